// How numbers, letters and formulas are set in the account: as on the page where they are printed there, else with
// the figures that repeat by hand.
function makeSetting(book) {
  const THIN = "\u202f", SHORTEST = 6, RESIDUAL = "< 1 \u00d7 10^\u22129";

  function make(tag, manner, ...content) {
    const element = document.createElement(tag);
    if (manner) { element.className = manner; }
    element.append(...content.flat(Infinity).filter((part) => part !== null && part !== undefined && part !== ""));
    return element;
  }
  const seen = (sort) => make("span", "h", sort);
  function written(value, figures) {  // the rule of the sheets: whole figures are never put to zero
    if (value === 0) { return "0"; }
    const size = Math.abs(value), kept = Math.min(figures, digits(size)), power = Number(size.toExponential(kept - 1).split("e")[1]);
    let text;
    if (size >= 1e-3 && size < 1e7) {
      const [whole, rest] = size.toFixed(Math.max(0, kept - 1 - power)).split(".");
      text = (whole.length >= 5 ? whole.replace(/\B(?=(\d{3})+$)/g, THIN) : whole) + (rest === undefined ? "" : `.${rest}`);
    } else {
      text = `${size.toExponential(kept - 1).split("e")[0]} \u00d7 10^${String(power).replace("-", MINUS)}`;
    }
    return (value < 0 ? MINUS : "") + text;
  }
  const digits = (size) => Math.max(1, size.toExponential().split("e")[0].replace(".", "").replace(/0+$/, "").length);

  function numeral(text) {  // a power of ten is raised
    const [mantissa, power] = text.split("10^");
    return power === undefined ? [text] : [`${mantissa}10`, seen("^"), make("sup", "", power)];
  }
  const united = (nodes, unit) => make("span", "nw", nodes, unit ? make("span", "u", THIN + unit) : null);
  const amount = (i, figures = SHORTEST, si = false) => united(numeral(written(book.value(i, si), figures)), book.unit(i, si));

  // A number as the page prints it: on its own line, else where it is printed first.
  function anchorOf(i) {
    const line = book.line(i), where = line && document.getElementById(`line-${line}`), key = `data[value^="${i.toString(36)}."]`;
    return (where && where.querySelector(key)) || document.querySelector(key);
  }
  function printed(i) {
    const anchor = anchorOf(i);
    if (!anchor) { return null; }
    const unit = book.forms[parseInt(anchor.getAttribute("value").split(".")[1], 36)].split("|")[0];
    return { nodes: () => [...anchor.childNodes].map((node) => node.cloneNode(true)), unit, text: anchor.textContent, anchor };
  }
  function shown(i) {
    const found = printed(i);
    return found ? united(found.nodes(), found.unit) : amount(i);
  }

  function letter(text) {
    const bars = text.startsWith("|") && text.endsWith("|") ? "|" : "", [stem, below] = text.replace(/^\||\|$/g, "").split("_");
    return make("span", "sy", bars, make("i", "", stem), below ? [seen("_"), make("sub", "", below.replace("-", MINUS))] : null, bars);
  }
  function link(i, content, manner) {
    const a = make("a", manner, content);
    a.href = `#${encodeURIComponent(book.id(i))}`;
    return a;
  }
  // A number put in carries its letter above it.
  function operand(i, sign, figures, si) {
    const below = book.value(i) < 0, put = link(i, amount(i, figures, si), "put");
    put.setAttribute("aria-label", `${sign}: ${put.textContent}, ${book.words(i)}`);
    return make("span", "slot", make("span", "over", letter(sign)), make("span", "", below ? "(" : "", put, below ? ")" : ""));
  }
  function template(law, part) {
    const held = document.querySelector(`template[data-equation="${CSS.escape(law[0])}"]`);
    return held && held.content.querySelector(part).firstElementChild.cloneNode(true);
  }
  function result(i, si) {
    const found = printed(i);
    if (found && found.unit === book.unit(i, si)) { return shown(i); }
    return book.figures(i) < 0 ? united(numeral(RESIDUAL), book.unit(i, si)) : amount(i, SHORTEST, si);
  }
  // [symbols, numbers put in, result] of a number derived by a law
  function worked(i) {
    const law = book.law(i), symbols = template(law, ".symbols"), put = template(law, ".worked"), figures = Math.abs(book.figures(i)), si = Boolean(law[7]);
    const inputs = new Map(book.from(i).map((got) => [got.name, got]));
    for (const slot of put.querySelectorAll(".slot")) {
      const sort = slot.dataset.name, got = inputs.get(sort);
      if (got) { slot.replaceWith(operand(got.i, got.letter, figures, si)); } else { slot.replaceWith(make("span", "slot", make("span", "over", letter(law[5])), result(i, si))); }
    }
    const tiny = book.figures(i) < 0 || result(i, si).textContent.startsWith("<");
    const last = law[6] ? ["at ", letter(law[5]), " = ", result(i, si)] : [tiny ? "" : "= ", result(i, si)];
    if (!tiny && shown(i).textContent !== result(i, si).textContent) { last.push(", printed as ", shown(i)); }
    put.removeAttribute("role");
    put.removeAttribute("aria-label");
    return [make("div", "eqs", symbols), make("div", "eqs", put), make("p", "res", last)];
  }
  // What is wider than its place can be scrolled by keyboard too.
  function reachable(root) {
    for (const one of root.querySelectorAll(".hold, .eqs, figure")) {
      if (one.clientWidth && one.scrollWidth > one.clientWidth) { one.tabIndex = 0; } else { one.removeAttribute("tabindex"); }
    }
  }
  return { reachable, make, written, amount, shown, printed, anchorOf, letter, link, worked, result };
}

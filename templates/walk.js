"use strict";
// A number's derivation, one level at a time, down to the place in a file where it was written.
// The address of the page is the id of the number, so that Back and Forward walk too.
(function () {
  const read = (id) => JSON.parse(document.getElementById(id).textContent);
  const books = read("ledger").columns;
  const names = read("names");
  const panel = document.getElementById("walk");
  const said = document.getElementById("walk-said");
  const THIN = "\u202f", MINUS = "\u2212";
  let returnTo = null, keyed = false;

  const idOf = (k, r) => {  // a section that stands once has no row; a column of "#n" belongs to that trial
    const column = books[k], [group, ...rest] = column.name.split("."), of = column.of || "";
    const [subject, trial] = !of ? [column.rows[r], ""] : of.startsWith("#") ? [column.rows[r], of] : [of, "#" + column.rows[r]];
    const words = [group, subject, rest.join(".")].filter(Boolean).join(".");
    return words + (column.case ? "@" + column.case : "") + trial;
  };
  const at = new Map();
  books.forEach((column, k) => column.rows.forEach((_, r) => {
    const id = idOf(k, r);
    if (!at.has(id)) { at.set(id, { k, r, id }); }
  }));

  // --- words and numbers
  function written(value, figures) {
    if (value === 0) { return "0"; }
    const size = Math.abs(value);
    let text;
    if (size >= 1e-3 && size < 1e7) {
      text = Number(size.toPrecision(figures)).toString();
    } else {
      const [mantissa, power] = Number(size.toPrecision(figures)).toExponential().split("e");
      text = `${mantissa} \u00d7 10^${String(Number(power)).replace("-", MINUS)}`;
    }
    const [whole, rest] = text.split(".");
    const grouped = /^\d{5,}$/.test(whole) ? whole.replace(/\B(?=(\d{3})+$)/g, THIN) : whole;
    return (value < 0 ? MINUS : "") + grouped + (rest === undefined ? "" : "." + rest);
  }
  function numeral(text) {  // a power of ten is raised
    const [mantissa, power] = text.split("10^");
    const span = make("span", power === undefined ? text : mantissa + "10");
    if (power !== undefined) { span.append(make("span", "^", "h"), make("sup", power)); }
    return span;
  }
  function amount(spot, figures) {
    const column = books[spot.k];
    const span = make("span", numeral(written(column.values[spot.r], figures)), "nw");
    if (column.unit) { span.append(make("span", THIN + column.unit, "u")); }
    return span;
  }
  const called = (column) => names.words[column.name] || column.name.split(".").slice(1).join(" ").replace(/_/g, " ");

  // --- elements
  function make(tag, content, manner) {
    const element = document.createElement(tag);
    if (manner) { element.className = manner; }
    for (const part of [].concat(content)) { element.append(part); }
    return element;
  }
  function letter(text) {
    const bars = text.startsWith("|") && text.endsWith("|");
    const [stem, below] = text.replace(/^\||\|$/g, "").split("_");
    const span = make("span", [bars ? "|" : "", make("i", stem)], "sy");
    if (below) { span.append(make("sub", below.replace("-", MINUS))); }
    if (bars) { span.append("|"); }
    return span;
  }
  function link(href, content, manner) {
    const a = make("a", content, manner);
    a.href = href;
    return a;
  }
  function placed(text) {  // file:line:column as a link into the listing, where there is one
    const [, file, line] = /^(.*):(\d+):\d+$/.exec(text) || [];
    const target = file && document.getElementById(`at-${file}:${line}`);
    return target ? link("#" + encodeURIComponent(target.id), text, "linked") : text;
  }

  // --- origins
  function input(view, r) {
    if (view.column !== undefined) {
      const row = Array.isArray(view.rows) ? view.rows[r] : view.row !== undefined ? view.row : r;
      return { k: view.column, r: row };
    }
    return view.columns[r] === null ? null : { k: view.columns[r], r: view.rows[r] };
  }
  function listed(title, entries) {
    const list = make("ul", entries.map(({ spot, sign }) => {
      const column = books[spot.k], id = idOf(spot.k, spot.r);
      const what = make("span", [called(column), make("small", id)], "what");
      return make("li", link("#" + encodeURIComponent(id), [make("span", sign || "", "sign"), what, make("span", amount(spot, 7), "amount")]));
    }));
    return entries.length ? [make("h3", title), list] : [];
  }
  function filled(equation, spots, result, title, note) {
    const template = document.querySelector(`template[data-equation="${CSS.escape(equation)}"]`);
    if (!template) { return []; }
    const copy = template.content.cloneNode(true);
    for (const slot of copy.querySelectorAll(".slot")) {
      const spot = spots.get(slot.dataset.name) || (result && slot.dataset.name === result.unknown ? result.spot : null);
      const below = spot && books[spot.k].values[spot.r] < 0;
      slot.replaceChildren(...(spot ? [below ? "(" : "", amount(spot, 7), below ? ")" : ""] : ["?"]));
    }
    return [make("h3", "formula"), make("p", title), copy.querySelector(".symbols"), note, make("h3", "numbers put in, in SI"), copy.querySelector(".worked")];
  }
  function derived(origin, spot) {
    const letters = names.letters[origin.equation] || {};
    const inputs = new Map(Object.entries(origin.inputs).map(([name, view]) => [name, input(view, spot.r)]).filter(([name, one]) => one && name in letters));
    const regime = origin.regime ? `, ${origin.regime}` : "";
    return [
      ...filled(origin.equation, inputs, origin.root_of ? { unknown: origin.root_of, spot } : null, origin.title + regime,
        make("p", `Source: ${origin.source}. Range: ${origin.range}.`, "note")),
      make("p", [origin.root_of ? "zero at " : "= ", amount(spot, 9)]),
      ...listed("inputs", [...inputs].map(([name, one]) => ({ spot: one, sign: letter(letters[name]) }))),
    ];
  }
  function stated(origin, spot) {
    const how = origin.kind === "library" ? "as shipped with the program" : "as written";
    const parts = [make("h3", how), make("p", origin.written[spot.r], "as-written"), make("p", ["at ", placed(origin.marks[spot.r])])];
    if (origin.kind === "converted") {
      const offset = origin.offsets[spot.r] ? ` + ${written(origin.offsets[spot.r], 12)}` : "";
      const turned = `${written(origin.numbers[spot.r], 12)} ${origin.units[spot.r]} \u00d7 ${written(origin.factors[spot.r], 12)}${offset} = `;
      parts.push(make("p", [turned, amount(spot, 12)]));
    }
    if (origin.bases[spot.r]) { parts.push(make("p", `Basis: ${origin.bases[spot.r]}`, "note")); }
    return parts;
  }
  function combined(origin, spot) {
    const terms = [];
    origin.into.forEach((row, k) => {
      const one = row === spot.r ? input(origin.terms, k) : null;
      if (one) { terms.push({ spot: one, sign: origin.operation === "sum" ? (origin.signs[k] < 0 ? MINUS : "+") : "" }); }
    });
    return [make("h3", origin.operation), make("p", origin.meaning), ...listed("terms", terms)];
  }
  function solved(origin, spot) {
    const column = books[spot.k], subject = column.of || column.rows[spot.r], proofs = [];
    books.forEach((other, k) => {
      if (!origin.proof.includes(other.name) || other.of || other.case !== column.case) { return; }
      const r = other.rows.indexOf(subject);
      if (r >= 0) { proofs.push({ spot: { k, r } }); }
    });
    const rests = Object.values(origin.inputs).map(view => ({ spot: input(view, spot.r) })).filter(one => one.spot);
    return [make("h3", "found by iteration"), make("p", origin.statement), make("p", `${origin.method}, ${origin.iterations} iterations`, "note"), ...listed("proof", proofs), ...listed("rests on", rests)];
  }
  function origins(spot) {
    const origin = books[spot.k].origin;
    switch (origin.kind) {
      case "derived": return derived(origin, spot);
      case "total": return combined(origin, spot);
      case "solved": return solved(origin, spot);
      case "judged": return [make("h3", "verdict"), make("p", `met where the margin is not negative: ${books[spot.k].values[spot.r] ? "met" : "not met"}`), ...listed("margin", [input(origin.margin, spot.r)].filter(Boolean).map((one) => ({ spot: one })))];
      case "program": return [make("h3", "of the program"), make("p", origin.statement)];
      default: return stated(origin, spot);
    }
  }

  // --- the panel
  function show(spot) {
    const column = books[spot.k], printed = anchor(spot.id);
    const unit = printed ? printed.dataset.as.split("|")[0] : "";
    const value = printed ? [numeral(printed.textContent), make("span", unit ? THIN + unit : "", "u")] : amount(spot, 7);
    const line = names.at[spot.id];
    const heading = make("h2", called(column));
    heading.tabIndex = -1;
    const inside = keyed || panel.contains(document.activeElement);
    keyed = false;
    said.replaceChildren(
      heading, make("p", spot.id, "id"), make("p", value, "value"),
      make("p", ["in full ", amount(spot, 17)], "full"),
      ...(line ? [make("p", ["on line ", link("#line-" + line, line, "linked")], "note")] : []),
      ...origins(spot));
    panel.hidden = false;
    panel.scrollTop = 0;
    document.body.classList.add("walking");
    mark(spot.id);
    if (inside) { heading.focus({ preventScroll: true }); }
    if (printed && !visible(printed)) { printed.scrollIntoView({ block: "center" }); }
  }
  function close() {
    panel.hidden = true;
    document.body.classList.remove("walking");
    mark(null);
    if (returnTo) { returnTo.focus({ preventScroll: true }); }
  }
  const anchors = [...document.querySelectorAll("data.n")];
  const anchor = (id) => anchors.find((one) => one.value === id);
  function mark(id) {
    for (const one of anchors) { one.toggleAttribute("aria-current", one.value === id); }
  }
  function visible(element) {
    const box = element.getBoundingClientRect();
    const floor = matchMedia("(max-width: 1179px)").matches ? innerHeight * 0.48 : innerHeight;
    return box.top >= 0 && box.bottom <= floor;
  }
  function follow() {
    const id = decodeURIComponent(location.hash.slice(1));
    const spot = at.get(id);
    if (spot) { show(spot); } else if (id) { document.getElementById(id)?.scrollIntoView(); } else { close(); }
  }
  function go(id) {
    if (decodeURIComponent(location.hash.slice(1)) === id) { follow(); } else { location.hash = encodeURIComponent(id); }
  }

  for (const one of anchors) {
    if (at.has(one.value)) {
      one.tabIndex = 0;
      one.setAttribute("role", "button");
      one.setAttribute("aria-label", `${one.textContent}, ${one.value}`);
    }
  }
  for (const list of document.querySelectorAll(".ad")) {  // addresses become links to their lines
    for (const run of list.querySelectorAll(".nw")) {
      run.replaceChildren(...run.textContent.split(/(\d+\.\d+)/).map((part) => (/^\d+\.\d+$/.test(part) ? link("#line-" + part, part) : part)));
    }
  }
  document.addEventListener("click", (event) => {
    const one = event.target.closest("data.n[tabindex]");
    if (one) { returnTo = one; go(one.value); }
  });
  document.addEventListener("keydown", (event) => {
    if (event.key === "Escape" && !panel.hidden) { close(); return; }
    const one = event.target.closest?.("data.n[tabindex]");
    if (one && (event.key === "Enter" || event.key === " ")) {
      event.preventDefault();
      returnTo = one;
      keyed = true;
      go(one.value);
    }
  });
  document.getElementById("walk-close").addEventListener("click", close);
  addEventListener("hashchange", follow);
  if (location.hash) { follow(); }
})();

// Find: by line, id, words, value as printed, or place in a file.
function makeFind(book, set, sections, field, list, tell) {
  const { make } = set, MOST = 60;
  let hay = null;
  const plain = (text) => text.toLowerCase().replace(/[\s,.@#\-_/]+/g, " ");
  function words() {
    if (!hay) {
      hay = [];
      for (let i = 0; i < book.count; i += 1) { hay.push(` ${plain(`${book.id(i)} ${book.words(i)} ${book.caseOf(i)} ${book.trialOf(i) && "trial"}`)} `); }
    }
    return hay;
  }
  function byWords(query) {  // each word must begin a word; where it is the whole word comes first
    const asked = plain(query).trim().split(" ").filter(Boolean), whole = [], some = [];
    if (!asked.length) { return []; }
    words().forEach((text, i) => {
      if (!asked.every((word) => text.includes(` ${word}`))) { return; }
      (asked.every((word) => text.includes(` ${word} `)) ? whole : some).push(i);
    });
    return [...whole, ...some].sort((a, b) => !book.line(a) - !book.line(b)).slice(0, whole.length + some.length);
  }
  function byValue(query) {
    const digits = (text) => text.replace(/[\s\u202f\u00a0,]/g, "").replace(/^[-\u2212]/, "\u2212"), asked = digits(query), same = [], begin = [];
    const seen = new Set();
    for (const anchor of document.querySelectorAll("main data")) {
      const text = digits(anchor.textContent);
      if (!text.startsWith(asked)) { continue; }
      const i = parseInt(anchor.getAttribute("value"), 36);
      if (!seen.has(i)) { seen.add(i); (text === asked ? same : begin).push(i); }
    }
    return [...same, ...begin];
  }
  function byPlace(file, line) {
    const found = [];
    for (let i = 0; i < book.count; i += 1) {
      const at = book.place(i);
      if (at && at[0] === file && at[1] === line) { found.push(i); }
    }
    return found;
  }
  function search(query) {  // {others: [[href, text]], numbers: [i]}
    const asked = query.trim(), others = [], place = /^([^\s:]+\.\w+):(\d+)/.exec(asked), exact = book.find(asked);
    if (!asked) { return { others, numbers: [] }; }
    if (exact !== undefined) { return { others, numbers: [exact] }; }
    if (place) {
      const at = `at-${place[1]}:${place[2]}`, row = document.getElementById(at);
      if (row) { others.push([at, place[0], row.querySelector(".tx").textContent.trim()]); }
      return { others, numbers: byPlace(place[1], Number(place[2])) };
    }
    const line = /^\d+\.\d+$/.test(asked) && document.getElementById(`line-${asked}`);
    if (line) { others.push([`line-${asked}`, asked, "the line of that number"]); }
    if (/^[<+\u2212-]?\s*[\d][\d\s.,\u202f]*$/.test(asked)) { return { others, numbers: byValue(asked) }; }
    for (const [number, title] of sections) {
      if (plain(asked).trim().split(" ").every((word) => ` ${plain(title)}`.includes(` ${word}`))) { others.push([`section-${number}`, number, title]); }
    }
    return { others, numbers: byWords(asked) };
  }
  function close() {
    list.hidden = true;
    field.setAttribute("aria-expanded", "false");
  }
  function entry(href, left, middle, right) {
    const a = make("a", "", make("span", "ref", left), make("span", "", middle), make("span", "nw", right));
    a.href = `#${encodeURIComponent(href)}`;
    return make("li", "", a);
  }
  function look() {
    if (!field.value.trim()) { close(); return; }
    const { others, numbers } = search(field.value), count = others.length + numbers.length;
    const about = (i) => [book.subject(i), book.caseOf(i) && `case ${book.caseOf(i)}`, book.trialOf(i) && `trial ${book.trialOf(i)}`].filter(Boolean).join(", ");
    const said = count ? `${count} found${numbers.length > MOST ? `, the first ${MOST} shown` : ""}` : "Nothing answers to that. Try an id, a line such as 5.3, a value as printed, or network.yaml:12.";
    list.replaceChildren(make("p", "yn", said), make("ol", "",
      others.map(([href, left, middle]) => entry(href, left, middle, "")),
      numbers.slice(0, MOST).map((i) => entry(book.id(i), book.line(i) || "\u2013", [book.words(i), " ", make("span", "wh", about(i))], set.shown(i)))));
    list.hidden = false;
    field.setAttribute("aria-expanded", "true");
    tell(said);
  }
  let waiting = 0;
  field.addEventListener("input", () => { clearTimeout(waiting); waiting = setTimeout(look, 80); });
  field.addEventListener("keydown", (event) => {
    if (event.key === "Escape") { close(); }
    else if (event.key === "ArrowDown" && !list.hidden) { list.querySelector("a")?.focus(); event.preventDefault(); }
    else if (event.key === "Enter") { clearTimeout(waiting); look(); list.querySelector("a")?.click(); }
  });
  list.addEventListener("keydown", (event) => {
    const all = [...list.querySelectorAll("a")], k = all.indexOf(document.activeElement);
    if (event.key === "ArrowDown") { all[k + 1]?.focus(); } else if (event.key === "ArrowUp") { (all[k - 1] || field).focus(); }
    else if (event.key === "Escape") { close(); field.focus(); } else { return; }
    event.preventDefault();
  });
  list.addEventListener("click", (event) => { if (event.target.closest("a")) { close(); } });
  for (const elsewhere of ["focusin", "pointerdown"]) {
    document.addEventListener(elsewhere, (event) => { if (!event.target.closest(".find")) { close(); } });
  }
  return { search, close };
}

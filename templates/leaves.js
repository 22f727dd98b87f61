// The leaves of the ledger: a section, or a part of a long one, is on the page at a time; the rest is out of layout.
function makeLeaves(book, set, main) {
  const FULL = 130, UNITS = "tr, li, p, figcaption, .notes > div, .facts > div";
  const sections = [...main.querySelectorAll(":scope > section")];
  const leaves = [];
  const title = (section) => section.querySelector("h1 .words, h1.title")?.textContent || "First page";
  const number = (section) => section.id.replace("section-", "");

  // A long section is cut between its blocks, a long table between its rows.
  const weigh = (block) => 2 + block.querySelectorAll("tr, li").length;
  function cutSection(section) {
    const pieces = [...section.children].flatMap((block) => {
      const rows = block.matches(".hold, .listing") ? [...block.querySelectorAll("tbody > tr")] : [...block.querySelectorAll(":scope > li")];
      if (rows.length <= FULL * 1.25) { return [{ block, elements: [block], weight: weigh(block) }]; }
      return rows.map((row) => ({ block, elements: [row], weight: 1 }));
    });
    const whole = pieces.reduce((sum, piece) => sum + piece.weight, 0), parts = Math.max(1, Math.round(whole / FULL));
    let filled = 0, part = 0;
    const cut = [[]];
    for (const piece of pieces) {
      const opens = piece.block.matches("h2, header") || piece.elements[0].matches(".group");
      if (part < parts - 1 && filled >= (whole / parts) * (part + 1) - (opens ? piece.weight : piece.weight / 2)) { part += 1; cut.push([]); }
      cut[part].push(piece);
      filled += piece.weight;
    }
    return cut.filter((pieces) => pieces.length);
  }
  for (const section of sections) {
    const cut = cutSection(section);
    cut.forEach((pieces, part) => leaves.push({ section, pieces, part: cut.length > 1 ? part + 1 : 0, title: title(section) }));
  }
  const said = (leaf) => `${number(leaf.section)} ${leaf.title}${leaf.part ? ` (part ${leaf.part})` : ""}`;

  let shown = -1, marked = new Set(), done = new Set();
  function leafOf(element) {
    const section = element.closest("main > section");
    const mine = leaves.map((leaf, k) => k).filter((k) => leaves[k].section === section);
    if (mine.length < 2) { return mine.length ? mine[0] : -1; }
    return mine.find((k) => leaves[k].pieces.some((piece) => piece.elements[0].contains(element))) ?? mine[0];
  }
  function show(k) {
    if (k === shown) { return; }
    const leaf = leaves[k], before = leaves[shown];
    if (before) { before.section.classList.remove("shown"); }
    if (leaf.part) {
      const here = new Set(leaf.pieces.flatMap((piece) => [piece.block, ...piece.elements]));
      for (const other of leaves.filter((one) => one.section === leaf.section)) {
        for (const piece of other.pieces) {
          piece.block.classList.toggle("off", !here.has(piece.block) && !piece.block.matches("header"));
          if (piece.elements[0] !== piece.block) { piece.elements[0].classList.toggle("off", !here.has(piece.elements[0])); }
        }
      }
    }
    leaf.section.classList.add("shown");
    shown = k;
    if (!done.has(k)) { done.add(k); prepare(leaf); }
    paint();
  }

  // --- its lines
  const units = (leaf) => leaf.pieces.flatMap((piece) => piece.elements)
    .flatMap((element) => [...(element.matches(UNITS) ? [element] : []), ...element.querySelectorAll(UNITS)])
    .filter((unit) => (unit.id.startsWith("line-") || unit.querySelector("data")) && !unit.parentElement.closest(UNITS));
  const lines = () => leaves[shown].lines;
  const unitOf = (element) => {
    let unit = element.closest(UNITS);
    for (let over = unit?.parentElement.closest(UNITS); over; over = over.parentElement.closest(UNITS)) { unit = over; }
    return unit;
  };
  const spot = (anchor) => parseInt(anchor.getAttribute("value"), 36);
  const own = (unit) => {  // the number that stands on the line, not one put in
    const address = unit.id.replace("line-", ""), all = [...unit.querySelectorAll("data")];
    return all.find((anchor) => address && book.line(spot(anchor)) === address && !anchor.closest(".eq")) || all.find((anchor) => !anchor.closest(".eq")) || all[0] || null;
  };

  function prepare(leaf) {  // its numbers and addresses can be followed; only the current line's are tab stops
    leaf.lines = units(leaf);
    for (const unit of leaf.lines) {
      for (const anchor of unit.querySelectorAll("data")) {
        anchor.tabIndex = -1;
        anchor.setAttribute("role", "link");
      }
      const cell = unit.querySelector("td.no .own, .no .own");
      if (cell && unit.id && !cell.querySelector("a")) {
        const a = set.make("a", "lno", cell.textContent), held = own(unit);
        a.href = `#${unit.id}`;
        a.tabIndex = -1;
        a.setAttribute("aria-label", `${cell.textContent}, line${held ? `: ${book.words(spot(held))}, ${book.subject(spot(held))}, ${held.textContent}` : ""}`);
        cell.replaceChildren(a);
      }
      for (const run of unit.querySelectorAll(".ad .nw")) {
        run.replaceChildren(...run.textContent.split(/(\d+\.\d+)/).map((part) => {
          if (!/^\d+\.\d+$/.test(part)) { return part; }
          const a = set.make("a", "", part);
          a.href = `#line-${part}`;
          a.tabIndex = -1;
          return a;
        }));
      }
    }
  }
  let roving = null;
  function rove(unit, quiet) {
    const each = (held, index) => held?.querySelectorAll("data, a").forEach((one) => { one.tabIndex = index; });
    each(roving, -1);
    roving?.classList.remove("cur");
    roving = unit;
    each(unit, 0);
    if (!quiet) { unit?.classList.add("cur"); }
  }
  let anchorNow = null;
  function point(anchor) {
    anchorNow?.removeAttribute("aria-current");
    anchorNow = anchor;
    anchor?.setAttribute("aria-current", "true");
  }
  function mark(addresses) {
    marked = addresses;
    paint();
  }
  function paint() {
    main.querySelectorAll(".mk").forEach((one) => one.classList.remove("mk"));
    if (marked.size) { lines().forEach((unit) => unit.classList.toggle("mk", marked.has(unit.id.replace("line-", "")))); }
  }
  return {
    leaves, said, show, leafOf, lines, unitOf, spot, own, rove, point, mark, number,
    shown: () => shown, roving: () => roving,
    named: (section) => leaves.find((leaf) => number(leaf.section) === section)?.title || "",
    caseLeaf: (held) => leaves.findIndex((leaf) => leaf.section.dataset.key === `case-${held}`),
    caseShown: () => (leaves[shown]?.section.dataset.key || "").match(/^case-(.*)$/)?.[1],
  };
}

// The page: the address says what is shown, so that Back and Forward are the browser's. A click or Enter acts; hovering
// and focus only tell.
(function () {
  const $ = (selector) => document.querySelector(selector);
  const book = readBook(JSON.parse($("#book").textContent)), set = makeSetting(book);
  const main = $("main"), panel = $("#account"), body = document.body;
  const tell = (text) => {
    $("#told").textContent = "";
    setTimeout(() => { $("#told").textContent = text; }, 30);
  };
  const ledger = makeLeaves(book, set, main), account = makeAccount(book, set, panel, tell, marks);
  let current = -1, keyed = false, following = -1;

  const inSight = () => main.offsetParent !== null;
  const hash = (id) => `#${encodeURIComponent(id)}`;
  const here = () => { try { return decodeURIComponent(location.hash.slice(1)); } catch { return ""; } };
  function go(id, byKey) {
    keyed = byKey;
    if (here() === id) { follow(); } else { location.hash = encodeURIComponent(id); }
  }

  // --- where it goes: counted by section, marked in the margin
  function marks(i, place) {
    place.hidden = i === null;
    if (i === null) { following = -1; ledger.mark(new Set()); return; }
    following = i;
    const reached = book.reach(i), lines = reached.map(book.line).filter(Boolean), sections = new Map();
    for (const line of new Set(lines)) {
      const section = line.split(".")[0], held = sections.get(section) || { count: 0, first: line };
      sections.set(section, { count: held.count + 1, first: held.first });
    }
    const entries = [...sections].map(([section, held]) => {
      const a = set.make("a", "", `${section} ${ledger.named(section)}`);
      a.href = `#line-${held.first}`;
      return set.make("li", "", set.make("span", "", a), set.make("span", "v", `${held.count} ${held.count === 1 ? "line" : "lines"}`));
    });
    const said = `${reached.length} numbers depend on it, on ${new Set(lines).size} lines`;
    place.replaceChildren(set.make("p", "", `${said}, marked `, set.make("span", "sign-mk", "\u203a"), " in the margin."), set.make("ul", "plain", entries));
    ledger.mark(new Set(lines));
    tell(said);
  }

  // --- what the address says
  function leave() {
    body.classList.remove("turned-to");
    takePlace();
  }
  function takePlace() {  // where the account is a leaf of its own it is the matter of the page
    const alone = body.classList.contains("turned-to") && !inSight();
    panel.toggleAttribute("role", alone);
    if (alone) { panel.setAttribute("role", "main"); }
    panel.querySelector("h2").setAttribute("aria-level", alone ? "1" : "2");
    panel.querySelectorAll("h3").forEach((one) => one.setAttribute("aria-level", alone ? "2" : "3"));
  }
  function open(i) {
    const anchor = set.printed(i)?.anchor || null, unit = anchor && ledger.unitOf(anchor), inside = panel.contains(document.activeElement) || keyed;
    const again = current === i && following === i;
    current = i;
    if (anchor) {
      ledger.show(ledger.leafOf(anchor));
      ledger.rove(unit);
    } else if (ledger.shown() < 0) { ledger.show(0); }
    ledger.point(anchor);
    if (!again && following >= 0) { following = -1; ledger.mark(new Set()); }
    const title = account.show(i, marks);
    body.classList.add("turned-to");
    panel.scrollTop = 0;
    takePlace();
    set.reachable(panel);
    contents();
    if (inSight()) {
      if (unit) { bring(unit); }
      if (inside) { title.focus({ preventScroll: true }); }
    } else {
      scrollTo(0, 0);
      title.focus({ preventScroll: true });
    }
    keyed = false;
  }
  function bring(unit) {
    const box = unit.getBoundingClientRect(), top = $("header.top").getBoundingClientRect().bottom;
    if (box.top < Math.max(top, 0) || box.bottom > innerHeight - 16) { unit.scrollIntoView({ block: "center" }); }
  }
  function reveal(element) {  // a section, a line without a number, a line of a file
    const k = ledger.leafOf(element);
    leave();
    ledger.show(k);
    main.querySelectorAll(".at").forEach((one) => one.classList.remove("at"));
    if (element.id.startsWith("at-")) { element.classList.add("at"); }
    if (element.id.startsWith("line-")) { ledger.rove(element); } else { ledger.rove(ledger.lines()[0], true); }
    contents();
    if (element.matches("section")) { scrollTo(0, 0); } else { element.scrollIntoView({ block: "center" }); }
    const target = element.matches("section") ? element.querySelector("h1") : element.querySelector(".lno") || element;
    if (!target.matches("a")) { target.tabIndex = -1; }
    target.focus({ preventScroll: true });
  }
  function follow() {
    const asked = here(), element = asked && document.getElementById(asked), inMain = element && main.contains(element), i = asked ? book.find(asked) : undefined;
    if (i !== undefined) { open(i); return; }
    const own = inMain && asked.startsWith("line-") ? ledger.own(element) : null;
    if (own) { open(ledger.spot(own)); return; }
    if (inMain && element.id) { reveal(element); return; }
    const part = /^leaf-(\d+)$/.exec(asked);
    if (part && ledger.leaves[part[1] - 1]) { turnTo(part[1] - 1); return; }
    leave();
    if (ledger.shown() < 0 || !asked) { turnTo(Math.max(ledger.shown(), 0), true); }
    toLine();
  }
  function turnTo(k, quiet) {
    leave();
    ledger.show(k);
    ledger.rove(ledger.lines()[0], true);
    contents();
    if (!quiet) {
      scrollTo(0, 0);
      const title = ledger.leaves[k].section.querySelector("h1");
      title.tabIndex = -1;
      title.focus({ preventScroll: true });
    }
  }
  function toLine() {  // back from the account to the line in hand
    leave();
    const unit = ledger.roving();
    if (!unit || current < 0) { return; }
    bring(unit);
    (unit.querySelector("[aria-current]") || unit.querySelector(".lno, data"))?.focus({ preventScroll: true });
  }

  // --- leaves and cases
  const leafId = (k) => (ledger.leaves[k].part > 1 ? `leaf-${k + 1}` : ledger.leaves[k].section.id);
  const turn = set.make("nav", "turn"), choice = $("#leaf"), cases = $("#case");
  turn.setAttribute("aria-label", "Leaves");
  main.append(turn);
  ledger.leaves.forEach((leaf, k) => choice.append(new Option(ledger.said(leaf), k)));
  book.cases.forEach(([held]) => cases.append(new Option(held, held)));
  cases.closest("label").hidden = book.cases.length < 2;
  function contents() {
    const k = ledger.shown(), a = (to, said, manner) => {
      const made = set.make("a", manner, said);
      made.href = hash(leafId(to));
      return made;
    };
    choice.value = String(k);
    set.reachable(ledger.leaves[k].section);
    const held = (current >= 0 && book.caseOf(current)) || ledger.caseShown();
    if (held) { cases.value = held; }
    turn.replaceChildren(...[k > 0 && a(k - 1, `\u2039 ${ledger.said(ledger.leaves[k - 1])}`, "pv"), k + 1 < ledger.leaves.length && a(k + 1, `${ledger.said(ledger.leaves[k + 1])} \u203a`, "nx")].filter(Boolean));
  }
  function leafBy(n) {
    const k = ledger.shown() + n;
    if (ledger.leaves[k]) { go(leafId(k), true); } else { tell(n > 0 ? "The last leaf" : "The first leaf"); }
  }
  function switchCase(held) {
    const same = current >= 0 && book.caseOf(current) ? book.inCase(current, held) : undefined, k = ledger.caseLeaf(held);
    if (same !== undefined) { go(book.id(same)); } else if (k >= 0) { go(leafId(k)); }
    tell(`Case ${held}`);
  }
  choice.addEventListener("change", () => go(leafId(Number(choice.value))));
  cases.addEventListener("change", () => switchCase(cases.value));

  // --- lines, one by one; the column is kept
  function step(n) {
    const all = ledger.lines(), k = all.indexOf(ledger.roving()), unit = all[k + n];
    if (!unit) {
      if (!ledger.leaves[ledger.shown() + n]) { tell(n > 0 ? "The last line" : "The first line"); return; }
      ledger.show(ledger.shown() + n);
      contents();
      take(ledger.lines()[n > 0 ? 0 : ledger.lines().length - 1]);
      return;
    }
    const cell = document.activeElement.closest?.("td") || ledger.roving()?.querySelector("[aria-current]")?.closest("td");
    const column = cell && cell.closest("tr") === ledger.roving() && !cell.matches(".no") ? cell.cellIndex : -1;
    take(unit, column > 0 && unit.cells?.[column]?.querySelector("data:not(.eq data)"));
  }
  function take(unit, kept) {
    if (!unit) { return; }
    const anchor = kept || ledger.own(unit);
    ledger.rove(unit);
    bring(unit);
    if (anchor) {
      history.replaceState(null, "", hash(book.id(ledger.spot(anchor))));
      current = ledger.spot(anchor);
      ledger.point(anchor);
      if (matchMedia("(min-width: 68rem)").matches) { account.show(current, marks); }
    }
    (kept || unit.querySelector(".lno") || anchor)?.focus({ preventScroll: true });
  }

  // --- clicks and keys
  makeFind(book, set, ledger.leaves.filter((leaf) => leaf.part < 2).map((leaf) => [ledger.number(leaf.section), leaf.title]), $("#q"), $("#hits"), tell);
  document.addEventListener("click", (event) => {
    const anchor = event.target.closest("main data"), a = event.target.closest("a[href^='#']");
    if (anchor) { go(book.id(ledger.spot(anchor)), event.detail === 0); return; }
    if (a && !a.matches(".skip")) {
      event.preventDefault();
      go(decodeURIComponent(a.hash.slice(1)), event.detail === 0);
    }
  });
  main.addEventListener("mouseover", (event) => {
    const anchor = event.target.closest("data:not([title])");
    if (anchor) { const i = ledger.spot(anchor); anchor.title = `${book.words(i)}, ${account.about(i)}`; }
  });
  let letters = true;
  $("#letters").addEventListener("change", (event) => { letters = event.target.checked; });
  const acts = {
    j: () => step(1), k: () => step(-1), "]": () => leafBy(1), "[": () => leafBy(-1), b: () => history.back(), f: () => history.forward(),
    o: () => (current >= 0 && !inSight() ? null : current >= 0 ? enter() : null), c: () => panel.querySelector("[data-do=copy]")?.click(), d: () => panel.querySelector("[data-do=where]")?.click(),
  };
  function enter() {
    if (account.current() !== current) { account.show(current, marks); }
    body.classList.add("turned-to");
    takePlace();
    panel.querySelector("h2")?.focus();
  }
  document.addEventListener("keydown", (event) => {
    const { target, key } = event;
    if (event.ctrlKey || event.metaKey || event.altKey || target.matches("input, select, textarea") || $("#keys").open) { return; }
    const inLedger = main.contains(target), inAccount = panel.contains(target);
    if (inAccount && account.walkTree(event)) { event.preventDefault(); return; }
    if (letters && key === "/") { $("#q").focus(); $("#q").select(); event.preventDefault(); return; }
    if (letters && key === "?") { $("#keys").showModal(); event.preventDefault(); return; }
    if (key === "Escape" && inAccount) { toLine(); return; }
    if (key === "Enter" && target.matches("main data")) { go(book.id(ledger.spot(target)), true); event.preventDefault(); return; }
    if (!inLedger && !inAccount && target !== body) { return; }
    if (inLedger && target.closest("tr, li, p, figcaption, div") && (key === "ArrowDown" || key === "ArrowUp") && ledger.roving()?.contains(target)) {
      step(key === "ArrowDown" ? 1 : -1);
    } else if (letters && Object.hasOwn(acts, key)) { acts[key](); } else { return; }
    event.preventDefault();
  });
  $("#back").addEventListener("click", () => history.back());
  $("#forward").addEventListener("click", () => history.forward());
  $("#print").addEventListener("click", () => print());
  $("#list").addEventListener("click", () => $("#keys").showModal());
  $("#shut").addEventListener("click", () => $("#keys").close());
  $("#return").addEventListener("click", toLine);
  $(".skip").addEventListener("click", (event) => {
    event.preventDefault();
    (ledger.roving()?.querySelector("a, data") || main).focus();
  });
  addEventListener("hashchange", follow);
  history.scrollRestoration = "manual";
  const measured = () => {
    document.documentElement.style.setProperty("--top", `${getComputedStyle($("header.top")).position === "sticky" ? $("header.top").offsetHeight : 0}px`);
    takePlace();
    set.reachable(document);
  };
  addEventListener("resize", measured);
  measured();
  follow();
  document.fonts.ready.then(measured);
  document.documentElement.classList.add("ready");
}());

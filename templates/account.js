// The account of one number: how it was come by, where it goes, and the same in each case.
function makeAccount(book, set, panel, tell) {
  const { make } = set, DEEP = 12, FEW = 8, ALL = 150;
  let met = new Map(), current = -1;

  const capital = (text) => text.charAt(0).toUpperCase() + text.slice(1);
  function button(content, manner, act) {
    const made = make("button", manner, content);
    made.type = "button";
    made.addEventListener("click", act);
    return made;
  }
  const inCase = (i) => (book.caseOf(i) && book.cases.length > 1 ? `case ${book.caseOf(i)}` : "");
  const trial = (i) => (book.trialOf(i) ? `trial ${book.trialOf(i)}` : "");
  const about = (i) => [book.subject(i), inCase(i), trial(i)].filter(Boolean).join(", ");
  function who(i) {  // what is unlike the number in hand
    const unlike = [book.subject(i) !== book.subject(current) && book.subject(i), book.caseOf(i) !== book.caseOf(current) && inCase(i), trial(i) !== trial(current) && trial(i)];
    return [book.words(i), ...unlike.filter(Boolean)].join(", ");
  }
  function reference(i) {
    const a = set.link(i, book.line(i) || "open", "ref");
    a.setAttribute("aria-label", book.line(i) ? `${book.line(i)}, go to that line: ${book.words(i)}` : `open ${book.words(i)}, ${about(i)}`);
    return a;
  }

  // --- what was written in a file, with the lines that it stands under
  function listed(file, line) {
    const row = document.getElementById(`at-${file}:${line}`);
    if (!row) { return null; }
    const text = (one) => one.querySelector(".tx").textContent, under = [row];
    let indent = text(row).search(/\S/);
    for (let one = row.previousElementSibling; one && indent > 0 && !/\.csv$/.test(file); one = one.previousElementSibling) {
      const begins = text(one).search(/\S/);
      if (begins >= 0 && begins < indent && text(one)[begins] !== "#") { under.unshift(one); indent = begins; }
    }
    if (/\.csv$/.test(file) && line > 1) { under.unshift(document.getElementById(`at-${file}:1`)); }
    return make("pre", "yl", under.map((one) => make("span", one === row ? "on" : "", make("i", "", one.querySelector(".ln").textContent), ` ${text(one)}\n`)));
  }
  function stated(i) {
    const origin = book.origin(i), r = book.rowOf(i), [file, line, column] = book.place(i), here = listed(file, line), held = make("div", "yb");
    const said = `${file}, line ${line}, column ${column}`;
    if (here) {
      const a = make("a", "linked", said);
      a.href = `#${encodeURIComponent(`at-${file}:${line}`)}`;
      here.setAttribute("aria-label", said);
      here.setAttribute("role", "group");
      here.tabIndex = 0;
      held.append(make("p", "yn", a), here);
    } else {
      held.append(make("p", "yn", `${origin[0] === "l" ? "shipped with the program: " : ""}${said}`));
    }
    held.append(make("p", "yn", "written ", make("code", "as-written", book.one(origin[2], r))));
    if (origin[0] === "c") {
      const [number, unit, factor, offset] = origin.slice(4).map((list) => book.one(list, r));
      const turned = `${set.written(number, 12)} ${book.texts[unit]} \u00d7 ${set.written(factor, 12)}${offset ? ` + ${set.written(offset, 12)}` : ""} = `;
      held.append(make("p", "eqn", turned, set.amount(i, 12, true)));
    }
    const basis = book.texts[book.one(origin[3], r)];
    if (basis) { held.append(make("p", "yn", `basis: ${basis}`)); }
    return [held];
  }

  // --- how a number was come by
  function sum(i) {
    const origin = book.origin(i), terms = book.from(i), adds = book.texts[origin[1]] === "sum";
    const said = terms.slice(0, DEEP).map((got, k) => {
      const below = book.value(got.i) < 0 && (k || got.sign === MINUS), sign = !adds ? (k ? ", " : "") : got.sign === MINUS ? " \u2212 " : k ? " + " : "";
      return [sign, below ? "(" : "", set.link(got.i, set.amount(got.i, 9), "put"), below ? ")" : ""];
    });
    const rest = terms.length > DEEP ? ` \u2026 (${terms.length} terms)` : "";
    return [make("p", "yn", `${capital(book.texts[origin[1]])}: ${book.texts[origin[2]]}.`),
      ...(terms.length ? [make("p", "eqn", "= ", said.flat(), rest), make("p", "res", "= ", set.result(i))] : [])];
  }
  function way(i) {
    const origin = book.origin(i);
    switch (origin[0]) {
      case "d": {
        const law = book.law(i), regime = book.texts[origin[2]], chosen = origin[5].length ? book.texts[book.one(origin[5], book.rowOf(i))] : "";
        return [make("p", "yn law", `${law[1]}${regime && !law[1].includes(regime) ? `, ${regime}` : ""}`), ...set.worked(i),
          ...(chosen ? [make("p", "yn", `as stated: ${chosen}`)] : [])];
      }
      case "t": return sum(i);
      case "s": return [make("p", "yn", `Found by iteration: ${book.texts[origin[1]]}.`), make("p", "yn", `${capital(book.texts[origin[2]])}, ${origin[3]} iterations.`)];
      case "j": return [make("p", "yn", `Met where the margin is not negative: ${book.value(i) ? "met" : "not met"}.`)];
      case "p": return [make("p", "yn", `Of the program: ${book.texts[origin[1]]}.`)];
      default: return stated(i);
    }
  }
  function sourced(i) {
    const law = book.law(i);
    return law ? [make("p", "yn", `Source: ${law[2]}. Range: ${law[3]}.`)] : [];
  }

  // --- the tree of what it came from
  function node(got) {
    const { i } = got, li = make("li"), label = [got.letter ? [set.letter(got.letter), " = "] : "", got.sign ? `${got.sign} ` : "", make("b", "", set.shown(i)), " ", make("span", "wh", who(i))];
    if (met.has(i)) {
      const again = button("shown above", "quiet", () => {
        const there = met.get(i).querySelector("button, [tabindex]") || met.get(i);
        there.focus();
        there.scrollIntoView({ block: "nearest" });
      });
      li.append(make("span", "nd", label), again, reference(i));
      return li;
    }
    met.set(i, li);
    const turn = button([make("span", "tw"), label], "nd", () => {
      const open = turn.getAttribute("aria-expanded") !== "true";
      turn.setAttribute("aria-expanded", String(open));
      if (!li.held) {
        const inner = book.from(i);
        li.held = make("div", "in1", way(i), inner.length ? branch(inner) : null);
        li.append(li.held);
      }
      li.held.hidden = !open;
      set.reachable(li.held);
    });
    turn.setAttribute("aria-expanded", "false");
    li.append(turn, reference(i));
    if (book.place(i)) { turn.click(); }
    return li;
  }
  function branch(all) {
    const ul = make("ul", "tree"), terms = all.filter((got, k) => all.findIndex((one) => one.i === got.i) === k);
    const put = (a, b) => terms.slice(a, b).forEach((got) => ul.append(node(got)));
    put(0, DEEP);
    if (terms.length > DEEP) {
      const li = make("li"), more = button(`and ${terms.length - DEEP} more`, "quiet", () => {
        const last = li.previousElementSibling;
        li.remove();
        put(DEEP);
        last.nextElementSibling.querySelector("button, a").focus();
      });
      li.append(more);
      ul.append(li);
    }
    return ul;
  }
  function unfold(tree) {  // down to the inputs, nearest first
    const left = [...tree.querySelectorAll("button.nd")];
    let count = 0;
    while (left.length && count < ALL) {
      const turn = left.shift();
      if (turn.getAttribute("aria-expanded") === "false") { turn.click(); count += 1; }
      left.push(...turn.parentNode.querySelectorAll(":scope > .in1 > .tree > li > button.nd"));
    }
    tell(left.length ? `Unfolded the nearest ${ALL}` : "Unfolded to the inputs");
  }

  function heading(text, count, ...rest) {
    return make("h3", "", text, count === null ? "" : make("span", "ct", ` ${count}`), rest);
  }
  function origins(i) {
    const terms = book.from(i), tree = terms.length ? branch(terms) : null;
    const distinct = new Set(terms.map((got) => got.i)).size;
    return tree ? [heading("From", distinct, button("unfold to the inputs", "quiet", () => unfold(tree))), tree] : [];
  }
  function users(i) {
    const all = book.into(i), ul = make("ul", "plain");
    const put = (a, b) => all.slice(a, b).forEach((k) => ul.append(make("li", "", make("span", "", make("b", "", set.shown(k)), " ", make("span", "wh", who(k))), reference(k))));
    put(0, FEW);
    const more = all.length > FEW ? button(`and ${all.length - FEW} more`, "quiet", () => {
      more.remove();
      put(FEW);
      ul.children[FEW].querySelector("a").focus();
    }) : null;
    return [heading("Into", all.length), all.length ? ul : make("p", "yn", "Nothing further: the calculation ends here."), more];
  }
  function each(i) {
    if (!book.caseOf(i) || book.cases.length < 2) { return []; }
    const body = make("tbody"), head = make("thead", "", make("tr", "", ["case", "value", "line"].map((text, k) => { const th = make("th", k ? "v" : "", text); th.scope = "col"; return th; })));
    for (const [held] of book.cases) {
      const k = book.inCase(i, held), th = make("th", "", held);
      th.scope = "row";
      const parent = k !== undefined && book.caseOf(k) !== held ? make("span", "wh", ` as in ${book.caseOf(k)}`) : null;
      th.append(parent || "");
      body.append(make("tr", held === book.caseOf(i) ? "on" : "", th, make("td", "v", k === undefined ? "\u2013" : set.shown(k)), make("td", "v", k === undefined ? "" : reference(k))));
    }
    return [heading("The same in each case", null), make("table", "cs", head, body)];
  }

  // --- the whole
  function asText(i) {
    const told = make("div", "", way(i)), said = [...told.children].map((part) => {
      part.querySelectorAll(".over").forEach((over) => over.remove());
      return part.textContent.trim();
    });
    return `${book.line(i) ? `${book.line(i)}  ` : ""}${capital(book.words(i))}, ${about(i)}: ${set.shown(i).textContent}. ${said.join(" ")} [${book.id(i)}]`.replace(/\s+/g, " ");
  }
  function show(i, marks) {
    current = i;
    met = new Map([[i, panel]]);
    const title = make("h2", "", capital(book.words(i))), line = book.line(i), a = line && make("a", "linked", `line ${line}`);
    title.tabIndex = -1;
    if (line) { a.href = `#line-${line}`; }
    const gone = make("div", "gone"), where = button("Where does this go?", "", () => {
      const on = where.getAttribute("aria-pressed") !== "true";
      where.setAttribute("aria-pressed", String(on));
      marks(on ? i : null, gone);
    });
    gone.hidden = true;
    where.setAttribute("aria-pressed", "false");
    where.dataset.do = "where";
    const copy = button("Copy as text", "", () => copied(asText(i)));
    copy.dataset.do = "copy";
    const full = set.printed(i) && set.printed(i).unit !== book.unit(i) ? make("p", "yn full", "that is ", set.amount(i, 9)) : null;
    panel.replaceChildren(title, make("p", "what", about(i)), make("p", "id", book.id(i), a ? [", ", a] : ""), make("p", "value", set.shown(i)), full || "",
      make("div", "sum", way(i)), make("div", "", sourced(i)), make("p", "deeds", copy, where), gone, ...[...origins(i), ...users(i), ...each(i)].filter(Boolean));
    return title;
  }
  function copied(text) {
    const done = () => tell("Copied as text");
    const older = () => {
      const area = make("textarea", "off-sight");
      area.value = text;
      document.body.append(area);
      area.select();
      const copiedSo = document.execCommand("copy");
      area.remove();
      tell(copiedSo ? "Copied as text" : "The browser does not allow copying");
    };
    if (navigator.clipboard && isSecureContext) { navigator.clipboard.writeText(text).then(done, older); } else { older(); }
  }
  function walkTree(event) {  // arrows walk the tree
    const turn = event.target.closest(".tree button.nd");
    if (!turn) { return false; }
    const all = [...panel.querySelectorAll(".tree button.nd")].filter((one) => one.offsetParent), k = all.indexOf(turn), open = turn.getAttribute("aria-expanded") === "true";
    if (event.key === "ArrowDown") { all[k + 1]?.focus(); } else if (event.key === "ArrowUp") { all[k - 1]?.focus(); }
    else if (event.key === "ArrowRight") { if (open) { all[k + 1]?.focus(); } else { turn.click(); } }
    else if (event.key === "ArrowLeft") { if (open) { turn.click(); } else { turn.closest("ul").closest("li")?.querySelector("button.nd")?.focus(); } }
    else { return false; }
    return true;
  }
  return { show, walkTree, about, current: () => current };
}

"use strict";
// The ledger that the page carries: ids, values, where numbers come from and what uses them. Knows nothing of any page.
const MINUS = "\u2212";

function readBook(told) {
  const { texts, columns, laws, forms, files } = told;
  const starts = [], owner = [];
  columns.forEach((column, k) => {
    starts.push(owner.length);
    column[6].forEach(() => owner.push(k));
  });
  const count = owner.length, coherent = new Map(Object.entries(told.coherent));
  const one = (list, k) => (list.length === 1 ? list[0] : list[k]);
  const columnOf = (i) => columns[owner[i]];
  const rowOf = (i) => i - starts[owner[i]];
  const parents = new Map(told.cases);

  const rowName = (i) => {
    const rows = columnOf(i)[5], r = rowOf(i);
    return typeof rows === "string" ? String(Number(rows) + r) : texts[rows[r]];
  };
  const name = (i) => texts[columnOf(i)[0]];
  const caseOf = (i) => texts[columnOf(i)[2]];
  const of = (i) => texts[columnOf(i)[3]];  // a component whose trials are the rows, or a trial, as #3
  const trialOf = (i) => (of(i).startsWith("#") ? of(i).slice(1) : of(i) ? rowName(i) : "");
  const subject = (i) => (of(i) && !of(i).startsWith("#") ? of(i) : rowName(i));
  const stem = (i) => {
    const [group, ...rest] = name(i).split(".");
    return [group, subject(i), rest.join(".")].filter(Boolean).join(".");
  };
  const idIn = (i, held) => stem(i) + (held ? `@${held}` : "") + (trialOf(i) ? `#${trialOf(i)}` : "");
  const id = (i) => idIn(i, caseOf(i));
  let ids = null;
  function find(text) {
    if (!ids) {
      ids = new Map();
      for (let i = count - 1; i >= 0; i -= 1) { ids.set(id(i), i); }
    }
    return ids.get(text);
  }

  // Lines are stated as their section and number; a section that goes on is not said again.
  const lines = [];
  columns.forEach((column) => {
    let section = "";
    const said = column[7] ? column[7].split(" ") : [];
    column[6].forEach((_, r) => {
      const word = said[r] && said[r] !== "-" ? said[r] : "";
      if (word.includes(".")) { section = word.split(".")[0]; }
      lines.push(!word || word.includes(".") ? word : `${section}.${word}`);
    });
  });

  // Where a number comes from: [{i, sign, letter}]
  const input = (view, r) => (typeof view === "number" ? view + r : one(view, r));
  let proved = null;
  function standing(held, wanted, row) {
    if (!proved) {
      proved = new Map();
      columns.forEach((column, k) => {
        if (texts[column[3]]) { return; }
        column[6].forEach((_, r) => proved.set(`${column[0]} ${column[2]} ${rowName(starts[k] + r)}`, starts[k] + r));
      });
    }
    return proved.get(`${wanted} ${held} ${row}`);
  }
  function from(i) {
    const origin = columnOf(i)[8], r = rowOf(i);
    switch (origin[0]) {
      case "d": return origin[3].map((view, k) => ({ i: input(view, r), letter: laws[origin[1]][4][k][1], name: laws[origin[1]][4][k][0] }))
        .filter((got) => got.i >= 0);
      case "t": {
        const [, , , terms, view, into, signs] = origin, found = [];
        for (let k = 0; k < terms; k += 1) {
          const at = input(view, k);
          if (one(into, k) === r && at >= 0) { found.push({ i: at, sign: signs[k] === "-" ? MINUS : "+" }); }
        }
        return found;
      }
      case "s": {
        const column = columnOf(i), proofs = texts[column[3]] ? [] : origin[4].map((wanted) => standing(column[2], wanted, rowName(i)));
        return [...proofs.filter((at) => at !== undefined).map((at) => ({ i: at, proof: true })),
          ...origin[5].map((view) => ({ i: input(view, r) })).filter((got) => got.i >= 0)];
      }
      case "j": return [{ i: input(origin[1], r) }].filter((got) => got.i >= 0);
      default: return [];
    }
  }

  let uses = null;
  function into(i) {
    if (!uses) {
      uses = new Map();
      for (let k = 0; k < count; k += 1) {
        for (const got of from(k)) {
          if (got.proof) { continue; }
          const held = uses.get(got.i);
          if (!held) { uses.set(got.i, [k]); } else if (held[held.length - 1] !== k) { held.push(k); }
        }
      }
    }
    return uses.get(i) || [];
  }
  function reach(i) {
    const seen = new Set(), left = [i];
    while (left.length) {
      for (const next of into(left.pop())) {
        if (!seen.has(next)) { seen.add(next); left.push(next); }
      }
    }
    return [...seen].sort((a, b) => a - b);
  }

  // What rests on inputs alone belongs to the cases that build upon its own; what was solved does not.
  const resting = new Map();
  function restsOnInputs(k) {
    if (!resting.has(k)) {
      resting.set(k, false);
      const column = columns[k], kind = column[8][0];
      const views = kind === "d" ? column[8][3] : [];
      const sources = views.flatMap((view) => (typeof view === "number" ? [view] : view)).filter((at) => at >= 0).map((at) => owner[at]);
      resting.set(k, !texts[column[3]] && ("gcl".includes(kind) || (kind === "d" && sources.every(restsOnInputs))));
    }
    return resting.get(k);
  }
  function inCase(i, wanted) {
    const own = find(idIn(i, wanted));
    if (own !== undefined) { return own; }
    for (let held = parents.get(wanted); held; held = parents.get(held)) {
      const found = find(idIn(i, held));
      if (found !== undefined && restsOnInputs(owner[found])) { return found; }
    }
    return undefined;
  }

  function place(i) {  // [file, line, column] of what was stated
    const origin = columnOf(i)[8];
    if (!"gcl".includes(origin[0])) { return null; }
    const [file, line, column] = one(origin[1], rowOf(i)).split(":");
    return [files[file], Number(line), Number(column)];
  }
  return {
    count, texts, laws, forms, cases: told.cases, find, id, name, caseOf, subject, trialOf, from, into, reach, inCase, place, one, rowOf,
    // in the unit in which formulas are worked, or in SI
    value: (i, si) => (si || !coherent.has(texts[columnOf(i)[4]]) ? columnOf(i)[6][rowOf(i)] : Number((columnOf(i)[6][rowOf(i)] * coherent.get(texts[columnOf(i)[4]])[1]).toPrecision(13))),
    unit: (i, si) => (!si && coherent.has(texts[columnOf(i)[4]]) ? coherent.get(texts[columnOf(i)[4]])[0] : texts[columnOf(i)[4]]),
    words: (i) => texts[columnOf(i)[1]] || name(i).split(".").slice(1).join(" ").replace(/_/g, " "),
    origin: (i) => columnOf(i)[8],
    line: (i) => lines[i],
    onLine: (address) => { const i = lines.indexOf(address); return i < 0 ? undefined : i; },
    law: (i) => (columnOf(i)[8][0] === "d" ? laws[columnOf(i)[8][1]] : null),
    figures: (i) => one(columnOf(i)[8][4], rowOf(i)),
  };
}

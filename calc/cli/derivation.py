"""``headtrace trace``: one number's derivation, or the numbers of a column."""

from __future__ import annotations

import argparse
import contextlib
import json
import re
import sys
from collections.abc import Generator, Iterator
from pathlib import Path
from typing import Any

from calc import pipeline
from calc.account import Account
from calc.cli.call import WrongCall
from calc.cli.outcome import Outcome
from calc.cli.progress import Progress
from calc.ledger import Ledger, Spot, number_of, stated_as, trace, traced
from calc.ledger.trace import FORMAT as TRACE_FORMAT
from calc.problems import NotConverged, Unresolved, nearest
from calc.project import BASE

LONGEST = 200
"""Characters of an id; a longer one has no near neighbour."""
FRAMES, DEEPEST = 5, 20_000
"""Calls within calls for one step of a derivation, and the most that are allowed."""
_COLUMN = re.compile(r"(?P<name>[\w-]+\.[\w-]+)(?:@(?P<case>[\w-]+))?", re.ASCII)


def run(asked: argparse.Namespace) -> Outcome:
    """Print the tree of a number, or the ids and values of a column."""
    progress = Progress()
    try:
        account = pipeline.account(Path(asked.folder), progress.say)
    finally:
        progress.wipe()
    with room_for(account.ledger):
        found = wanted(account, asked.id)
        if asked.json:
            return Outcome(said=json.dumps(as_data(account.ledger, asked.id, found), indent=1, allow_nan=False))
        if isinstance(found, Spot):
            return Outcome(said="\n".join(trace(account.ledger, found)))
        return Outcome(said="\n".join(stated_as(spot) for spot in found))


@contextlib.contextmanager
def room_for(ledger: Ledger) -> Generator[None, None, None]:
    """Let a tree be as deep as the ledger is long: each case may build upon the one before."""
    before = sys.getrecursionlimit()
    sys.setrecursionlimit(min(before + FRAMES * len(ledger.columns), DEEPEST))
    try:
        yield
    finally:
        sys.setrecursionlimit(before)


def wanted(account: Account, id_: str) -> Spot | list[Spot]:
    """Return the number of an id, or the numbers of a column; without ``@case`` it is of the base case.

    Raises
    ------
    WrongCall
        If nothing has this id; the hint is the nearest.
    NotConverged
        If its case has no solution.
    """
    try:
        return account.ledger.spot(id_)
    except Unresolved:
        rows = column_spots(account.ledger, id_)
        if not rows:
            raise _unknown(account, id_) from None
        return rows


def as_data(ledger: Ledger, id_: str, found: Spot | list[Spot]) -> dict[str, Any]:
    """Return a derivation as `calc.ledger.traced` documents it; of a column, ``numbers`` without derivations."""
    if isinstance(found, Spot):
        return traced(ledger, found)
    return {"format": TRACE_FORMAT, "id": id_, "numbers": [number_of(spot) for spot in found]}


def column_spots(ledger: Ledger, wanted: str) -> list[Spot]:
    """Return the numbers of a column such as ``pipes.flow@peak``, each from the nearest case that states it."""
    match = _COLUMN.fullmatch(wanted[:LONGEST])
    if match is None:
        return []
    name, case = match["name"], match["case"] or ""
    if not case and not ledger.find(name):
        case = BASE
    found: dict[str, Spot] = {}
    for column in ledger.find(name, case):
        for k, row in enumerate(column.rows):
            found.setdefault(row, Spot(column, k))
    return list(found.values())


def _unknown(account: Account, wanted: str) -> Exception:
    case = wanted.partition("@")[2].partition("#")[0] or BASE
    held = account.cases.get(case)
    if held is not None and not held.solution.converged:
        return NotConverged(
            f"no number has the id '{wanted[:LONGEST]}', and the case '{case}' has no solution: {held.solution.reason}"
        )
    hint = ""
    if len(wanted) <= LONGEST:
        full = wanted if "@" in wanted else f"{wanted}@{BASE}"
        hint = nearest(full, list(_ids(account.ledger, case)))
    return WrongCall(f"no number has the id '{wanted[:LONGEST]}'", "group.row.quantity@case", hint)


def _ids(ledger: Ledger, case: str) -> Iterator[str]:
    """Yield ids that may have been meant: those of the case, or all where there is no such case."""
    cases = {column.case for column in ledger.columns}
    for column in ledger.columns:
        if case not in cases or column.case in (case, BASE, ""):
            yield f"{column.name}@{column.case}"
            yield from (column.id(k) for k in range(min(len(column.rows), LONGEST)))

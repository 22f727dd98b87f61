"""``headtrace tables``: the shipped tables, with the source and place of every value."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Mapping

from calc.cli.call import WrongCall
from calc.cli.layout import columns
from calc.cli.outcome import Outcome
from calc.problems import nearest
from calc.project import shipped
from calc.project.shipped import Row


def run(asked: argparse.Namespace) -> Outcome:
    """Print one table, or the names of all."""
    if asked.name is None:
        return Outcome(said="\n".join(columns([[name, words] for name, (words, _) in TABLES.items()], "<<", 0)))
    if asked.name not in TABLES:
        known = list(TABLES)
        hint = nearest(asked.name[:100], known)
        raise WrongCall(f"there is no table '{asked.name}'", f"one of {', '.join(known)}", hint)
    words, rows = TABLES[asked.name]
    return Outcome(said="\n".join([words, "", *rows()]))


def _fittings() -> list[str]:
    return _coefficients(shipped.fittings(), "K", "K in reverse")


def _ends() -> list[str]:
    return _coefficients(shipped.ends(), "entry", "exit")


def _coefficients(table: Mapping[str, Row], forward: str, reverse: str) -> list[str]:
    rows = [["kind", forward, reverse, "what it is", "source", "place"]]
    for name, row in table.items():
        one, other = row.forward, row.reverse
        source = one.basis.source
        rows.append([name, one.written, other.written, row.title.text, source, str(one.mark)])
    return columns(rows, "<>><<<", 0)


def _defaults() -> list[str]:
    rows = [["path", "value", "source", "place"]]
    for path, stated in shipped.defaults().items():
        rows.append([path, stated.written, stated.basis.source, str(stated.mark)])
    return columns(rows, "<<<<", 0)


TABLES: dict[str, tuple[str, Callable[[], list[str]]]] = {
    "fittings": (
        "Kinds of fitting with their loss coefficients, on the velocity head in the fitting's bore",
        _fittings,
    ),
    "ends": ("Shapes of reservoir ends: the coefficient when water leaves the reservoir and when it enters", _ends),
    "defaults": ("Values in force where a project states none", _defaults),
}
"""By name: what a table holds, and its lines."""

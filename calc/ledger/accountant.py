"""The evaluator that keeps the books: laws on columns, each result entered with its origin."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

from calc.equation import Labels, Law, Leaf, select
from calc.equation.evaluation import evaluate_leaf, part
from calc.equation.law import gives, takes
from calc.equation.slope import value_of
from calc.kinds import Kind
from calc.ledger.column import ABSENT, Array, Column, Rows, View
from calc.ledger.ledger import Ledger
from calc.ledger.origin import Combined, Derived


class Accountant:
    """Applies laws to views of columns and enters the results under one case.

    Parameters
    ----------
    ledger : Ledger
        Where results are entered.
    case : str
        Id of the case; empty for numbers that belong to none.
    of : str
        The component whose history is being entered, or the trial, as ``#3``; empty otherwise.
    """

    def __init__(self, ledger: Ledger, case: str, of: str = "") -> None:
        self.ledger = ledger
        self.case = case
        self.of = of

    def apply(self, name: str, law: Law, /, *, by: Labels | None = None, **inputs: View) -> View:
        """Apply a law to views and enter the result; rows for which the law defines no value stay absent."""
        owner = next((view for view in inputs.values() if not view.shared), None)
        shared = owner is None
        rows = next(iter(inputs.values())).rows[:1] if owner is None else owner.rows
        arrays: dict[str, Any] = {n: view.values for n, view in inputs.items()}
        if by is not None:
            arrays["by"] = by
        governed: dict[tuple[str, str], tuple[Leaf, list[Rows]]] = {}
        for at, leaf, label in select(law, arrays, len(rows)):
            if leaf is not None:
                governed.setdefault((leaf.name, label), (leaf, []))[1].append(at)
        columns: list[Column] = []
        which = np.full(len(rows), ABSENT, dtype=np.int64)
        place = np.zeros(len(rows), dtype=np.int64)
        for (_, label), (leaf, pieces) in governed.items():
            at = np.sort(np.concatenate(pieces))
            which[at], place[at] = len(columns), np.arange(len(at))
            chosen = tuple(by.said(int(k)) for k in at) if by is not None else ()
            cited = {n: inputs[n].take(at) for n in takes(leaf)}
            origin = Derived(law, leaf, label, cited, chosen)
            values = np.broadcast_to(
                value_of(evaluate_leaf(leaf, {n: part(arrays[n], at) for n in takes(leaf)})), at.shape
            )
            held = [rows[int(k)] for k in at]
            kind = gives(leaf).kind
            columns.append(self.ledger.enter(name, kind, held, values, origin, case=self.case, of=self.of))
        return View(tuple(columns), which, place, tuple(rows), shared and bool(columns))

    def gather(self, value: View, at: Rows, rows: tuple[str, ...], /) -> View:
        """Return one number for each of ``rows``."""
        return value.take(at, rows)

    def total(self, name: str, kind: Kind, value: View, into: Rows, rows: tuple[str, ...], /) -> View:
        """Enter for each of ``rows`` the sum of the numbers that go into it; 0 where none does."""
        return View.whole(self.combine(name, "sum", value, into, rows, words="all its parts", kind=kind))

    def combine(
        self,
        name: str,
        operation: str,
        terms: View,
        into: Rows,
        rows: Sequence[str],
        *,
        words: str,
        signs: npt.ArrayLike | None = None,
        kind: Kind | None = None,
    ) -> Column:
        """Enter a sum, or the largest or least, of signed terms for each row; of their kind unless told."""
        signed = np.ones(len(into)) if signs is None else np.asarray(signs, dtype=np.float64)
        origin = Combined(operation, terms, into, signed, words)
        kind = kind or terms.sources[0].kind
        values = combined(operation, signed * terms.values, into, len(rows))
        return self.ledger.enter(name, kind, rows, values, origin, case=self.case, of=self.of)


def combined(operation: str, terms: Array, into: Rows, count: int) -> Array:
    """Return the sum, largest, least or largest size of terms for each of ``count`` rows."""
    if operation == "sum":
        return np.bincount(into, terms, count).astype(np.float64)
    if operation == "largest size":
        terms = np.abs(terms)
    at = np.minimum if operation == "least" else np.maximum
    values = np.full(count, np.inf if operation == "least" else -np.inf)
    at.at(values, into, terms)
    return values

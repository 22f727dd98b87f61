"""How many figures numbers need on the screen's page, so that its formulas can be repeated by hand.

The rule is that of the worked lines: the printed formula on the printed operands gives the printed result, within one
unit of its last figure. Here it is found for whole columns at once.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import numpy.typing as npt

from calc.equation.evaluation import evaluate_leaf
from calc.equation.law import takes
from calc.ledger import Column, Converted, Derived, Given, Ledger, Library
from calc.ledger.column import ABSENT, View
from calc.report.conversion import empirical
from calc.report.derivation import MOST_FIGURES, RESULT_FIGURES, SMALLEST
from calc.report.formats import shortest
from calc.report.numbers import last_place, read_back, written

Coherent = Mapping[str, tuple[str, float]]
Counts = npt.NDArray[np.int64]
Array = npt.NDArray[np.float64]
CARRIED, SPARE = 9, 2
"""Significant figures that a number has at least; the ledger beside the page holds all. A few more are carried
than are put in."""
STATED = 15
"""Likewise of what was stated, so that it is written in any unit as it was stated."""
RESIDUALS = ("closing_error", "imbalance")
"""Quantities that are written as less than `SMALLEST` where they are; their figures carry a minus sign."""


def operand_figures(column: Column, coherent: Coherent) -> Counts:
    """Return for each row the figures that its operands need to give its result as printed; shape (n,).

    Parameters
    ----------
    column : Column
    coherent : mapping
        By SI unit, the unit in which formulas are worked and the factor to it, where they differ; an empirical law is
        worked in SI.

    Raises
    ------
    EquationError
        If the law of the column finds no root.
    """
    origin = column.origin
    if not isinstance(origin, Derived):
        return np.full(len(column.rows), RESULT_FIGURES)
    units = {} if empirical(origin.leaf) else coherent
    unit, factor = units.get(column.kind.unit, (column.kind.unit, 1.0))
    said = [
        written(value, column.kind, shortest(value * factor, unit, RESULT_FIGURES)) for value in column.values.tolist()
    ]
    result = np.array([read_back(text) for text in said])
    within = np.array([1.01 * last_place(text) for text in said])
    residual = column.quantity.endswith(RESIDUALS) & (np.abs(column.values * factor) < SMALLEST)
    result, within = np.where(residual, 0.0, result), np.where(residual, SMALLEST, within)
    needed, open_ = np.full(len(result), MOST_FIGURES), np.arange(len(result))
    for figures in range(RESULT_FIGURES, MOST_FIGURES):
        if not len(open_):
            break
        operands = {name: _rounded(origin.inputs[name], units, open_, figures) for name in takes(origin.leaf)}
        again = np.broadcast_to(np.asarray(evaluate_leaf(origin.leaf, operands), dtype=np.float64), open_.shape)
        holds = np.abs(again - result[open_]) <= within[open_]
        needed[open_[holds]] = figures
        open_ = open_[~holds]
    return np.where(residual, -needed, needed)


def carried_figures(ledger: Ledger, needed: Mapping[int, Counts]) -> dict[int, Counts]:
    """Return for each column, by its place in the ledger, the figures with which the page carries its rows.

    Parameters
    ----------
    ledger : Ledger
    needed : mapping
        By place of the column, what `operand_figures` found.
    """
    places = {id(column): k for k, column in enumerate(ledger.columns)}
    found = {
        k: np.full(len(column.rows), STATED if isinstance(column.origin, Given | Converted | Library) else CARRIED)
        for k, column in enumerate(ledger.columns)
    }
    for k, column in enumerate(ledger.columns):
        if not isinstance(column.origin, Derived):
            continue
        for name in takes(column.origin.leaf):
            view = column.origin.inputs[name]
            figures = np.abs(needed[k])
            wanted = SPARE + (np.full(len(view.rows), figures.max(initial=0)) if view.shared else figures)
            for source, held in enumerate(view.sources):
                taken = view.which == source
                np.maximum.at(found[places[id(held)]], view.at[taken], wanted[taken])
    return found


def rounded(value: float, figures: int) -> float:
    """Return a number of so many significant figures."""
    return float(f"{value:.{figures}g}")


def _rounded(view: View, units: Coherent, rows: Counts, figures: int) -> Array:
    """Return an input as it would be put in, for some rows; one number serves all where the view is shared."""
    factors = [units.get(source.kind.unit, ("", 1.0))[1] for source in view.sources]
    scaled = view.values * np.array([1.0 if k == ABSENT else factors[k] for k in view.which.tolist()])
    values = scaled if view.shared else scaled[rows]
    return np.array([rounded(value, figures) for value in values.tolist()])

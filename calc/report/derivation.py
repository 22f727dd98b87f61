"""Worked lines: a formula in symbols, with numbers put in, and its result, so that it can be repeated by hand."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc.equation import Leaf
from calc.equation.evaluation import evaluate_leaf
from calc.equation.law import takes
from calc.ledger import Combined, Derived, Spot
from calc.report.composer import FROM, INTO, Sheet, cited, inputs_of
from calc.report.document import Cite, Formula, Letter, Number, Part, Parts, Row, TableColumn
from calc.report.formats import shortest
from calc.report.numbers import Format, last_place, read_back, written

RESULT_FIGURES = 6
MOST_FIGURES = 16
SMALLEST = 1e-9
"""Results of differences below this are residuals: written as less than a bound, not as rounding noise."""
MOST_TERMS = 10

COLUMNS = (
    TableColumn(("statement",), role="statement"),
    TableColumn(("value",), align="right", width=25, edge=True, role="value"),
    TableColumn(("",), width=13, role="unit"),
    FROM,
    INTO,
)


@dataclass(frozen=True)
class Worked:
    """A worked line before it is given an address."""

    statement: Parts
    value: Number
    unit: str


def worked(spot: Spot) -> Worked:
    """Return the worked line of a number in coherent SI units.

    Operands carry as many figures as it takes for the printed formula on the printed operands to give the printed
    result within one unit of its last figure.
    """
    origin, unit = spot.column.origin, spot.column.kind.unit
    result = _result(spot)
    if isinstance(origin, Derived):
        leaf = origin.leaf
        operands = _operands(origin, leaf, spot.row, result)
        title = leaf.title
        label = origin.label
        said: tuple[Part, ...] = (title, f" ({label})" if label and label not in title else "")
        return Worked((*said, Formula(leaf, operands, result)), result, unit)
    if isinstance(origin, Combined):
        return Worked(_sum(origin, spot.row), result, unit)
    return Worked((spot.column.quantity.replace("_", " "),), result, unit)


def _result(spot: Spot) -> Number:
    unit = spot.column.kind.unit
    form = shortest(spot.value, unit, RESULT_FIGURES)
    if spot.column.quantity.endswith(("closing_error", "imbalance")) and abs(spot.value) < SMALLEST:
        form = Format(unit, decimals=9, bound=SMALLEST)
    return Number(spot.id, form, written(spot.value, spot.column.kind, form))


def _operands(origin: Derived, leaf: Leaf, row: int, result: Number) -> dict[str, Number]:
    operands: dict[str, Number] = {}
    for figures in range(RESULT_FIGURES, MOST_FIGURES + 1):
        operands = {}
        for name in takes(leaf):
            found = origin.inputs[name].spot(row)
            if found is not None:
                operands[name] = _operand(Spot(*found), figures)
        if _repeats(leaf, operands, result):
            return operands
    return operands


def _operand(spot: Spot, figures: int) -> Number:
    kind = spot.column.kind
    form = shortest(spot.value, kind.unit, figures)
    return Number(spot.id, form, written(spot.value, kind, form), with_unit=True)


def _repeats(leaf: Leaf, operands: dict[str, Number], result: Number) -> bool:
    """Return whether the printed operands give the printed result."""
    printed = {name: np.array([read_back(number.text)]) for name, number in operands.items()}
    again = float(np.asarray(evaluate_leaf(leaf, printed)).reshape(-1)[0])
    if result.text.startswith("<"):
        return abs(again) < read_back(result.text)
    return abs(again - read_back(result.text)) <= 1.01 * last_place(result.text)


def _sum(origin: Combined, row: int) -> Parts:
    terms = [k for k, into in enumerate(origin.into.tolist()) if into == row]
    if not terms:
        return (f"{origin.operation.capitalize()}: {origin.words}. There are none.",)
    parts: list[Part] = [f"{origin.operation.capitalize()}: {origin.words}. "]
    for position, k in enumerate(terms[:MOST_TERMS]):
        found = origin.terms.spot(k)
        if found is None:
            continue
        spot = Spot(*found)
        unit = spot.column.kind.unit
        form = Format(unit, significant=RESULT_FIGURES)
        number = Number(spot.id, form, written(spot.value, spot.column.kind, form), with_unit=True)
        if origin.operation == "sum":
            parts.append(("− (" if origin.signs[k] < 0 else "+ (" if spot.value < 0 else "+ ") if position else "")
            parts += [number, ") " if position and (spot.value < 0 or origin.signs[k] < 0) else " "]
        else:
            parts += [", " if position else "", number]
    if len(terms) > MOST_TERMS:
        parts.append(" and the rest")
    return tuple(part for part in parts if part != "")


UNTABLED = ("factor_turbulent", "factor_laminar", "limit_head", "speed", "friction_gradient")
"""Derived quantities that no table of a case holds: worked in front of the first line that needs them."""


def lines(sheet: Sheet, spot: Spot, *before: Part) -> list[Row]:
    """Return a worked number as the next line, after those it rests on that stand nowhere else."""
    ledger, rows = sheet.composer.ledger, []
    for ref in inputs_of(ledger, spot):
        needed = ledger.spot(ref)
        derived = isinstance(needed.column.origin, Derived) and needed.column.quantity in UNTABLED
        if derived and ref not in sheet.composer.addresses:
            rows.append(line(sheet, needed, *before))
    return [*rows, line(sheet, spot, *before)]


def line(sheet: Sheet, spot: Spot, *before: Part) -> Row:
    """Return a worked number as the next line of a section."""
    held = worked(spot)
    return sheet.row(
        (*before, *held.statement),
        (held.value,),
        (held.unit,),
        (cited(sheet.composer.ledger, [spot]),),
        (Cite((spot.id,), into=True),),
        refs=(spot.id,),
    )


def symbols_of(leaf: Leaf) -> list[tuple[Letter, str, str]]:
    """Return the symbols of a law with their words and units, the result first."""
    every = [leaf.gives, *takes(leaf).values()]
    return [(Letter(symbol.text), symbol.words, symbol.kind.unit) for symbol in every]

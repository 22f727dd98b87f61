"""Worked lines: a formula in symbols, with numbers put in, and its result, so that it can be repeated by hand."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from calc.equation import Leaf
from calc.equation.evaluation import evaluate_leaf
from calc.equation.law import takes
from calc.ledger import Combined, Derived, Spot
from calc.report.composer import FROM, INTO, Sheet, cited, inputs_of
from calc.report.conversion import empirical, law_into, worth_id
from calc.report.display import FIELD_OF, SI, Display
from calc.report.document import Cite, Formula, Letter, Number, Part, Parts, Row, TableColumn, named_unit
from calc.report.formats import shortest
from calc.report.numbers import Format, last_place, read_back, shown, written

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


def worked(spot: Spot, display: Display) -> Worked:
    """Return the worked line of a number in the coherent units of a display; an empirical law is worked in SI.

    Operands carry as many figures as it takes for the printed formula on the printed operands to give the printed
    result within one unit of its last figure.
    """
    origin = spot.column.origin
    if isinstance(origin, Derived) and empirical(origin.leaf):
        display = SI
    unit = display.coherent(spot.column.kind)
    result = _result(spot, unit)
    if isinstance(origin, Derived):
        leaf = origin.leaf
        operands = _operands(origin, spot.row, result, display)
        said: tuple[Part, ...] = (leaf.title, f" ({origin.remark})" if origin.remark else "")
        return Worked((*said, Formula(leaf, operands, result)), result, unit)
    if isinstance(origin, Combined):
        return Worked(_sum(origin, spot.row, display), result, unit)
    return Worked((spot.column.quantity.replace("_", " "),), result, unit)


def _result(spot: Spot, unit: str) -> Number:
    kind = spot.column.kind
    value = shown(spot.value, kind, unit)
    form = shortest(value, unit, RESULT_FIGURES)
    if spot.column.quantity.endswith(("closing_error", "imbalance")) and abs(value) < SMALLEST:
        form = Format(unit, decimals=9, bound=SMALLEST)
    return Number(spot.id, form, written(spot.value, kind, form))


def _operands(origin: Derived, row: int, result: Number, display: Display) -> dict[str, Number]:
    found = {name: origin.inputs[name].spot(row) for name in takes(origin.leaf)}
    spots = {name: Spot(*one) for name, one in found.items() if one is not None}
    return repeating(origin.leaf, spots, result, display)


def repeating(leaf: Leaf, spots: Mapping[str, Spot], result: Number, display: Display) -> dict[str, Number]:
    """Return the operands of a formula in coherent units, with the figures it takes to give the printed result."""
    operands: dict[str, Number] = {}
    for figures in range(RESULT_FIGURES, MOST_FIGURES + 1):
        operands = {name: operand(spot, display.coherent(spot.column.kind), figures) for name, spot in spots.items()}
        if _repeats(leaf, operands, result):
            return operands
    return operands


def operand(spot: Spot, unit: str, figures: int) -> Number:
    """Return a number as put into a formula, with the figures it has, at most so many."""
    kind = spot.column.kind
    form = shortest(shown(spot.value, kind, unit), unit, figures)
    return Number(spot.id, form, written(spot.value, kind, form), with_unit=True)


def _repeats(leaf: Leaf, operands: dict[str, Number], result: Number) -> bool:
    """Return whether the printed operands give the printed result."""
    printed = {name: np.array([read_back(number.text)]) for name, number in operands.items()}
    again = float(np.asarray(evaluate_leaf(leaf, printed)).reshape(-1)[0])
    if result.text.startswith("<"):
        return abs(again) < read_back(result.text)
    return abs(again - read_back(result.text)) <= 1.01 * last_place(result.text)


def _sum(origin: Combined, row: int, display: Display) -> Parts:
    terms = [k for k, into in enumerate(origin.into.tolist()) if into == row]
    if not terms:
        return (f"{origin.operation.capitalize()}: {origin.words}. There are none.",)
    parts: list[Part] = [f"{origin.operation.capitalize()}: {origin.words}. "]
    for position, k in enumerate(terms[:MOST_TERMS]):
        found = origin.terms.spot(k)
        if found is None:
            continue
        spot = Spot(*found)
        form = Format(display.coherent(spot.column.kind), significant=RESULT_FIGURES)
        number = Number(spot.id, form, written(spot.value, spot.column.kind, form), with_unit=True)
        if origin.operation == "sum":
            taken = origin.signs[k] < 0
            parts.append("− (" if taken else ("+ (" if spot.value < 0 else "+ ") if position else "")
            parts += [number, ") " if taken or (position and spot.value < 0) else " "]
        else:
            parts += [", " if position else "", number]
    if len(terms) > MOST_TERMS:
        parts.append(" and the rest")
    return tuple(part for part in parts if part != "")


UNTABLED = ("factor_turbulent", "factor_laminar", "speed", "friction_gradient")
"""Derived quantities that no table of a case holds: worked in front of the first line that needs them."""


def lines(sheet: Sheet, spot: Spot, *before: Part) -> list[Row]:
    """Return a worked number as the next line, after those it rests on that stand nowhere else."""
    ledger, rows = sheet.composer.ledger, []
    for ref in inputs_of(ledger, spot):
        needed = ledger.spot(ref)
        derived = isinstance(needed.column.origin, Derived) and needed.column.quantity in UNTABLED
        if derived and ref not in sheet.composer.addresses:
            rows += _worked_with_conversions(sheet, needed, *before)
    return [*rows, *_worked_with_conversions(sheet, spot, *before)]


def _worked_with_conversions(sheet: Sheet, spot: Spot, *before: Part) -> list[Row]:
    """Return a worked line; of an empirical law, its operands put into SI before it and its result back after it."""
    composer, origin = sheet.composer, spot.column.origin
    if composer.display.system == SI.system or not isinstance(origin, Derived) or not empirical(origin.leaf):
        return [line(sheet, spot, *before)]
    taken = [origin.inputs[name].spot(spot.row) for name in takes(origin.leaf)]
    rows = [row for one in taken if one for row in converted(sheet, Spot(*one), SI.coherent(one[0].kind), *before)]
    rows.append(line(sheet, spot, *before))
    if id(spot.column) in composer.taken_by_laws:
        rows += converted(sheet, spot, composer.display.coherent(spot.column.kind), *before)
    return rows


def line(sheet: Sheet, spot: Spot, *before: Part) -> Row:
    """Return a worked number as the next line of a section."""
    held = worked(spot, sheet.composer.display)
    return sheet.row(
        (*before, *held.statement),
        (held.value,),
        (held.unit,),
        (cited(sheet.composer.ledger, [spot]),),
        (Cite((spot.id,), into=True),),
        refs=(spot.id,),
    )


def converted(sheet: Sheet, spot: Spot, unit: str, *before: Part) -> list[Row]:
    """Return the conversion of a number into a unit as the next line, unless it stands in that unit already.

    It is converted from the coherent unit of the display, or from SI where an empirical law gave it.
    """
    composer, kind, origin = sheet.composer, spot.column.kind, spot.column.origin
    units = sheet.worked_in.setdefault(spot.id, [])
    if not units:
        in_si = isinstance(origin, Derived) and empirical(origin.leaf)
        units.append((SI if in_si else composer.display).coherent(kind))
    if unit in units:
        return []
    coherent = composer.display.coherent(kind)
    source = coherent if coherent in units else units[0]
    units.append(unit)
    law, form = law_into(unit, kind), _form_into(composer.display, spot, unit)
    result = Number(spot.id, form, written(spot.value, kind, form))
    spots = {"amount": spot}
    if "worth" in law.takes:
        spots["worth"] = composer.ledger.spot(worth_id(unit))
    operands: dict[str, Number] = {}
    for figures in range(RESULT_FIGURES, MOST_FIGURES + 1):
        operands = {name: operand(one, source, figures) for name, one in spots.items()}
        if _repeats(law, operands, result):
            break
    quantity = "margin" if spot.column.quantity.endswith("-margin") else spot.column.quantity.replace("_", " ")
    words = (quantity.capitalize(), " in ", named_unit(unit))
    stands = tuple(one.id for one in spots.values())
    cells = ((*before, *words, Formula(law, operands, result)), (result,), (named_unit(unit),))
    return [sheet.row(*cells, (Cite(stands),), ("",))]


def _form_into(display: Display, spot: Spot, unit: str) -> Format:
    """Return the format of a converted number: as in the tables where they are in this unit."""
    for one in (display, *display.beside):
        form = one.usual(spot.column)
        if form.unit == unit:
            return form
    return shortest(shown(spot.value, spot.column.kind, unit), unit, RESULT_FIGURES)


def displayed(sheet: Sheet, spots: Iterable[Spot], *before: Part) -> list[Row]:
    """Return the first of each kind of number put into the units of the tables, where these are others."""
    rows: list[Row] = []
    seen: set[str] = set()
    for spot in spots:
        field = FIELD_OF.get(spot.column.kind)
        if field is None or field in seen:
            continue
        seen.add(field)
        for display in (sheet.composer.display, *sheet.composer.display.beside):
            rows += converted(sheet, spot, display.unit(field), *before)
    return rows


def symbols_of(leaf: Leaf, display: Display) -> list[tuple[Letter, str, str]]:
    """Return the symbols of a law with their words and the units in which it is worked, the result first."""
    display = SI if empirical(leaf) else display
    every = [leaf.gives, *takes(leaf).values()]
    return [(Letter(symbol.text), symbol.words, display.coherent(symbol.kind)) for symbol in every]

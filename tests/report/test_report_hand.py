"""The check by hand: every printed line repeated from the printed figures, by code that knows nothing of the program.

Formulas are evaluated by the tests' own arithmetic, numbers read by the tests' own reader, roots found by SciPy.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import replace
from decimal import Decimal

import numpy as np
import pytest
from arithmetic import compute
from pages import Figures, figure_of, numbers, parts_within, plain, tables
from scipy.optimize import brentq
from works import NAMES, work

from calc import kinds
from calc.equation import Equation, Expression, Implicit, Literal, Operation, Symbol, linear
from calc.report.document import Document, Formula, Number, Part, Row, Table
from calc.report.numbers import written
from calc.solve.rules import RULES

FEET, GPM = 0.3048**-3, 60 / (231 * 0.0254**3)
"""Cubic feet in a cubic metre; US gallons a minute in one cubic metre a second: 231 cubic inches of 25.4 mm, exact."""
CONVERSIONS = ("number_in_unit", "degrees_celsius", "degrees_fahrenheit")
EVERY = pytest.mark.parametrize("name", NAMES)


def formulas(document: Document) -> Iterator[tuple[Row, Formula]]:
    for held in tables(document):
        for row in held.rows:
            for cell in row.cells:
                for part in parts_within(cell):
                    if isinstance(part, Formula) and part.operands is not None:
                        yield row, part


def repeated(part: Formula) -> float:
    """Put the printed operands into the printed formula."""
    assert part.operands is not None
    values = {name: Figures.read(number.text).value for name, number in part.operands.items()}
    if isinstance(part.law, Implicit):
        text = linear(part.law.residual.expression, lambda name: name)
        unknown = part.law.unknown
        return float(brentq(lambda x: compute(text, {**values, unknown: x}), 1e-4, 10.0, xtol=1e-15))
    return compute(linear(part.law.expression, lambda name: name), values)


def apart(part: Formula) -> float:
    """Return by how many units of its last place the printed result is off; of a bound, the share that is used."""
    assert part.result is not None
    result, again = Figures.read(part.result.text), repeated(part)
    return abs(again) / result.value if result.below else abs(again - result.value) / result.last


@EVERY
def test_every_worked_line_can_be_repeated_from_the_page(name: str) -> None:
    off = {row.address: apart(part) for row, part in formulas(work(name).document)}
    assert len(off) > 10
    assert {address: units for address, units in off.items() if units > 1.001} == {}


def test_a_worked_line_with_one_wrong_figure_is_not_repeated() -> None:
    for _, part in formulas(work("laws").document):
        assert part.result is not None
        figures = Figures.read(part.result.text)
        if not figures.below and figures.value:
            wrong = written(figures.value + 3 * figures.last, kinds.NUMBER, replace(part.result.form, unit=""))
            assert apart(replace(part, result=replace(part.result, text=wrong))) > 1.001


COHERENT = {
    "m": "ft",
    "m/s": "ft/s",
    "m/s²": "ft/s²",
    "m³/s": "ft³/s",
    "m²/s": "ft²/s",
    "Pa": "lbf/ft²",
    "Pa·s": "lbf·s/ft²",
    "kg/m³": "slug/ft³",
    "s/m²": "s/ft²",
}
"""The coherent units of foot, slug and second; pure numbers and kelvin have none of their own."""


def coherent(name: str, law: Equation, symbol: Symbol) -> str:
    """Return the unit of a symbol on a worked line: foot and slug in US packages, unless the law has SI units in it."""
    si = symbol.kind.unit
    in_si = not name.endswith("-us") or re.search(r"[0-9] (m|K|Pa|Pa·s|kg/m³|m³/s)\b", prose(law.expression))
    return si if in_si else COHERENT.get(si, si)


def prose(node: Expression) -> str:
    """Return the numbers of a formula with their units, in any order."""
    match node:
        case Operation(args=args):
            return ", ".join(map(prose, args))
        case Literal(text=text, unit=unit):
            return f"{text} {unit}"
        case _:
            return ""


@EVERY
def test_operands_are_in_coherent_units(name: str) -> None:
    for row, part in formulas(work(name).document):
        if part.law.name in CONVERSIONS:
            continue
        law: Equation = part.law.residual if isinstance(part.law, Implicit) else part.law
        for operand, number in (part.operands or {}).items():
            assert number.form.unit == coherent(name, law, law.takes[operand]), row.address
        assert part.result is not None
        assert part.result.form.unit == coherent(name, law, part.law.gives)


@EVERY
def test_the_value_of_a_worked_line_is_the_result_of_its_formula(name: str) -> None:
    for row, part in formulas(work(name).document):
        value = figure_of(row.cells[1])
        assert value is not None
        assert value == part.result
        assert plain(row.cells[2]) == value.form.unit


def test_every_law_and_regime_is_worked_somewhere() -> None:
    found = {part.law.name for name in NAMES for _, part in formulas(work(name).document)}
    assert found >= {
        *("density", "dynamic_viscosity", "kinematic_viscosity", "vapour_pressure", "atmospheric_pressure"),
        *("flow_each", "mean_velocity", "reynolds_number", "velocity_head", "head_loss", "closing_error"),
        *("colebrook_white", "swamee_jain", "haaland", "fixed", "laminar_factor", "hagen_poiseuille"),
        *("transition_factor", "factor_at_laminar_limit", "darcy_weisbach", "fitting_loss"),
        *("forward_coefficient", "reverse_coefficient", "pressure_head", "pressure", "scaled_value"),
        *("margin_below_limit", "margin_above_limit", "speed", "friction_gradient"),
        *("bend_coefficient", "sudden_widening", "sudden_narrowing", "gradual_widening", "gradual_narrowing"),
        *("steep_narrowing", "coefficient_of_kv", "coefficient_of_cv", "bore_within"),
    }


def terms_of(parts: tuple[Part, ...]) -> list[float]:
    """Read a sum as it stands: ``a + (−b) − (c)``."""
    terms, sign = [], 1.0
    for part in parts:
        if isinstance(part, str) and part.strip() in ("", "+", "−", "+ (", "− (", ")", ".", ","):
            sign = -1.0 if "−" in part else 1.0 if "+" in part else sign
        elif isinstance(part, Number):
            terms.append(sign * Figures.read(part.text).value)
            sign = 1.0
    return terms


@EVERY
def test_the_terms_of_a_sum_add_up_on_paper(name: str) -> None:
    for held in tables(work(name).document):
        for row in held.rows:
            if not plain(row.cells[0]).partition(": Sum")[0].startswith("Sum:"):
                continue
            terms = terms_of(row.cells[0])
            printed = [part for part in row.cells[0] if isinstance(part, Number)]
            value = figure_of(row.cells[1])
            assert value is not None
            total = Figures.read(value.text)
            half = sum(Figures.read(term.text).last / 2 for term in printed) + total.last / 2
            assert abs(sum(terms) - total.value) <= half * 1.001, row.address


def decimal(text: str) -> Decimal:
    return Decimal(text.replace("\u202f", "").replace("−", "-"))


@EVERY
def test_continuity_adds_up_in_the_printed_figures(name: str) -> None:
    document = work(name).document
    balanced = 0
    for held in tables(document, "continuity-"):
        full, printed, last = Decimal(0), Decimal(0), Decimal(1)
        terms = 0
        for row in held.rows:
            if row.tone == "group":
                full, printed, terms = Decimal(0), Decimal(0), 0
                continue
            exact, rounded = figure_of(row.cells[1]), figure_of(row.cells[2])
            assert exact is not None
            assert rounded is not None
            if row.tone == "proved":
                assert decimal(rounded.text) == printed, row.address
                assert abs(full) <= (Decimal("0.5") * terms + 1) * last
                assert exact.text.startswith("<")
                balanced += 1
            else:
                terms += 1
                last = Decimal(1).scaleb(decimal(exact.text).as_tuple().exponent)
                full += decimal(exact.text)
                printed += decimal(rounded.text)
    assert balanced == sum(
        len(work(name).account.project.junctions) for case in work(name).account.cases.values() if case.columns
    )


@EVERY
def test_head_less_losses_is_the_next_head(name: str) -> None:
    document = work(name).document
    walked = 0
    for held in tables(document, "energy-"):
        head: Figures | None = None
        for row in held.rows:
            if row.tone == "group":
                head = None
                continue
            if row.tone == "proved":
                error = figure_of(row.cells[3])
                assert error is not None
                assert error.text.startswith("<")
                continue
            told = figure_of(row.cells[3])
            assert told is not None
            here = Figures.read(told.text)
            if head is not None:
                losses = [figure_of(cell) for cell in row.cells[1:3]]
                lost = sum(Figures.read(loss.text).value for loss in losses if loss is not None)
                assert len([loss for loss in losses if loss is not None]) == 2
                assert abs(head.value - lost - here.value) <= 2.001 * here.last, row.address
                walked += 1
            head = here
    assert walked


@EVERY
def test_margins_follow_from_the_printed_figures(name: str) -> None:
    document, account = work(name).document, work(name).account
    senses = {one.criterion.title: one.criterion.sense for one in account.verdicts}
    judged = [(row, row.cells[2], row.cells[3], row.cells[4], plain(row.cells[0])) for row in first_page(document)]
    for one in account.verdicts:
        for held in tables(document, f"verdicts-{one.id}"):
            judged += [(row, row.cells[2], row.cells[3], row.cells[5], one.criterion.title) for row in held.rows]
    for row, found, limit, margin, title in judged:
        figures = [figure_of(cell) for cell in (found, limit, margin)]
        if None in figures:
            assert "not judged" in plain(row.cells[6])
            continue
        value, bound, left = (Figures.read(number.text) for number in figures if number is not None)
        by_hand = bound.value - value.value if senses[title] == "at most" else value.value - bound.value
        assert abs(by_hand - left.value) <= 1.001 * left.last, row.address


def first_page(document: Document) -> list[Row]:
    return [row for held in tables(document, "criteria") for row in held.rows]


@EVERY
def test_tables_of_a_case_agree_with_themselves(name: str) -> None:
    document = work(name).document
    for held in tables(document, "pipes-"):
        for row in held.rows:
            start, end, lost = (figure_of(row.cells[k]) for k in (2, 4, 5))
            if start and end and lost:
                by_hand = Figures.read(start.text).value - Figures.read(end.text).value
                assert abs(by_hand - Figures.read(lost.text).value) <= 1.5001e-3, row.address
    for held in tables(document, "losses-"):
        heads = [plain(one.head) for one in held.columns]
        places = [heads.index(head) for head in ("friction", "fittings", "loss")]
        for row in held.rows:
            parts = [figure_of(row.cells[k]) for k in places]
            if None not in parts:
                friction, fittings, lost = (Figures.read(part.text).value for part in parts if part is not None)
                assert abs(friction + fittings - lost) <= 1.5001e-3, row.address
    for held in tables(document, "junctions-"):
        for row in held.rows:
            if all(figure_of(row.cells[k]) for k in (1, 2, 3)):
                head, elevation, pressure = (Figures.read(plain(row.cells[k])).value for k in (1, 2, 3))
                assert abs(head - elevation - pressure) <= 1.0001e-3 + 0.0051, row.address


RULE = re.compile(
    r"(?P<rule>[a-z ]+?) on (?P<uses>[\d, ]+?)(?:, s = (?P<step>\S+(?: × \S+)?) (?:m|ft))?(?:; accepted)?"
)


def trial_tables(name: str) -> Iterator[tuple[str, Table]]:
    account, document = work(name).account, work(name).document
    for case in account.cases.values():
        if case.solution.trials is not None:
            yield case.id, next(tables(document, f"trials-{case.id}"))


def with_rounding(law: Equation, printed: dict[str, Figures]) -> tuple[float, float]:
    """Return what a law gives on printed figures, and how far half a last place of each may move it."""
    text = linear(law.expression, lambda operand: operand)
    values = {operand: figures.value for operand, figures in printed.items()}
    again = compute(text, values)
    moved = [compute(text, {**values, name: one.value + one.last / 2}) - again for name, one in printed.items()]
    return again, 1.01 * sum(map(abs, moved))


@EVERY
def test_each_trial_head_follows_from_the_printed_rows(name: str) -> None:
    for _, held in trial_tables(name):
        heads, imbalances = [], []
        for row in held.rows:
            head, imbalance = figure_of(row.cells[3]), figure_of(row.cells[-2])
            assert head is not None
            assert imbalance is not None
            match = RULE.fullmatch(plain(row.cells[-1]))
            if match:
                uses = [int(use) - 1 for use in match["uses"].split(", ")]
                values = {"step": Figures.read(match["step"])} if match["step"] else {}
                for operand, column, place in RULES[match["rule"]].places:
                    if place is not None:
                        values[operand] = (heads if column == "head" else imbalances)[uses[place]]
                again, rounding = with_rounding(RULES[match["rule"]].equation, values)
                read = Figures.read(head.text)
                allowed = min(0.501 * read.last + rounding, 10 * read.last)
                assert abs(again - read.value) <= allowed, (row.address, again, head.text)
            else:
                assert plain(row.cells[-1]).startswith(("level of ", "start")), row.address
            heads.append(Figures.read(head.text))
            imbalances.append(Figures.read(imbalance.text))


@EVERY
def test_flows_of_a_trial_add_up_to_its_imbalance(name: str) -> None:
    account = work(name).account
    for case, held in trial_tables(name):
        drawn = account.ledger.find("junctions.withdrawal", case)
        scale = {"L/s": 1000, "m³/s": 1, "gpm": GPM, "ft³/s": FEET}[held.columns[4].unit]
        withdrawal = float(drawn[0].values[0]) * scale if drawn else 0.0
        for row in held.rows:
            flows = [Figures.read(plain(cell)) for cell in row.cells[4:-2]]
            imbalance = Figures.read(plain(row.cells[-2])).value
            half = sum(flow.last / 2 for flow in flows)
            total = sum(flow.value for flow in flows) - withdrawal
            assert abs(total - imbalance) <= half * 1.001 + 1e-6, row.address


@EVERY
def test_every_trial_lies_between_the_ends_of_its_bracket(name: str) -> None:
    account = work(name).account
    for case, held in trial_tables(name):
        trials = account.cases[case].solution.trials
        assert trials is not None
        assert len(held.rows) == len(trials.head)
        bracketed = 0
        for t, row in enumerate(held.rows):
            low, head, high = trials.low_end[t], trials.head[t], trials.high_end[t]
            printed = [figure_of(cell) for cell in row.cells[1:4]]
            if not np.isnan([low, high]).any():
                assert low < head < high, row.address
                assert all(printed)
                read = [Figures.read(number.text) for number in printed if number is not None]
                assert read[0].value - read[0].last <= read[2].value <= read[1].value + read[1].last
                bracketed += 1
        assert bracketed or len(held.rows) < 3


def test_a_number_printed_anywhere_can_be_read() -> None:
    for name in NAMES:
        for number in numbers(work(name).document):
            Figures.read(number.text)

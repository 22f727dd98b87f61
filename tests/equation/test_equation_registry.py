"""What holds for every equation, and so for every new one."""

from __future__ import annotations

import re
from collections import defaultdict
from typing import Any

import numpy as np
import pytest
from arithmetic import compute
from declared import equations, for_each_kind, modules, symbols

from calc.equation import Equation, Slope, linear
from calc.equation.dimension import Dimensional, dimension_of
from calc.equation.expression import terms_of

EQUATIONS = equations()
PLAUSIBLE = {
    "pure number": (0.5, 3.0),
    "length": (50.0, 2000.0),
    "bore": (0.1, 0.9),
    "roughness": (1e-5, 1e-3),
    "elevation": (10.0, 300.0),
    "head": (1.0, 90.0),
    "flow": (0.01, 0.5),
    "velocity": (0.2, 3.0),
    "acceleration": (9.7, 9.9),
    "kinematic viscosity": (8e-7, 2e-6),
    "dynamic viscosity": (8e-4, 2e-3),
    "density": (950.0, 1000.0),
    "pressure": (1e4, 9e5),
    "temperature": (275.0, 370.0),
    "gradient": (1e-3, 1e-2),
    "angle": (0.1, 0.7),
    "thickness": (0.004, 0.009),
    "rise of head lost with flow": (50.0, 5000.0),
}
BY_LETTER = {
    "Re": (5e3, 5e6),
    "Re_L": (1900.0, 2100.0),
    "Re_T": (3900.0, 4200.0),
    "f": (0.01, 0.05),
    "f_0": (0.01, 0.05),
    "f_L": (0.03, 0.035),
    "f_T": (0.036, 0.05),
    "F_b": (-0.5, -0.3),
    "F_c": (-0.2, -0.1),
}


def named(one: Equation) -> str:
    return one.name


def samples(one: Equation, count: int = 7) -> dict[str, np.ndarray[Any, np.dtype[np.float64]]]:
    generator = np.random.default_rng(20261102)
    return {
        name: generator.uniform(*BY_LETTER.get(symbol.text, PLAUSIBLE[symbol.kind.name]), count)
        for name, symbol in one.takes.items()
    }


def test_the_walk_finds_what_each_package_declares() -> None:
    names = {one.name for one in EQUATIONS}
    assert {"darcy_weisbach", "colebrook_white_residual", "vapour_pressure", "closing_error"} <= names
    assert {"margin_below_limit", "scaled_value", "halved", "difference", "verification_difference"} <= names
    declared = {one.name for module in modules() for one in vars(module).values() if isinstance(one, Equation)}
    assert declared <= names
    assert len(names) >= 45


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_it_balances(one: Equation) -> None:
    read = one.body(**{name: Dimensional(symbol.kind.dimension) for name, symbol in one.takes.items()})
    assert dimension_of(read) == one.gives.kind.dimension


def test_those_for_any_kind_balance_in_every_kind() -> None:
    for one in for_each_kind():
        one.check()


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_it_says_where_it_comes_from_and_where_it_holds(one: Equation) -> None:
    assert one.title
    assert not one.title.endswith(".")
    assert one.source.key
    assert one.source.text
    assert one.valid
    assert one.gives.words
    assert all(symbol.words for symbol in one.takes.values())
    assert terms_of(one.expression) == set(one.takes)


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_its_slope_is_the_central_difference(one: Equation) -> None:
    inputs = samples(one)
    value = one.body(**inputs)
    for name, x in inputs.items():
        slope = one.body(**{**inputs, name: Slope(x, np.ones_like(x))}).slope
        step = 1e-5 * np.abs(x)
        high, low = (one.body(**{**inputs, name: x + side * step}) for side in (1, -1))
        scale = np.maximum(np.abs(value / x), np.abs(slope))
        assert np.all(np.abs(slope - (high - low) / (2 * step)) <= 1e-6 * scale), name


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_an_array_gives_what_its_rows_give(one: Equation) -> None:
    inputs = samples(one)
    whole = one.body(**inputs)
    rows = [one.body(**{name: x[k : k + 1] for name, x in inputs.items()})[0] for k in range(7)]
    np.testing.assert_allclose(whole, rows, rtol=1e-14, atol=0)


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_its_printed_formula_gives_its_value(one: Equation) -> None:
    inputs = samples(one)
    text = linear(one.expression, lambda name: name)
    whole = one.body(**inputs)
    for k in range(7):
        again = compute(text, {name: float(x[k]) for name, x in inputs.items()})
        size = max(abs(float(x[k])) for x in inputs.values())
        assert again == pytest.approx(float(whole[k]), rel=1e-12, abs=1e-15 * size), text


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_its_printed_formula_with_numbers_put_in_gives_its_value(one: Equation) -> None:
    inputs = {name: float(x[0]) for name, x in samples(one).items()}
    text = linear(one.expression, lambda name: f"({inputs[name]!r})")
    value = one.body(**{name: np.array([x]) for name, x in inputs.items()})[0]
    assert compute(text, {}) == pytest.approx(value, rel=1e-12, abs=1e-15 * max(map(abs, inputs.values())))


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_another_body_prints_another_formula(one: Equation) -> None:
    other = Equation(
        one.name, one.title, one.gives, one.takes, lambda **given: 1.01 * one.body(**given), one.source, ""
    )
    assert other.formula() != one.formula()
    inputs = {name: float(x[0]) for name, x in samples(one).items()}
    printed, value = compute(linear(other.expression, lambda name: name), inputs), one.body(**inputs)
    assert printed == pytest.approx(1.01 * float(value), rel=1e-12, abs=1e-15 * max(map(abs, inputs.values())))


@pytest.mark.parametrize("one", EQUATIONS, ids=named)
def test_pi_is_printed_as_such(one: Equation) -> None:
    assert not re.search(r"3\.14|6\.28|0\.785", one.formula())


def test_a_letter_means_one_thing() -> None:
    meanings = defaultdict(set)
    for symbol in (*symbols(), *(part for one in EQUATIONS for part in (one.gives, *one.takes.values()))):
        meanings[symbol.text].add(symbol.words)
    assert {letter: words for letter, words in meanings.items() if len(words) > 1} == {}


def test_a_letter_has_one_kind_unless_its_equation_serves_any_kind() -> None:
    kinds = defaultdict(set)
    for symbol in (*symbols(), *(part for one in EQUATIONS for part in (one.gives, *one.takes.values()))):
        kinds[symbol.text].add(symbol.kind.name)
    generic = {part.text for one in for_each_kind() for part in (one.gives, *one.takes.values())}
    generic |= {"Δ", "x_1", "x_2"}  # the second opinion compares flows and heads alike
    assert {letter for letter, found in kinds.items() if len(found) > 1} <= generic

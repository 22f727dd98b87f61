"""What may be declared as an equation, and what is refused while it is declared."""

# ruff: noqa: ANN401 - bodies are read with several types of operand

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from arithmetic import compute

from calc.equation import Equation, Expression, Reference, Slope, Symbol, Unit, equation, linear
from calc.equation.reading import Reading
from calc.kinds import AREA, FLOW, LENGTH, NUMBER, TIME, VELOCITY, Kind
from calc.problems import EquationError

SOURCE = Reference("test", "A test")
X, Y = Symbol("x", LENGTH, "a length"), Symbol("y", LENGTH, "another length")
N = Symbol("n", NUMBER, "a number")


def declare(body: Callable[..., Any], kind: Kind = LENGTH, **takes: Symbol) -> Equation:
    body.__doc__ = body.__doc__ or "A law under test."
    return equation(gives=Symbol("z", kind, "result"), source=SOURCE, valid="always", **takes)(body)


def test_a_balanced_body_stands() -> None:
    def area(*, x: Any, y: Any) -> Any:
        """Area of a rectangle."""
        return x * y

    made = declare(area, AREA, x=X, y=Y)
    assert made.title == "Area of a rectangle"
    assert made.formula() == "z = x * y"
    assert made.body(x=np.array([2.0]), y=np.array([3.0])) == 6.0


def test_an_omitted_division_is_refused_with_both_dimensions() -> None:
    def loss(*, x: Any, y: Any) -> Any:
        return x * y

    with pytest.raises(EquationError, match=r"gives a length in m, but the body has m²"):
        declare(loss, x=X, y=Y)


@pytest.mark.parametrize(
    "body",
    [
        lambda *, x, n: x + n,
        lambda *, x, n: n - x,
        lambda *, x, n: x**0.5 * n,
        lambda *, x, n: x**n,
        lambda *, x, n: n**x,
        lambda *, x, n: np.log(x) * n * x,
        lambda *, x, n: np.exp(x) * n * x,
    ],
)
def test_what_has_no_dimension_is_refused(body: Callable[..., Any]) -> None:
    body.__doc__ = "A law under test."
    with pytest.raises(EquationError):
        declare(body, x=X, n=N)


def test_an_empirical_law_divides_by_its_unit_first() -> None:
    metre = Unit("m", LENGTH.dimension)

    def law(*, x: Any) -> Any:
        return (x / metre) ** 0.63 * metre

    assert declare(law, x=X).body(x=np.array([3.0]))[0] == pytest.approx(3**0.63, rel=1e-15)


def test_a_body_that_branches_is_refused() -> None:
    def truth(*, x: Any, y: Any) -> Any:
        return x if x else y  # noqa: FURB110 - the trap itself

    def order(*, x: Any, y: Any) -> Any:
        return x if x > y else y  # noqa: FURB136 - the trap itself

    def both(*, x: Any, y: Any) -> Any:
        return x and y

    def largest(*, x: Any, y: Any) -> Any:
        return max(x, y)

    for body in (truth, order, both, largest):
        with pytest.raises(EquationError):
            declare(body, x=X, y=Y)


def test_a_function_without_a_reading_is_refused() -> None:
    def law(*, x: Any, y: Any) -> Any:
        return np.hypot(x, y)

    with pytest.raises(EquationError, match="may not use hypot; it may use add"):
        declare(law, x=X, y=Y)


def test_positional_inputs_are_refused_when_declared_and_when_called() -> None:
    def law(x: Any, y: Any) -> Any:
        return x + y

    with pytest.raises(EquationError, match="keyword-only"):
        declare(law, x=X, y=Y)

    def named(*, x: Any, y: Any) -> Any:
        return x + y

    with pytest.raises(TypeError):
        declare(named, x=X, y=Y).body(1.0, 2.0)


def test_symbols_and_parameters_are_the_same_in_the_same_order() -> None:
    def law(*, x: Any, y: Any) -> Any:
        return x + y

    with pytest.raises(EquationError, match="parameters"):
        declare(law, y=Y, x=X)
    with pytest.raises(EquationError, match="parameters"):
        declare(law, x=X)


def test_two_inputs_with_one_letter_are_refused() -> None:
    def law(*, x: Any, y: Any) -> Any:
        return x + y

    with pytest.raises(EquationError, match="share a letter"):
        declare(law, x=X, y=Symbol("x", LENGTH, "another length"))


def test_an_input_never_used_is_refused() -> None:
    def law(*, x: Any, y: Any) -> Any:
        del y
        return 2 * x

    with pytest.raises(EquationError, match="never used: y"):
        declare(law, x=X, y=Y)


def test_a_body_without_inputs_is_refused() -> None:
    def law(*, n: Any) -> Any:
        del n
        return 2.0

    with pytest.raises(EquationError, match="does not depend"):
        declare(law, NUMBER, n=N)


def test_a_body_without_a_title_is_refused() -> None:
    def law(*, x: Any) -> Any:
        return 2 * x

    law.__doc__ = None
    with pytest.raises(EquationError, match="title"):
        equation(gives=X, source=SOURCE, valid="always", x=Y)(law)


def test_a_long_number_in_a_body_is_refused() -> None:
    def law(*, x: Any) -> Any:
        return 1.2345678901 * x

    with pytest.raises(EquationError, match="too long a number"):
        declare(law, x=X)


def test_pi_is_known_by_its_value() -> None:
    def law(*, x: Any) -> Any:
        return np.pi * x**2 / 4

    made = declare(law, AREA, x=X)
    assert made.formula() == "z = pi * x^2 / 4"
    assert compute(made.formula().partition(" = ")[2], {"x": 2.0}) == pytest.approx(math.pi, rel=1e-15)


@pytest.mark.parametrize(
    ("body", "text", "value"),
    [
        (lambda *, x, y: x - (y - x), "x - (y - x)", 3.0),
        (lambda *, x, y: x / (y / x) / x * x, "x / (y / x) / x * x", 4.0),
        (lambda *, x, y: -(x + y), "-(x + y)", -3.0),
        (lambda *, x, y: np.abs(-x - y), "abs(-x - y)", 3.0),
        (lambda *, x, y: (x * y) / (2 * x), "x * y / (2 * x)", 0.5),
        (lambda *, x, y: np.sqrt(x * y), "sqrt(x * y)", math.sqrt(2.0)),
        (lambda *, x, y: x * (y / x) ** -2, "x * (y / x)^-2", 8.0),
        (lambda *, x, y: x * (x / y) ** (y / x), "x * (x / y)^(y / x)", 2 * math.sqrt(2.0)),
        (lambda *, x, y: x * (-2) ** (y / y), "x * (-2)^(y / y)", -4.0),
        (lambda *, x, y: -((x / y) ** 2) * x, "-(x / y)^2 * x", -8.0),
        (lambda *, x, y: np.square(x + y) / x, "(x + y)^2 / x", 4.5),
    ],
)
def test_brackets_stand_where_they_must(body: Callable[..., Any], text: str, value: float) -> None:
    body.__doc__ = "A law under test."
    made = declare(body, x=X, y=Y)
    assert linear(made.expression, lambda name: name) == text
    assert compute(text, {"x": 2.0, "y": 1.0}) == pytest.approx(value, rel=1e-15)
    assert made.body(x=np.array([2.0]), y=np.array([1.0]))[0] == pytest.approx(value, rel=1e-15)


def test_a_value_alone_has_no_reading_of_its_own() -> None:
    with pytest.raises(EquationError, match="has no sense for add"):
        Reading() + 1.0
    with pytest.raises(EquationError, match="has no prose"):
        linear(Expression(), str)


@pytest.mark.parametrize(
    ("body", "slope"),
    [
        (lambda *, x, y: -x * y / y, -1.0),
        (lambda *, x, y: np.square(x) / y, 4.0),
        (lambda *, x, y: np.sqrt(x * y), 0.5 * math.sqrt(0.5)),
        (lambda *, x, y: np.log(x / y) * y, 0.5),
        (lambda *, x, y: np.log10(x / y) * y, 0.5 / math.log(10)),
        (lambda *, x, y: np.exp(x / y) * y, math.exp(2)),
        (lambda *, x, y: np.abs(-x) * y / y, 1.0),
        (lambda *, x, y: y * 2 ** (x / y), 4 * math.log(2)),
    ],
)
def test_every_operation_has_its_slope(body: Callable[..., Any], slope: float) -> None:
    body.__doc__ = "A law under test."
    made = declare(body, x=X, y=Y)
    got = made.body(x=Slope(np.array([2.0]), np.ones(1)), y=np.array([1.0]))
    assert got.slope[0] == pytest.approx(slope, rel=1e-14)


def test_a_kind_of_another_dimension_cannot_slip_in() -> None:
    def law(*, x: Any, t: Any) -> Any:
        return x / t

    made = declare(law, VELOCITY, x=X, t=Symbol("t", TIME, "a time"))
    assert str(made.gives.kind.dimension) == "m s⁻¹"
    with pytest.raises(EquationError, match="gives a flow"):
        declare(law, FLOW, x=X, t=Symbol("t", TIME, "a time"))

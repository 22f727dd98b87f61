"""Laws that are more than one equation: regimes, choices, roots, and their slopes."""

# ruff: noqa: ANN401 - bodies are read with several types of operand

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from calc.equation import (
    ARRAYS,
    Bound,
    Choice,
    Implicit,
    Labels,
    Reference,
    Regimes,
    Slope,
    Symbol,
    equation,
    evaluate,
    select,
    value_of,
)
from calc.kinds import NUMBER
from calc.problems import EquationError

SOURCE = Reference("test", "A test")
X, Y, Z = (Symbol(letter, NUMBER, f"the number {letter}") for letter in "xyz")
LIMIT = Symbol("b", NUMBER, "a bound")


@equation(gives=Y, source=SOURCE, valid="always", x=X)
def doubled(*, x: Any) -> Any:
    """Twice."""
    return 2 * x


@equation(gives=Y, source=SOURCE, valid="always", x=X)
def squared(*, x: Any) -> Any:
    """Square."""
    return x**2


@equation(gives=Z, source=SOURCE, valid="always", y=Y, x=X)
def square_root_residual(*, y: Any, x: Any) -> Any:
    """Square root, zero at the root."""
    return y**2 - x


@equation(gives=Y, source=SOURCE, valid="always", x=X)
def guess(*, x: Any) -> Any:
    """First guess."""
    return (1 + x) / 2


ROOT = Implicit("root", "Square root", square_root_residual, "y", Y, guess)
PARTS = Regimes(
    "parts",
    "By size",
    "x",
    (Bound(0.0, strict=True), Bound("limit")),
    (None, doubled, squared),
    ("none", "small", "large"),
)


def test_a_bound_belongs_to_the_regime_that_begins_there_unless_strict() -> None:
    x = np.array([-1.0, 0.0, 1e-300, 2.999, 3.0, 4.0])
    got = value_of(evaluate(PARTS, {"x": x, "limit": np.array([3.0])}))
    np.testing.assert_array_equal(got, [np.nan, np.nan, 2e-300, 5.998, 9.0, 16.0])


def test_a_bound_may_differ_from_row_to_row() -> None:
    got = value_of(evaluate(PARTS, {"x": np.array([2.0, 2.0]), "limit": np.array([1.0, 3.0])}))
    np.testing.assert_array_equal(got, [4.0, 4.0])
    labels = [label for _, _, label in select(PARTS, {"x": np.array([2.0, 2.0]), "limit": np.array([1.0, 3.0])}, 2)]
    assert labels == ["small", "large"]


def test_a_choice_picks_by_word_and_refuses_a_word_it_does_not_know() -> None:
    choice = Choice("pick", "Pick", "by", {"two": doubled, "square": squared, "nothing": None})
    words = ("square", "two", "nothing", "cube")
    x = np.array([3.0, 3.0, 3.0])
    got = value_of(evaluate(choice, {"x": x, "by": Labels(words, np.array([0, 1, 2]))}))
    np.testing.assert_array_equal(got, [9.0, 6.0, np.nan])
    one_for_all = value_of(evaluate(choice, {"x": x, "by": Labels(words, np.array([1]))}))
    np.testing.assert_array_equal(one_for_all, [6.0, 6.0, 6.0])
    with pytest.raises(EquationError, match="no law for 'cube'"):
        evaluate(choice, {"x": x, "by": Labels(words, np.array([3]))})


def test_no_rows_give_no_rows() -> None:
    choice = Choice("pick", "Pick", "by", {"two": PARTS})
    none = np.zeros(0)
    got = evaluate(choice, {"x": none, "limit": none, "by": Labels(("two",), np.zeros(0, dtype=np.int64))})
    assert value_of(got).shape == (0,)


def test_a_root_is_found_to_the_last_bits_with_its_slope() -> None:
    x = np.array([2.0, 9.0, 1e-6, 1e6])
    np.testing.assert_allclose(value_of(evaluate(ROOT, {"x": x})), np.sqrt(x), rtol=4e-16)
    got = evaluate(ROOT, {"x": Slope(x, np.ones(4))})
    assert isinstance(got, Slope)
    np.testing.assert_allclose(got.slope, 0.5 / np.sqrt(x), rtol=1e-14)


def test_a_root_that_cannot_be_found_is_loud() -> None:
    with pytest.raises(EquationError, match="no root found"), np.errstate(all="ignore"):
        evaluate(ROOT, {"x": np.array([-5.0])})


def test_what_is_not_a_number_stays_so() -> None:
    got = value_of(evaluate(ROOT, {"x": np.array([np.nan, 4.0])}))
    np.testing.assert_array_equal(got, [np.nan, 2.0])


def test_a_slope_passes_through_regimes_and_vanishes_where_it_does_not_matter() -> None:
    x = Slope(np.array([1.0, 5.0]), np.ones(2))
    got = evaluate(PARTS, {"x": x, "limit": np.array([3.0])})
    assert isinstance(got, Slope)
    np.testing.assert_array_equal(got.slope, [2.0, 10.0])


def test_arrays_gather_and_total() -> None:
    value = np.array([1.0, 2.0, 4.0])
    at = np.array([2, 0, 2])
    np.testing.assert_array_equal(value_of(ARRAYS.gather(value, at, ("a", "b", "c"))), [4.0, 1.0, 4.0])
    total = ARRAYS.total("sum", NUMBER, Slope(value, 10 * value), np.array([1, 1, 0]), ("a", "b", "c"))
    assert isinstance(total, Slope)
    np.testing.assert_array_equal(total.value, [4.0, 3.0, 0.0])
    np.testing.assert_array_equal(total.slope, [40.0, 30.0, 0.0])

"""The reading of a body as a dimension, which tells whether it balances."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from calc.equation.reading import Amount, Reading
from calc.kinds import Dimension
from calc.problems import EquationError

PURE = Dimension()


@dataclass(frozen=True, eq=False)
class Dimensional(Reading):
    """An operand known by its dimension alone."""

    dimension: Dimension

    def apply(self, operation: str, args: tuple[Any, ...]) -> Dimensional:
        """Return the dimension of the result, or raise EquationError where it has none."""
        first = dimension_of(args[0])
        match operation:
            case "add" | "subtract":
                second = dimension_of(args[1])
                if first != second:
                    raise EquationError(f"{operation}: {first} against {second}")
                found = first
            case "multiply":
                found = first.times(dimension_of(args[1]))
            case "divide":
                found = first.times(dimension_of(args[1]).power(Fraction(-1)))
            case "square":
                found = first.power(Fraction(2))
            case "sqrt":
                found = first.power(Fraction(1, 2))
            case "negative" | "abs":
                found = first
            case "power":
                found = _raised(first, args[1])
            case _:
                if first != PURE:
                    raise EquationError(f"{operation} of a quantity in {first}; divide by its unit first")
                found = PURE
        return Dimensional(found)


def dimension_of(operand: Any) -> Dimension:  # noqa: ANN401
    """Return the dimension of an operand; a literal is a pure number."""
    return operand.dimension if isinstance(operand, Dimensional | Amount) else PURE


def _raised(base: Dimension, exponent: Any) -> Dimension:  # noqa: ANN401
    if isinstance(exponent, Reading):
        if base != PURE or dimension_of(exponent) != PURE:
            raise EquationError(f"power: {base} to the power of an input; both must be pure numbers")
        return PURE
    whole = float(exponent).is_integer()
    if base != PURE and not whole:
        raise EquationError(f"power: {base} to the power {exponent}; divide by its unit first")
    return base.power(Fraction(exponent)) if whole else PURE

"""The reading of a body as a value with its slope: forward differentiation with one seed per element."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from calc.equation.reading import Amount, Reading
from calc.problems import EquationError

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Slope(Reading):
    """A value and its derivative with respect to the seed; arrays of one shape."""

    value: Array
    slope: Array

    def apply(self, operation: str, args: tuple[Any, ...]) -> Slope:  # noqa: PLR0911 - one rule a line
        """Return the value and slope of one operation by the rules of the calculus."""
        x, dx = _pair(args[0])
        y, dy = _pair(args[1]) if len(args) > 1 else (np.float64(0), np.float64(0))
        match operation:
            case "add":
                return Slope(x + y, dx + dy)
            case "subtract":
                return Slope(x - y, dx - dy)
            case "multiply":
                return Slope(x * y, dx * y + x * dy)
            case "divide":
                return Slope(x / y, (dx - x / y * dy) / y)
            case "power":
                return _power(x, dx, y, args[1])
            case "square":
                return Slope(x * x, 2 * x * dx)
            case "negative":
                return Slope(-x, -dx)
            case "abs":
                return Slope(np.abs(x), np.sign(x) * dx)
            case _:
                return _function(operation, x, dx)


def _function(operation: str, x: Any, dx: Any) -> Slope:  # noqa: ANN401
    match operation:
        case "sqrt":
            return Slope(root := np.sqrt(x), dx / (2 * root))
        case "ln":
            return Slope(np.log(x), dx / x)
        case "log10":
            return Slope(np.log10(x), dx / (x * np.log(10.0)))
        case "exp":
            return Slope(raised := np.exp(x), raised * dx)
        case "sin":
            return Slope(np.sin(x), np.cos(x) * dx)
        case _:
            raise EquationError(f"{operation} has no slope")


def _power(x: Any, dx: Any, y: Any, exponent: Any) -> Slope:  # noqa: ANN401
    value = x**y
    still = dx == 0  # at zero a power below one is steep without bound, and yet nothing moves
    slope = np.where(still, 0.0, y * np.where(still, 1.0, x) ** (y - 1) * dx)
    if isinstance(exponent, Slope):
        slope = slope + value * np.log(x) * exponent.slope
    return Slope(value, slope)


def _pair(operand: Any) -> tuple[Any, Any]:  # noqa: ANN401
    if isinstance(operand, Slope):
        return operand.value, operand.slope
    number = operand.number if isinstance(operand, Amount) else operand
    return np.asarray(number, dtype=np.float64), np.float64(0)


def value_of(operand: Any) -> Array:  # noqa: ANN401
    """Return the value of an operand, whichever reading it is."""
    return operand.value if isinstance(operand, Slope) else np.asarray(operand, dtype=np.float64)

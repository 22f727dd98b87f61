"""What every reading of an equation body has in common: it answers operators and a dozen ufuncs.

NumPy hands each operator to ``__array_ufunc__``; a reading names the operation and applies it in its own
sense. A body cannot branch: truth of a reading raises, for a Python ``if`` would silently take one side.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, ClassVar, NoReturn

import numpy as np

from calc.kinds import Dimension
from calc.problems import EquationError

OPERATIONS: dict[Any, str] = {
    np.add: "add",
    np.subtract: "subtract",
    np.multiply: "multiply",
    np.divide: "divide",
    np.power: "power",
    np.negative: "negative",
    np.square: "square",
    np.sqrt: "sqrt",
    np.log10: "log10",
    np.log: "ln",
    np.exp: "exp",
    np.sin: "sin",
    np.absolute: "abs",
}
"""The ufuncs that a body may use, and the names the readings know them by."""


class Reading(np.lib.mixins.NDArrayOperatorsMixin):
    """Send every operator and ufunc to ``apply(operation, arguments)`` of the reading among the arguments."""

    ranks_above_units: ClassVar[bool] = True

    def __array_ufunc__(self, ufunc: Any, method: str, *args: Any, **kwargs: Any) -> Any:  # noqa: ANN401
        """Name the operation and apply it, or refuse a ufunc that has no reading."""
        if method != "__call__" or kwargs or ufunc not in OPERATIONS:
            allowed = ", ".join(OPERATIONS.values())
            raise EquationError(f"an equation body may not use {ufunc.__name__}; it may use {allowed}")
        ranking = [a for a in args if isinstance(a, Reading) and a.ranks_above_units]
        reading = ranking[0] if ranking else self
        return reading.apply(OPERATIONS[ufunc], args)

    def apply(self, operation: str, args: tuple[Any, ...]) -> Any:  # noqa: ANN401
        """Return the result of one operation in this reading."""
        raise EquationError(f"{type(self).__name__} has no sense for {operation} of {args}")

    def __bool__(self) -> NoReturn:
        """Refuse to be a condition."""
        raise EquationError("an equation body may not branch; declare the branches as Regimes or Choice")


@dataclass(frozen=True, eq=False)
class Amount(Reading):
    """A fixed amount of a unit inside a body, such as ``101325 * PASCAL``; on arrays it is its SI number.

    Attributes
    ----------
    number : float
        How many of the unit; the unit is an SI unit without a prefix, so this is the value.
    unit : str
        The unit as printed.
    dimension : Dimension
        Exponents of the base units.
    """

    ranks_above_units: ClassVar[bool] = False

    number: float
    unit: str
    dimension: Dimension

    def apply(self, operation: str, args: tuple[Any, ...]) -> Any:  # noqa: ANN401
        """Keep the unit when multiplied by a literal; otherwise become a plain number."""
        if operation == "multiply" and any(type(a) in (int, float) for a in args):
            number = next(a for a in args if type(a) in (int, float))
            return Amount(self.number * number, self.unit, self.dimension)
        ufunc = next(u for u, name in OPERATIONS.items() if name == operation)
        return ufunc(*(a.number if isinstance(a, Amount) else a for a in args))


def Unit(name: str, dimension: Dimension) -> Amount:  # noqa: N802 - reads as the type it stands for
    """Return one of a unit, by which an empirical law divides its inputs first."""
    return Amount(1.0, name, dimension)

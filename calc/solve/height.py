"""A head kept to twice the digits of a float, so that flows at a head close to a level are resolved.

Near a level z the flow of a branch with fixed f goes as √|H − z|: with H about 200 m the nearest float
is 3·10⁻¹⁴ m away, where a wide short pipe already carries more than the tolerance. Value and rest are
summed only after a level was taken away.
"""

from __future__ import annotations

from typing import NamedTuple, TypeVar

import numpy as np
import numpy.typing as npt

Number = TypeVar("Number", float, npt.NDArray[np.float64])


def sum_with_rest(value: Number, rest: Number, by: Number) -> tuple[Number, Number]:
    """Return (value + rest) + by as a float and what it lacks; exact additions after Knuth (1969)."""
    total = value + by
    back = total - value
    lost = (value - (total - back)) + (by - back) + rest
    new = total + lost
    return new, lost - (new - total)


class Height(NamedTuple):
    """A head in metres: ``value`` is the nearest float, ``rest`` what it lacks."""

    value: float
    rest: float = 0.0

    def raised(self, by: float) -> Height:
        """Return the head higher by so many metres (lower, if negative)."""
        return Height(*sum_with_rest(self.value, self.rest, by))

    def above(self, other: Height) -> float:
        """Return how far this head is above another, m."""
        return (self.value - other.value) + (self.rest - other.rest)

"""A head kept to twice the digits of a float, so that flows at a head close to a level are resolved.

Near a level z the flow of a branch with fixed f goes as √|H − z|: with H about 200 m the nearest float is
3·10⁻¹⁴ m away, where a wide short pipe already carries more than the tolerance. Value and rest are summed only
after a level was taken away.
"""

from __future__ import annotations

from typing import NamedTuple


class Height(NamedTuple):
    """A head in metres: ``value`` is the nearest float, ``rest`` what it lacks."""

    value: float
    rest: float = 0.0

    def raised(self, by: float) -> Height:
        """Return the head higher by so many metres (lower, if negative)."""
        total = self.value + by
        back = total - self.value
        rest = (self.value - (total - back)) + (by - back) + self.rest
        value = total + rest
        return Height(value, rest - (value - total))

    def above(self, other: Height) -> float:
        """Return how far this head is above another, m."""
        return (self.value - other.value) + (self.rest - other.rest)

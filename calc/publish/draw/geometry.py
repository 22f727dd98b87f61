"""Boxes and segments, in points: what lies on what."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Point = tuple[float, float]
Array = NDArray[np.float64]

PARALLEL = 1e-9


class Box(NamedTuple):
    """A rectangle: left, foot, right, top."""

    left: float
    foot: float
    right: float
    top: float

    @property
    def corners(self) -> list[Point]:
        """Return the four corners in order."""
        return [
            (self.left, self.foot),
            (self.right, self.foot),
            (self.right, self.top),
            (self.left, self.top),
        ]

    def grown(self, by: float) -> Box:
        """Return the box with a margin all round."""
        return Box(self.left - by, self.foot - by, self.right + by, self.top + by)

    def meets(self, other: Box) -> bool:
        """Tell whether two boxes share any area."""
        return self.left < other.right and other.left < self.right and self.foot < other.top and other.foot < self.top


def boxes(rows: list[Box] | list[tuple[float, float, float, float]]) -> Array:
    """Return boxes as an array of shape (n, 4)."""
    return np.asarray(rows, dtype=np.float64).reshape(-1, 4)


def overlap(one: Array, other: Array) -> Array:
    """Return the shared areas of boxes (n, 4) with boxes (m, 4), shape (n, m)."""
    width = np.minimum(one[:, None, 2], other[None, :, 2]) - np.maximum(one[:, None, 0], other[None, :, 0])
    height = np.minimum(one[:, None, 3], other[None, :, 3]) - np.maximum(one[:, None, 1], other[None, :, 1])
    return np.asarray(np.clip(width, 0, None) * np.clip(height, 0, None))


def inside(starts: Array, ends: Array, rectangles: Array) -> Array:
    """Return the length of each segment (s, 2)-(s, 2) within each box (n, 4), shape (n, s)."""
    run = ends - starts
    first = np.zeros((len(rectangles), len(starts)))
    last = np.ones_like(first)
    for axis in (0, 1):
        low, high = rectangles[:, axis][:, None], rectangles[:, axis + 2][:, None]
        step, origin = run[:, axis][None, :], starts[:, axis][None, :]
        flat = np.abs(step) < PARALLEL
        safe = np.where(flat, 1.0, step)
        enter, leave = (low - origin) / safe, (high - origin) / safe
        within = (origin > low) & (origin < high)
        first = np.maximum(first, np.where(flat, np.where(within, -np.inf, np.inf), np.minimum(enter, leave)))
        last = np.minimum(last, np.where(flat, np.where(within, np.inf, -np.inf), np.maximum(enter, leave)))
    return np.asarray(np.clip(last - first, 0, None) * np.hypot(run[:, 0], run[:, 1])[None, :])


def crossings(starts: Array, ends: Array, others: Array, other_ends: Array) -> NDArray[np.bool_]:
    """Tell which segments (n) cross which others (m) away from their ends, shape (n, m)."""
    a, b, c, d = starts[:, None], ends[:, None], others[None], other_ends[None]
    return np.asarray((_turn(a, b, c) * _turn(a, b, d) < 0) & (_turn(c, d, a) * _turn(c, d, b) < 0))


def distance(points: Array, starts: Array, ends: Array) -> Array:
    """Return the distance of each point (p, 2) from each segment (s, 2)-(s, 2), shape (s, p)."""
    run = ends - starts
    length = np.maximum((run**2).sum(1), PARALLEL)[:, None]
    along = np.clip(((points[None] - starts[:, None]) * run[:, None]).sum(2) / length, 0, 1)
    near = starts[:, None] + along[..., None] * run[:, None] - points[None]
    return np.asarray(np.hypot(near[..., 0], near[..., 1]))


def _turn(a: Array, b: Array, c: Array) -> Array:
    return np.asarray(
        (b[..., 0] - a[..., 0]) * (c[..., 1] - a[..., 1]) - (b[..., 1] - a[..., 1]) * (c[..., 0] - a[..., 0])
    )

"""The lines of pipes on a schematic, and where along them their arrowheads have most room."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from itertools import pairwise
from math import atan2, degrees, hypot
from typing import TYPE_CHECKING

import numpy as np

from calc.publish.draw.geometry import distance
from calc.publish.draw.marks import BASIN_DEPTH, BASIN_WIDTH

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.arrangement import Arrangement
    from calc.publish.draw.geometry import Array, Box, Point
    from calc.report.figures import Pipe, Schematic

ASIDE = (0.0, 14.0, -14.0, 24.0, -24.0, 36.0, -36.0)  # pt a pipe may bend to clear a foreign node
CLEAR = 8.0  # pt from a foreign node
TWIN = 15.0  # pt between pipes that join the same two nodes
ALONG = (0.5, 0.42, 0.58, 0.34, 0.66, 0.27, 0.73)


@dataclass(frozen=True, slots=True)
class Route:
    """A pipe's line, in the direction of its water.

    Attributes
    ----------
    pipe : Pipe
        What it shows.
    points : list of Point
        From where the water enters to where it leaves.
    """

    pipe: Pipe
    points: list[Point]

    def at(self, share: float) -> tuple[Point, float]:
        """Return the point at a share of the line's length, and the line's bearing there in degrees."""
        runs = [hypot(b[0] - a[0], b[1] - a[1]) for a, b in pairwise(self.points)]
        left = share * sum(runs)
        for k, run in enumerate(runs):
            if left <= run or k == len(runs) - 1:
                a, b = self.points[k], self.points[k + 1]
                part = left / run if run > 0 else 0.0
                bearing = degrees(atan2(b[1] - a[1], b[0] - a[0]))
                return (a[0] + part * (b[0] - a[0]), a[1] + part * (b[1] - a[1])), bearing
            left -= run
        raise AssertionError  # a route has at least two points


def route(figure: Schematic, arrangement: Arrangement, size: float) -> list[Route]:
    """Lay every pipe: straight, with a knee only to clear a foreign node or a twin."""
    pairs = Counter(frozenset((pipe.start, pipe.end)) for pipe in figure.pipes)
    seen: Counter[frozenset[str]] = Counter()
    routes = []
    for pipe in figure.pipes:
        pair = frozenset((pipe.start, pipe.end))
        start = _port(pipe.start, pipe.end, arrangement, size)
        end = _port(pipe.end, pipe.start, arrangement, size)
        if pairs[pair] > 1:
            offset = (seen[pair] - (pairs[pair] - 1) / 2) * TWIN
            seen[pair] += 1
            points = _beside(start, end, offset if pipe.start < pipe.end else -offset)
        else:
            points = _clear(start, end, _foreign(pipe, arrangement), arrangement.area)
        routes.append(Route(pipe, points if pipe.flow >= 0 else points[::-1]))
    return routes


def roomiest(route: Route, others: Array, marks: Sequence[Box]) -> float:
    """Return the share of the length at which an arrowhead lies farthest from everything else.

    Parameters
    ----------
    route : Route
        The pipe.
    others : ndarray, shape (n, 2)
        Points along all other pipes, and the nodes.
    marks : sequence of Box
        What is drawn already.
    """

    def room(share: float) -> float:
        (x, y), _ = route.at(share)
        near = float(np.hypot(others[:, 0] - x, others[:, 1] - y).min()) if len(others) else 26.0
        hit = any(m.left - 6 < x < m.right + 6 and m.foot - 6 < y < m.top + 6 for m in marks)
        return min(near, 26.0) - 12 * abs(share - 0.5) - (30 if hit else 0)

    return max(ALONG, key=room)


def _port(name: str, toward: str, arrangement: Arrangement, size: float) -> Point:
    """Return where a pipe leaves its node: a junction itself, a basin's floor, or its wall at the water."""
    x, y = arrangement.places[name]
    side = arrangement.sides.get(name)
    if side is None:
        return x, y
    if arrangement.by_distance:
        return x + 2.0 * size * side, y - BASIN_DEPTH * size
    far = arrangement.places[toward][0]
    return x + (1 if far >= x else -1) * BASIN_WIDTH * size / 2, y


def _foreign(pipe: Pipe, arrangement: Arrangement) -> Array:
    """Return the places of all nodes that are no end of the pipe, shape (n, 2)."""
    found = [place for name, place in arrangement.places.items() if name not in (pipe.start, pipe.end)]
    return np.asarray(found, dtype=np.float64).reshape(-1, 2)


def _clear(start: Point, end: Point, foreign: Array, area: Box) -> list[Point]:
    """Return a straight line, or the least bent one that keeps off foreign nodes."""
    best: tuple[float, list[Point]] | None = None
    for aside in ASIDE:
        points = [start, end] if not aside else [start, *_shifted(start, end, (0.5,), aside), end]
        if not all(area.left <= x <= area.right and area.foot <= y <= area.top for x, y in points[1:-1]):
            continue
        line = np.asarray(points, dtype=np.float64)
        near = float(distance(foreign, line[:-1], line[1:]).min()) if len(foreign) else CLEAR
        price = 4.0 * max(0.0, CLEAR - near) + 0.3 * abs(aside)
        if best is None or price < best[0] - 1e-6:
            best = price, points
    return best[1] if best else [start, end]


def _beside(start: Point, end: Point, offset: float) -> list[Point]:
    """Return a line that runs beside the straight one and meets it at both ends."""
    return [start, *_shifted(start, end, (0.16, 0.84), offset), end]


def _shifted(start: Point, end: Point, shares: tuple[float, ...], offset: float) -> list[Point]:
    """Return points at shares of a straight line, moved to its left."""
    across, up = end[0] - start[0], end[1] - start[1]
    run = hypot(across, up) or 1.0
    return [
        (start[0] + share * across - offset * up / run, start[1] + share * up + offset * across / run)
        for share in shares
    ]

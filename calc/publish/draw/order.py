"""The order of nodes across a schematic: few crossings, short pipes, no pipe over a foreign node.

Whole numbers and simple sums only, so that the order is the same on every machine. The search begins with
the nodes by falling head, as water runs, and with their distance from the highest water counted in pipes;
it keeps the better.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from calc.publish.draw.geometry import crossings, distance

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.geometry import Array

THOROUGH_TO = 30  # nodes: beyond, only neighbours change places
FAR_TO = 90  # nodes: beyond, the order as begun stands
SWEEPS = 8
GAIN = 1e-6
CLEAR = 1.1  # slots a pipe should keep from a foreign node


def order(heads: Sequence[float], pairs: Sequence[tuple[int, int]], aspect: float = 1.0) -> list[int]:
    """Return the slot (from 0, left) of each node.

    Parameters
    ----------
    heads : sequence of float
        Of the nodes.
    pairs : sequence of (int, int)
        The pipes, by numbers of their nodes.
    aspect : float
        Height of the drawing over its width.
    """
    count = len(heads)
    if count <= 2 or not pairs:  # noqa: PLR2004
        return _slots(sorted(range(count), key=lambda i: (-heads[i], i)))
    cost = _Cost(heads, pairs, aspect)
    best: tuple[float, list[int]] | None = None
    for begun in (_by_head(heads), _by_distance(heads, pairs)):
        slots = _improve(begun, cost)
        price = cost.of(slots)
        if best is None or price < best[0] - GAIN:
            best = price, slots
    slots = best[1] if best else []
    middle = (count - 1) / 2
    tilt = sum(head * (slot - middle) for head, slot in zip(heads, slots, strict=True))
    return [count - 1 - slot for slot in slots] if tilt > 0 else slots


def breathe(slots: Sequence[int], heads: Sequence[float], reach: int = 5, band: float = 0.05) -> list[float]:
    """Return places across from 0 to 1, with wider steps where many nodes lie at nearly one height."""
    count = len(slots)
    if count == 1:
        return [0.5]
    by_slot = sorted(range(count), key=lambda i: slots[i])
    span = (max(heads) - min(heads)) or 1.0
    crowd = [
        sum(
            abs(heads[by_slot[i]] - heads[by_slot[j]]) < band * span
            for j in range(max(0, i - reach), min(count, i + reach + 1))
            if j != i
        )
        for i in range(count)
    ]
    places = [0.0]
    for i in range(count - 1):
        places.append(places[-1] + 1 + 0.16 * (crowd[i] + crowd[i + 1]))
    found = [0.0] * count
    for i, node in enumerate(by_slot):
        found[node] = places[i] / places[-1]
    return found


class _Cost:
    """The price of an order; kept arrays make it quick to ask again."""

    def __init__(self, heads: Sequence[float], pairs: Sequence[tuple[int, int]], aspect: float) -> None:
        level = np.asarray(heads, dtype=np.float64)
        span = float(level.max() - level.min()) or 1.0
        self._up = (level - level.min()) / span * aspect * len(heads)
        self._ends = np.asarray(pairs)
        mine = np.zeros((len(pairs), len(heads)), bool)
        mine[np.arange(len(pairs))[:, None], self._ends] = True
        self._foreign = ~mine
        shared = (mine[:, None, :] & mine[None, :, :]).any(2)
        self._apart = np.triu(~shared, 1)

    def of(self, slots: Sequence[int]) -> float:
        """Return the price of slots."""
        at = np.column_stack([np.asarray(slots, dtype=np.float64), self._up])
        starts, ends = at[self._ends[:, 0]], at[self._ends[:, 1]]
        crossed = int((crossings(starts, ends, starts, ends) & self._apart).sum())
        over: Array = np.clip(CLEAR - distance(at, starts, ends), 0, None) * self._foreign
        run = np.abs(ends[:, 0] - starts[:, 0])
        return float(3.0 * crossed + 5.0 * (over**2).sum() + 0.35 * run.sum() + 0.02 * (run**2).sum())


def _improve(slots: list[int], cost: _Cost) -> list[int]:
    """Let nodes change places, and step aside, while that is cheaper."""
    count = len(slots)
    if count > FAR_TO:
        return slots
    best = cost.of(slots)
    for _ in range(SWEEPS if count <= THOROUGH_TO else 2):
        before = best
        for trial in _moves(count):
            moved = trial(slots)
            price = cost.of(moved)
            if price < best - GAIN:
                best, slots = price, moved
        if best >= before:
            break
    return slots


class _Move:
    """Take the node in one slot out and put it into another; or let the two change places."""

    def __init__(self, start: int, end: int, *, swap: bool) -> None:
        self._start, self._end, self._swap = start, end, swap

    def __call__(self, slots: list[int]) -> list[int]:
        a, b = self._start, self._end
        if self._swap:
            return [b if s == a else a if s == b else s for s in slots]
        if a < b:
            return [b if s == a else s - 1 if a < s <= b else s for s in slots]
        return [b if s == a else s + 1 if b <= s < a else s for s in slots]


def _moves(count: int) -> list[_Move]:
    if count > THOROUGH_TO:
        return [_Move(i, i + 1, swap=True) for i in range(count - 1)]
    swaps = [_Move(i, j, swap=True) for i in range(count) for j in range(i + 1, count)]
    return swaps + [_Move(i, j, swap=False) for i in range(count) for j in range(count) if abs(i - j) > 1]


def _slots(nodes: Sequence[int]) -> list[int]:
    """Turn a row of nodes into the slot of each node."""
    slots = [0] * len(nodes)
    for slot, node in enumerate(nodes):
        slots[node] = slot
    return slots


def _by_head(heads: Sequence[float]) -> list[int]:
    return _slots(sorted(range(len(heads)), key=lambda i: (-heads[i], i)))


def _by_distance(heads: Sequence[float], pairs: Sequence[tuple[int, int]]) -> list[int]:
    """Order by pipes counted from the highest node, then by falling head."""
    beside: dict[int, list[int]] = {i: [] for i in range(len(heads))}
    for a, b in pairs:
        beside[a].append(b)
        beside[b].append(a)
    far: dict[int, int] = {}
    for source in sorted(range(len(heads)), key=lambda i: (-heads[i], i)):
        if source in far:
            continue
        far[source] = 0
        row = [source]
        while row:
            row = [
                other
                for node in row
                for other in beside[node]
                if other not in far and far.setdefault(other, far[node] + 1) > 0
            ]
    return _slots(sorted(range(len(heads)), key=lambda i: (far[i], -heads[i], i)))

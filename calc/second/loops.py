"""Independent loops of the open pipes, with all reservoirs merged into one reference.

The tree takes pipes of little resistance first (by decades, nearest to the reservoirs within one), so
that its flows, which follow from continuity, are the large ones, and the pipes that close loops are the
ones whose own loss decides. A loop goes back through the tree and the loops closed before it by a short
path, which keeps the matrix of the loops sparse; each has a pipe that no earlier one has, so that they
are independent.
"""

from __future__ import annotations

import heapq
from dataclasses import dataclass
from itertools import pairwise
from typing import TypeAlias

import numpy as np
from scipy.sparse import csc_array

from calc.second.works import Floats, Works

Step: TypeAlias = tuple[int, int]  # a pipe and +1 when walked from its start to its end, else -1
Neighbours: TypeAlias = list[dict[int, Step]]
SEARCH = 400  # nodes looked at for a short way round before the way through the tree is taken


@dataclass(frozen=True, slots=True, eq=False)
class Branching:
    """The spanning tree.

    Attributes
    ----------
    order : list of (int, int, int, int)
        Each junction when the tree reached it: its pipe, the walking sign away from the reference, the
        node it was reached from and the junction itself, as numbered in the works.
    upward : dict of int to (int, Step)
        For each junction the merged node nearer the reference and the step to it.
    depth : dict of int to int
        Steps from the reference of each merged node reached.
    chords : list of int
        Open pipes outside the tree, those of least resistance first.
    """

    order: list[tuple[int, int, int, int]]
    upward: dict[int, tuple[int, Step]]
    depth: dict[int, int]
    chords: list[int]


def merge(works: Works) -> list[int]:
    """Return a number for every node, the same one, ``node_count``, for all reservoirs."""
    fixed = ~np.isnan(works.level)
    return [works.node_count if fixed[node] else node for node in range(works.node_count)]


def branch_out(works: Works, decade: list[int]) -> Branching:
    """Return the spanning tree of what the reservoirs reach through open pipes."""
    merged, root = merge(works), works.node_count
    start, end = works.start.tolist(), works.end.tolist()
    touching: list[list[Step]] = [[] for _ in range(root + 1)]
    opened = np.flatnonzero(works.open).tolist()
    for pipe in opened:
        if merged[start[pipe]] != merged[end[pipe]]:
            touching[merged[start[pipe]]].append((pipe, 1))
            touching[merged[end[pipe]]].append((pipe, -1))
    tree = Branching([], {}, {root: 0}, [])
    reachable = [(decade[pipe], 1, pipe, sign) for pipe, sign in touching[root]]
    heapq.heapify(reachable)
    used = set()
    while reachable:
        _, depth, pipe, sign = heapq.heappop(reachable)
        near, far = (start[pipe], end[pipe]) if sign > 0 else (end[pipe], start[pipe])
        if merged[far] in tree.depth:
            continue
        used.add(pipe)
        tree.depth[far] = depth
        tree.order.append((pipe, sign, near, far))
        tree.upward[far] = (merged[near], (pipe, -sign))
        for onward, direction in touching[far]:
            heapq.heappush(reachable, (decade[onward], depth + 1, onward, direction))
    chords = [pipe for pipe in opened if pipe not in used and merged[start[pipe]] in tree.depth]
    chords.sort(key=lambda p: (decade[p], tree.depth[merged[start[p]]] + tree.depth[merged[end[p]]], p))
    tree.chords.extend(chords)
    return tree


def climb(tree: Branching, origin: int, target: int) -> list[Step]:
    """Return the steps from origin to target through the tree."""
    there: list[Step] = []
    back: list[Step] = []
    while origin != target:
        if tree.depth[origin] >= tree.depth[target]:
            origin, step = tree.upward[origin]
            there.append(step)
        else:
            target, (pipe, sign) = tree.upward[target]
            back.append((pipe, -sign))
    return there + back[::-1]


def short_way(neighbours: Neighbours, origin: int, target: int) -> list[Step] | None:
    """Return the fewest steps from origin to target, or None when `SEARCH` nodes did not find them."""
    if origin == target:
        return []
    seen: tuple[dict[int, int], dict[int, int]] = ({origin: origin}, {target: target})
    edges = [[origin], [target]]
    looked = 0
    while edges[0] and edges[1] and looked < SEARCH:
        side = 0 if len(edges[0]) <= len(edges[1]) else 1
        mine, other, beyond = seen[side], seen[1 - side], []
        for node in edges[side]:
            looked += len(neighbours[node])
            for onward in neighbours[node]:
                if onward in mine:
                    continue
                mine[onward] = node
                if onward in other:
                    return trace(neighbours, seen, onward)
                beyond.append(onward)
        edges[side] = beyond
    return None


def trace(neighbours: Neighbours, seen: tuple[dict[int, int], dict[int, int]], middle: int) -> list[Step]:
    """Return the steps of a path found from both its ends, through the node where they met."""
    path = [middle]
    while seen[0][path[-1]] != path[-1]:
        path.append(seen[0][path[-1]])
    path.reverse()
    while seen[1][path[-1]] != path[-1]:
        path.append(seen[1][path[-1]])
    return [neighbours[near][far] for near, far in pairwise(path)]


def close_loops(works: Works, tree: Branching) -> csc_array:
    """Return the loops, shape (pipes, loops): +1 where a loop runs from the start of a pipe to its end."""
    merged = merge(works)
    start = [merged[node] for node in works.start.tolist()]
    end = [merged[node] for node in works.end.tolist()]
    neighbours: Neighbours = [{} for _ in range(works.node_count + 1)]

    def join(pipe: int) -> None:
        # The latest pipe between two nodes stands for them: pipes side by side then close loops in a
        # row, each with the one before, and not all with the first, which would fill the matrix.
        neighbours[start[pipe]][end[pipe]] = (pipe, 1)
        neighbours[end[pipe]][start[pipe]] = (pipe, -1)

    for pipe, _, _, _ in tree.order:
        join(pipe)
    rows: list[int] = []
    signs: list[float] = []
    bounds = [0]
    for chord in tree.chords:
        way = short_way(neighbours, end[chord], start[chord])
        steps = [(chord, 1), *(climb(tree, end[chord], start[chord]) if way is None else way)]
        rows.extend(pipe for pipe, _ in steps)
        signs.extend(float(sign) for _, sign in steps)
        bounds.append(len(rows))
        if start[chord] != end[chord]:
            join(chord)
    shape = (len(works.start), len(tree.chords))
    return csc_array((np.array(signs), np.array(rows, dtype=np.int64), np.array(bounds)), shape=shape)


def carry_withdrawals(works: Works, tree: Branching) -> Floats:
    """Return flows through the tree alone that satisfy continuity at every junction, shape (m,)."""
    flow = np.zeros(len(works.start))
    carried = works.withdrawal.tolist()
    for pipe, sign, near, far in reversed(tree.order):
        flow[pipe] = sign * carried[far]
        carried[near] += carried[far]
    return flow


def walk_heads(works: Works, tree: Branching, loss: Floats) -> Floats:
    """Return the heads met walking the tree from the reservoirs, shape (n,); NaN where it does not reach."""
    head = works.level.tolist()
    for pipe, sign, near, far in tree.order:
        head[far] = head[near] - sign * float(loss[pipe])
    return np.array(head, dtype=np.float64)

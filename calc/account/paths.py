"""Energy closure: along independent paths between reservoirs, losses add up to the difference of levels."""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass

import numpy as np

from calc.account.flows import CaseColumns, restricted
from calc.components import Network
from calc.ledger import Accountant, Ledger, View
from calc.physics import energy


@dataclass(frozen=True)
class Path:
    """A way from one reservoir to another along open pipes.

    ``pipes`` are ids in the order of the walk; ``signs`` +1 where a pipe is walked from its ``from`` to its
    ``to``.
    """

    id: str
    start: str
    end: str
    pipes: tuple[str, ...]
    nodes: tuple[str, ...]
    signs: tuple[int, ...]


def find_paths(network: Network) -> tuple[Path, ...]:
    """Return n - 1 independent paths between n reservoirs that open pipes join, each of fewest pipes."""
    reach: list[list[tuple[int, int, int]]] = [[] for _ in network.nodes]
    for pipe in np.flatnonzero(network.open).tolist():
        a, b = int(network.start[pipe]), int(network.end[pipe])
        reach[a].append((pipe, b, 1))
        reach[b].append((pipe, a, -1))
    reservoirs = np.flatnonzero(~np.isnan(network.level)).tolist()
    paths: list[Path] = []
    joined: set[int] = set()
    for root in reservoirs:
        if root in joined:
            continue
        joined.add(root)
        came = _walk(root, reach)
        for goal in reservoirs:
            if goal in came and goal not in joined:
                joined.add(goal)
                paths.append(_path(network, root, goal, came))
    return tuple(paths)


def _walk(root: int, reach: list[list[tuple[int, int, int]]]) -> dict[int, tuple[int, int, int]]:
    came: dict[int, tuple[int, int, int]] = {}
    waiting = deque([root])
    while waiting:
        node = waiting.popleft()
        for pipe, other, sign in reach[node]:
            if other != root and other not in came:
                came[other] = (pipe, node, sign)
                waiting.append(other)
    return came


def _path(network: Network, root: int, goal: int, came: dict[int, tuple[int, int, int]]) -> Path:
    pipes: list[str] = []
    signs: list[int] = []
    nodes = [network.nodes[goal]]
    node = goal
    while node != root:
        pipe, node, sign = came[node]
        pipes.append(network.pipes.rows[pipe])
        signs.append(sign)
        nodes.append(network.nodes[node])
    start, end = network.nodes[root], network.nodes[goal]
    return Path(f"{start}/{end}", start, end, tuple(pipes[::-1]), tuple(nodes[::-1]), tuple(signs[::-1]))


def enter_paths(ledger: Ledger, network: Network, columns: CaseColumns, case: str) -> tuple[Path, ...]:
    """Enter for each path the sum of its losses, and by how much it fails to be the difference of levels."""
    paths = find_paths(network)
    if not paths:
        return paths
    books = Accountant(ledger, case)
    rows = tuple(path.id for path in paths)
    walked = [pipe for path in paths for pipe in path.pipes]
    loss = books.combine(
        "paths.loss",
        "sum",
        restricted(columns.results.head_loss, walked),
        np.repeat(np.arange(len(paths)), [len(path.pipes) for path in paths]),
        rows,
        words="head lost along the path, pipe by pipe in the direction of the walk",
        signs=[sign for path in paths for sign in path.signs],
    )
    place = {name: k for k, name in enumerate(columns.head.rows)}

    def level(names: list[str]) -> View:
        return columns.head.take(np.array([place[name] for name in names], dtype=np.int64), rows)

    books.apply(
        "paths.closing_error",
        energy.closing_error,
        head_from=level([path.start for path in paths]),
        head_to=level([path.end for path in paths]),
        head_loss=View.whole(loss),
    )
    return paths

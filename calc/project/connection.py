"""Whether the works hang together: every part has a reservoir, and there is one part."""

from __future__ import annotations

from collections.abc import Mapping

from calc.components import Record
from calc.project.reader import Reader
from calc.project.wording import listed
from calc.project.works import Works


def check_connection(reader: Reader, works: Works) -> None:
    """Note parts without a reservoir, further parts, and nodes that no pipe joins.

    A shut pipe joins its nodes: whether water passes is a matter of cases.
    """
    if not works.whole or not works.pipes:
        return
    parts = _parts([*works.reservoirs, *works.junctions], works.pipes)
    fed = [part for part in parts if any(node in works.reservoirs for node in part)]
    main = max(fed, key=len, default=None)
    for part in parts:
        if part is main:
            continue
        first = part[0]
        group = "reservoirs" if first in works.reservoirs else "junctions"
        mark = getattr(works, group)[first].mark
        path = f"{group}.{first}"
        if len(part) == 1:
            reader.note(mark, "not-connected", path, "no pipe joins this node", "at least one pipe")
        elif part in fed:
            found = f"{listed(part, 'and')} are a part by themselves"
            hint = "join the parts by a pipe, or put each in a project of its own"
            reader.note(mark, "not-connected", path, found, "works that hang together", hint)
        else:
            found = f"no reservoir is joined to {listed(part, 'and')}"
            reader.note(mark, "no-reservoir", path, found, "a pipe that leads to a reservoir")


def _parts(nodes: list[str], pipes: Mapping[str, Record]) -> list[list[str]]:
    """Return the nodes of each part, both in the order of the files."""
    leader = {node: node for node in nodes}

    def find(node: str) -> str:
        while leader[node] != node:
            leader[node] = leader[leader[node]]
            node = leader[node]
        return node

    for pipe in pipes.values():
        start, end = find(pipe.text("from")), find(pipe.text("to"))
        leader[end] = start
    parts: dict[str, list[str]] = {}
    for node in nodes:
        parts.setdefault(find(node), []).append(node)
    return list(parts.values())

"""The shipped tables of pipe dimensions: by standard, size and class."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import lru_cache

from calc.components import Stated
from calc.kinds import BORE, PRESSURE, THICKNESS, Kind
from calc.project import shipped
from calc.project.reader import Reader
from calc.yamlfile import Mapping as MappingNode
from calc.yamlfile import Node, Scalar, Sequence

MEMORY = "from memory"
MARK = f"; this value {MEMORY}"
"""Ends the source of a value that was recalled where others of its table were read."""


@dataclass(frozen=True, slots=True)
class PipeClass:
    """A class of a standard: the column of its walls, and its rated pressure where that is the same for all sizes."""

    name: str
    also: tuple[str, ...]
    wall: str
    pressure_rating: Stated | None
    source: str
    line: int


@dataclass(frozen=True, slots=True)
class Size:
    """A nominal size: its outside diameter and lining, its wall by column of walls, its rated pressure by class."""

    name: str
    also: tuple[str, ...]
    outside_diameter: Stated
    lining: Stated
    walls: Mapping[str, Stated]
    pressure_ratings: Mapping[str, Stated]


@dataclass(frozen=True, slots=True)
class Standard:
    """A standard: what it is for, which wall it tabulates, where values and walls are from, and its rows."""

    name: str
    title: str
    wall: str
    source: str
    wall_source: str
    example: str
    classes: Mapping[str, PipeClass]
    sizes: Mapping[str, Size]

    def classes_of(self, size: Size) -> list[PipeClass]:
        """Return the classes in which a size is tabulated."""
        return [one for one in self.classes.values() if one.wall in size.walls]


def matching(written: str, rows: Iterable[PipeClass | Size | Standard]) -> PipeClass | Size | Standard | None:
    """Return the row that a name means, whatever its blanks and capitals."""
    wanted = _plain(written)
    return next((row for row in rows if wanted in map(_plain, (row.name, *getattr(row, "also", ())))), None)


@lru_cache(maxsize=4096)
def _plain(name: str) -> str:
    return "".join(name.split()).casefold()


@lru_cache(maxsize=1)
def standards() -> dict[str, Standard]:
    """Return the standards with their tables."""
    reader = Reader()
    held = shipped.read("sizes.yaml")
    found = {name: _standard(reader, name, node) for name, node in shipped.members(held, "standards")}
    shipped.sound(reader)
    return found


def _standard(reader: Reader, name: str, node: MappingNode) -> Standard:
    title, wall, source, example = (shipped.scalar(node.get(key)).text for key in ("title", "wall", "source", "size"))
    of_walls = shipped.scalar(node.get("wall_source") or node.get("source")).text
    own = {
        key: shipped.scalar(said).text for key, one in shipped.members(node, "classes") if (said := one.get("source"))
    }
    classes = {key: _class(reader, key, one, own.get(key, source)) for key, one in shipped.members(node, "classes")}
    sizes = {key: _size(reader, key, one, (source, of_walls), own) for key, one in shipped.members(node, "sizes")}
    return Standard(name, title, wall, source, of_walls, example, classes, sizes)


def _class(reader: Reader, name: str, node: MappingNode, source: str) -> PipeClass:
    wall, rated = node.get("wall"), node.get("pressure_rating")
    said = _said(source, node, "pressure_rating")
    found = None if rated is None else shipped.stated(reader, shipped.scalar(rated), PRESSURE, said)
    walls = name if wall is None else shipped.scalar(wall).text
    return PipeClass(name, _texts(node.get("also")), walls, found, source, node.mark.line)


def _size(reader: Reader, name: str, node: MappingNode, sources: tuple[str, str], own: Mapping[str, str]) -> Size:
    """Return a size.

    ``sources`` are those of the standard's values and of its walls; ``own`` those of classes, each of which holds
    for its walls and rated pressures.
    """
    source, of_walls = sources

    def one(field: str, kind: Kind) -> Stated:
        return shipped.stated(reader, shipped.scalar(node.get(field)), kind, _said(source, node, field))

    def several(field: str, kind: Kind, general: str) -> dict[str, Stated]:
        group, found = node.get(field), dict[str, Stated]()
        for key, value in group.entries if isinstance(group, MappingNode) else ():
            said = _said(own.get(key.text, general), node, key.text)
            found[key.text] = shipped.stated(reader, shipped.scalar(value), kind, said)
        return found

    outer, lining = one("outside_diameter", BORE), one("lining", THICKNESS)
    walls, ratings = several("wall", THICKNESS, of_walls), several("pressure_rating", PRESSURE, source)
    return Size(name, _texts(node.get("also")), outer, lining, walls, ratings)


def _said(source: str, row: MappingNode, field: str) -> str:
    """Return the source of a value, with what its row says of it."""
    return f"{source}{MARK}" if field in _texts(row.get("memory")) else source


def _texts(node: Node | None) -> tuple[str, ...]:
    if isinstance(node, Sequence):
        return tuple(item.text for item in node.items if isinstance(item, Scalar))
    return (node.text,) if isinstance(node, Scalar) else ()

"""The shipped tables of materials: roughness heights, Hazen–Williams C and Manning n."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache

from calc.components import Stated
from calc.kinds import NUMBER, ROUGHNESS, Kind
from calc.project import shipped
from calc.project.reader import Reader
from calc.yamlfile import Mapping as MappingNode

FILE = "materials.yaml"
KINDS: dict[str, Kind] = {"roughness": ROUGHNESS, "hazen-williams": NUMBER, "manning": NUMBER}
"""By table."""


@dataclass(frozen=True, slots=True)
class Material:
    """A row: what it is, its typical value with its source, the range and its words, and the key of the source."""

    name: str
    title: Stated
    value: Stated
    low: Stated
    high: Stated
    span: str
    key: str


@lru_cache(maxsize=1)
def tables() -> dict[str, dict[str, Material]]:
    """Return the rows of every table, by its name."""
    reader = Reader()
    held = shipped.read(FILE)
    found = {
        table: {name: _row(reader, name, node, kind) for name, node in shipped.members(held, table)}
        for table, kind in KINDS.items()
    }
    shipped.sound(reader)
    return found


def _row(reader: Reader, name: str, node: MappingNode, kind: Kind) -> Material:
    texts = {field: shipped.scalar(node.get(field)) for field in ("title", "value", "low", "high", "source")}
    source = shipped.sources(FILE)[texts["source"].text]
    least, most = (shipped.stated(reader, texts[field], kind, source) for field in ("low", "high"))
    span = f"{least.written.removesuffix(f' {least.unit}')} to {most.written}" if least.si != most.si else ""
    title = shipped.stated(reader, texts["title"], None, source)
    value = shipped.stated(reader, texts["value"], kind, f"{source}; range {span}" if span else source)
    return Material(name, title, value, least, most, span or least.written, texts["source"].text)


def values(table: str) -> Mapping[str, Stated]:
    """Return the typical values of a table by material."""
    return {name: row.value for name, row in tables()[table].items()}

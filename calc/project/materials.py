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
    held = shipped.read("materials.yaml")
    sources = held.get("sources")
    found: dict[str, dict[str, Material]] = {}
    for table, kind in KINDS.items():
        group = held.get(table)
        found[table] = {
            key.text: _row(reader, key.text, value, kind, sources)
            for key, value in (group.entries if isinstance(group, MappingNode) else ())
            if isinstance(value, MappingNode) and isinstance(sources, MappingNode)
        }
    shipped.sound(reader)
    return found


def _row(reader: Reader, name: str, node: MappingNode, kind: Kind, sources: MappingNode) -> Material:
    texts = {field: shipped.scalar(node.get(field)) for field in ("title", "value", "low", "high", "source")}
    source = shipped.scalar(sources.get(texts["source"].text)).text
    low, high = texts["low"].text, texts["high"].text
    span = f"{low.removesuffix(kind.example.lstrip('0123456789.'))} to {high}" if low != high else ""
    title = shipped.stated(reader, texts["title"], None, source)
    value = shipped.stated(reader, texts["value"], kind, f"{source}; range {span}" if span else source)
    least, most = (shipped.stated(reader, texts[field], kind, source) for field in ("low", "high"))
    return Material(name, title, value, least, most, span or low, texts["source"].text)


def sources() -> dict[str, str]:
    """Return the sources by the key that rows name."""
    node = shipped.read("materials.yaml").get("sources")
    entries = node.entries if isinstance(node, MappingNode) else ()
    return {key.text: shipped.scalar(value).text for key, value in entries}


def values(table: str) -> Mapping[str, Stated]:
    """Return the typical values of a table by material."""
    return {name: row.value for name, row in tables()[table].items()}

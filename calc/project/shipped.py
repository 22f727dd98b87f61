"""Defaults and tables that ship with the program, read like any other file so that they have places."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import lru_cache
from importlib import resources

from calc.components import Basis, Quantity, Stated
from calc.kinds import ACCELERATION, ELEVATION, FLOW, NUMBER, TEMPERATURE, THICKNESS, Kind
from calc.problems import ProblemsFound
from calc.project.reader import Reader
from calc.yamlfile import Mapping, Node, Scalar, read_text

FOLDER = "calc/data"

_KINDS: dict[str, Kind] = {
    "fluid.temperature": TEMPERATURE,
    "site.altitude": ELEVATION,
    "site.gravity": ACCELERATION,
    "constants.transition.laminar_below": NUMBER,
    "constants.transition.turbulent_above": NUMBER,
    "constants.hazen_williams.coefficient": NUMBER,
    "constants.hazen_williams.flow_exponent": NUMBER,
    "constants.hazen_williams.bore_exponent": NUMBER,
    "constants.manning.coefficient": NUMBER,
    "constants.manning.bore_exponent": NUMBER,
    "junctions.withdrawal": FLOW,
    "pipes.parallel": NUMBER,
    "pipes.lining": THICKNESS,
    "fittings.count": NUMBER,
    "ends.exit": NUMBER,
}
"""Defaults that are quantities; the rest are words."""


@dataclass(frozen=True, slots=True)
class Row:
    """An entry of a shipped table; for an end, ``forward`` is its entry and ``reverse`` its exit.

    ``span`` is the range of ``forward``, empty where none is known; ``key`` names its source.
    """

    name: str
    title: Stated
    forward: Stated
    reverse: Stated
    span: str
    key: str


@dataclass(frozen=True, slots=True)
class Computed:
    """A kind of fitting whose coefficient follows by a law; each text with its place and source."""

    name: str
    title: Stated
    takes: Stated
    law: Stated


@lru_cache(maxsize=1)
def defaults() -> dict[str, Stated]:
    """Return every default by path, such as ``site.gravity``."""
    found: dict[str, Stated] = {}
    reader = Reader()
    _walk(reader, read("defaults.yaml"), "", found)
    sound(reader)
    return found


@lru_cache(maxsize=1)
def fittings() -> dict[str, Row]:
    """Return the shipped kinds of fitting."""
    return _rows("fittings", "K", "K_reverse")


@lru_cache(maxsize=1)
def computed_fittings() -> dict[str, Computed]:
    """Return the kinds of fitting whose coefficient follows by a law from what is stated of them."""
    reader = Reader()
    found: dict[str, Computed] = {}
    for kind, node in members(read("fittings.yaml"), "computed"):
        source = scalar(node.get("source")).text
        title, takes, law = (stated(reader, scalar(node.get(name)), None, source) for name in ("title", "takes", "law"))
        found[kind] = Computed(kind, title, takes, law)
    sound(reader)
    return found


@lru_cache(maxsize=1)
def ends() -> dict[str, Row]:
    """Return the shipped shapes of reservoir ends."""
    return _rows("ends", "entry", "exit")


def read(name: str) -> Mapping:
    """Return a shipped file."""
    content = resources.files("calc").joinpath("data", name).read_bytes()
    mapping, problems = read_text(f"{FOLDER}/{name}", content)
    if mapping is None or problems:
        raise ProblemsFound(problems)
    return mapping


def members(node: Mapping, name: str) -> list[tuple[str, Mapping]]:
    """Return the mappings in a group of a shipped file, each with its key."""
    group = node.get(name)
    entries = group.entries if isinstance(group, Mapping) else ()
    return [(key.text, value) for key, value in entries if isinstance(value, Mapping)]


@lru_cache(maxsize=8)
def sources(name: str) -> dict[str, str]:
    """Return the sources of a shipped file by the key that its rows name."""
    node = read(name).get("sources")
    return {key.text: scalar(value).text for key, value in (node.entries if isinstance(node, Mapping) else ())}


def sound(reader: Reader) -> None:
    """Raise what is wrong with a shipped file."""
    if reader.problems:
        raise ProblemsFound(reader.problems)


def _walk(reader: Reader, node: Mapping, path: str, found: dict[str, Stated]) -> None:
    for key, value in node.entries:
        at = f"{path}.{key.text}" if path else key.text
        if isinstance(value, Mapping) and value.get("value") is None:
            _walk(reader, value, at, found)
        elif isinstance(value, Mapping):
            written, source = value.get("value"), value.get("source")
            if isinstance(written, Scalar) and isinstance(source, Scalar):
                found[at] = stated(reader, written, _KINDS.get(at), source.text)


def stated(reader: Reader, written: Scalar, kind: Kind | None, source: str) -> Stated:
    """Return a value of a shipped file, of a kind or a word."""
    if kind is None:
        flag = {"true": True, "false": False}.get(written.text, written.text)
        return Stated(flag, written.text, written.mark, basis=Basis(source), shipped=True)
    got = reader.quantity(written, "", (Quantity(kind),))
    if got is None:
        raise ProblemsFound(reader.problems)
    return replace(got[0], basis=Basis(source), shipped=True)


def _rows(table: str, forward: str, reverse: str) -> dict[str, Row]:
    reader = Reader()
    rows = members(read("fittings.yaml"), table)
    found = {name: _row(reader, name, node, (forward, reverse)) for name, node in rows}
    sound(reader)
    return found


def _row(reader: Reader, name: str, node: Mapping, fields: tuple[str, str]) -> Row:
    forward, reverse = fields
    named, said = scalar(node.get("source")), sources("fittings.yaml")
    low, high = node.get("low"), node.get("high")
    span = f"{scalar(low).text} to {scalar(high).text}" if low is not None and high is not None else ""
    source = said[named.text]
    one = stated(reader, scalar(node.get(forward)), NUMBER, f"{source}{f'; range {span}' if span else ''}")
    back = node.get(reverse)
    other = one if back is None else stated(reader, scalar(back), NUMBER, said["exit"])
    title = stated(reader, scalar(node.get("title")), None, source)
    return Row(name, title, one, other, span, named.text)


def scalar(node: Node | None) -> Scalar:
    """Return a text that a shipped file has."""
    if isinstance(node, Scalar):
        return node
    raise TypeError("a shipped table lacks a text")

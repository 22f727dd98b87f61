"""Reading the shipped cases."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import lru_cache
from importlib import resources

from calc import units
from calc.components import Basis, Stated
from calc.kinds import BORE, DENSITY, FLOW, HEAD, KINEMATIC_VISCOSITY, NUMBER, PRESSURE, VELOCITY, Kind
from calc.problems import ProblemsFound
from calc.yamlfile import Mapping as MappingNode
from calc.yamlfile import Node, Scalar, Sequence, read_text

PLACE = "calc/data/verification.yaml"

KINDS: dict[str, Kind] = {
    "friction_factor": NUMBER,
    "coefficient": NUMBER,
    "bore": BORE,
    "density": DENSITY,
    "viscosity": KINEMATIC_VISCOSITY,
    "vapour_pressure": PRESSURE,
    "flow": FLOW,
    "velocity": VELOCITY,
    "head": HEAD,
    "pressure_head": HEAD,
    "friction_loss": HEAD,
    "fitting_loss": HEAD,
    "head_loss": HEAD,
}
"""Kinds of what may be expected, by the last word of its path."""


@dataclass(frozen=True, slots=True)
class Expected:
    """One value of a case: its path, kind, text and mark, and the difference allowed."""

    quantity: str
    kind: Kind
    stated: Stated
    limit: Stated
    relative: bool


@dataclass(frozen=True, slots=True)
class Case:
    """A case: inputs of a law in ``given``, or the name of a project folder in ``works``; what it ``concerns``."""

    id: str
    title: str
    source: str
    source_class: str
    concerns: tuple[str, ...]
    works: str
    given: Mapping[str, str]
    expected: tuple[Expected, ...]


@lru_cache(maxsize=1)
def read_cases() -> tuple[Case, ...]:
    """Return the shipped cases.

    Raises
    ------
    ProblemsFound
        If the shipped file is damaged.
    """
    content = resources.files("calc").joinpath("data", "verification.yaml").read_bytes()
    top, problems = read_text(PLACE, content)
    if top is None or problems:
        raise ProblemsFound(problems)
    return tuple(_case(entry.key.text, _mapping(entry.value)) for entry in top.entries)


def _case(name: str, node: MappingNode) -> Case:
    source = _text(node, "source")
    given = node.get("given")
    return Case(
        name,
        _text(node, "title"),
        source,
        _text(node, "source_class"),
        tuple(_scalar(item).text for item in _items(node.get("concerns"))),
        _text(node, "works") if node.get("works") is not None else "",
        {} if given is None else {e.key.text: _scalar(e.value).text for e in _mapping(given).entries},
        tuple(
            _expected(entry.key.text, _mapping(entry.value), source) for entry in _mapping(node.get("expected")).entries
        ),
    )


def _expected(path: str, node: MappingNode, source: str) -> Expected:
    kind = KINDS[path.rpartition(".")[2]]
    limit = _scalar(node.get("allowed"))
    relative = limit.text.endswith("%")
    stated = quantity(_scalar(node.get("value")), kind, source)
    return Expected(path, kind, stated, quantity(limit, NUMBER if relative else kind, source), relative)


def quantity(scalar: Scalar, kind: Kind, source: str) -> Stated:
    """Return a quantity of a kind as stated in a shipped file, with its source."""
    read = units.read(scalar.text, kind)
    stated = Stated(read.value, scalar.text, scalar.mark, read.number, read.unit, read.factor, read.offset)
    return replace(stated, basis=Basis(source), shipped=True)


def _text(node: MappingNode, name: str) -> str:
    return _scalar(node.get(name)).text


def _scalar(node: Node | None) -> Scalar:
    if isinstance(node, Scalar):
        return node
    raise TypeError(f"{PLACE}: a text is missing")


def _items(node: Node | None) -> tuple[Node, ...]:
    if isinstance(node, Sequence):
        return tuple(node.items)
    raise TypeError(f"{PLACE}: a list is missing")


def _mapping(node: Node | None) -> MappingNode:
    if isinstance(node, MappingNode):
        return node
    raise TypeError(f"{PLACE}: a mapping is missing")

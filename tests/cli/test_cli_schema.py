"""The JSON Schema: well formed, true to the demo and the samples, and refusing what the reader refuses."""

# ruff: noqa: ANN401 - what stands in a file is of any type
from __future__ import annotations

import copy
import json
import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
import yaml

from calc.cli.beginning import samples
from calc.cli.schema import schema

Inside = Callable[..., tuple[int, str, str]]
DEMO = Path(__file__).resolve().parents[2] / "projects" / "ostrel-transfer-main"
WHOLE = schema()

TYPES: dict[str, Callable[[Any], bool]] = {
    "object": lambda x: isinstance(x, dict),
    "array": lambda x: isinstance(x, list),
    "string": lambda x: isinstance(x, str),
    "boolean": lambda x: isinstance(x, bool),
    "number": lambda x: isinstance(x, int | float) and not isinstance(x, bool),
    "integer": lambda x: isinstance(x, int) and not isinstance(x, bool),
    "null": lambda x: x is None,
}
# The vocabulary of JSON Schema 2020-12 (json-schema.org, validation and applicator) that the schema uses.
ANNOTATIONS = {"$schema", "title", "description", "examples", "$defs", "const", "pattern"}


class CoreLoader(yaml.SafeLoader):
    """Reads as editors do, by the core schema of YAML 1.2: no dates, and only true and false are flags."""


CoreLoader.yaml_implicit_resolvers = {
    first: [
        (tag, re.compile(r"^(?:true|false)$") if tag.endswith(":bool") else pattern)
        for tag, pattern in found
        if not tag.endswith(":timestamp")
    ]
    for first, found in yaml.SafeLoader.yaml_implicit_resolvers.items()
}


def holds(rule: Any, x: Any) -> bool:
    """Evaluate the keywords in use, as the specification defines them."""
    unknown = set(rule) - ANNOTATIONS - set(CHECKS)
    assert not unknown, unknown
    return all(check(rule, x) for name, check in CHECKS.items() if name in rule) and (
        rule["const"] == x if "const" in rule else True
    )


def _types(rule: Any, x: Any) -> bool:
    names = rule["type"] if isinstance(rule["type"], list) else [rule["type"]]
    return any(TYPES[name](x) for name in names) and (
        not isinstance(x, str) or "pattern" not in rule or re.search(rule["pattern"], x) is not None
    )


def _referred(rule: Any, x: Any) -> bool:
    target: Any = WHOLE
    for part in rule["$ref"].removeprefix("#/").split("/"):
        target = target[part.replace("%20", " ")]
    return holds(target, x)


def _closed(rule: Any, x: Any) -> bool:
    if not isinstance(x, dict):
        return True
    rest = {key: value for key, value in x.items() if key not in rule.get("properties", {})}
    if rule["additionalProperties"] is False:
        return not rest
    return all(holds(rule["additionalProperties"], value) for value in rest.values())


CHECKS: dict[str, Callable[[Any, Any], bool]] = {
    "type": _types,
    "$ref": _referred,
    "enum": lambda rule, x: x in rule["enum"],
    "anyOf": lambda rule, x: any(holds(one, x) for one in rule["anyOf"]),
    "oneOf": lambda rule, x: sum(holds(one, x) for one in rule["oneOf"]) == 1,
    "allOf": lambda rule, x: all(holds(one, x) for one in rule["allOf"]),
    "not": lambda rule, x: not holds(rule["not"], x),
    "required": lambda rule, x: not isinstance(x, dict) or set(rule["required"]) <= set(x),
    "properties": lambda rule, x: (
        not isinstance(x, dict) or all(holds(one, x[key]) for key, one in rule["properties"].items() if key in x)
    ),
    "additionalProperties": _closed,
    "propertyNames": lambda rule, x: (
        not isinstance(x, dict) or all(re.search(rule["propertyNames"]["pattern"], key) for key in x)
    ),
    "items": lambda rule, x: not isinstance(x, list) or all(holds(rule["items"], one) for one in x),
    "minItems": lambda rule, x: not isinstance(x, list) or len(x) >= rule["minItems"],
    "maxItems": lambda rule, x: not isinstance(x, list) or len(x) <= rule["maxItems"],
    "minLength": lambda rule, x: not isinstance(x, str) or len(x) >= rule["minLength"],
    "minimum": lambda rule, x: not TYPES["number"](x) or x >= rule["minimum"],
    "maximum": lambda rule, x: not TYPES["number"](x) or x <= rule["maximum"],
    "exclusiveMinimum": lambda rule, x: not TYPES["number"](x) or x > rule["exclusiveMinimum"],
}


def files() -> Iterator[Any]:
    for path in sorted(DEMO.glob("*.yaml")):
        yield pytest.param(path.read_text(encoding="utf-8"), id=path.name)
    for name, sample in samples().items():
        for file in sample.iterdir():
            yield pytest.param(file.read_text(encoding="utf-8"), id=f"{name}/{file.name}")


def read(text: str) -> Any:
    return yaml.load(text, CoreLoader)  # noqa: S506 - a safe loader with fewer tags


def test_the_command_prints_the_schema(inside: Inside) -> None:
    status, said, remarks = inside("schema")
    assert (status, remarks) == (0, "")
    assert json.loads(said) == WHOLE
    assert WHOLE["$schema"] == "https://json-schema.org/draft/2020-12/schema"


@pytest.mark.parametrize("text", list(files()))
def test_what_the_program_reads_the_schema_accepts(text: str) -> None:
    assert holds(WHOLE, read(text))


@pytest.mark.parametrize("key", [*WHOLE["properties"]])
def test_every_reference_leads_somewhere(key: str) -> None:
    def walk(rule: Any) -> Iterator[str]:
        if isinstance(rule, dict):
            if isinstance(rule.get("$ref"), str):
                yield rule["$ref"]
            for one in rule.values():
                yield from walk(one)
        elif isinstance(rule, list):
            for one in rule:
                yield from walk(one)

    for reference in walk(WHOLE["properties"][key]):
        assert reference.removeprefix("#/$defs/").replace("%20", " ") in WHOLE["$defs"]


def spoil(path: str, value: Any) -> Any:
    works = copy.deepcopy(read((DEMO / "network.yaml").read_text(encoding="utf-8")))
    *way, last = path.split(".")
    at = works
    for part in way:
        at = at[int(part)] if isinstance(at, list) else at[part]
    if value is None:
        del at[last]
    else:
        at[last] = value
    return works


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("pipes.upper-main.length", 1850),
        ("pipes.upper-main.length", "1850"),
        ("pipes.upper-main.bor", "384 mm"),
        ("pipes.upper-main.length", None),
        ("pipes.upper-main.open", "yes"),
        ("pipes.upper-main.parallel", 0),
        ("pipes.upper-main.law", "colebrok"),
        ("pipes.upper-main.bore.grade", "guessed"),
        ("pipes.upper-main.bore.value", None),
        ("pipes.upper-main.fittings.0.kind", "bend-91"),
        ("pipes.upper-main.fittings.3.K", -1.0),
        ("pipes.upper-main.fittings.3.K", None),
        ("pipes.upper-main.ends.from", "squared"),
        ("pipes.upper main", {"from": "a", "to": "b", "length": "1 m", "bore": "1 m"}),
        ("junctions.marl-cross.inflow", "1 L/s"),
        ("friction", "fixd"),
        ("pumps", {}),
        ("criteria", {"velocity-max": {}}),
        ("display", {"flow": "furlongs"}),
        ("solver", {"tolerance": 1e-6}),
        ("cases", {"peak": {"times": {"junctions.*.withdrawal": "lots"}}}),
        ("revisions", [{"revision": "P01", "date": "2nd of May", "change": "none"}]),
    ],
)
def test_what_the_reader_refuses_the_schema_refuses(path: str, value: Any) -> None:
    assert not holds(WHOLE, spoil(path, value))


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("pipes.upper-main.length", "1.85 km"),
        ("pipes.upper-main.parallel", 2),
        ("pipes.upper-main.open", False),
        ("pipes.upper-main.bore", {"value": "15 in", "range": ["14.9 in", "15.1 in"]}),
        ("pipes.upper-main.friction_factor", 0.02),
        ("pipes.upper-main.ends", {"from": {"entry": 0.5, "source": "S2"}}),
        ("pipes", {"table": "pipes.csv"}),
        ("junctions.marl-cross", {"inflow": "-3 L/s"}),
        ("fluid", {"density": "870 kg/m³", "viscosity": "8e-6 m²/s"}),
        ("solver", {"tolerance": "1e-6 L/s", "start": {"marl-cross": "190 m"}}),
        ("constants", {"transition": {"laminar_below": 2100}}),
        ("junctions", {}),
    ],
)
def test_other_ways_to_write_are_accepted(path: str, value: Any) -> None:
    assert holds(WHOLE, spoil(path, value))

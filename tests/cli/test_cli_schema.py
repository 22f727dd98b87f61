"""The JSON Schema: well formed, explaining itself, accepting what is read and refusing what it can see is not."""

# ruff: noqa: ANN401 - what stands in a file is of any type
from __future__ import annotations

import copy
import json
import re
from collections.abc import Callable, Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
import yaml
from cli_folders import samples_and_projects
from editor import read
from faulty_folders import FaultyFolder, faulty_folders, sound_folder
from jsonschema import Draft202012Validator

from calc import pipeline, units
from calc.cli.schema import schema
from calc.kinds import FLOW
from calc.project import shipped
from calc.report.display import Display
from calc.solve.solution import Settings

Inside = Callable[..., tuple[int, str, str]]
DEMO = Path(__file__).resolve().parents[2] / "projects" / "ostrel-transfer-main"
WHOLE = schema()
VALIDATOR = Draft202012Validator(WHOLE)


def holds(x: Any) -> bool:
    return VALIDATOR.is_valid(x)


def faults(x: Any) -> str:
    return "\n".join(f"{error.json_path}: {error.message[:200]}" for error in VALIDATOR.iter_errors(x))


def test_the_command_prints_the_schema(inside: Inside) -> None:
    status, said, remarks = inside("schema")
    assert (status, remarks) == (0, "")
    assert json.loads(said) == WHOLE
    Draft202012Validator.check_schema(WHOLE)
    assert WHOLE["$schema"] == "https://json-schema.org/draft/2020-12/schema"


@pytest.mark.parametrize("path", samples_and_projects(), ids=lambda path: f"{path.parent.name}/{path.name}")
def test_what_the_program_reads_the_schema_accepts(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert faults(read(text)) == ""
    assert faults(json.loads(json.dumps(yaml.safe_load(text), default=str))) == ""  # YAML 1.1, which knows dates


def walk(rule: Any, way: str = "") -> Iterator[tuple[str, Any]]:
    if isinstance(rule, dict):
        yield way, rule
        for key, one in rule.items():
            yield from walk(one, f"{way}/{key}")
    elif isinstance(rule, list):
        for number, one in enumerate(rule):
            yield from walk(one, f"{way}/{number}")


CONDITIONS = re.compile("/(?:if|then|not|allOf|anyOf/[0-9]+/properties/value/properties)(?:/|$)")


def test_every_property_says_what_it_is() -> None:
    silent = [
        f"{way}/{name}"
        for way, rule in walk(WHOLE)
        if not CONDITIONS.search(way)
        for key in ("properties", "patternProperties")
        if isinstance(rule.get(key), dict) and not way.endswith(("/properties", "/patternProperties"))
        for name, one in rule[key].items()
        if not _described(one)
    ]
    assert silent == []


def _described(rule: Any) -> bool:
    if rule.get("description", "").strip():
        return True
    way = rule.get("$ref", "")
    target: Any = WHOLE
    for part in way.removeprefix("#/").split("/") if way else ():
        target = target[part.replace("%20", " ")]
    return bool(way) and bool(target.get("description", "").strip())


def test_every_quantity_tells_kind_range_and_example() -> None:
    bore = WHOLE["properties"]["pipes"]["else"]["additionalProperties"]["properties"]["bore"]
    for words in ("bore", "above 0 m", "Example: 384.4 mm"):
        assert words in bore["description"]
    site = WHOLE["properties"]["site"]["properties"]["gravity"]
    for words in ("acceleration with its unit", "from 9.7 m/s² to 10 m/s²", "Default: 9.80665 m/s²"):
        assert words in site["description"]
    assert site["default"] == "9.80665 m/s²"


def test_defaults_are_those_in_force() -> None:
    """Sections declare theirs beside the code that takes them, and every one must be what holds without it."""
    solver, display = (WHOLE["properties"][name]["properties"] for name in ("solver", "display"))
    assert units.read(solver["tolerance"]["default"], FLOW).value == Settings().tolerance
    assert solver["narrowing"]["default"] == Settings().narrowing
    project = pipeline.read(DEMO)
    shown = Display.of(replace(project.sections["display"], stated={}))
    assert shown.system == display["units"]["default"]
    defaults = [rule["default"] for way, rule in walk(WHOLE["properties"]) if "default" in rule and "/with/" not in way]
    written = {stated.written for stated in shipped.defaults().values()}
    own = {solver["tolerance"]["default"], solver["narrowing"]["default"], "SI", "A4"}
    assert {plain(str(one)) for one in defaults} <= {plain(text) for text in written | own}


def plain(text: str) -> str | float:
    try:
        return float(text)
    except ValueError:
        return text.lower()


@pytest.mark.parametrize("key", [*WHOLE["properties"]])
def test_every_reference_leads_somewhere(key: str) -> None:
    references = [rule["$ref"] for _, rule in walk(WHOLE["properties"][key]) if isinstance(rule.get("$ref"), str)]
    for reference in references:
        assert reference.removeprefix("#/$defs/").partition("/")[0].replace("%20", " ") in WHOLE["$defs"]


def test_patterns_are_read_alike_by_ecmascript_and_python() -> None:
    """ECMA-262, flag u: only syntax characters may be escaped; no group of Python's own."""
    for _, rule in walk(WHOLE):
        pattern = rule.get("pattern")
        if isinstance(pattern, str):
            assert set(re.findall(r"\\(.)", pattern)) <= set(".^*+?()[]{}|\\/$S")
            assert set(re.findall(r"\(\?(.)", pattern)) <= set(":=!")


LARGEST_EDITED = 2_000_000
"""Bytes above which editors give up on a file; common practice."""


def documents(fault: FaultyFolder) -> list[Any] | None:
    """Return what an editor reads of a faulty folder; None where it reads nothing, and says so itself."""
    if max(map(len, fault.files.values()), default=0) > LARGEST_EDITED:
        return None
    try:
        return [read(text.decode()) for name, text in fault.files.items() if name.endswith(".yaml")]
    except (yaml.YAMLError, UnicodeDecodeError, TypeError):
        return None


FAULTS = [fault for fault in faulty_folders() if documents(fault)]


@pytest.mark.parametrize("fault", FAULTS, ids=lambda one: f"{one.theme}-{one.name}")
def test_faults_that_a_schema_can_express_are_refused(fault: FaultyFolder) -> None:
    assert all(map(holds, documents(fault) or ())) != fault.schema


def test_many_faults_can_be_expressed() -> None:
    assert sum(fault.schema for fault in FAULTS) > 100


@pytest.mark.parametrize("name", ["sound", "sound-table"])
def test_the_sound_folders_are_accepted(name: str) -> None:
    for file, text in sound_folder(name).items():
        if file.endswith(".yaml"):
            assert faults(read(text)) == ""


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
    assert not holds(spoil(path, value))


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
    assert holds(spoil(path, value))

"""Whatever the program reads without a problem, the schema accepts: drawn from the declarations of the fields."""

# ruff: noqa: ANN401 - what stands in a file is of any type
from __future__ import annotations

import tempfile
from functools import cache
from pathlib import Path
from typing import Any

import pytest
from editor import read
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from jsonschema import Draft202012Validator

from calc import pipeline
from calc.cli.schema import schema
from calc.components import Count, Date, Ends, Field, Fittings, Flag, Node, Quantity, Text, Word
from calc.components.fitting import SCHEMA as FITTING
from calc.components.pipe import SCHEMA as PIPE
from calc.criteria import ALL
from calc.kinds import Kind
from calc.physics.friction import LAW_NAMES
from calc.problems import Problem, ProblemsFound
from calc.project import header, materials, shipped, standards
from calc.project import settings as whole
from calc.project.paths import GROUPS, SINGLE
from calc.project.reader import Reader
from calc.solve.section import SOLVER
from calc.units import words
from calc.units.registry import worth
from calc.yamlfile import read_text

VALIDATOR = Draft202012Validator(schema())

NUMBERS = [
    *("0", "1.", ".5", "1e3", "1E-3", "+2.5", "007", "-0.0", "1e-6", "0.02", "150", "2300", "0.011"),
    *("-3", "17", "384.4", "0.0003", "2999", "-12.5", "5e3", "9.81"),
]


@cache
def names_of(kind: Kind) -> list[str]:
    found = [name for name, word in words.WORDS.items() if worth(name).dimension == kind.dimension]
    compound = {"m³/s": ["L/s", "m^3/h", "ft**3/s", "US gal/min", "ML / d"], "m/s": ["m/s", "ft s^-1", "km/h"]}
    more = {"m²/s": ["m²/s", "mm2/s"], "Pa·s": ["Pa·s", "N s/m²", "kg/m/s"], "kg/m³": ["kg/m³", "lb/ft^3"]}
    rest = {"": ["", "%", "m/km", "ft/1000 ft"], "m/s²": ["m/s²", "m/s**2"], "Pa": ["N/m²"]}
    return [*found, *(compound | more | rest).get(kind.unit, [])]


@cache
def quantities(kind: Kind) -> list[str]:
    """Return every number in every unit, with no blank between them, one or two."""
    pairs = [(number, unit) for number in NUMBERS for unit in names_of(kind)]
    return [f"{number}{' ' * (place % 3)}{unit}" for place, (number, unit) in enumerate(pairs)]


def written(text: str, quoted: bool) -> str:  # noqa: FBT001 - drawn
    return f"'{text}'" if quoted or text.strip() in {"%", ""} else text


@cache
def values(field: Field) -> st.SearchStrategy[str]:
    """Return YAML texts of a field, alone or with what they rest on; not all of them will do."""
    form = field.form
    match form:
        case Quantity():
            # from those that will do, for a draw that is turned down costs as much as one that is not
            bare = (text for text in quantities(form.kind) if sound(field, written(text, quoted=False)))
            plain = st.sampled_from(list(bare))
        case Count():
            plain = st.sampled_from(["1", "3", "007", "1000"])
        case Word():
            plain = st.sampled_from(form.options or ("bend-90",))
        case Flag():
            plain = st.sampled_from(["true", "false"])
        case Date():
            plain = st.dates().map(str)
        case Text():
            return st.sampled_from(["P01", "14", "1e3", "true", "2026-11-02", "0x10", "a text", "'null'", "12:30"])
        case _:
            plain = st.sampled_from(["upper", "vell"])
    return ways_to_write(field, plain).filter(lambda text: sound(field, text))


def ways_to_write(field: Field, plain: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    form = field.form
    alone = st.builds(written, plain, st.booleans())
    spread = st.sampled_from(["", ", deviation: 5 %", ", deviation: 2 K", ", deviation: 0.1 m", ", range: [1 m, 9 km]"])
    basis = st.sampled_from(["", ", source: S1, page: 14", ", grade: assumed, note: as built"])
    supported = st.builds(lambda v, b, s: f"{{value: {v}{b}{s}}}", alone, basis, spread)
    if isinstance(form, Date):
        return alone
    ways = [alone, supported]
    if isinstance(form, Quantity) and form.table:
        named = st.sampled_from(sorted(materials.tables()[form.table]))
        ways.append(st.builds(lambda m, b: f"{{material: {m}{b}}}", named, basis))
    return st.one_of(*ways)


def sound(field: Field, text: str) -> bool:
    """Return whether the reader takes a text for a field; the most that is drawn shall come through."""
    node, problems = read_text("drawn.yaml", f"x: {text}\n")
    if node is None or problems or isinstance(field.form, Node | Ends | Fittings):
        return not problems
    reader = Reader(references=frozenset({"S1"}), materials=materials.values)
    reader.value(field.form, node.entries[0].value, "x")
    return not reader.problems


def mapping(*pairs: tuple[str, str]) -> str:
    return f"{{{', '.join(f'{name}: {value}' for name, value in pairs)}}}"


@cache
def one_field(fields: tuple[Field, ...]) -> st.SearchStrategy[tuple[str, str]]:
    return st.one_of(*(values(field).map(lambda v, name=field.name: (name, v)) for field in fields))


SIZED = [
    f"{{size: {size.name}, standard: {one.name}, class: {kind.name}}}"
    for one in standards.standards().values()
    for size in list(one.sizes.values())[:3]
    for kind in one.classes_of(size)[:1]
]
ENDS = [
    "{from: square}",
    "{from: {entry: 0.5}}",
    "{from: {entry: 5e-1, exit: '1.0', source: S1}}",
    "{}",
    "",
    "{from: rounded}",
]
SMOOTH = ["0.15 mm", "1e-4m", "0.0005 ft", "0 m", "'5 µm'", "{value: 0.1 mm, source: S1, range: [0 mm, 1 mm]}"]
"""Below every bore that is drawn."""
CHANGES = {
    f"{group}.{row}{field.name}": field
    for group, schema_ in (GROUPS | SINGLE).items()
    if group != "junctions"
    for row in (["*.", "main.", "*a*."] if group == "pipes" else ["*."] if group == "reservoirs" else [""])
    for field in schema_.fields
    if not (field.fixed or isinstance(field.form, Node | Text | Ends | Fittings))
}
HEAD = "references: {S1: {title: A survey}}\n"


@st.composite
def folders(draw: Any) -> str:
    """Return the text of a folder of one file, sound but for what one draw may have spoilt."""
    pipe = {
        "from": "upper",
        "to": "vell",
        "length": draw(values(PIPE.field("length"))),
        "bore": draw(st.one_of(values(PIPE.field("bore")), st.sampled_from(SIZED))),
        "roughness": draw(st.sampled_from(SMOOTH)),
        "hazen_williams_c": draw(values(PIPE.field("hazen_williams_c"))),
        "manning_n": draw(values(PIPE.field("manning_n"))),
        "friction_factor": draw(values(PIPE.field("friction_factor"))),
        "ends": draw(st.sampled_from(ENDS)),
    }
    optional = tuple(f for f in PIPE.fields if f.name in {"law", "parallel", "open", "pressure_rating"})
    pipe |= dict(draw(st.lists(one_field(optional), max_size=3)))
    if draw(st.booleans()):
        kind = draw(st.sampled_from([*shipped.fittings(), "bend, angle: 45 deg, radius_ratio: 1.5"]))
        own = draw(one_field(tuple(f for f in FITTING.fields if f.name in {"K", "Kv", "Cv"})))
        pipe["fittings"] = f"[{{kind: {kind}}}, {{{own[0]}: {own[1]}, note: meter}}]"
    text = HEAD + "reservoirs:\n  upper: {level: 21 m}\n  vell: {level: 20 m}\npipes:\n  main:\n"
    text += "".join(f"    {name}: {value}\n" for name, value in pipe.items())
    path = draw(st.sampled_from(sorted(CHANGES)))
    change = draw(values(CHANGES[path]))
    times = mapping(("'pipes.*.length'", draw(st.sampled_from(NUMBERS))))
    parts = {
        "friction": draw(st.sampled_from(LAW_NAMES)),
        "project": mapping(draw(one_field(header.HEADER.fields))),
        "people": f"{{checker: {mapping(('name', 'A'), draw(one_field(header.PERSON.fields[1:])))}}}",
        "revisions": f"[{{revision: 1, date: {draw(st.dates())}, change: First}}]",
        "site": mapping(draw(one_field(whole.SITE.fields))),
        "solver": mapping(draw(one_field(SOLVER.fields))),
        "cases": f"{{peak: {{with: {{'{path}': {change}}}}}, low: {{after: peak, times: {times}}}}}",
        "criteria": criterion(draw),
        "junctions": draw(st.sampled_from(["", "{}", "null"])),
    }
    kept = draw(st.sets(st.sampled_from(sorted(parts)), max_size=3))
    return text + "".join(f"{key}: {parts[key]}\n" for key in sorted(kept))


def criterion(draw: Any) -> str:
    one = draw(st.sampled_from(ALL))
    limit = draw(st.sampled_from([text for kind in one.kinds for text in quantities(kind)]))
    more = draw(
        st.sampled_from(["", ", cases: all", ", cases: [base]", ", applies_to: ", f", applies_to: '{one.group}.*'"])
    )
    return f"{{{one.id}: {{limit: {limit}{more}}}}}"


def problems_of(text: str) -> tuple[Problem, ...]:
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        (folder / "network.yaml").write_text(text, encoding="utf-8")
        try:
            pipeline.read(folder)
        except ProblemsFound as found:
            return found.problems
    return ()


@pytest.mark.slow
def test_what_is_read_the_schema_accepts() -> None:
    accepted = 0

    @given(folders())
    @settings(max_examples=60, deadline=None, suppress_health_check=list(HealthCheck))
    def drawn(text: str) -> None:
        nonlocal accepted
        if problems_of(text):
            return
        accepted += 1
        faults = [f"{error.json_path}: {error.message[:200]}" for error in VALIDATOR.iter_errors(read(text))]
        assert faults == [], text

    drawn()
    assert accepted > 40

"""Schemas of cases and criteria: paths with what may be set there, and limits."""

from __future__ import annotations

from collections.abc import Iterator

from calc.cli.inputschema.records import by_id, describe, mapping, told
from calc.cli.inputschema.values import IDENTIFIER, SCALAR, Json, Values
from calc.cli.inputschema.works import viscosity
from calc.components import Count, Field, Flag, Quantity, Word
from calc.criteria import ALL, Criterion
from calc.kinds import NUMBER, TEMPERATURE
from calc.project import BASE
from calc.project.judging import limit_forms
from calc.project.paths import FRICTION, GROUPS, PATTERN, SINGLE
from calc.project.settings import CONSTANTS


def cases(values: Values) -> Json:
    """Return the operating cases by id; the base case has a title at most."""
    title = {"description": "What the case is, in a few words. Example: Peak withdrawal", **values.refer("text")}
    after: Json = {
        "description": f"The case that this one changes further. Example: drawdown. Default: {BASE}",
        "type": [*SCALAR, "null"],
        "pattern": f"{IDENTIFIER}|^$",
    }
    settable = {rf"^{path}$": _settable(values, field) for path, field in fields() if may_change(field)}
    scalable = {rf"^{path}$": _factor(values) for path, field in fields() if _may_scale(field)}
    case = mapping(
        {
            "title": title,
            "after": after,
            "with": {
                "description": "What is set in this case: path and value, * for any id. Example: "
                "{reservoirs.upper.level: 209.20 m}",
                **_changes(settable),
            },
            "times": {
                "description": "What is multiplied in this case: path and factor, * for any id. Example: "
                "{junctions.*.withdrawal: 1.4}",
                **_changes(scalable),
            },
        }
    )
    words = "Operating cases by id; each changes the inputs as stated."
    found = by_id(words, {"description": "A case.", **case})
    base = {"description": "The inputs as stated; it changes nothing.", **mapping({"title": title})}
    return {**found, "properties": {BASE: base}}


def _changes(patterns: dict[str, Json]) -> Json:
    return {"type": ["object", "null"], "patternProperties": patterns, "additionalProperties": False}


def fields() -> Iterator[tuple[str, Field]]:
    """Yield every field that a path may end at, with the pattern of its path."""
    for group, schema in GROUPS.items():
        yield from ((rf"{group}\.{PATTERN}\.{field.name}", field) for field in schema.fields)
    for group, schema in SINGLE.items():
        yield from ((rf"{group}\.{field.name}", field) for field in schema.fields)
    for group, schema in CONSTANTS.items():
        yield from ((rf"constants\.{group}\.{field.name}", field) for field in schema.fields)
    yield "friction", FRICTION.fields[0]


def may_change(field: Field) -> bool:
    """Return whether a case may set a field."""
    return not field.fixed and isinstance(field.form, Quantity | Count | Word | Flag)


def _may_scale(field: Field) -> bool:
    return not field.fixed and isinstance(field.form, Quantity) and field.form.kind is not TEMPERATURE


def _settable(values: Values, field: Field) -> Json:
    return viscosity(values) if field.name == "viscosity" else told(values, field, "")


def _factor(values: Values) -> Json:
    form = Quantity(NUMBER)
    return {"description": describe("factor", form, "1.4"), **values.of(form), "examples": [1.4]}


def paths(*, whole: bool, group: str = "") -> Json:
    """Return the schema of a path: to fields, and to ``whole`` records; of one group where one is named."""
    ends = [path for path, _ in fields()] if not group else []
    components = [rf"{name}\.{PATTERN}" for name in ([group] if group else GROUPS)] if whole else []
    if whole and not group:
        components += [rf"constants\.{name}" for name in CONSTANTS]
    return {"type": "string", "pattern": f"^(?:{'|'.join([*components, *ends])})$"}


def criteria(values: Values) -> Json:
    """Return the criteria by id."""
    words = "Limits that the project sets, each with its source; none is set by default."
    return {"description": words, **mapping({one.id: _criterion(values, one) for one in ALL})}


def _criterion(values: Values, one: Criterion) -> Json:
    forms = limit_forms(one)
    limits = [values.of(form) for form in forms]
    kinds = " or ".join(f"{form.kind.phrase} such as {form.kind.example}" for form in forms)
    path, case = paths(whole=True, group=one.group), values.refer("id")
    texts = {
        "title": {"description": f"What the package calls it. Default: {one.title}", **values.refer("text")},
        **values.basis(),
    }
    properties: dict[str, Json] = {
        "limit": {
            "description": f"{one.title}: {one.sense} this, {kinds}",
            **(limits[0] if len(limits) == 1 else {"anyOf": limits}),
            "examples": [form.kind.example for form in forms],
        },
        "applies_to": {
            "description": f"Paths of what it applies to, * for any part of an id. Default: {one.group}.*",
            "anyOf": [path, {"type": "array", "items": path}, {"type": "null"}],
        },
        "cases": {
            "description": "Ids of the cases in which it holds. Example: [base, peak]. Default: all",
            "anyOf": [case, {"type": "array", "items": case}, {"type": "null"}],
        },
    }
    return {"description": f"{one.title}, of {one.group}.", **mapping(properties | texts, ["limit"])}

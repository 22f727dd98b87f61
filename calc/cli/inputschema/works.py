"""Schemas of the works: groups of components, and what holds for all of them."""

from __future__ import annotations

from dataclasses import replace

from calc.cli.inputschema import losses
from calc.cli.inputschema.dimensions import dimensions, rules
from calc.cli.inputschema.records import as_json, describe, example_of, mapping, record
from calc.cli.inputschema.values import IDENTIFIER, SCALAR, Json, Values
from calc.components import SCHEMAS, Ends, Fittings, Schema
from calc.components.pipe import LAW_INPUT
from calc.physics.friction import LAW_NAMES
from calc.project import settings, shipped
from calc.project.works import NEEDED

GROUP_WORDS = {
    "reservoirs": "Bodies of water with a known level, by id.",
    "junctions": "Places where pipes meet, by id.",
    "pipes": "Pipes, by id; flow is positive from 'from' to 'to'.",
}
WITHIN = r"^(?!/)(?!(?:.*/)?\.\.(?:/|$))[^\\:]+$"
"""The name of a file in the project folder."""


def groups(values: Values) -> dict[str, Json]:
    """Return the groups of components: by id, or as a table in a file beside."""
    return {one.group: _group(one, component(values, one)) for one in SCHEMAS}


def component(values: Values, one: Schema) -> Json:
    """Return the schema of a component."""
    own: dict[str, Json] = {}
    for field in one.fields:
        if isinstance(field.form, Ends):
            words = f"{field.words[:1].upper()}{field.words[1:]}. Example: {{from: square}}"
            own[field.name] = {"description": words, **losses.ends(values)}
        elif isinstance(field.form, Fittings):
            words = f"{field.words[:1].upper()}{field.words[1:]}, each by kind or by coefficient."
            own[field.name] = {"description": words, "type": ["array", "null"], "items": losses.fitting(values)}
    if one.group != "pipes":
        return {**record(values, one, one.group, own), "description": f"A {one.singular}."}
    apart = replace(one, excludes=tuple(pair for pair in one.excludes if "bore" not in pair))
    found = record(values, apart, one.group, own | dimensions(values, one))
    found["allOf"] = [*found.get("allOf", []), *map(_law_input, LAW_INPUT), *rules(values, one)]
    return {**found, "description": f"A {one.singular}."}


def _group(one: Schema, member: Json) -> Json:
    table: Json = {
        "description": "A *.csv file in the project folder that holds all of them: a header row of field names, each "
        "alone or with its unit as in 'length [m]', and one a row; the column 'id' holds the ids. Example: pipes.csv",
        "type": SCALAR,
        "pattern": WITHIN,
    }
    words = GROUP_WORDS.get(one.group, f"By id, each a {one.singular}.")
    some = {"type": "object", "minProperties": 1} if one.group in NEEDED else {"type": ["object", "null"]}
    return {
        "description": f"{words} Or all of them in a table: {{table: {one.group}.csv}}.",
        **some,
        "if": {"type": "object", "properties": {"table": {"type": SCALAR}}, "required": ["table"]},
        "then": {"properties": {"table": table}, "additionalProperties": False},
        "else": {"propertyNames": {"pattern": IDENTIFIER}, "additionalProperties": member},
    }


def _law_input(law: str) -> Json:
    return {"if": losses.says("law", law), "then": {"required": [LAW_INPUT[law]]}}


def default_laws() -> list[Json]:
    """Return, for each law, what pipes without one must state where the law is the default in the same file."""
    return [
        {
            "if": {"properties": {"friction": {"const": law}}, "required": ["friction"]},
            "then": {
                "properties": {
                    "pipes": {
                        "additionalProperties": {
                            "if": {"type": "object", "not": {"required": ["law"]}},
                            "then": {"required": [LAW_INPUT[law]]},
                        }
                    }
                }
            },
        }
        for law in LAW_NAMES
    ]


def whole(values: Values) -> dict[str, Json]:
    """Return what holds for all of the works: liquid, site, default law, constants."""
    law = shipped.defaults()["friction"].written
    words = f"Friction law of every pipe that states none. One of: {', '.join(LAW_NAMES)}. Default: {law}"
    constants = {
        name: {"description": f"Constants of {one.singular}.", **record(values, one, f"constants.{name}")}
        for name, one in settings.CONSTANTS.items()
    }
    return {
        "fluid": {"description": "The liquid: water at a temperature, or any by its properties.", **_fluid(values)},
        "site": {"description": "Where the works lie.", **record(values, settings.SITE, "site")},
        "friction": {"description": words, "enum": list(LAW_NAMES), "default": law},
        "constants": {"description": "Constants of the friction laws.", **mapping(constants)},
    }


def _fluid(values: Values) -> Json:
    found = record(values, settings.FLUID, "fluid", {"viscosity": viscosity(values)})
    properties = {name: {"required": [name]} for name in settings.PROPERTIES}
    both = ["density", "viscosity"]
    found["dependentRequired"] = {name: [one for one in both if one != name] for name in settings.PROPERTIES}
    only_water: Json = {
        "if": {"type": "object", "not": {"anyOf": list(properties.values())}},
        "then": {"properties": {"kind": {"const": "water"}}},
    }
    found["allOf"] = [*found.get("allOf", []), only_water]
    return found


def viscosity(values: Values) -> Json:
    """Return the viscosity of the liquid, which may be of two kinds."""
    form = settings.VISCOSITIES[0]
    other = settings.VISCOSITIES[1].kind
    words = f"{describe('viscosity', form, example_of(form))}, or {other.phrase} such as {other.example}"
    ways = [values.of(one) for one in settings.VISCOSITIES]
    return {"description": words, "anyOf": ways, "examples": [as_json(form, example_of(form)), other.example]}

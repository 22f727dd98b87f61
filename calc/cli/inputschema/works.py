"""Schemas of the works: groups of components, and what holds for all of them."""

from __future__ import annotations

from calc.cli.inputschema.records import as_json, describe, example_of, mapping, record, told
from calc.cli.inputschema.values import IDENTIFIER, SCALAR, Json, Values, closed
from calc.components import SCHEMAS, Ends, Fittings, Schema
from calc.components.pipe import LAW_INPUT
from calc.physics.friction import LAW_NAMES
from calc.project import fittings, settings, shipped, sizes
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
            own[field.name] = {"description": field.words, **_ends(values)}
        elif isinstance(field.form, Fittings):
            words = f"{field.words[:1].upper()}{field.words[1:]}, each by kind or by coefficient."
            own[field.name] = {"description": words, "type": ["array", "null"], "items": _fitting(values)}
    if one.group == "pipes":
        own["bore"] = _bore(values, one)
    found = record(values, one, one.group, own)
    if one.group == "pipes":
        found["allOf"] = [*found.get("allOf", []), *map(_law_input, LAW_INPUT), *_sizes()]
    return {**found, "description": f"A {one.singular}."}


def _bore(values: Values, pipe: Schema) -> Json:
    """Return a bore: a quantity, or a size in the shipped tables."""
    within = {field.name: told(values, field, "") for field in pipe.fields if field.name in sizes.WITHIN}
    plain = next(told(values, field, "") for field in pipe.fields if field.name == "bore")
    size = {"type": "object", **closed({**within, **values.basis()}, list(sizes.NAMES))}
    named = {"type": "object", "anyOf": [{"required": [name]} for name in sizes.NAMES]}
    kept: Json = {name: plain.pop(name) for name in ("description", "examples", "default") if name in plain}
    return {**kept, "if": named, "then": size, "else": plain}


def _sizes() -> list[Json]:
    """Return what size, standard and class hold one another to, and an outside diameter."""
    others = [name for name in sizes.NAMES if name != "size"]
    named = {"anyOf": [{"required": [name]} for name in others]}
    return [
        {"if": {"required": ["size"]}, "then": {"required": others}},
        {"if": named, "then": {"required": ["size"]}},
        {"if": {"required": ["outside_diameter"]}, "then": {"required": ["wall"]}},
    ]


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


def says(name: str, word: str) -> Json:
    """Return the condition that a field says a word, alone or with what it rests on."""
    held = {"properties": {"value": {"const": word}}, "required": ["value"], "type": "object"}
    return {"properties": {name: {"anyOf": [{"const": word}, held]}}, "required": [name]}


def _law_input(law: str) -> Json:
    return {"if": says("law", law), "then": {"required": [LAW_INPUT[law]]}}


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


def _fitting(values: Values) -> Json:
    schema = fittings.schema()
    field = schema.field("kind")
    listed = getattr(field.form, "options", ()) if field else ()
    words = {"oneOf": [{"const": name, "description": _what(name)} for name in listed]}
    kind = {"description": f"Kind in the shipped table: {', '.join(listed)}.", **values.word(words)}
    found = record(values, schema, "fittings", {"kind": kind, **values.basis()})
    return {**found, "type": "object", "description": "A fitting."}


def _what(kind: str) -> str:
    row = shipped.fittings().get(kind) or shipped.computed_fittings().get(kind)
    return kind if row is None else row.title.text


def _ends(values: Values) -> Json:
    shapes = {
        "oneOf": [
            {"const": name, "description": f"{row.title.text}: entry {row.forward.written}, exit {row.reverse.written}"}
            for name, row in shipped.ends().items()
        ]
    }
    own = record(values, fittings.OWN_END, "ends", values.basis())
    words = "Loss where the pipe {} in a reservoir, by shape or as {{entry: 0.5, exit: 1.0}}. Example: square"
    end = {"anyOf": [shapes, own], "examples": ["square"]}
    ends = {"from": "begins", "to": "ends"}
    return mapping({name: {"description": words.format(verb), **end} for name, verb in ends.items()})


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

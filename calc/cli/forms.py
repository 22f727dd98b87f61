"""JSON Schemas of single values: what may stand for a quantity, a word, a flag, an id."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any
from urllib.parse import quote

from calc.components import Count, Flag, Node, Quantity, Text, Word
from calc.components.fields import Form
from calc.kinds import KINDS, Kind
from calc.project.reader import GRADES

Json = dict[str, Any]

ID = "^[A-Za-z0-9_-]{1,64}$"
TEXT: Json = {"$ref": "#/$defs/text"}
"""Free text."""
GRADE: Json = {"$ref": "#/$defs/grade"}
"""How well a value is known."""
NUMBER_WITH_UNIT = r"^\s*[-+−]?\s*[0-9.].*[A-Za-z°%µμ]"
"""A figure, and somewhere behind it a unit."""


def shared() -> Json:
    """Return what many places refer to: text, grade, and a quantity of each kind that has a unit."""
    grades = {"enum": list(GRADES), "description": "how well the value is known, as its source shows it"}
    # An editor takes an unquoted 14 for a number; it is read as text all the same.
    text = {"type": ["string", "number"], "minLength": 1}
    quantities = {kind.name: {"anyOf": [_written(kind), supported(_written(kind))]} for kind in KINDS if kind.unit}
    return {"text": text, "grade": grades, **quantities}


def closed(properties: Json, required: Iterable[str] = ()) -> Json:
    """Return an object in which only these properties may stand."""
    told: Json = {"type": ["object", "null"], "additionalProperties": False, "properties": properties}
    needed = list(required)
    return {**told, "type": "object", "required": needed} if needed else told


def by_id(member: Json) -> Json:
    """Return an object of members by id."""
    return {"type": ["object", "null"], "propertyNames": {"pattern": ID}, "additionalProperties": member}


def of(form: Form, words: str) -> Json:
    """Return the schema of a value, alone or as ``{value, source, …}``."""
    told: Json = {"description": words} if words else {}
    match form:
        case Quantity():
            return {**told, **_quantity(form)}
        case Count():
            whole = {"type": "integer", "minimum": form.at_least, "maximum": form.at_most}
            return {**told, "anyOf": [whole, supported(whole)]}
        case Word():
            word = {"enum": list(form.options)}
            return {**told, "anyOf": [word, supported(word)]}
        case Flag():
            return {**told, "anyOf": [{"type": "boolean"}, supported({"type": "boolean"})]}
        case Node():
            return {**told, "type": "string", "pattern": ID}
        case Text():
            return {**told, **TEXT}
        case _:
            raise TypeError(f"no schema for a {type(form).__name__}")


def _quantity(form: Quantity) -> Json:
    if form.kind.unit:
        return {"$ref": f"#/$defs/{quote(form.kind.name)}"}
    plain = {"anyOf": [{**_written(form.kind), **_bounds(form)}, {"type": "string", "pattern": "[0-9]"}]}
    return {"anyOf": [plain, supported(plain)]}


def _written(kind: Kind) -> Json:
    if kind.unit:
        return {"type": "string", "pattern": NUMBER_WITH_UNIT, "examples": [kind.example]}
    return {"type": "number", "examples": [float(kind.example)]}


def _bounds(form: Quantity) -> Json:
    limits = {"exclusiveMinimum": form.above, "minimum": form.at_least, "maximum": form.at_most}
    return {name: limit for name, limit in limits.items() if limit is not None}


def supported(value: Json) -> Json:
    """Return a value with what it rests on beside it."""
    return closed(
        {
            "value": value,
            "source": {"type": "string", "description": "id of a reference"},
            "page": TEXT,
            "grade": GRADE,
            "note": TEXT,
            "range": {"type": "array", "items": value, "minItems": 2, "maxItems": 2},
            "deviation": {"type": ["string", "number"], "description": "standard deviation, such as 5 %"},
        },
        ["value"],
    )

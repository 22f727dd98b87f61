"""Schemas of a pipe's bore: stated, left by a wall, or of a size in the shipped tables."""

from __future__ import annotations

from collections.abc import Iterable

from calc.cli.inputschema.records import described, told
from calc.cli.inputschema.values import SCALAR, Json, Values, closed
from calc.components import Schema
from calc.project import sizes, standards
from calc.project.standards import PipeClass, Size, Standard

FOLDED: Json = {
    "type": "object",
    "anyOf": [{"required": [name]} for name in sizes.NAMES],
    "not": {"required": ["value"]},
}
"""A bore that is a mapping of size, standard and class."""
_FOLDED: Json = {"properties": {"bore": FOLDED}, "required": ["bore"]}
_PLAIN: Json = {"properties": {"bore": {"not": FOLDED}}, "required": ["bore"]}


def dimensions(values: Values, pipe: Schema) -> dict[str, Json]:
    """Return the fields of a pipe that name or make its bore."""
    tables = standards.standards().values()
    rows: dict[str, Iterable[Standard | Size | PipeClass]] = {
        "standard": tables,
        "size": [row for one in tables for row in one.sizes.values()],
        "class": [row for one in tables for row in one.classes.values()],
    }
    values.shared["of a standard"] = {"allOf": _of_standards()}
    values.shared |= {name: values.word(_names(rows[name])) for name in sizes.NAMES}
    named = {name: {**described(pipe, name), **values.refer(name)} for name in sizes.NAMES}
    return {**named, "bore": _bore(values, pipe, named)}


def _bore(values: Values, pipe: Schema, named: dict[str, Json]) -> Json:
    within = {field.name: told(values, field, "") for field in pipe.fields if field.name in sizes.WITHIN} | named
    plain = next(told(values, field, "") for field in pipe.fields if field.name == "bore")
    size: Json = {"type": "object", **closed({**within, **values.basis()}), **values.refer("of a standard")}
    kept: Json = {name: plain.pop(name) for name in ("description", "examples", "default") if name in plain}
    kept["description"] += ". Or a size in the shipped tables: {size: DN400, standard: EN 545, class: C40}"
    return {**kept, "if": FOLDED, "then": size, "else": plain}


def rules(values: Values, pipe: Schema) -> list[Json]:
    """Return what the fields that name or make a bore hold one another to."""
    others = [name for name in sizes.NAMES if name != "size"]
    excluded = [other for pair in pipe.excludes if "bore" in pair for other in pair if other != "bore"]
    everything: Json = {"properties": {"bore": {"required": list(sizes.NAMES)}}}
    unnamed: Json = {"not": {"anyOf": [{"required": [name]} for name in sizes.NAMES]}}
    wall: Json = {"anyOf": [{"required": ["wall"]}, {**_FOLDED, "properties": {"bore": {"required": ["wall"]}}}]}
    return [
        {"if": _PLAIN, "then": {"not": {"anyOf": [{"required": [name]} for name in excluded]}}},
        {
            "if": {"not": _FOLDED},
            "then": {"dependentRequired": {"size": others, **{name: ["size"] for name in others}}},
        },
        {"if": {"allOf": [_FOLDED, unnamed]}, "then": everything},
        *({"not": {"allOf": [_within(name), {"required": [name]}]}} for name in sizes.WITHIN),
        {"not": {"allOf": [_within("size"), {"required": ["outside_diameter"]}]}},
        {"if": {"required": ["outside_diameter"]}, "then": wall},
        values.refer("of a standard"),
    ]


def _within(name: str) -> Json:
    """Return the condition that a field stands under a bore that is a mapping."""
    return {"properties": {"bore": {**FOLDED, "required": [name]}}, "required": ["bore"]}


def _names(rows: Iterable[Standard | Size | PipeClass]) -> Json:
    """Return the schema of a name in a table: as it is spelt there, or whatever its blanks and capitals."""
    held = list(rows)
    return {"type": SCALAR, "anyOf": [{"enum": list(dict.fromkeys(row.name for row in held))}, _loosely(held)]}


def _loosely(rows: Iterable[Standard | Size | PipeClass]) -> Json:
    spelt = dict.fromkeys(name for row in rows for name in (row.name, *getattr(row, "also", ())))
    return {"pattern": f"^(?:{'|'.join(_pattern(name) for name in spelt)})$"}


def _pattern(name: str) -> str:
    return " *".join(["", *(_letter(letter) for letter in "".join(name.split())), ""])


def _letter(letter: str) -> str:
    if letter.isalpha():
        return f"[{letter.lower()}{letter.upper()}]"
    return letter if letter.isalnum() or letter in "-_" else f"\\{letter}"


def _of_standards() -> list[Json]:
    """Return, for each standard, which sizes and classes it has."""
    return [
        {
            "if": {"properties": {"standard": _either(_loosely([one]))}, "required": ["standard"]},
            "then": {
                "properties": {
                    "size": _either(_loosely(one.sizes.values())),
                    "class": _either(_loosely(one.classes.values())),
                }
            },
        }
        for one in standards.standards().values()
    ]


def _either(name: Json) -> Json:
    """Return what holds of a name, alone or as the value of a mapping."""
    return {**name, "properties": {"value": name}}

"""``headtrace schema``: a JSON Schema of the input files, made from the declarations that read them."""

from __future__ import annotations

import argparse
import json
from collections.abc import Iterable
from typing import Any

from calc.cli import forms
from calc.cli.outcome import Outcome
from calc.components import SCHEMAS, Field, Quantity, Schema
from calc.components.fitting import SCHEMA as FITTING_SCHEMA
from calc.criteria import ALL, Criterion
from calc.kinds import NUMBER
from calc.physics.friction import LAW_NAMES
from calc.pipeline import SECTIONS
from calc.project import header, settings, shipped
from calc.project.section import SectionSchema

DIALECT = "https://json-schema.org/draft/2020-12/schema"
BASIS = ("source", "page", "grade", "note")

Json = dict[str, Any]


def run(asked: argparse.Namespace) -> Outcome:
    """Print the schema."""
    del asked
    return Outcome(said=json.dumps(schema(), indent=2, ensure_ascii=False))


def schema() -> Json:
    """Return the schema that each ``*.yaml`` file of a project folder follows.

    No key is required of a file: each top-level key may stand in any of them.
    """
    return {
        "$schema": DIALECT,
        "title": "Headtrace inputs",
        "description": "One *.yaml file of a project folder; each top-level key stands once, in any of them.",
        "type": "object",
        "additionalProperties": False,
        "properties": {
            **_header(),
            **_whole_works(),
            **{one.group: _group(one) for one in SCHEMAS},
            "cases": forms.by_id(_case()),
            "criteria": forms.closed({one.id: _criterion(one) for one in ALL}),
            **{one.name: _section(one) for one in SECTIONS},
        },
        "$defs": forms.shared(),
    }


def record(one: Schema, *, extra: Json | None = None) -> Json:
    """Return the schema of one record: its fields, what it needs, and what excludes what."""
    properties = {field.name: _field(field) for field in one.fields} | (extra or {})
    needed = [field.name for field in one.fields if field.required]
    told = forms.closed(properties, needed)
    if one.excludes:
        told["allOf"] = [{"not": {"required": list(pair)}} for pair in one.excludes]
    return told


def _field(field: Field) -> Json:
    if field.name == "fittings":
        return {"type": "array", "description": field.words, "items": _fitting()}
    if field.name == "ends":
        end = {"anyOf": [{"enum": list(shipped.ends())}, _own_end()]}
        return {"description": field.words, **forms.closed({"from": end, "to": end})}
    return forms.of(field.form, field.words)


def _fitting() -> Json:
    extra: Json = {name: forms.TEXT for name in BASIS if name != "grade"}
    extra |= {"grade": forms.GRADE, "at": {"enum": ["from", "to", "along"]}}
    told = record(FITTING_SCHEMA, extra=extra)
    told["properties"]["kind"] = {
        "description": "kind in the shipped table",
        "oneOf": [{"const": name, "description": row.title.text} for name, row in shipped.fittings().items()],
    }
    told["anyOf"] = [{"required": ["kind"]}, {"required": ["K"]}]
    return told


def _own_end() -> Json:
    coefficient = Quantity(NUMBER, at_least=0.0)
    extra: Json = {name: forms.TEXT for name in BASIS if name != "grade"}
    entry = forms.of(coefficient, "loss coefficient, flow out of the reservoir")
    leaving = forms.of(coefficient, "loss coefficient, flow into the reservoir")
    return forms.closed({"entry": entry, "exit": leaving, "grade": forms.GRADE, **extra}, ["entry"])


def _group(one: Schema) -> Json:
    """Return a group of components: by id, or as a table in a file beside."""
    table = forms.closed({"table": {"type": "string", "pattern": r"\.csv$"}}, ["table"])
    return {"anyOf": [table, forms.by_id(record(one))]}


def _header() -> Json:
    texts = {"type": "array", "items": forms.TEXT}
    affects = {"affects": {"anyOf": [forms.TEXT, texts]}, "basis": forms.TEXT}
    revision = record(header.REVISION)
    revision["properties"]["date"] = {"type": "string", "pattern": "^[0-9]{4}-[0-9]{2}-[0-9]{2}$"}
    return {
        "project": record(header.HEADER),
        "purpose": {"anyOf": [forms.TEXT, texts]},
        "people": forms.closed({role: record(header.PERSON) for role in header.ROLES}),
        "references": forms.by_id(record(header.REFERENCE)),
        "assumptions": forms.by_id(record(header.ASSUMPTION, extra=affects)),
        "revisions": {"type": "array", "items": revision},
    }


def _whole_works() -> Json:
    fluid = record(settings.FLUID)
    viscosities = [forms.of(form, "viscosity, kinematic or dynamic") for form in settings.VISCOSITIES]
    fluid["properties"]["viscosity"] = {"anyOf": viscosities}
    return {
        "fluid": fluid,
        "site": record(settings.SITE),
        "friction": {"enum": list(LAW_NAMES), "description": "friction law of pipes that state none"},
        "constants": forms.closed({name: record(one) for name, one in settings.CONSTANTS.items()}),
    }


def _case() -> Json:
    path = {"propertyNames": {"pattern": r"^[A-Za-z0-9_*.-]+$"}}
    factor = forms.of(Quantity(NUMBER), "factor")
    changed = {"anyOf": [{"type": ["string", "number", "boolean"]}, {"type": "object", "required": ["value"]}]}
    return forms.closed(
        {
            "title": forms.TEXT,
            "after": {"type": "string", "description": "the case that this one changes further"},
            "with": {"type": "object", **path, "additionalProperties": changed},
            "times": {"type": "object", **path, "additionalProperties": factor},
        }
    )


def _criterion(one: Criterion) -> Json:
    limits = [forms.of(Quantity(kind), f"{one.title}: {one.sense} this") for kind in one.kinds]
    several: Json = {"anyOf": [forms.TEXT, {"type": "array", "items": forms.TEXT}]}
    fields: Json = {
        "limit": limits[0] if len(limits) == 1 else {"anyOf": limits},
        "applies_to": {"description": f"paths such as {one.group}.*", **several},
        "cases": {"description": "all, or ids of cases", **several},
        "grade": forms.GRADE,
    }
    texts: Iterable[str] = ("title", "source", "page", "note")
    return {"description": one.title, **forms.closed(fields | dict.fromkeys(texts, forms.TEXT), ["limit"])}


def _section(one: SectionSchema) -> Json:
    fields: Json = {field.name: forms.of(field.form, field.words) for field in one.fields}
    for field in one.by_node:
        fields[field.name] = {"description": field.words, **forms.by_id(forms.of(field.form, field.words))}
    return forms.closed(fields)

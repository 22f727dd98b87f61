"""The schema as a whole."""

from __future__ import annotations

from calc.cli.inputschema.changes import cases, criteria
from calc.cli.inputschema.heading import heading
from calc.cli.inputschema.records import by_id, mapping, told
from calc.cli.inputschema.values import Json, Values
from calc.cli.inputschema.works import default_laws, groups, whole
from calc.pipeline import SECTIONS
from calc.project.section import SectionSchema

FORMAT = "https://json-schema.org/draft/2020-12/schema"


def schema() -> Json:
    """Return the schema that each ``*.yaml`` file of a project folder follows.

    No key is required of a file: each top-level key may stand in any of them.
    """
    values = Values()
    properties = {
        **heading(values),
        **whole(values),
        **groups(values),
        "cases": cases(values),
        "criteria": criteria(values),
        **{one.name: _section(values, one) for one in SECTIONS},
    }
    return {
        "$schema": FORMAT,
        "title": "Headtrace inputs",
        "description": "One *.yaml file of a project folder; each top-level key stands once, in any of them.",
        **mapping(properties, rules=default_laws()),
        "$defs": values.shared,
    }


def _section(values: Values, one: SectionSchema) -> Json:
    fields: dict[str, Json] = {field.name: told(values, field, one.name) for field in one.fields}
    for field in one.by_node:
        words = f"{field.words[:1].upper()}{field.words[1:]}, by the id of a junction."
        fields[field.name] = by_id(words, told(values, field, one.name))
    return {"description": f"{one.words[:1].upper()}{one.words[1:]}.", **mapping(fields)}

"""Schemas of what a project says of itself: title block, purpose, people, references, assumptions, revisions."""

from __future__ import annotations

from calc.cli.inputschema.changes import paths
from calc.cli.inputschema.records import by_id, mapping, record
from calc.cli.inputschema.values import Json, Values
from calc.project import header


def heading(values: Values) -> dict[str, Json]:
    """Return the top-level keys of the header."""
    texts: Json = {"type": "array", "items": values.refer("text")}
    purpose = {"anyOf": [values.refer("text"), texts, {"type": "null"}]}
    return {
        "project": {"description": "Title block.", **record(values, header.HEADER, "project")},
        "purpose": {"description": "What the calculation is to show: a sentence, or a list of them.", **purpose},
        "people": {"description": "Who makes, checks and approves the calculation.", **_people(values)},
        "references": by_id(
            "Sources of the inputs, by the id that 'source' names, such as S1.",
            {"description": "A source of inputs.", **record(values, header.REFERENCE, "references")},
        ),
        "assumptions": by_id(
            "What is assumed, by id, such as A1.",
            {"description": "An assumption.", **_assumption(values)},
        ),
        "revisions": {
            "description": "Every revision of the calculation with its date, the newest last.",
            "type": ["array", "null"],
            "items": {"description": "A revision.", **record(values, header.REVISION, "revisions")},
        },
    }


def _people(values: Values) -> Json:
    person = record(values, header.PERSON, "people")
    return mapping({role: {"description": f"The {role}.", **person} for role in header.ROLES})


def _assumption(values: Values) -> Json:
    path = paths(whole=True)
    own: dict[str, Json] = {
        "basis": {"description": "id of the reference that it rests on, such as S2", **values.refer("id")},
        "affects": {
            "description": "Paths of the inputs that rest on it. Example: [pipes.upper-main.roughness]",
            "anyOf": [path, {"type": "array", "items": path}, {"type": "null"}],
        },
    }
    return record(values, header.ASSUMPTION, "assumptions", own)

"""Schemas of local losses: fittings and reservoir ends."""

from __future__ import annotations

from calc.cli.inputschema.records import mapping, record
from calc.cli.inputschema.values import Json, Values
from calc.components.fitting import FLOW_COEFFICIENTS, FORM_FIELDS, NEEDS
from calc.project import fittings, shipped


def fitting(values: Values) -> Json:
    """Return a fitting: of a kind, or by a coefficient."""
    schema = fittings.schema()
    field = schema.field("kind")
    listed = getattr(field.form, "options", ()) if field else ()
    words = {"oneOf": [{"const": name, "description": _what(name)} for name in listed]}
    kind = {"description": f"Kind in the shipped table: {', '.join(listed)}.", **values.word(words)}
    found = record(values, schema, "fittings", {"kind": kind, **values.basis()})
    found["allOf"] = [*found.get("allOf", []), *_forms()]
    return {**found, "type": "object", "description": "A fitting."}


def _what(kind: str) -> str:
    row = shipped.fittings().get(kind) or shipped.computed_fittings().get(kind)
    return kind if row is None else row.title.text


def says(name: str, word: str) -> Json:
    """Return the condition that a field says a word, alone or with what it rests on."""
    held = {"properties": {"value": {"const": word}}, "required": ["value"], "type": "object"}
    return {"properties": {name: {"anyOf": [{"const": word}, held]}}, "required": [name]}


def _forms() -> list[Json]:
    """Return what each computed kind takes and what it makes nothing of; others take no form."""
    rules: list[Json] = []
    computed: list[Json] = []
    for kind, needs in NEEDS.items():
        condition: Json = {"required": [kind]} if kind in FLOW_COEFFICIENTS else says("kind", kind)
        idle = [name for name in (*FORM_FIELDS, "K_reverse") if name not in needs]
        rules.append({"if": condition, "then": {"required": list(needs), "properties": dict.fromkeys(idle, False)}})
        computed.append(condition)
    return [*rules, {"if": {"not": {"anyOf": computed}}, "then": {"properties": dict.fromkeys(FORM_FIELDS, False)}}]


def ends(values: Values) -> Json:
    """Return the losses at the reservoir ends of a pipe."""
    shapes = {
        "oneOf": [
            {"const": name, "description": f"{row.title.text}: entry {row.forward.written}, exit {row.reverse.written}"}
            for name, row in shipped.ends().items()
        ]
    }
    own = record(values, fittings.OWN_END, "ends", values.basis())
    words = "Loss where the pipe {} in a reservoir, by shape or as {{entry: 0.5, exit: 1.0}}. Example: square"
    end = {"anyOf": [shapes, own], "examples": ["square"]}
    verbs = {"from": "begins", "to": "ends"}
    return mapping({name: {"description": words.format(verb), **end} for name, verb in verbs.items()})

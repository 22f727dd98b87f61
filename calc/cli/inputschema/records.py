"""Schemas of records: fields with what they are, what must stand, what excludes what."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from calc.cli.inputschema.values import IDENTIFIER, Json, Values, closed
from calc.components import Count, Date, Field, Flag, Quantity, Schema, Word
from calc.components.fields import Form
from calc.project import bounds, shipped


def record(values: Values, one: Schema, path: str, own: Mapping[str, Json] | None = None) -> Json:
    """Return the schema of one record.

    Parameters
    ----------
    values : Values
        Makes the schemas of values.
    one : Schema
        Its fields.
    path : str
        Under which its defaults ship, such as ``pipes``.
    own : mapping of str to Json
        Fields that code of their own reads: further ones, and some in place of those declared.
    """
    special = own or {}
    properties = {field.name: special.get(field.name) or told(values, field, path) for field in one.fields}
    needed = [field.name for field in one.fields if field.required]
    return mapping({**properties, **special}, needed, _together(one))


def mapping(properties: Json, required: Iterable[str] = (), rules: Iterable[Json] = ()) -> Json:
    """Return a mapping in which only these keys may stand; nothing at all will do where none is required."""
    needed, held = list(required), list(rules)
    types = "object" if needed else ["object", "null"]
    return {"type": types, **closed(properties, needed), **({"allOf": held} if held else {})}


def by_id(words: str, member: Json) -> Json:
    """Return a mapping of members by id."""
    return {
        "description": words,
        "type": ["object", "null"],
        "propertyNames": {"pattern": IDENTIFIER},
        "additionalProperties": member,
    }


def _together(one: Schema) -> list[Json]:
    """Return what the fields of a record hold one another to."""
    rules: list[Json] = [{"not": {"required": list(pair)}} for pair in one.excludes]
    return [*rules, *({"anyOf": [{"required": [name]} for name in names]} for names in one.either)]


def told(values: Values, field: Field, path: str) -> Json:
    """Return a field: what it is, how it is written, its range and default, and what may stand there."""
    example = field.example or example_of(field.form)
    default = shipped.defaults().get(f"{path}.{field.name}")
    usual = default.written if default else field.default
    return {
        "description": describe(field.words, field.form, example, usual),
        **values.of(field.form),
        **({"examples": [as_json(field.form, example)]} if example else {}),
        **({"default": as_json(field.form, usual)} if usual else {}),
    }


def described(one: Schema, name: str) -> Json:
    """Return what a field of a schema is, without what may stand there."""
    field = one.field(name)
    if field is None:
        raise TypeError(f"{one.group} has no field {name}")
    return {"description": describe(field.words, field.form, field.example), "examples": [field.example]}


def describe(words: str, form: Form, example: str, usual: str = "") -> str:
    """Return what a field is, in words: kind and range, an example, the default."""
    parts = [words[:1].upper() + words[1:], _kind(form), f"Example: {example}" if example else ""]
    parts.append(f"Default: {usual}" if usual else "")
    return "".join(f"{part}. " for part in parts if part).rstrip()


def _kind(form: Form) -> str:
    match form:
        case Quantity():
            kind = form.kind
            bare = f"; without a unit, in {form.bare}" if form.bare else ""
            return f"{kind.phrase[0].upper()}{kind.phrase[1:]}{' with its unit' * bool(kind.unit)}{bare}{_range(form)}"
        case Count():
            return f"A whole number from {form.at_least} to {form.at_most}"
        case Word():
            return f"One of: {', '.join(form.options)}" if form.options else ""
        case Flag():
            return "true or false"
        case Date():
            return "Year, month and day"
        case _:
            return ""


def _range(form: Quantity) -> str:
    least, most = bounds.limits(form)
    if form.above is not None:
        return f", above {bounds.show(form.above, form.kind)}"
    return f", from {bounds.show(least, form.kind)} to {bounds.show(most, form.kind)}"


def example_of(form: Form) -> str:
    """Return what a value of a form may look like."""
    match form:
        case Quantity():
            return form.kind.example
        case Count():
            return str(form.at_least)
        case Word():
            return form.options[0] if form.options else ""
        case Flag():
            return "true"
        case Date():
            return "2026-11-02"
        case _:
            return ""


def as_json(form: Form, written: str) -> str | float | bool:
    """Return a text as an editor reads it where it stands unquoted."""
    match form:
        case Quantity() if (not form.kind.unit or form.bare) and not written[-1].isalpha():
            return float(written)
        case Count():
            return int(written)
        case Flag():
            return written == "true"
        case _:
            return written

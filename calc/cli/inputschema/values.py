"""What may stand for one value: a quantity, a count, a word, a flag, a text, a date, an id."""

from __future__ import annotations

from typing import Any
from urllib.parse import quote

from calc import units
from calc.components import Count, Date, Flag, Name, Node, Quantity, Text, Word
from calc.components.fields import Form
from calc.kinds import NUMBER, Kind
from calc.project import bounds, materials
from calc.project.reader import GRADES, ID
from calc.units import pattern
from calc.units.names import measured

Json = dict[str, Any]

IDENTIFIER = f"^(?:{ID})$"
SCALAR = ["string", "number", "boolean"]
"""What an editor takes an unquoted text for: an id ``12`` is a number to it, and a text to us."""
WHOLE = "^[0-9]{1,9}$"
_YEAR = "[0-9]{4}"
_LEAP = "(?:[0-9]{2}(?:0[48]|[2468][048]|[13579][26])|(?:[02468][048]|[13579][26])00)"
CALENDAR = (
    f"^(?!0000)(?:{_YEAR}-(?:(?:0[13578]|1[02])-(?:0[1-9]|[12][0-9]|3[01])"
    f"|(?:0[469]|11)-(?:0[1-9]|[12][0-9]|30)|02-(?:0[1-9]|1[0-9]|2[0-8]))|{_LEAP}-02-29)$"
)
"""A date of the calendar, year first."""


class Values:
    """Schemas of values; what many of them share is collected in ``shared`` as they are asked for."""

    def __init__(self) -> None:
        self.shared: dict[str, Json] = {
            "text": {"type": SCALAR, "pattern": r"\S"},
            "id": {"type": SCALAR, "pattern": IDENTIFIER},
            "date": {
                "type": "string",
                "pattern": CALENDAR,
                "patternErrorMessage": "a date of the calendar, year first: 2026-11-02",
            },
            "basis": {"properties": self._basis()},
        }

    @staticmethod
    def refer(name: str) -> Json:
        """Return a reference to what is shared."""
        return {"$ref": f"#/$defs/{quote(name)}"}

    def _basis(self) -> Json:
        return {
            "source": {"description": "id of the reference that it comes from, such as S1", **self.refer("id")},
            "page": {"description": "page in that reference, such as 14", **self.refer("text")},
            "grade": {
                "description": f"how well it is known, as its source shows it: {', '.join(GRADES)}",
                "enum": list(GRADES),
            },
            "note": {"description": "a remark, printed beside the value: flow test of 2019", **self.refer("text")},
        }

    def basis(self) -> Json:
        """Return ``source``, ``page``, ``grade`` and ``note``, which stand beside a value."""
        return {name: {"$ref": f"#/$defs/basis/properties/{name}"} for name in self._basis()}

    def of(self, form: Form) -> Json:
        """Return the schema of a value, alone or as ``{value, source, …}``."""
        match form:
            case Quantity():
                return self._quantity(form)
            case Count():
                return self._count(form)
            case Word():
                return self.word({"enum": list(form.options)})
            case Flag():
                return self.word({"enum": [True, False, "true", "false"]})
            case Name():
                return self.word(self.refer("text"))
            case Node() | Text() | Date():
                return self.refer({Node: "id", Text: "text", Date: "date"}[type(form)])
            case _:
                raise TypeError(f"no schema for a {type(form).__name__}")

    def word(self, word: Json) -> Json:
        """Return a word, alone or with what it rests on."""
        supported = {"value": {"description": "the value itself", **word}, **self.basis()}
        return {"anyOf": [word, {"type": "object", **closed(supported, ["value"])}]}

    def _count(self, form: Count) -> Json:
        held: Json = {"minimum": form.at_least, "maximum": form.at_most, "pattern": WHOLE}
        bounded = {"type": ["integer", "string"], **held}
        return {
            "type": ["integer", "string", "object"],
            **held,
            **self._supported(bounded, {"type": "string", **self._share(), "pattern": pattern.ABOVE_ZERO}),
        }

    def _quantity(self, form: Quantity) -> Json:
        sign, kind = _sign(form), form.kind
        if kind.unit and not form.bare:
            name, types, limits = f"{_name(kind)}{_SIGNS[sign]}", ["string"], Json()
        else:
            limits = _limits(form)
            low, high = limits.values()
            name = f"{_name(kind)} {'above' if 'exclusiveMinimum' in limits else 'from'} {low:.12g} to {high:.12g}"
            types = ["number", "string"]
        text = self.text(kind, sign, bare=bool(form.bare))
        name += f" or material of the table {form.table}" if form.table else ""
        if name not in self.shared:
            one = {"type": types, **limits, **text}
            supported = self._supported(one, self._deviation(kind))
            self.shared[name] = {**limits, **text, **self._material(form.table, supported)}
        return {"type": [*types, "object"], **self.refer(name)}

    def _material(self, table: str, supported: Json) -> Json:
        """Return what must hold of a mapping that may name a material in place of a value."""
        if not table:
            return supported
        rows = materials.tables()[table]
        words = {"oneOf": [{"const": name, "description": row.title.text} for name, row in rows.items()]}
        named = {"description": f"material in the shipped table: {', '.join(rows)}", **words}
        other = closed({"material": named, **self.basis()}, ["material"])
        return {"if": {"type": "object", "required": ["material"]}, "then": other, "else": supported}

    def text(self, kind: Kind, sign: str = "", *, bare: bool = False) -> Json:
        """Return the schema of a quantity as text, by reference; it says nothing of what is no text."""
        name = f"text of {_name(kind)}"
        held: Json = {} if not sign else {"pattern": sign, "patternErrorMessage": _SIGNS[sign].strip()}
        if name not in self.shared:
            message = f"{kind.phrase}, such as '{kind.example}'"
            self.shared[name] = {"pattern": pattern.quantity(kind), "patternErrorMessage": message}
        if bare:
            return {"anyOf": [self.refer(name), {"pattern": pattern.NUMBER}], **held}
        return {**self.refer(name), **held}

    def _supported(self, value: Json, deviation: Json) -> Json:
        """Return what must hold of a mapping ``{value, source, …}``; it says nothing of what is no mapping."""
        spread: Json = {
            "range": {
                "description": "lowest and highest value that it may have",
                "type": ["array", "null"],
                "items": value,
                "minItems": 2,
                "maxItems": 2,
            },
            "deviation": {"description": "standard deviation: a share such as 5 %, or an amount", **deviation},
        }
        properties = {"value": {"description": "the value itself", **value}, **self.basis(), **spread}
        return {**closed(properties, ["value"]), "not": {"type": "object", "required": ["range", "deviation"]}}

    def _share(self) -> Json:
        return {"allOf": [self.text(NUMBER), {"pattern": "%"}]}

    def _deviation(self, kind: Kind) -> Json:
        """Return a standard deviation: a share of the value, or a difference in its unit."""
        if not kind.unit:
            return {"type": ["number", "string"], "exclusiveMinimum": 0, **self.text(NUMBER, pattern.ABOVE_ZERO)}
        amount = self.text(kind)
        if pattern.has_scales(kind):
            amount = {"pattern": pattern.quantity(kind, differences=True)}
        return {"type": "string", "anyOf": [self._share(), amount], "pattern": pattern.ABOVE_ZERO}


def _limits(form: Quantity) -> Json:
    """Return the bounds of a number without a unit."""
    worth = units.factor(form.bare, form.kind) if form.bare else 1.0
    least, most = (bound * worth for bound in bounds.limits(form))
    if form.above is not None and form.above * worth >= least:
        return {"exclusiveMinimum": form.above * worth, "maximum": most}
    return {"minimum": least, "maximum": most}


def closed(properties: Json, required: list[str] | tuple[str, ...] = ()) -> Json:
    """Return what holds of a mapping in which only these keys may stand; it says nothing of what is none."""
    told: Json = {"properties": properties, "additionalProperties": False}
    return {**told, "required": [*required]} if required else told


_SIGNS = {"": "", pattern.NOT_BELOW_ZERO: " not below zero", pattern.ABOVE_ZERO: " above zero"}


def _sign(form: Quantity) -> str:
    """Return the pattern of the sign that the bounds of a form leave."""
    least, _ = bounds.limits(form)
    if not pattern.never_negative(form.kind, least if form.above is None else max(least, form.above)):
        return ""
    return pattern.ABOVE_ZERO if form.above is not None else pattern.NOT_BELOW_ZERO


def _name(kind: Kind) -> str:
    """Return what quantities of the dimension of a kind are called; kinds of one dimension share it."""
    name = measured(kind.dimension)
    return kind.name if kind.unit and name == NUMBER.name else name

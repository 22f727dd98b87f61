"""Reading one value: a node becomes a Stated, or a problem is noted."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Callable, Sequence
from collections.abc import Mapping as Table
from dataclasses import dataclass, field, replace

from calc.components import Basis, Count, Date, Flag, Name, Quantity, Record, Stated, Text, Word
from calc.components.fields import Form
from calc.kinds import Kind
from calc.project.notes import Notes, empty
from calc.project.spread import KEYS as SPREAD_KEYS
from calc.project.spread import read_spread
from calc.project.wording import listed, quoted
from calc.yamlfile import Mapping, Node, Scalar

GRADES = ("surveyed", "drawing", "manufacturer", "measured", "standard", "assumed")
"""How well a value is known, as its source shows it."""

BASIS_KEYS = ("source", "page", "grade", "note")
_VALUE_KEYS = ("value", *BASIS_KEYS, *SPREAD_KEYS)
LONGEST_ID = 64
ID = f"[A-Za-z0-9_-]{{1,{LONGEST_ID}}}"
_ID = re.compile(ID, re.ASCII)
_WHOLE = re.compile(r"[0-9]{1,9}", re.ASCII)
_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", re.ASCII)


@dataclass
class Reader(Notes):
    """What reading carries along: the problems found, and what later values refer to.

    Attributes
    ----------
    references : frozenset of str
        Ids that ``source`` may name.
    doubtful : set of str
        Groups of which some ids could not be read; of paths into them it is not said that they lead nowhere.
    nodes : set of str or None
        Ids that ``from`` and ``to`` may name; None while a group could not be read, when nothing is said.
    spreads : dict
        Ranges and deviations by path.
    defaults : dict
        Defaults in use by path.
    materials : callable
        Gives the typical values of a shipped table by material.
    reached : dict
        The ids that each pattern of each group reaches, so that many lines share one tuple.
    """

    references: frozenset[str] = frozenset()
    doubtful: set[str] = field(default_factory=set)
    nodes: set[str] | None = None
    spreads: dict[str, Record] = field(default_factory=dict)
    defaults: dict[str, Stated] = field(default_factory=dict)
    materials: Callable[[str], Table[str, Stated]] = field(default=lambda _: {})
    reached: dict[tuple[str, str], tuple[str, ...]] = field(default_factory=dict)

    def id(self, key: Scalar, path: str, what: str) -> bool:
        """Return whether a key may be an id."""
        if _ID.fullmatch(key.text):
            return True
        hint = "" if key.text.isascii() else "a letter here only looks like one of a to z"
        expected = f"the id of {what}: at most {LONGEST_ID} letters, digits, _ and -"
        self.note(key.mark, "bad-id", path, f"{quoted(key.text)} is not an id", expected, hint)
        return False

    def word(
        self, node: Node, path: str, options: Sequence[str], code: str = "bad-word", what: str = "word"
    ) -> Stated | None:
        """Return one of some words."""
        scalar = self.scalar(node, path, f"one of {listed(options)}")
        if scalar is None:
            return None
        if scalar.text in options:
            return Stated(scalar.text, scalar.text, scalar.mark)
        found = f"unknown {what} {quoted(scalar.text)}"
        self.note(scalar.mark, code, path, found, f"one of {listed(options)}", self.near(scalar.text, options))
        return None

    def text(self, node: Node, path: str) -> Stated | None:
        """Return a free text; that it prints has been seen to when the file was read."""
        scalar = self.scalar(node, path, "a text")
        if scalar is None:
            return None
        if empty(scalar) or not scalar.text.strip():
            self.note(scalar.mark, "bad-text", path, "nothing is written here", "a text")
            return None
        return Stated(scalar.text, scalar.text, scalar.mark)

    def date(self, node: Node, path: str) -> Stated | None:
        """Return a date of the calendar."""
        stated = self.text(node, path)
        if stated is None:
            return None
        try:
            sound = _DATE.fullmatch(stated.text) and dt.date.fromisoformat(stated.text)
        except ValueError:
            sound = None
        if not sound:
            found = f"{quoted(stated.text)} is not a date"
            self.note(stated.mark, "bad-date", path, found, "year, month and day, such as '2026-11-02'")
            return None
        return stated

    def basis(self, node: Mapping, path: str) -> Basis:
        """Return what a value rests on, from the keys beside it."""
        got: dict[str, str] = {}
        for entry in node.entries:
            key, at = entry.key.text, f"{path}.{entry.key.text}"
            if key == "source":
                stated = self.reference(entry.value, at)
            elif key == "grade":
                stated = self.word(entry.value, at, GRADES, what="grade")
            elif key in BASIS_KEYS:
                stated = self.text(entry.value, at)
            else:
                continue
            if stated is not None:
                got[key] = stated.text
        return Basis(**got)

    def reference(self, node: Node, path: str) -> Stated | None:
        """Return the id of a reference."""
        scalar = self.scalar(node, path, "the id of a reference")
        if scalar is None:
            return None
        if scalar.text in self.references:
            return Stated(scalar.text, scalar.text, scalar.mark)
        known = sorted(self.references)
        hint = self.near(scalar.text, known) or f"list {quoted(scalar.text)} under 'references', with its title"
        found = f"there is no reference {quoted(scalar.text)}"
        self.note(scalar.mark, "unknown-reference", path, found, "the id of one of the references", hint)
        return None

    def value(self, form: Form, node: Node, path: str, code: str = "bad-word") -> Stated | None:
        """Return the value of a field of any scalar form, alone or as ``{value, source, …}``."""
        if isinstance(form, Text):
            return self.text(node, path)
        if isinstance(form, Quantity) and form.table and isinstance(node, Mapping) and node.get("material"):
            return self.material(form.table, node, path)
        if isinstance(form, Date):
            return self.date(node, path)
        if isinstance(node, Scalar):
            return self.plain(form, node, path, code)
        kind = form.kind if isinstance(form, Quantity) else None
        return self.supported(node, path, lambda scalar, at: self.plain(form, scalar, at, code), kind)

    def plain(self, form: Form, scalar: Scalar, path: str, code: str = "bad-word") -> Stated | None:
        """Return the value of a scalar."""
        if isinstance(form, Quantity):
            got = self.quantity(scalar, path, (form,))
            return got and got[0]
        if isinstance(form, Word):
            return self.word(scalar, path, form.options, code, _NAMES.get(code, "word"))
        if isinstance(form, Flag):
            stated = self.word(scalar, path, ("true", "false"))
            return stated and Stated(stated.text == "true", stated.written, stated.mark)
        if isinstance(form, Count):
            return self.count(form, scalar, path)
        if isinstance(form, Name):
            return self.text(scalar, path)
        raise TypeError(f"a {type(form).__name__} is not a scalar")

    def material(self, table: str, node: Mapping, path: str) -> Stated | None:
        """Return the typical value that a shipped table has for a material: ``{material: …, source, …}``."""
        rows = self.materials(table)
        named: Stated | None = None
        for key, value in node.entries:
            at = f"{path}.{key.text}"
            if key.text == "material":
                named = self.word(value, at, tuple(rows), "unknown-material", "material")
            elif key.text == "value":
                found = "'material' and 'value' both stand here"
                self.note(key.mark, "excluded-pair", at, found, "one of the two")
            elif key.text not in BASIS_KEYS:
                self.unknown(key, at, ("material", *BASIS_KEYS))
        basis = self.basis(node, path)
        if named is None:
            return None
        return taken(rows[named.text], f"{named.text} at {named.mark}", basis)

    def count(self, form: Count, scalar: Scalar, path: str) -> Stated | None:
        """Return a whole number."""
        expected = f"a whole number from {form.at_least} to {form.at_most}"
        if not _WHOLE.fullmatch(scalar.text):
            found = f"{quoted(scalar.text)} is not a whole number"
            self.note(scalar.mark, "not-a-quantity", path, found, expected)
            return None
        if not form.at_least <= int(scalar.text) <= form.at_most:
            self.note(scalar.mark, "out-of-range", path, f"{quoted(scalar.text)} is out of range", expected)
            return None
        return Stated(float(scalar.text), scalar.text, scalar.mark, float(scalar.text))

    def supported(
        self, node: Node, path: str, read: Callable[[Scalar, str], Stated | None], kind: Kind | None = None
    ) -> Stated | None:
        """Return a value written as ``{value, source, page, grade, note, range or deviation}``.

        ``read`` reads its value; a deviation is of ``kind``, or a share of the value where that is None.
        """
        if not isinstance(node, Mapping):
            self.wrong_shape(node, path, "a value, or {value: …, source: …}")
            return None
        at = {entry.key.text: entry.value for entry in node.entries}
        for key, _ in node.entries:
            if key.text not in _VALUE_KEYS:
                self.unknown(key, f"{path}.{key.text}", _VALUE_KEYS)
        if "value" not in at:
            self.note(node.mark, "missing-key", path, "there is no value here", "'value'")
            return None
        basis = self.basis(node, path)
        scalar = self.scalar(at["value"], path, "a value")
        stated = scalar and read(scalar, path)
        if stated is None:
            return None
        spread = read_spread(self, at, path, stated, kind=kind, read=read)
        if spread is not None:
            self.spreads[path] = spread
        return replace(stated, basis=basis)


def taken(value: Stated, said: str, basis: Basis) -> Stated:
    """Return a shipped value that a project took by a name: its own source, the name and place, the table's source."""
    named = f"{basis.source}, p. {basis.page}" if basis.source and basis.page else basis.source
    told = ": ".join(part for part in (named, said) if part)
    return replace(value, basis=replace(basis, source=f"{told}; {value.basis.source}", page=""))


_NAMES = {"unknown-law": "friction law", "unknown-kind": "kind"}

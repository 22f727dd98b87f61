"""Values as the user stated them: in SI, with the text, its mark and what it rests on."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from calc.marks import Mark


@dataclass(frozen=True, slots=True)
class Basis:
    """What a value rests on: a reference id, its page, a grade and a note; each empty where not said."""

    source: str = ""
    page: str = ""
    grade: str = ""
    note: str = ""


NO_BASIS = Basis()


@dataclass(frozen=True, slots=True)
class Stated:
    """One value of an input.

    Attributes
    ----------
    value : float, str or bool
        A quantity in SI; a word, id or text; a flag.
    written : str
        The text as written, such as ``384.4 mm``.
    mark : Mark
        Where it stands; in ``calc/data`` when ``shipped``.
    number, unit, factor, offset
        For a quantity: ``value = number · factor + offset``, the number and unit being as written.
    basis : Basis
        Source, page, grade, note.
    shipped : bool
        Whether it comes from a table or default that ships with the program.
    follows : bool
        Whether it follows by a law from other values of its record; the books apply that law again.
    """

    value: float | str | bool
    written: str
    mark: Mark
    number: float = math.nan
    unit: str = ""
    factor: float = 1.0
    offset: float = 0.0
    basis: Basis = NO_BASIS
    shipped: bool = False
    follows: bool = False

    @property
    def si(self) -> float:
        """The value of a quantity, in SI."""
        return float(self.value)

    @property
    def text(self) -> str:
        """The value of a word or text."""
        return str(self.value)


@dataclass(frozen=True, slots=True)
class Record:
    """A component or section as stated: its id, where it begins, and the values of its fields.

    ``stated`` holds only what was written or what a default supplies; ``parts`` holds lists of smaller
    records, such as the fittings of a pipe.
    """

    id: str
    mark: Mark
    stated: Mapping[str, Stated]
    parts: Mapping[str, tuple[Record, ...]] = field(default_factory=dict)

    def number(self, name: str) -> float:
        """Return a quantity in SI, NaN where it is not stated."""
        found = self.stated.get(name)
        return math.nan if found is None else found.si

    def text(self, name: str, default: str = "") -> str:
        """Return a word or text, ``default`` where it is not stated."""
        found = self.stated.get(name)
        return default if found is None else found.text

    def flag(self, name: str, default: bool) -> bool:  # noqa: FBT001 - mirrors dict.get
        """Return a flag, ``default`` where it is not stated."""
        found = self.stated.get(name)
        return default if found is None else bool(found.value)

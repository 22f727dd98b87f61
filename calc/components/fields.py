"""The words in which a component declares its fields."""

from __future__ import annotations

from dataclasses import dataclass

from calc.kinds import NUMBER, Kind


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number with a unit of a kind, within bounds in SI.

    Attributes
    ----------
    bare : str
        The unit of a number without one, where the name of the field fixes it; empty where a unit must stand.
    table : str
        The shipped table of materials from which ``{material: …}`` may take it; empty where there is none.
    """

    kind: Kind = NUMBER
    above: float | None = None
    at_least: float | None = None
    at_most: float | None = None
    bare: str = ""
    table: str = ""


@dataclass(frozen=True, slots=True)
class Count:
    """A whole number."""

    at_least: int = 1
    at_most: int = 1000


@dataclass(frozen=True, slots=True)
class Word:
    """One of a few words."""

    options: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Name:
    """A name in a shipped table, which the reader of the component looks up."""


@dataclass(frozen=True, slots=True)
class Text:
    """Free text."""


@dataclass(frozen=True, slots=True)
class Date:
    """A date of the calendar, year first: ``2026-11-02``."""


@dataclass(frozen=True, slots=True)
class Flag:
    """``true`` or ``false``; ``yes`` and ``no`` are read as the words they are."""


@dataclass(frozen=True, slots=True)
class Node:
    """The id of a reservoir or junction."""


@dataclass(frozen=True, slots=True)
class Ends:
    """Losses at the reservoir ends of a pipe, by shape or by coefficients."""


@dataclass(frozen=True, slots=True)
class Fittings:
    """A list of fittings, each by its kind in the shipped table or by its own coefficients."""


Form = Quantity | Count | Word | Name | Text | Date | Flag | Node | Ends | Fittings


@dataclass(frozen=True, slots=True)
class Field:
    """A field of a component.

    Attributes
    ----------
    name : str
        The YAML key, which is also the ledger name and the heading.
    form : Form
        What may stand there.
    required : bool
        Whether it must be stated.
    words : str
        What it is, for schemas and input tables.
    example : str
        A value as a user would write it, where that of its kind would not fit.
    fixed : str
        What to do instead where a case may not change it; empty where it may.
    default : str
        What holds where it is not stated and no shipped default says so.
    """

    name: str
    form: Form
    required: bool = False
    words: str = ""
    example: str = ""
    fixed: str = ""
    default: str = ""


@dataclass(frozen=True, slots=True)
class Schema:
    """The fields of a group of components.

    ``excludes`` are pairs of fields that say the same thing, of which at most one may stand; of each group in
    ``either`` one must.
    """

    group: str
    singular: str
    fields: tuple[Field, ...]
    excludes: tuple[tuple[str, str], ...] = ()
    either: tuple[tuple[str, ...], ...] = ()

    def field(self, name: str) -> Field | None:
        """Return the field of that name, or None."""
        return next((f for f in self.fields if f.name == name), None)

"""The origins of columns: every sort there is."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from calc.equation import Law, Leaf
from calc.ledger.column import Origin, View
from calc.marks import Mark

Rows = npt.NDArray[np.int64]


@dataclass(frozen=True, eq=False, slots=True)
class Given(Origin):
    """Read from the user's files, in SI: a mark, the text as written and what it rests on, per row."""

    marks: tuple[Mark, ...]
    written: tuple[str, ...]
    bases: tuple[str, ...]


@dataclass(frozen=True, eq=False, slots=True)
class Converted(Origin):
    """Read from the user's files in another unit: value = number · factor + offset, per row."""

    marks: tuple[Mark, ...]
    written: tuple[str, ...]
    bases: tuple[str, ...]
    numbers: tuple[float, ...]
    units: tuple[str, ...]
    factors: tuple[float, ...]
    offsets: tuple[float, ...]


@dataclass(frozen=True, eq=False, slots=True)
class Library(Origin):
    """From a table or default that ships with the program: a mark in it, the text and its source, per row."""

    marks: tuple[Mark, ...]
    written: tuple[str, ...]
    bases: tuple[str, ...]


@dataclass(frozen=True, eq=False, slots=True)
class Derived(Origin):
    """Computed by a law from other columns; rows that another of its equations governs are another column.

    Attributes
    ----------
    law : Law
        As declared.
    leaf : Leaf
        The equation (or implicit law) that governed these rows.
    label : str
        The regime or choice that it stands for; empty where the law is one equation.
    inputs : mapping of str to View
        What the leaf takes, aligned with the rows or shared.
    choices : tuple of str
        For each row, the word that a Choice read, with the place where it was stated; empty where there is no Choice.
    """

    law: Law
    leaf: Leaf
    label: str
    inputs: Mapping[str, View]
    choices: tuple[str, ...] = ()

    @property
    def remark(self) -> str:
        """The label, empty where the title of the leaf says it already."""
        title = self.leaf.title.casefold().replace("–", "-")
        return "" if self.label.casefold() in title else self.label


@dataclass(frozen=True, eq=False, slots=True)
class Solved(Origin):
    """Found by iteration: what makes it the answer, and the columns that prove it.

    Attributes
    ----------
    statement : str
        The condition that it satisfies, in words and symbols.
    method : str
        How it was found.
    iterations : int
        Rows of the history.
    proof : tuple of str
        Names of the columns of the same case in which the condition is evaluated at the answer.
    inputs : mapping of str to View
        What the condition rests on, aligned with the rows, where no column evaluates it: flows at a trial head.
    """

    statement: str
    method: str
    iterations: int
    proof: tuple[str, ...]
    inputs: Mapping[str, View] = field(default_factory=dict)


@dataclass(frozen=True, eq=False, slots=True)
class Combined(Origin):
    """A sum, or the largest or least, of several numbers per row.

    Attributes
    ----------
    operation : str
        ``sum``, ``largest``, ``least`` or ``largest size`` (greatest absolute value).
    terms : View
        All numbers combined. Shape (k,).
    into : ndarray of int
        For each term, the row that it enters. Shape (k,).
    signs : ndarray
        +1 or -1 for each term. Shape (k,).
    words : str
        What the combination means.
    """

    operation: str
    terms: View
    into: Rows
    signs: npt.NDArray[np.float64]
    words: str


@dataclass(frozen=True, eq=False, slots=True)
class Judged(Origin):
    """A verdict: 1 where the margin is not negative, 0 where it is."""

    margin: View


@dataclass(frozen=True, eq=False, slots=True)
class Program(Origin):
    """A fact of the program's own: a count, a tolerance, a version."""

    statement: str

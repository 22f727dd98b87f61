"""Columns, and views that put rows of columns side by side as inputs of a law."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
import numpy.typing as npt

from calc.kinds import Kind

Array = npt.NDArray[np.float64]
Rows = npt.NDArray[np.int64]
ABSENT = -1


class Origin:
    """How a column was obtained; `calc.ledger.origin` holds every sort there is."""

    __slots__ = ()


@dataclass(frozen=True, eq=False, repr=False)
class Column:
    """One quantity for all components of a case, or of one component for all trials, with one origin.

    Attributes
    ----------
    name : str
        ``group.quantity``, such as ``pipes.friction_loss``.
    case : str
        Id of the case; empty where the number belongs to none.
    of : str
        The component whose history this is, its rows being the trials; or a trial, as ``#3``, its rows being the
        components; empty otherwise.
    kind : Kind
        What it measures; values are in its SI unit.
    rows : tuple of str
        Ids, shape (n,).
    values : ndarray
        Shape (n,), finite, not writeable.
    origin : Origin
        How the column was obtained.
    """

    name: str
    case: str
    of: str
    kind: Kind
    rows: tuple[str, ...]
    values: Array
    origin: Origin

    def __post_init__(self) -> None:
        """Freeze the values."""
        self.values.flags.writeable = False

    def __repr__(self) -> str:
        """Name the column and no more: its origin leads to all that it rests on."""
        return f"<Column {self.name}@{self.case}{f' of {self.of}' if self.of else ''}, {len(self.rows)} rows>"

    @property
    def group(self) -> str:
        """The group of components, the first word of an id."""
        return self.name.partition(".")[0]

    @property
    def quantity(self) -> str:
        """The quantity, the last word of an id."""
        return self.name.partition(".")[2]

    def id(self, row: int) -> str:
        """Return the id of one number: ``group.row.quantity@case``, with ``#n`` for a trial.

        A section that stands once has no row: ``site.gravity@base``.
        """
        subject, trial = (self.of, f"#{self.rows[row]}") if self.of else (self.rows[row], "")
        if self.of.startswith("#"):
            subject, trial = self.rows[row], self.of
        words = ".".join(word for word in (self.group, subject, self.quantity) if word)
        return words + (f"@{self.case}" if self.case else "") + trial

    @cached_property
    def index(self) -> dict[str, int]:
        """The position of each row."""
        return {row: k for k, row in enumerate(self.rows)}


@dataclass(frozen=True, eq=False, repr=False)
class View:
    """Rows of columns, in an order of their own: what laws take and give.

    Attributes
    ----------
    sources : tuple of Column
        The columns drawn on.
    which, at : ndarray of int
        For each row, the source and the row in it; ``which`` is -1 where there is no number.
    rows : tuple of str
        Ids of the rows.
    shared : bool
        One number that serves every row of the other inputs, such as gravity.
    """

    sources: tuple[Column, ...]
    which: Rows
    at: Rows
    rows: tuple[str, ...]
    shared: bool = False

    def __repr__(self) -> str:
        """Name the sources and no more."""
        return f"<View of {', '.join(sorted({column.name for column in self.sources}))}, {len(self.rows)} rows>"

    @classmethod
    def whole(cls, column: Column, *, shared: bool = False) -> View:
        """Return a column as it stands."""
        count = len(column.rows)
        return cls((column,), np.zeros(count, dtype=np.int64), np.arange(count), column.rows, shared)

    @classmethod
    def assembled(cls, columns: Sequence[Column], rows: Sequence[str]) -> View:
        """Return the given rows, each from the first of the columns that holds it."""
        which = np.full(len(rows), ABSENT, dtype=np.int64)
        at = np.zeros(len(rows), dtype=np.int64)
        for k, row in enumerate(rows):
            for c, column in enumerate(columns):
                if (found := column.index.get(row)) is not None:
                    which[k], at[k] = c, found
                    break
        return cls(tuple(columns), which, at, tuple(rows))

    @classmethod
    def gathered(cls, spots: Sequence[tuple[Column, int]]) -> View:
        """Return single numbers one after the other, each under the row that it has in its column."""
        sources = {id(column): column for column, _ in spots}
        place = {key: k for k, key in enumerate(sources)}
        which = np.array([place[id(column)] for column, _ in spots], dtype=np.int64)
        at = np.array([row for _, row in spots], dtype=np.int64)
        return cls(tuple(sources.values()), which, at, tuple(column.rows[row] for column, row in spots))

    def take(self, index: Rows, rows: Sequence[str] | None = None) -> View:
        """Return some rows, under new ids if given; a shared view serves as it is."""
        if self.shared and rows is None:
            return self
        named = tuple(self.rows[k] for k in index) if rows is None else tuple(rows)
        return View(self.sources, self.which[index], self.at[index], named)

    @cached_property
    def values(self) -> Array:
        """The numbers, NaN where absent; shape (n,)."""
        if not self.sources:
            return np.full(len(self.rows), np.nan)
        lengths = np.array([len(column.rows) for column in self.sources])
        starts = np.concatenate(([0], np.cumsum(lengths)))
        flat = np.concatenate([column.values for column in self.sources])
        place = np.where(self.which == ABSENT, 0, starts[self.which] + self.at)
        got = flat[place] if len(flat) else np.full(len(self.rows), np.nan)
        return np.where(self.which == ABSENT, np.nan, got)

    def spot(self, row: int) -> tuple[Column, int] | None:
        """Return the column and its row behind one row of the view, None where absent."""
        k = 0 if self.shared else row
        return None if self.which[k] == ABSENT else (self.sources[self.which[k]], int(self.at[k]))

"""The ledger itself: columns entered once, found by id."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from calc.kinds import Kind
from calc.ledger.column import Column, Origin, View
from calc.ledger.origin import Converted, Derived, Given, Library
from calc.problems import CalcError, Unresolved, nearest

_ID = re.compile(
    r"(?P<group>[\w-]+)\.(?P<rest>[^@#]+?)(?:@(?P<case>[\w-]+))?(?:#(?P<trial>\d+))?",
)


class Spot(NamedTuple):
    """One number: a column and a row in it."""

    column: Column
    row: int

    @property
    def id(self) -> str:
        """Its id."""
        return self.column.id(self.row)

    @property
    def value(self) -> float:
        """Its value, in SI."""
        return float(self.column.values[self.row])


@dataclass
class Ledger:
    """Columns in the order of their making.

    ``parents`` says which case a case builds upon: an input that a case does not state is its parent's, and
    so is what follows from inputs alone. What was solved, and all that rests on it, belongs to its case.
    """

    parents: Mapping[str, str] = field(default_factory=dict)
    columns: list[Column] = field(default_factory=list)
    _named: dict[tuple[str, str, str], list[Column]] = field(default_factory=dict)
    _inherited: set[int] = field(default_factory=set)

    def enter(
        self,
        name: str,
        kind: Kind,
        rows: Sequence[str],
        values: npt.ArrayLike,
        origin: Origin,
        *,
        case: str = "",
        of: str = "",
    ) -> Column:
        """Enter a column and return it.

        Raises
        ------
        CalcError
            If a number is not finite, a row comes twice, or one of that name and case stands already.
        """
        array = np.array(values, dtype=np.float64).reshape(-1)
        if len(array) != len(rows):
            raise CalcError(f"{name}@{case}: {len(array)} numbers for {len(rows)} rows")
        if not np.all(np.isfinite(array)):
            bad = rows[int(np.flatnonzero(~np.isfinite(array))[0])]
            raise CalcError(f"{name}@{case}: the number of {bad} is not finite")
        if len(set(rows)) < len(rows):
            raise CalcError(f"{name}@{case}: a row comes twice")
        column = Column(name, case, of, kind, tuple(rows), array, origin)
        standing = self._named.setdefault((name, case, of), [])
        if any(row in other.index for other in standing for row in column.rows):
            raise CalcError(f"{name}@{case}: a row stands already")
        standing.append(column)
        self.columns.append(column)
        if not of and self._rests_on_inputs(origin):
            self._inherited.add(id(column))
        return column

    def _rests_on_inputs(self, origin: Origin) -> bool:
        if isinstance(origin, Derived):
            sources = (source for view in origin.inputs.values() for source in view.sources)
            return all(id(source) in self._inherited for source in sources)
        return isinstance(origin, Given | Converted | Library)

    def find(self, name: str, case: str = "", of: str = "") -> list[Column]:
        """Return the columns of a name in a case, nearest first.

        After those of the case come the inputs of the cases it builds upon, then the columns of no case.
        """
        found = list(self._named.get((name, case, of), []))
        while case:
            case = self.parents.get(case, "")
            standing = self._named.get((name, case, of), [])
            found += [column for column in standing if not case or id(column) in self._inherited]
        return found

    def spot(self, id_: str) -> Spot:
        """Return the number of an id.

        Raises
        ------
        Unresolved
            If there is none; the message names the nearest.
        """
        for spot in self._spots(id_):
            return spot
        raise Unresolved(f"no number has the id '{id_}'. {self._hint(id_)}".strip())

    def _spots(self, id_: str) -> Iterator[Spot]:
        match = _ID.fullmatch(id_)
        if match is None:
            return
        subject, _, quantity = match["rest"].rpartition(".")
        name, case, trial = f"{match['group']}.{quantity}", match["case"] or "", match["trial"]
        if trial is None and not case and not self.find(name):
            case = "base"
        places = [("", subject)] if trial is None else [(subject, trial), (f"#{trial}", subject)]
        for of, row in places:
            for column in self.find(name, case, of):
                if row in column.index:
                    yield Spot(column, column.index[row])

    def _hint(self, id_: str) -> str:
        known = [column.id(row) for column in self.columns for row in range(min(len(column.rows), 200))]
        return nearest(id_, known)

    def view(self, name: str, case: str, rows: Sequence[str]) -> View:
        """Return the given rows of a name in a case, absent where nothing states them."""
        return View.assembled(self.find(name, case), rows)

    def shared(self, name: str, case: str = "") -> View:
        """Return the single number of a name, to serve every row."""
        columns = self.find(name, case)
        if not columns:
            raise Unresolved(f"no column is named {name}@{case}")
        return self.serving(columns[0])

    def shared_of(self, name: str, row: str, case: str = "") -> View:
        """Return the number of one row of a name, to serve every row; absent where nothing states it."""
        found = self.view(name, case, (row,))
        return View(found.sources, found.which, found.at, found.rows, shared=True)

    @staticmethod
    def serving(column: Column, row: int = 0) -> View:
        """Return one number of a column, to serve every row."""
        at = np.array([row])
        return View((column,), np.zeros(1, dtype=np.int64), at, (column.rows[row],), shared=True)

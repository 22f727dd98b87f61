"""What the screen's page carries, read back from its text alone: for the seal, which trusts nothing else."""

from __future__ import annotations

import json
import math
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

from calc.ledger import Ledger
from calc.problems import IntegrityError

FIGURES = 9
"""Significant figures to which every number carried must be that of the ledger."""
_BOOK = re.compile(r'<script type="application/json" id="book">(.*?)</script>', re.DOTALL)


@dataclass(frozen=True, slots=True)
class Carried:
    """The numbers that a page carries: their ids and values in order, and its ways of writing."""

    ids: Sequence[str] = ()
    values: Sequence[float] = ()
    forms: Sequence[str] = ()

    def named(self, key: str) -> tuple[str, str]:
        """Return the id and the way of writing that an anchor names.

        Raises
        ------
        IntegrityError
            If the page carries no such number.
        """
        number, _, form = key.partition(".")
        try:
            return self.ids[int(number, 36)], self.forms[int(form, 36)]
        except (ValueError, IndexError):
            raise IntegrityError(f"'{key}' is printed and the page carries no such number") from None

    def prove(self, ledger: Ledger) -> None:
        """Prove every number carried against the ledger.

        Raises
        ------
        IntegrityError
            At the first that differs.
        """
        expected = [(c.id(row), value) for c in ledger.columns for row, value in enumerate(c.values.tolist())]
        if len(expected) != len(self.ids):
            raise IntegrityError(f"the page carries {len(self.ids)} numbers and the ledger {len(expected)}")
        for id_, value, (ref, true) in zip(self.ids, self.values, expected, strict=True):
            if id_ != ref or not math.isclose(value, true, rel_tol=0.51 * 10.0 ** (1 - FIGURES)):
                raise IntegrityError(f"the page carries {id_} as {value!r}, the ledger says {ref} is {true!r}")


def carried(page: str) -> Carried | None:
    """Return what a page carries, None where it carries nothing.

    Raises
    ------
    IntegrityError
        If it is not as it should be.
    """
    found = _BOOK.search(page)
    if found is None:
        return None
    try:
        told = json.loads(found[1])
        texts, columns = told["texts"], told["columns"]
        ids = [id_ for column in columns for id_ in _ids(column, texts)]
        return Carried(ids, [float(value) for column in columns for value in column[6]], told["forms"])
    except (ValueError, KeyError, IndexError, TypeError) as error:
        raise IntegrityError(f"the ledger that the page carries cannot be read: {error}") from error


def _ids(column: Sequence[Any], texts: Sequence[str]) -> Iterator[str]:
    """Yield the ids of a column: ``group.row.quantity@case``, or ``group.of.quantity@case#row``."""
    name, _, case, of, _, rows, values = column[:7]
    group, _, quantity = texts[name].partition(".")
    count = len(values)
    named = [str(int(rows) + k) for k in range(count)] if isinstance(rows, str) else [texts[k] for k in rows]
    if len(named) != count:
        raise IntegrityError(f"the page carries {count} numbers of {texts[name]} for {len(named)} rows")
    for row in named:
        subject, trial = (texts[of], f"#{row}") if texts[of] else (row, "")
        if texts[of].startswith("#"):
            subject, trial = row, texts[of]
        words = ".".join(word for word in (group, subject, quantity) if word)
        yield words + (f"@{texts[case]}" if texts[case] else "") + trial

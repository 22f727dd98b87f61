"""Marks: where in a file a piece of text stands."""

from __future__ import annotations

from typing import NamedTuple


class Mark(NamedTuple):
    """The place of a scalar or key in an input file.

    Attributes
    ----------
    file : str
        File name relative to the project folder (or to ``calc/data`` for shipped tables).
    line, column : int
        Counted from 1, as editors count.
    length : int
        Characters to underline; at least 1.
    """

    file: str
    line: int
    column: int
    length: int = 1

    def __str__(self) -> str:
        """Return ``file:line:column``, the form that editors open."""
        return f"{self.file}:{self.line}:{self.column}"

    @property
    def place(self) -> str:
        """Return ``file:line``, the form printed on paper."""
        return f"{self.file}:{self.line}"

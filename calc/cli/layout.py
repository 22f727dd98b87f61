"""Columns of text."""

from __future__ import annotations

from collections.abc import Sequence

GAP = "   "


def columns(rows: Sequence[Sequence[str]], align: str, indent: int = 2) -> list[str]:
    """Return rows as lines whose columns stand under one another.

    Parameters
    ----------
    rows : sequence of sequence of str
        Cells; every row has as many.
    align : str
        For each column ``<`` or ``>``.
    indent : int
        Blanks before each line.
    """
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    return [
        " " * indent
        + GAP.join(f"{cell:{side}{width}}" for cell, side, width in zip(row, align, widths, strict=True)).rstrip()
        for row in rows
    ]

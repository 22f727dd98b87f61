"""Walking a document: its rows, its parts, its numbers; and printed texts read by code of the tests' own."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from calc.report.document import (
    Bullets,
    Cite,
    Document,
    Figure,
    Formula,
    Heading,
    Letter,
    Masthead,
    Notes,
    Number,
    Own,
    Paragraph,
    Part,
    Parts,
    Quoted,
    Row,
    Section,
    Soft,
    Strong,
    Table,
)

PRINTED = re.compile(r"(?:< )?([+−]?)(\d[\d\u202f]*)(?:\.(\d+))?(?: × 10\^(−?\d+))?")


@dataclass(frozen=True)
class Figures:
    """A number as a reader takes it from the page."""

    value: float
    last: float
    below: bool

    @classmethod
    def read(cls, text: str) -> Figures:
        match = PRINTED.fullmatch(text)
        assert match, f"not a number as printed: {text!r}"
        sign, whole, rest, power = match[1], match[2].replace("\u202f", ""), match[3] or "", match[4] or "0"
        exponent = int(power.replace("−", "-")) - len(rest)
        value = int(whole + rest) * (10.0**exponent) if exponent >= 0 else int(whole + rest) / 10.0**-exponent
        return cls(-value if sign == "−" else value, 10.0**exponent, text.startswith("<"))


def parts_within(parts: Parts) -> Iterator[Part]:
    """Yield every part, those inside others too; the operands of a formula stand behind it."""
    for part in parts:
        yield part
        match part:
            case Strong() | Soft():
                yield from parts_within(part.parts)
            case Formula():
                yield from (part.operands or {}).values()
                if part.result is not None:
                    yield part.result
            case _:
                pass


def texts_of(section: Section) -> Iterator[Parts]:
    """Yield the lines of text of a section: lead, heads, cells, captions."""
    yield section.lead
    for block in section.blocks:
        match block:
            case Masthead():
                yield from (block.title, block.subtitle, (block.status,))
                yield from (parts for _, parts in block.facts)
            case Heading() | Paragraph():
                yield block.parts
            case Bullets() | Notes():
                yield from (parts for _, parts in block.items)
            case Figure():
                yield block.caption
            case Table():
                yield from (column.head for column in block.columns)
                yield from (cell for row in block.rows for cell in row.cells)
            case _:
                pass


def every_part(document: Document) -> Iterator[Part]:
    for section in document.sections:
        for parts in texts_of(section):
            yield from parts_within(parts)


def numbers(document: Document) -> Iterator[Number]:
    for part in every_part(document):
        if isinstance(part, Number):
            yield part


def tables(document: Document, key: str = "") -> Iterator[Table]:
    for section in document.sections:
        for block in section.blocks:
            if isinstance(block, Table) and block.key.startswith(key):
                yield block


def section(document: Document, key: str) -> Section:
    return next(one for one in document.sections if one.key == key)


def table(document: Document, key: str) -> Table:
    return next(one for one in tables(document) if one.key == key)


def plain(parts: Parts) -> str:
    """Return parts as text without their settings."""
    said = []
    for part in parts:
        match part:
            case str():
                said.append(part)
            case Number():
                said.append(part.text + (f" {part.form.unit}" if part.with_unit and part.form.unit else ""))
            case Own() | Quoted() | Letter():
                said.append(part.text)
            case Strong() | Soft():
                said.append(plain(part.parts))
            case Formula():
                said.append(f" [{part.law.title}]")
            case Cite():
                said.append("[cite]")
    return "".join(said)


def figure_of(cell: Parts) -> Number | None:
    """Return the one number of a cell, or None."""
    held = [part for part in parts_within(cell) if isinstance(part, Number)]
    assert len(held) <= 1
    return held[0] if held else None


def row_of(held: Table, first: str) -> Row:
    return next(row for row in held.rows if plain(row.cells[0]).startswith(first))

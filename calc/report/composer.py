"""Composing: sections under way, the addresses of their lines, and numbers by their ids."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from functools import cached_property

import numpy as np

from calc.account import Account
from calc.equation.law import takes
from calc.ledger import Combined, Derived, Judged, Ledger, Solved, Spot, proofs
from calc.report.conversion import empirical, enter_worths, units_needed
from calc.report.display import Display
from calc.report.document import (
    Block,
    Cite,
    Number,
    Own,
    Part,
    Parts,
    Quoted,
    Row,
    Section,
    Table,
    TableColumn,
)
from calc.report.numbers import Format, written
from calc.report.parallel import Parallel
from calc.verification import Check

NOTHING = "–"


class Composer:
    """Gathers the sections of a document.

    Parameters
    ----------
    account : Account
        What is reported.
    purpose : str
        Purpose of issue: checking, approval or record.
    checks : tuple of Check
        The verification run for this issue.
    """

    def __init__(self, account: Account, purpose: str, checks: tuple[Check, ...] = ()) -> None:
        self.account = account
        self.ledger: Ledger = account.ledger
        self.purpose = purpose
        self.checks = checks
        asked = account.project.sections["display"]
        self.display = Display.of(asked)
        self.paper = asked.text("paper", "A4")
        self.addresses: dict[str, str] = {}
        self.sections: list[Section] = []
        self.files: dict[str, bytes] = {}
        enter_worths(self.ledger, units_needed(self.ledger, self.display))
        self.figures = 0

    @cached_property
    def taken_by_laws(self) -> set[int]:
        """Columns, by identity, that laws in coherent units take; what an empirical law gives may be among them."""
        origins = [column.origin for column in self.ledger.columns]
        laws = [origin for origin in origins if isinstance(origin, Derived) and not empirical(origin.leaf)]
        views = [view for law in laws for view in law.inputs.values()]
        views += [origin.terms for origin in origins if isinstance(origin, Combined)]
        return {id(source) for view in views for source in view.sources}

    def unit(self, field: str) -> str:
        """Return the unit in which a kind of quantity is displayed, such as that of ``head``."""
        return self.display.unit(field)

    def form(self, field: str, more: int = 0, sign: str = "", *, residual: bool = False) -> Format:
        """Return the format of a kind of quantity as displayed, with so many decimals more than in the tables."""
        return self.display.form(field, more, sign, residual=residual)

    def begin(self, key: str, title: str, *lead: Part) -> Sheet:
        """Begin a section."""
        return Sheet(self, key, str(len(self.sections) + 1), title, lead)

    def number(self, at: Spot | str, form: Format | None = None, *, with_unit: bool = False) -> Number:
        """Return a ledger value as printed, in its usual format unless another is given."""
        spot = self.ledger.spot(at) if isinstance(at, str) else at
        form = form or self.display.usual(spot.column)
        return Number(spot.id, form, written(spot.value, spot.column.kind, form), with_unit)

    def turned(self, at: Spot | str, sign: str) -> Number:
        """Return a ledger value in its usual format with another treatment of its sign."""
        spot = self.ledger.spot(at) if isinstance(at, str) else at
        return self.number(spot, replace(self.display.usual(spot.column), sign=sign))

    def figure_number(self) -> str:
        """Return the number of the next figure."""
        self.figures += 1
        return str(self.figures)


class Sheet:
    """A section under way; closing it hands it to the composer."""

    def __init__(self, composer: Composer, key: str, number: str, title: str, lead: Parts) -> None:
        self.composer = composer
        self.key, self.number, self.title, self.lead = key, number, title, lead
        self.blocks: list[Block] = []
        self.lines = 0
        self.worked_in: dict[str, list[str]] = {}

    def add(self, *blocks: Block) -> None:
        """Add blocks."""
        self.blocks += blocks

    def address(self, refs: Iterable[str] = ()) -> str:
        """Return the address of the next line, on which these ids stand."""
        self.lines += 1
        address = f"{self.number}.{self.lines}"
        for ref in refs:
            self.composer.addresses.setdefault(ref, address)
        return address

    def row(self, *cells: Parts, refs: Iterable[str] = (), tone: str = "") -> Row:
        """Return the next line as a row."""
        held = tuple(refs)
        return Row(self.address(held), cells, held, tone)

    def group(self, *parts: Part) -> Row:
        """Return a heading row, which has no address."""
        return Row("", (parts,), tone="group")

    def table(self, key: str, columns: Iterable[TableColumn], rows: Iterable[Row], **how: bool) -> None:
        """Add a table, unless it would be empty."""
        held = tuple(rows)
        if any(row.tone != "group" for row in held):
            self.add(Table(key, tuple(columns), held, **how))

    def results(
        self, key: str, columns: Iterable[TableColumn], rows: Iterable[Row], *, without: Iterable[str] = (), **how: bool
    ) -> None:
        """Add a table of results: with parallel columns where the project asks for them."""
        heads, held = tuple(columns), tuple(rows)
        display = self.composer.display
        for other in display.beside:
            heads, held = Parallel(self.composer.ledger, display, other).widened(heads, held, without)
        self.table(key, heads, held, **how)

    def close(self) -> None:
        """End the section."""
        held = Section(self.key, self.number, self.title, self.lead, tuple(self.blocks))
        self.composer.sections.append(held)


def column(head: str, width: float | None = None, **how: str | bool) -> TableColumn:
    """Return a table column with a plain head."""
    return TableColumn((head,), width=width, **how)  # type: ignore[arg-type]


def figure_column(head: str, unit: str = "", width: float | None = None, *, edge: bool = False) -> TableColumn:
    """Return a right-aligned column of numbers with their unit under the head."""
    return TableColumn((head,), unit=unit, align="right", width=width, edge=edge, role="value")


FROM = TableColumn(("from",), width=19, edge=True, role="from")
INTO = TableColumn(("into",), width=19, role="into")


def name(text: str) -> Quoted:
    """Return an id or text of the project."""
    return Quoted(text)


def place(text: str) -> Own:
    """Return a place in a file."""
    return Own(text, "file")


def inputs_of(ledger: Ledger, spot: Spot) -> list[str]:
    """Return the ids of the numbers that a number rests on."""
    origin, row = spot.column.origin, spot.row
    match origin:
        case Derived():
            leaf = origin.leaf
            found = [origin.inputs[n].spot(row) for n in takes(leaf)]
        case Combined():
            found = [origin.terms.spot(int(k)) for k in np.flatnonzero(origin.into == row)]
        case Judged():
            found = [origin.margin.spot(row)]
        case Solved():
            rests = [view.spot(row) for view in origin.inputs.values()]
            return [proof.id for proof in (*proofs(ledger, spot.column, row), *(Spot(*one) for one in rests if one))]
        case _:
            return []
    return [Spot(*one).id for one in found if one is not None]


def cited(ledger: Ledger, spots: Iterable[Spot]) -> Cite:
    """Return a citation of all that some numbers rest on."""
    return Cite(tuple(dict.fromkeys(ref for spot in spots for ref in inputs_of(ledger, spot))))

"""The document: sections of blocks, of rows, of parts. Plain frozen values; publishing sets them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from calc.equation import Equation, Expression, Implicit, Operation
from calc.report import figures
from calc.report.numbers import Format

# --- parts of a line of text ---------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Number:
    """A ledger value as printed: its id, its format and the text; the unit is printed after it if ``with_unit``."""

    ref: str
    form: Format
    text: str
    with_unit: bool = False


@dataclass(frozen=True, slots=True)
class Own:
    """Text that may hold digits without being a calculated number: the document's own references.

    ``sort`` is one of address, date, document, file, source, id, name (program names and versions).
    """

    text: str
    sort: str


@dataclass(frozen=True, slots=True)
class Quoted:
    """Text as the user wrote it."""

    text: str


@dataclass(frozen=True, slots=True)
class Strong:
    """Parts set semibold; ``bar`` puts the reader's bar before them: this needs attention."""

    parts: tuple[Part, ...]
    bar: bool = False


@dataclass(frozen=True, slots=True)
class Soft:
    """Parts set in the second voice (labels, remarks)."""

    parts: tuple[Part, ...]


@dataclass(frozen=True, slots=True)
class Letter:
    """A symbol, its subscript after an underscore: ``h_f``."""

    text: str


@dataclass(frozen=True, slots=True)
class Formula:
    """An equation in symbols; with ``operands``, the same with numbers put in, and its result.

    Attributes
    ----------
    law : Equation or Implicit
        An implicit law is set as ``0 = residual``.
    operands : mapping of str to Number, or None
        By input name; the unit of each is set after it.
    result : Number or None
        Set after the numbers put in.
    """

    law: Equation | Implicit
    operands: Mapping[str, Number] | None = None
    result: Number | None = None

    @property
    def long(self) -> bool:
        """Whether it holds so many symbols and numbers that it asks for the whole width of a table."""
        equation = self.law.residual if isinstance(self.law, Implicit) else self.law
        return _count(equation.expression) > MOST_SYMBOLS


@dataclass(frozen=True, slots=True)
class Cite:
    """Addresses of the lines on which these ledger ids stand; ``into`` asks for the lines that use them instead."""

    refs: tuple[str, ...]
    into: bool = False


MOST_SYMBOLS = 13
"""Symbols and numbers of a formula that stands in a column; one that holds more stands beneath its line."""


def _count(node: Expression) -> int:
    return sum(map(_count, node.args)) if isinstance(node, Operation) else 1


Part = str | Number | Own | Quoted | Strong | Soft | Letter | Formula | Cite
Parts = tuple[Part, ...]


def named_unit(unit: str) -> Part:
    """Return a unit as text; one with a figure in it, such as ``ft/1000 ft``, is a name."""
    return Own(unit, "name") if any(character.isdecimal() for character in unit) else unit


# --- blocks -----------------------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class TableColumn:
    """A column: its head, the unit beneath it, alignment (left, right, centre), width in mm (None takes the rest).

    ``edge`` draws a rule at its left; ``role`` is empty or one of line, value, unit, from, into, tick, statement.
    """

    head: Parts
    unit: str = ""
    align: str = "left"
    width: float | None = None
    edge: bool = False
    role: str = ""


@dataclass(frozen=True, slots=True)
class Row:
    """A row: its address, its cells, and the ledger ids that stand on it.

    ``tone`` is empty, or: ``group`` (a heading row, one cell), ``sum`` (single rule above), ``proved`` (single rule
    above, double below), ``flag`` (needs the reader).
    """

    address: str
    cells: tuple[Parts, ...]
    refs: tuple[str, ...] = ()
    tone: str = ""

    @property
    def placed(self) -> tuple[tuple[Parts, ...], Parts]:
        """Its cells without long formulas, and these, which stand beneath across all columns."""
        if len(self.cells) == 1:
            return self.cells, ()
        below = tuple(part for cell in self.cells for part in cell if isinstance(part, Formula) and part.long)
        return tuple(tuple(part for part in cell if part not in below) for cell in self.cells), below


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under heads, each with its address at the left and a tick box at the right.

    ``key`` names it for styles and tests; ``lettered`` heads columns with letters, so that a cell can be cited.
    """

    key: str
    columns: tuple[TableColumn, ...]
    rows: tuple[Row, ...]
    lettered: bool = False
    tick: bool = True


@dataclass(frozen=True, slots=True)
class Masthead:
    """The head of the first page."""

    title: Parts
    subtitle: Parts
    status: str
    facts: tuple[tuple[str, Parts], ...]


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading within a section."""

    parts: Parts


@dataclass(frozen=True, slots=True)
class Paragraph:
    """Running text; ``tone`` is plain, small or caution."""

    parts: Parts
    tone: str = "plain"


@dataclass(frozen=True, slots=True)
class Bullets:
    """A list, each item with an address so that it can be cited."""

    items: tuple[tuple[str, Parts], ...]


@dataclass(frozen=True, slots=True)
class Notes:
    """Labels with text beside them, as on the first page."""

    items: tuple[tuple[str, Parts], ...]


@dataclass(frozen=True, slots=True)
class SignOff:
    """Blank lines for name, signature and date of each role; ``names`` where the project states them.

    ``seal_area`` leaves a blank area; nothing is ever drawn in it.
    """

    roles: tuple[tuple[str, str], ...]
    seal_area: bool


@dataclass(frozen=True, slots=True)
class Figure:
    """A drawing with its number, caption and the data it is drawn from."""

    number: str
    caption: Parts
    drawing: figures.Schematic | figures.Balance | figures.Convergence


@dataclass(frozen=True, slots=True)
class Listing:
    """A file as it was read, line by line."""

    name: str
    lines: tuple[str, ...]
    digest: str


@dataclass(frozen=True, slots=True)
class Contents:
    """The table of contents, made of the sections by the publisher."""


@dataclass(frozen=True, slots=True)
class Index:
    """Every ledger id with the address where it stands: (id, address)."""

    entries: tuple[tuple[str, str], ...]


Block = Masthead | Heading | Paragraph | Bullets | Notes | SignOff | Table | Figure | Listing | Contents | Index

# --- the whole --------------------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Section:
    """A numbered section; the first page has the number 1 and no opening of its own."""

    key: str
    number: str
    title: str
    lead: Parts
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Document:
    """A package as said.

    Attributes
    ----------
    title, number, revision, date : str
        Of the project; the date is the revision's (ISO), empty where none is stated.
    status : str
        The purpose of issue in words.
    paper : str
        A4 or Letter.
    digest : str
        Digest of inputs and solution, full; pages print its head.
    sections : tuple of Section
        In order.
    addresses : mapping of str to str
        Ledger id to the address of the line where it stands.
    used_by : mapping of str to tuple of str
        Ledger id to the ids that cite it and are printed.
    behind : mapping of str to tuple of str
        For a cited ledger id that stands on no line, the ids with lines on which it rests.
    coherent : mapping of str to (str, float)
        For each SI unit of the ledger the coherent unit of worked lines, and what an SI number is multiplied by; empty
        where the worked lines are in SI.
    files : mapping of str to bytes
        Tables that the pages cite by their digests, by path inside the package.
    """

    title: str
    number: str
    revision: str
    date: str
    status: str
    paper: str
    digest: str
    sections: tuple[Section, ...]
    addresses: Mapping[str, str] = field(default_factory=dict)
    used_by: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    behind: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    coherent: Mapping[str, tuple[str, float]] = field(default_factory=dict)
    files: Mapping[str, bytes] = field(default_factory=dict)

    def cited(self, cite: Cite) -> str:
        """Return the addresses that a citation stands for, runs collapsed: ``5.1–5.4, 6.2``."""
        refs: Iterable[str] = cite.refs
        if cite.into:
            refs = [user for ref in cite.refs for user in self.used_by.get(ref, ())]
        else:
            refs = [line for ref in cite.refs for line in self.behind.get(ref, (ref,))]
        found = {self.addresses[ref] for ref in refs if ref in self.addresses}
        runs = collapsed(found).split(", ") if found else []
        most = MOST_INTO if cite.into else MOST_RUNS
        return ", ".join(runs) if len(runs) <= most else f"{', '.join(runs[: most - 1])}, …"


MOST_RUNS, MOST_INTO = 4, 3
"""Runs of addresses that a citation prints; where there are more it ends in an ellipsis, and trace tells all."""


def collapsed(addresses: Iterable[str]) -> str:
    """Return addresses in order, runs of three or more as a range."""
    keys = sorted(tuple(int(n) for n in address.split(".")) for address in set(addresses))
    runs: list[list[tuple[int, ...]]] = []
    for key in keys:
        if runs and key[0] == runs[-1][-1][0] and key[-1] == runs[-1][-1][-1] + 1:
            runs[-1].append(key)
        else:
            runs.append([key])
    said = []
    for run in runs:
        ends = [".".join(map(str, key)) for key in (run[0], run[-1])]
        match len(run):
            case 1:
                said.append(ends[0])
            case 2:
                said += ends
            case _:
                said.append(f"{ends[0]}–{ends[1]}")
    return ", ".join(said)

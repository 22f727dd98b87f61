"""The page as HTML: one set of templates for paper and screen, in a sandbox that cannot print a bare number."""

from __future__ import annotations

import contextlib
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from functools import lru_cache
from typing import Any

from jinja2 import FileSystemLoader, StrictUndefined, Undefined, nodes
from jinja2.sandbox import ImmutableSandboxedEnvironment
from markupsafe import Markup, escape

from calc.ledger import Ledger
from calc.problems import Unresolved
from calc.publish import places
from calc.publish.columns import MEASURE, TURNED, Widths, widths
from calc.publish.faces import shown
from calc.publish.markup import anchored, hidden, named, own
from calc.publish.parts import Writer
from calc.publish.tables import Sheet
from calc.report.document import Block, Document, Figure, Index, Listing, Masthead, Number, Section, Table, collapsed

RUNNING = 80
"""Most characters of a section's title in the head of its pages."""
MANY = 12
"""Rows on the first page above which they are set closer."""
WIDE = 9
"""Columns above which the words of a row on the first page take a second line."""
FILTERS = ("e", "escape", "join", "lower", "trim")
"""Filters that stay; none of the rest makes or formats a number without the ledger."""


@dataclass(frozen=True, slots=True)
class Line:
    """One line of a listing as printed."""

    place: Markup
    number: Markup
    text: Markup


def finished(value: object) -> object:
    """Return what a template prints, unless it is a number, or text with a number in it that is not marked.

    Raises
    ------
    Unresolved
        If it is.
    """
    if isinstance(value, Markup):
        return value
    if isinstance(value, Undefined):
        return str(value)  # which raises, and says what is missing
    if not isinstance(value, str):
        raise Unresolved(f"a template may not print {value!r}: only text, and numbers that are in the ledger")
    if any(character.isdecimal() for character in value):
        raise Unresolved(f"a template may not print '{value}': it holds a number without a line in the ledger")
    return value


class Sandbox(ImmutableSandboxedEnvironment):
    """A sandbox that also looks at what a template prints without a name, which is set before `finished` sees it."""

    def _parse(self, source: str, name: str | None, filename: str | None) -> nodes.Template:
        parsed = super()._parse(source, name, filename)
        for child in (child for output in parsed.find_all(nodes.Output) for child in output.nodes):
            if not isinstance(child, nodes.TemplateData):
                with contextlib.suppress(nodes.Impossible):
                    finished(child.as_const())
        return parsed


@lru_cache(maxsize=1)
def environment() -> Sandbox:
    """Return the environment that templates run in."""
    made = Sandbox(
        loader=FileSystemLoader(places.templates()),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=finished,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.globals.clear()
    made.filters = {name: made.filters[name] for name in FILTERS}
    return made


@dataclass
class Page:
    """What a template may call.

    Attributes
    ----------
    document : Document
    writer : Writer
        Sets parts.
    picture : callable
        Gives the markup of a figure's drawing.
    """

    document: Document
    writer: Writer
    picture: Callable[[Figure], Markup]
    _placed: set[str] = field(default_factory=set)
    _widths: dict[int, Widths] = field(default_factory=dict)

    def words(self) -> dict[str, Any]:
        """Return everything that a template knows, by name."""
        return {
            "document": self.document,
            "title": escape(shown(heading(self.document))),
            "said": self.writer.said,
            "named": named,
            "own": own,
            "hidden": hidden,
            "verbatim": lambda text: escape(shown(text)),
            "running": lambda text: escape(shown(text if len(text) <= RUNNING else f"{text[: RUNNING - 1]}…")),
            "kind_of": kind_of,
            "place": place,
            "target": self.target,
            "sheet": self.sheet,
            "turned": self.turned,
            "tight": tight,
            "picture": self.picture,
            "numbered": numbered,
            "gathered": gathered,
        }

    def target(self, address: str) -> Markup:
        """Return the id attribute of a line; a line shown again has none."""
        if not address or address in self._placed:
            return Markup()
        self._placed.add(address)
        return Markup(' id="{}"').format(place("line", address))

    def sheet(self, table: Table, section: Section) -> Sheet:
        """Return a table as it will stand on the document's paper."""
        needed, paper = self._widths_of(table, close=_is_first(section)), self.document.paper
        whole = (TURNED if self.turned(section) else MEASURE)[paper]
        return Sheet(table, needed.on(whole), self.writer, needed.dense)

    def turned(self, section: Section) -> bool:
        """Return whether a section stands on turned sheets, as a table needs them; the first page never does."""
        if _is_first(section):
            return False
        tables = [block for block in section.blocks if isinstance(block, Table)]
        return any(self._widths_of(table).turned(self.document.paper) for table in tables)

    def _widths_of(self, table: Table, *, close: bool = False) -> Widths:
        key = id(table)  # the document holds it as long as this page is made
        if key not in self._widths:
            self._widths[key] = widths(table, self.document, close=close)
        return self._widths[key]


def _is_first(section: Section) -> bool:
    return any(isinstance(block, Masthead) for block in section.blocks)


def tight(section: Section) -> bool:
    """Return whether the first page holds so many rows that they must be set closer."""
    tables = [block for block in section.blocks if isinstance(block, Table)]
    rows = sum(len(table.rows) * (2 if len(table.columns) > WIDE else 1) for table in tables)
    return _is_first(section) and rows > MANY


def html(
    document: Document,
    ledger: Ledger,
    picture: Callable[[Figure], Markup],
    *,
    head: Markup,
    top: Markup | None = None,
    tail: Markup | None = None,
    anchored: Callable[[str, Number], Markup] = anchored,
) -> str:
    """Return a document as a page.

    Parameters
    ----------
    document : Document
    ledger : Ledger
        Holds every number that the document prints.
    picture : callable
        Gives the markup of a figure's drawing.
    head, top, tail : Markup
        What paper or screen add to the head, before and after the text.
    anchored : callable
        Sets a number as the anchor of its id.

    Raises
    ------
    Unresolved
        If a number has no line in the ledger, or text of the program's own holds a digit.
    """
    if document.paper not in MEASURE:
        raise Unresolved(f"no paper is called '{document.paper}'")
    page = Page(document, Writer(document, ledger, anchored), picture)
    template = environment().get_template("package.html")
    return template.render(**page.words(), head=head, top=top or Markup(), tail=tail or Markup())


def heading(document: Document) -> str:
    """Return the title of the file: project, number and revision."""
    issued = ", revision ".join(word for word in (document.number, document.revision) if word)
    return ": ".join(word for word in (document.title, issued) if word)


def kind_of(block: Block) -> str:
    """Return the word by which templates know a block."""
    return type(block).__name__.lower()


def place(sort: str, name: str) -> Markup:
    """Return the id of a section, a line or a line of a file."""
    return escape(f"{sort}-{'-'.join(name.split())}")


def numbered(listing: Listing) -> Iterator[Line]:
    """Yield the lines of a file with their numbers, counted from 1."""
    for number, text in enumerate(listing.lines, 1):
        yield Line(place("at", f"{listing.name}:{number}"), escape(str(number)), escape(shown(text, listing=True)))


def gathered(index: Index) -> Iterator[tuple[str, str]]:
    """Yield the entries of an index, gathered: each id without its cases, and the cases with their addresses.

    Ids without a case that differ in their last word and stand on one line are one entry.
    """
    held: dict[str, dict[str, list[tuple[str, str]]]] = {}
    alike: dict[tuple[str, str], list[str]] = {}
    for ref, address in index.entries:
        stem, _, case = ref.partition("@")
        named, _, step = case.partition("#")
        if case:
            held.setdefault(stem, {}).setdefault(named, []).append((step, address))
        else:
            row, _, last = ref.rpartition(".")
            alike.setdefault((row, address), []).append(last)
    said = [(stem, ", ".join(_in_case(named, found) for named, found in cases.items())) for stem, cases in held.items()]
    said += [(row, f"{', '.join(f'.{word}' for word in last)} {address}") for (row, address), last in alike.items()]
    yield from sorted(said)


def _in_case(case: str, found: list[tuple[str, str]]) -> str:
    """Return a case with the addresses where a number and its steps stand in it."""
    said = collapsed(address for _, address in found)
    steps = [step for step, _ in found if step]
    counted = f"#{steps[0]}" if len(steps) == 1 else f"#{min(steps, key=int)}–{max(steps, key=int)}" if steps else ""
    return f"@{case}{counted} {said}"


def style(name: str) -> str:
    """Return a style sheet of the templates."""
    return (places.templates() / name).read_text(encoding="utf-8")

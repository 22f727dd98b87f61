"""The seal: the finished page is read again, and every number on it is formatted anew from the ledger.

A number is printed by one rule and proved by another reader: this one knows the text of the page alone. A
ledger value altered after the page was made, or one printed digit altered, does not pass; nor does any
digit that is neither a number of the ledger nor marked as one of the document's own references.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from html.parser import HTMLParser

from calc.ledger import Ledger
from calc.problems import IntegrityError, Unresolved
from calc.publish.carried import Carried, carried
from calc.publish.parts import numbers
from calc.report.document import (
    Block,
    Bullets,
    Document,
    Figure,
    Heading,
    Masthead,
    Notes,
    Number,
    Paragraph,
    Parts,
    Table,
)
from calc.report.numbers import parsed, written

EXEMPT = frozenset({"own", "given", "lit"})
"""Classes whose text may hold digits: references, the user's words, numbers of an equation itself."""
LISTING = "listing"
UNREAD = frozenset({"script", "style", "title", "svg"})
"""Elements that print no text of the document; a drawing's texts come from the document as they are."""
VOID = frozenset({"area", "base", "br", "col", "hr", "img", "input", "link", "meta", "wbr"})


@dataclass
class _Open:
    """An element that is open: its tag and what it exempts."""

    tag: str
    free: bool = False
    unread: bool = False
    number: _Printed | None = None
    unit: bool = False


@dataclass
class _Printed:
    """A number as printed: its id, its format and its text."""

    ref: str
    spec: str
    text: list[str] = field(default_factory=list)


def seal(page: str, ledger: Ledger) -> int:
    """Prove every number of a page against the ledger.

    Parameters
    ----------
    page : str
        HTML as finished.
    ledger : Ledger

    Returns
    -------
    int
        How many numbers were proved.

    Raises
    ------
    IntegrityError
        At the first that differs, or at a digit from nowhere; with the text and its surroundings.
    """
    return len(proved(page, ledger))


def proved(page: str, ledger: Ledger) -> list[str]:
    """Return the ids of the numbers on a page in order, each proved as by `seal`; so is all that the page carries."""
    held = carried(page)
    if held is not None:
        held.prove(ledger)
    reader = _Reader(ledger, held or Carried())
    reader.feed(page)
    reader.close()
    if reader.stack:
        raise IntegrityError(f"the page ends inside <{reader.stack[-1].tag}>")
    return reader.proved


def seal_document(page: str, document: Document, ledger: Ledger) -> int:
    """Prove a page as by `seal`, and that it prints the numbers of its document: all, in order, and no other.

    Raises
    ------
    IntegrityError
        If it does not.
    """
    found = proved(page, ledger)
    expected = [ledger.spot(number.ref).id for number in printed(document)]
    if found != expected:
        at = next((k for k, (a, b) in enumerate(zip(found, expected, strict=False)) if a != b), None)
        where = f": '{found[at]}' stands where '{expected[at]}' should" if at is not None else ""
        raise IntegrityError(f"the page prints {len(found)} numbers and its document {len(expected)}{where}")
    return len(found)


def printed(document: Document) -> Iterator[Number]:
    """Yield every number of a document in the order in which it is printed."""
    for section in document.sections:
        yield from numbers(section.lead)
        for block in section.blocks:
            for parts in _texts(block):
                yield from numbers(parts)


def _texts(block: Block) -> Iterator[Parts]:
    match block:
        case Masthead():
            yield block.title
            yield block.subtitle
            yield from (parts for _, parts in block.facts)
        case Heading() | Paragraph():
            yield block.parts
        case Bullets() | Notes():
            yield from (parts for _, parts in block.items)
        case Table():
            yield from (column.head for column in block.columns)
            for cells, below in (row.placed for row in block.rows):
                yield from (*cells, below)
        case Figure():
            yield block.caption
        case _:
            return


class _Reader(HTMLParser):
    """Reads a page from its text alone."""

    def __init__(self, ledger: Ledger, held: Carried) -> None:
        super().__init__(convert_charrefs=True)
        self.ledger = ledger
        self.held = held
        self.stack: list[_Open] = []
        self.proved: list[str] = []
        self.last: _Printed | None = None
        self.said: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Open an element."""
        if tag in VOID:
            return
        known = dict(attrs)
        classes = set((known.get("class") or "").split())
        over = self.stack[-1] if self.stack else _Open("")
        here = _Open(tag, over.free or bool(classes & EXEMPT) or LISTING in classes, over.unread or tag in UNREAD)
        if tag == "data":
            named = known.get("value") or ""
            if any(element.number for element in self.stack):
                raise IntegrityError(f"a number stands inside another: {named}")
            here.number = _Printed(named, known["data-as"] or "") if "data-as" in known else self._short(named)
        here.unit = tag == "span" and "u" in classes
        self.stack.append(here)

    def handle_endtag(self, tag: str) -> None:
        """Close an element, and prove the number that it was."""
        if tag in VOID:
            return
        if not self.stack or self.stack[-1].tag != tag:
            raise IntegrityError(f"the page closes <{tag}> which is not open; near '{self._near()}'")
        closed = self.stack.pop()
        if closed.number is not None:
            self._prove(closed.number)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Pass over an element that closes itself, as those of a drawing do."""
        if not any(element.unread for element in self.stack):
            self.handle_starttag(tag, attrs)
            self.handle_endtag(tag)

    def handle_data(self, data: str) -> None:
        """Read text."""
        inside = self.stack[-1] if self.stack else _Open("")
        if inside.unread:
            return
        if data.strip():
            self.said.append(data)
        number = next((element.number for element in self.stack if element.number), None)
        if number is not None:
            number.text.append(data)
        elif inside.unit:
            self._prove_unit(data)
        elif not inside.free and any(character.isdecimal() for character in data):
            raise IntegrityError(f"'{data.strip()}' is printed and has no line in the ledger; near '{self._near()}'")

    def _short(self, key: str) -> _Printed:
        """Return a number that is named by its position in what the page carries."""
        return _Printed(*self.held.named(key))

    def _prove(self, number: _Printed) -> None:
        try:
            spot = self.ledger.spot(number.ref)
            form = parsed(number.spec)
        except (Unresolved, ValueError) as error:
            raise IntegrityError(f"'{''.join(number.text)}' is printed as '{number.ref}': {error}") from error
        expected = written(spot.value, spot.column.kind, form)
        found = "".join(number.text)
        if found != expected:
            raise IntegrityError(f"{number.ref}: '{found}' is printed, the ledger says '{expected}'")
        self.proved.append(spot.id)
        self.last = number

    def _prove_unit(self, data: str) -> None:
        unit = parsed(self.last.spec).unit if self.last else ""
        if data.strip() != unit:
            raise IntegrityError(f"'{data.strip()}' is printed after a number in '{unit}'; near '{self._near()}'")

    def _near(self) -> str:
        return " ".join("".join(self.said[-6:]).split())

"""Parts of a line of text become markup."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass

from markupsafe import Markup

from calc.ledger import Ledger
from calc.problems import Unresolved
from calc.publish import markup
from calc.publish.formula import formula, occurrences
from calc.report.document import (
    Cite,
    Document,
    Formula,
    Letter,
    Number,
    Own,
    Part,
    Quoted,
    Soft,
    Strong,
)

PAGE = 48.0  # em, the measure of running text


@dataclass(frozen=True)
class Writer:
    """Sets parts for one document.

    Attributes
    ----------
    document : Document
        Resolves citations.
    ledger : Ledger
        Resolves the ids of numbers.
    anchored : callable
        Sets a number as the anchor of an id.
    """

    document: Document
    ledger: Ledger
    anchored: Callable[[str, Number], Markup] = markup.anchored

    def said(self, parts: Iterable[Part], measure: float = PAGE, column: str | None = None) -> Markup:
        """Return parts side by side.

        Parameters
        ----------
        parts : iterable of Part
        measure : float
            Width of a line in em, for formulas.
        column : str or None
            The unit in the head of the column: numbers without a unit of their own must be in it.
        """
        return Markup().join(self._part(part, measure, column) for part in parts)

    def anchor(self, number: Number) -> Markup:
        """Return a number as an anchor of the id under which the ledger holds it."""
        return self.anchored(self.ledger.spot(number.ref).id, number)

    def _part(self, part: Part, measure: float, column: str | None) -> Markup:  # noqa: PLR0911 - one line for each part
        match part:
            case str():
                return markup.plain(part)
            case Number():
                return self._number(part, column)
            case Own(text=text, sort=sort):
                return markup.own(text, sort)
            case Quoted(text=text):
                return markup.given(text)
            case Strong(parts=parts, bar=bar):
                opening = Markup('<span class="bar"></span>') if bar else Markup()
                return opening + Markup("<b>{}</b>").format(self.said(parts, measure, column))
            case Soft(parts=parts):
                return Markup('<span class="soft">{}</span>').format(self.said(parts, measure, column))
            case Letter(text=text):
                return Markup('<span class="sy">{}</span>').format(markup.letter(text))
            case Formula():
                return formula(part, measure, self.anchor)
            case Cite():
                return self._cite(part)

    def _number(self, number: Number, column: str | None) -> Markup:
        if number.with_unit:
            return Markup('<span class="nw">{}{}</span>').format(self.anchor(number), markup.unit(number.form.unit))
        if column and number.form.unit != column:
            raise Unresolved(f"'{number.ref}' is printed in '{number.form.unit}' in a column of '{column}'")
        return self.anchor(number)

    def _cite(self, cite: Cite) -> Markup:
        addresses = self.document.cited(cite)
        if not addresses:
            return Markup()
        runs = addresses.split(", ")
        said = [Markup('<span class="nw">{}{}</span>').format(run, "," * (run is not runs[-1])) for run in runs]
        return Markup('<span class="own ad" data-sort="address">{}</span>').format(Markup(" ").join(said))


def numbers(parts: Iterable[Part]) -> Iterator[Number]:
    """Yield every number that parts print, in order."""
    for part in parts:
        match part:
            case Number():
                yield part
            case Strong(parts=inner) | Soft(parts=inner):
                yield from numbers(inner)
            case Formula():
                yield from occurrences(part)
            case _:
                continue

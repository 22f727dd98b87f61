"""Figures drawn: each drawing once, as SVG with its words for a reader who cannot see it."""

from __future__ import annotations

import re
from dataclasses import dataclass

from matplotlib.figure import Figure as Drawing

from calc.publish.draw import balance, convergence, schematic, svg
from calc.publish.faces import shown
from calc.report import figures
from calc.report.document import Document, Figure

_PROLOGUE = re.compile(r"^.*?(?=<svg\b)", re.DOTALL)
_METADATA = re.compile(r"<metadata>.*?</metadata>", re.DOTALL)


@dataclass(frozen=True, slots=True)
class Picture:
    """A drawing: SVG as text, beginning with its root element, and its words."""

    svg: str
    words: str


def drawn(figure: Figure) -> Picture:
    """Draw a figure."""
    drawing = figure.drawing
    match drawing:
        case figures.Schematic():
            return _picture(schematic.draw(drawing), schematic.alt(drawing))
        case figures.Balance():
            return _picture(balance.draw(drawing), balance.alt(drawing))
        case figures.Convergence():
            return _picture(convergence.draw(drawing), convergence.alt(drawing))


def _picture(made: Drawing, words: str) -> Picture:
    text = _METADATA.sub("", _PROLOGUE.sub("", svg(made).decode("utf-8"), count=1))
    return Picture(text.strip(), shown(words))


def all_drawn(document: Document) -> dict[str, Picture]:
    """Return every drawing of a document by the number of its figure."""
    blocks = [block for section in document.sections for block in section.blocks]
    return {block.number: drawn(block) for block in blocks if isinstance(block, Figure)}

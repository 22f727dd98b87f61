"""The faces of the page, read from their files, so that a drawing measures what the page will print.

Nothing is looked up by name on the machine: every text names its file for measuring and its family for the
page. A character that a face lacks is printed as a question mark, as no other face may step in; the raised
minus, which it lacks too, is written with its figures as a smaller minus and figures, raised.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from functools import lru_cache
from pathlib import Path
from typing import Literal

from matplotlib.font_manager import FontProperties
from matplotlib.ft2font import FT2Font, LoadFlags

from calc.publish import places

UNITS_PER_POINT = 64  # 26.6 fixed point
Slant = Literal["normal", "italic"]
LEADING = 1.16
RAISED = 0.8  # size of an exponent
EXPONENT = re.compile("(⁻[⁰¹²³⁴⁵⁶⁷⁸⁹]+)")
LOWERED = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "\u22120123456789")


@dataclass(frozen=True, slots=True)
class Voice:
    """A face at a size in an ink.

    Attributes
    ----------
    file : Path
        The face.
    family : str
        Its name in the page's style sheet.
    size : float
        In points.
    ink : str
        Colour, ``#rrggbb``.
    slant : str
        ``normal`` or ``italic``.
    weight : int
        400 or 600.
    """

    file: Path
    family: str
    size: float
    ink: str
    slant: Slant = "normal"
    weight: int = 400

    @property
    def font(self) -> FontProperties:
        """Return the properties a text of the drawing is set with."""
        return FontProperties(
            family=self.family,
            style=self.slant,
            weight=self.weight,
            size=self.size,
            fname=str(self.file),
        )

    @property
    def line(self) -> float:
        """Return the height of a line, in points."""
        return self.size * LEADING

    def width(self, text: str) -> float:
        """Return the width of one line of text, in points."""
        return sum(_width(str(say.file), say.size, part) for part, say in self.parts(text))

    def parts(self, text: str) -> list[tuple[str, Voice]]:
        """Split one line into what stands on the line and negative exponents, each with its voice."""
        small = replace(self, size=self.size * RAISED)
        found = [part for part in EXPONENT.split(text) if part]
        return [(part.translate(LOWERED), small) if part[0] == "⁻" else (part, self) for part in found]

    def clean(self, text: str) -> str:
        """Return the text in one line, with a question mark for every character the face lacks."""
        known = _characters(str(self.file))
        return "".join(c if ord(c) in known or c in "⁻⁰¹²³⁴⁵⁶⁷⁸⁹" else "?" for c in " ".join(text.split(" ")).strip())

    def wrap(self, text: str, width: float) -> tuple[str, ...]:
        """Break a text into lines no wider than ``width`` points, at blanks and hyphens where it can be."""
        lines: list[str] = []
        line = ""
        for piece in _pieces(self.clean(text)):
            if line and self.width((line + piece).rstrip()) > width:
                lines.append(line.rstrip())
                line = ""
            line += piece if line else piece.lstrip()
            while self.width(line.rstrip()) > width and len(line.rstrip()) > 1:
                cut = max(1, sum(self.width(line[: k + 1]) <= width for k in range(len(line))))
                lines.append(line[:cut])
                line = line[cut:]
        return (*lines, line.rstrip()) if line.strip() or not lines else tuple(lines)


def voice(ink: str, *, size: float = 8.0, slant: Slant = "normal", strong: bool = False) -> Voice:
    """Return the small face of the page in an ink; ``strong`` is its semibold."""
    cut = "SemiBold" if strong else "Italic" if slant == "italic" else "Regular"
    file = places.fonts() / f"LedgerSmall-{cut}.ttf"
    return Voice(file, "Ledger Small", size, ink, slant, 600 if strong else 400)


def _pieces(text: str) -> list[str]:
    """Split after blanks, hyphens and underscores, keeping each mark with the piece before it."""
    pieces = [""]
    for character in text:
        pieces[-1] += character
        if character in " -_/":
            pieces.append("")
    return [piece for piece in pieces if piece]


@lru_cache(maxsize=16)
def _face(file: str) -> FT2Font:
    return FT2Font(file)


@lru_cache(maxsize=16)
def _characters(file: str) -> frozenset[int]:
    return frozenset(_face(file).get_charmap())


@lru_cache(maxsize=20_000)
def _width(file: str, size: float, text: str) -> float:
    face = _face(file)
    face.set_size(size, 72)
    face.set_text(text, 0.0, flags=LoadFlags.NO_HINTING)
    return face.get_width_height()[0] / UNITS_PER_POINT

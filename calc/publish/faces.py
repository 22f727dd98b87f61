"""What the faces hold and how wide it is: for breaking formulas, and so that no other face steps in."""

from __future__ import annotations

import io
import unicodedata
from functools import lru_cache

from calc.publish import places

UPRIGHT, ITALIC, MONO = "LedgerText-Regular", "LedgerText-Italic", "LedgerMono-Regular"
WORDS = (UPRIGHT, ITALIC, "LedgerText-SemiBold", "LedgerSmall-Regular", "LedgerDisplay-Regular")
FEATURES = ["kern", "liga", "ccmp", "locl", "mark", "mkmk", "lnum", "tnum", "smcp", "c2sc"]
"""Those that the styles ask for, and those that are always on."""
KERNED = ("kern", "mark", "mkmk")
SET_CLOSE = (UPRIGHT, "LedgerDisplay-Regular")
"""Faces in which the screen sets pairs of letters close: running text and titles; the rest are words and figures."""
UNKNOWN = 0.6  # em, the width taken for a character that a face lacks
TAB = 4  # blanks that a tab stands for in a listing


@lru_cache(maxsize=8)
def _advances(face: str) -> dict[int, float]:
    from fontTools.ttLib import TTFont

    with TTFont(places.fonts() / f"{face}.ttf", lazy=True) as font:
        em, widths = font["head"].unitsPerEm, font["hmtx"]
        return {code: widths[glyph][0] / em for code, glyph in font.getBestCmap().items()}


@lru_cache(maxsize=50_000)
def width(text: str, face: str = UPRIGHT) -> float:
    """Return the width of one line of text in em."""
    advances = _advances(face)
    return sum(advances.get(ord(character), UNKNOWN) for character in text)


@lru_cache(maxsize=1)
def _capitals() -> dict[int, float]:
    """Return the advance of the small capital of each letter, in em."""
    from fontTools.ttLib import TTFont

    with TTFont(places.fonts() / "LedgerSmall-Regular.ttf", lazy=True) as font:
        table, em, advances = font["GSUB"].table, font["head"].unitsPerEm, font["hmtx"]
        wanted = {
            k for f in table.FeatureList.FeatureRecord if f.FeatureTag == "smcp" for k in f.Feature.LookupListIndex
        }
        turned: dict[str, str] = {}
        for lookup in (table.LookupList.Lookup[k] for k in sorted(wanted)):
            for part in lookup.SubTable:
                turned |= getattr(getattr(part, "ExtSubTable", part), "mapping", {})
        return {code: advances[turned.get(glyph, glyph)][0] / em for code, glyph in font.getBestCmap().items()}


def small_capitals(text: str, spaced: float = 0.0) -> float:
    """Return the width of text in small capitals set ``spaced`` apart, in em."""
    advances = _capitals()
    return sum(advances.get(ord(character), UNKNOWN) + spaced for character in text.lower())


@lru_cache(maxsize=2)
def _held(*, listing: bool) -> frozenset[int]:
    names = (MONO,) if listing else WORDS
    return frozenset.intersection(*(frozenset(_advances(name)) for name in names))


@lru_cache(maxsize=20_000)
def shown(text: str, *, listing: bool = False) -> str:
    """Return text in characters that our faces hold; any other is named by its code point, ``[U+4E2D]``.

    Nothing is lost or passed over: the reader sees that a sign stood there, and which. So hidden marks that turn the
    direction of writing become visible too.
    """
    held = _held(listing=listing)
    whole = text.expandtabs(TAB) if listing else unicodedata.normalize("NFC", text)
    return "".join(c if ord(c) in held or c == "\n" else f"[U+{ord(c):04X}]" for c in whole)


def cut(face: str, signs: frozenset[int]) -> bytes:
    """Return a face as a web font that holds only some signs, with their small capitals and figures."""
    from fontTools.subset import Options, Subsetter
    from fontTools.ttLib import TTFont

    features = [feature for feature in FEATURES if feature not in KERNED or face in SET_CLOSE]
    options = Options(layout_features=features, hinting=False, recalc_timestamp=False, notdef_outline=True)
    options.name_IDs = []
    made = io.BytesIO()
    with TTFont(places.fonts() / f"{face}.ttf", lazy=True, recalcTimestamp=False) as font:
        cutter = Subsetter(options)
        cutter.populate(unicodes=signs)
        cutter.subset(font)
        font.flavor = "woff2"
        font.save(made)
    return made.getvalue()

"""The smallest pieces of markup: numbers, units, letters, and the document's own references."""

from __future__ import annotations

import re

from markupsafe import Markup, escape

from calc.problems import Unresolved
from calc.publish.faces import shown
from calc.report.document import Number

NARROW = "\u202f"
SORTS = frozenset({"address", "date", "document", "file", "source", "id", "name"})
RAISED = " × 10^"
_NEGATIVE_POWER = re.compile("⁻[⁰¹²³⁴⁵⁶⁷⁸⁹]+")
_QUANTITY = re.compile(r"[-+−]?[0-9][0-9.,e+-]{0,14}( ?[^\s0-9]\S{0,7})?")
_LOWERED = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "−0123456789")


def words(text: str) -> Markup:
    """Return text as our faces can show it; a negative power, for which they have no sign, is raised."""
    at, said = 0, []
    for found in _NEGATIVE_POWER.finditer(text):
        power = Markup('{}<sup class="lit">{}</sup>').format(hidden("^"), found[0].translate(_LOWERED))
        said += [escape(shown(text[at : found.start()])), power]
        at = found.end()
    return Markup().join([*said, escape(shown(text[at:]))])


def plain(text: str) -> Markup:
    """Return text of the program's own; a digit in it would be a number from nowhere.

    Raises
    ------
    Unresolved
        If it holds a digit.
    """
    if any(character.isdecimal() for character in text):
        raise Unresolved(f"'{text}' holds a number without a line in the ledger")
    return words(text)


def own(text: str, sort: str) -> Markup:
    """Return a reference of the document's own: an address, a date, a name."""
    if sort not in SORTS:
        raise Unresolved(f"'{text}': no sort of reference is called '{sort}'")
    return Markup('<span class="own" data-sort="{}">{}</span>').format(sort, words(text))


def named(text: str) -> Markup:
    """Return a heading or label that may hold the user's own words, and so digits."""
    return own(text, "document") if any(c.isdecimal() for c in shown(text)) else words(text)


def given(text: str) -> Markup:
    """Return text as the user wrote it."""
    manner = "given nw" if is_quantity(text) else "given"
    return Markup('<span class="{}">{}</span>').format(manner, words(text))


def is_quantity(text: str) -> bool:
    """Return whether text is a number with a short unit, which no line breaks."""
    return _QUANTITY.fullmatch(text) is not None


def hidden(text: str) -> Markup:
    """Return signs that are not seen but copied, so that a formula copied reads as arithmetic."""
    return Markup('<span class="h">{}</span>').format(text)


def unit(text: str) -> Markup:
    """Return a unit as it follows a number, set off by a narrow blank."""
    return Markup('<span class="u">{}{}</span>').format(NARROW, text) if text else Markup()


def raised(text: str) -> Markup:
    """Return a written number with its power of ten raised; copied, it reads as it was written."""
    mantissa, sign, power = text.partition(RAISED)
    if not sign:
        return escape(text)
    return Markup("{} × 10{}<sup>{}</sup>").format(mantissa, hidden("^"), power)


def anchored(ref: str, number: Number) -> Markup:
    """Return a number as the anchor of a ledger id, without its unit."""
    opening = Markup('<data class="n" value="{}" data-as="{}">').format(ref, number.form.spec)
    return opening + raised(number.text) + Markup("</data>")


def letter(text: str) -> Markup:
    """Return a symbol in italics with its subscript: ``h_f``; bars around it stay upright: ``|V|``."""
    if text.startswith("|") and text.endswith("|"):
        return Markup("|") + letter(text.strip("|")) + Markup("|")
    stem, _, below = text.partition("_")
    hangs = Markup(' class="lf"') if stem == "f" else Markup()
    italic = Markup("<i{}>{}</i>").format(hangs, stem)
    if not below:
        return italic
    return italic + hidden("_") + Markup('<sub class="lit">{}</sub>').format(below.replace("-", "−"))

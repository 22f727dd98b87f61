"""How a ledger value is written: unit, figures, sign; and the same rule read back for the seal."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from calc.kinds import Kind
from calc.units import scale

THIN = "\u202f"
MINUS = "−"
LARGE, SMALL = 1e7, 1e-3
"""Beyond these, numbers with significant figures are written as a power of ten."""
GROUPED = 5
"""Whole digits from which thousands are set apart."""


@dataclass(frozen=True, slots=True)
class Format:
    """A way of writing a quantity.

    Attributes
    ----------
    unit : str
        Unit printed, such as ``L/s`` or ``°F``; empty for pure numbers.
    decimals : int or None
        Figures after the point; or
    significant : int or None
        significant figures, written as a power of ten when very large or small; whole figures are written all.
    sign : str
        Empty, or ``+`` (a positive number carries its sign), ``size`` (no number carries one: the direction is told
        in words) or ``turned`` (the number is reckoned the other way round, and carries its sign).
    bound : float or None
        In the printed unit: a value smaller than this is written ``< bound``, for residuals.
    """

    unit: str = ""
    decimals: int | None = None
    significant: int | None = None
    sign: str = ""
    bound: float | None = None

    @property
    def spec(self) -> str:
        """The format as one word, which `parsed` reads back."""
        figures = f"d{self.decimals}" if self.decimals is not None else f"s{self.significant}"
        bound = "" if self.bound is None else f"{self.bound!r}"
        return f"{self.unit}|{figures}|{self.sign}|{bound}"


def parsed(spec: str) -> Format:
    """Return the format that a spec stands for."""
    unit, figures, sign, bound = spec.split("|")
    count = int(figures[1:])
    return Format(
        unit,
        count if figures[0] == "d" else None,
        count if figures[0] == "s" else None,
        sign,
        float(bound) if bound else None,
    )


NAMES = {"MGD": "us_mgd"}
"""Units that are printed under a name which inputs may not use, as it does not say enough there."""


@lru_cache(maxsize=256)
def _scale(unit: str, kind: Kind) -> tuple[float, float]:
    return scale(NAMES.get(unit, unit), kind)


def shown(value: float, kind: Kind, unit: str) -> float:
    """Return a value in SI as a number in a unit; a temperature as it stands on its scale."""
    if not unit:
        return value
    factor, zero = _scale(unit, kind)
    return value * factor - zero


def written(value: float, kind: Kind, form: Format) -> str:
    """Return a value in SI as text in a format.

    Minus is U+2212, thousands are set apart by U+202F, a power of ten is ``1.3 × 10^−6`` (the caret is set as a raised
    exponent). A value that rounds to zero has no sign.
    """
    number = shown(value, kind, form.unit)
    if form.sign == "turned":
        number = -number
    if form.bound is not None and abs(number) < form.bound:
        return f"< {_figures(form.bound, Format(significant=1))}"
    sign = MINUS if number < 0 else "+" if form.sign in ("+", "turned") and number > 0 else ""
    if form.sign == "size":
        sign = ""
    text = _figures(abs(number), form)
    return text if not any(c in "123456789" for c in text) else sign + text


def _figures(number: float, form: Format) -> str:
    if form.decimals is not None:
        return _grouped(f"{number:.{form.decimals}f}")
    figures = form.significant or 1
    if number == 0:
        return "0"
    if not SMALL <= number < LARGE:
        mantissa, _, power = f"{number:.{figures - 1}e}".partition("e")
        return f"{mantissa} × 10^{str(int(power)).replace('-', MINUS)}"
    place = math.floor(math.log10(float(f"{number:.{figures - 1}e}")))
    # whole figures are never put to zero: the last figure written is always the last that counts
    return _grouped(f"{number:.{max(0, figures - 1 - place)}f}")


def _grouped(text: str) -> str:
    whole, point, rest = text.partition(".")
    if len(whole) >= GROUPED:
        head = len(whole) % 3 or 3
        whole = THIN.join([whole[:head], *(whole[k : k + 3] for k in range(head, len(whole), 3))])
    return whole + point + rest


def read_back(text: str) -> float:
    """Return the number that a written text stands for, in the printed unit (its bound where it begins with ``<``)."""
    plain = text.removeprefix("< ").replace(THIN, "").replace(MINUS, "-").removeprefix("+")
    mantissa, _, power = plain.partition(" × 10^")
    return float(mantissa) * 10.0 ** int(power or 0)


def last_place(text: str) -> float:
    """Return the worth of one unit in the last figure of a written text, in the printed unit."""
    mantissa, _, power = text.removeprefix("< ").partition(" × 10^")
    decimals = len(mantissa.partition(".")[2])
    return 10.0 ** (int(power.replace(MINUS, "-") or 0) - decimals)


def raised(text: str) -> str:
    """Return a written text with its power of ten in raised figures, for drawings: ``1.3 × 10⁻⁶``."""
    base, caret, power = text.partition("^")
    return base + power.translate(str.maketrans("0123456789−", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")) if caret else text

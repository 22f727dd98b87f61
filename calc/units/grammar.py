"""The grammar of unit text: whitelisted names with whole powers, joined by ``/``, ``*``, ``·`` or a space."""

from __future__ import annotations

import re
from fractions import Fraction
from functools import lru_cache
from typing import NamedTuple

from calc.kinds import Dimension
from calc.problems import nearest
from calc.units.registry import worth
from calc.units.trouble import quoted
from calc.units.words import AMBIGUOUS, INSTEAD, WORDS

LONGEST_UNIT = 60
_MOST_FACTORS = 6
_LOWERED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺", "0123456789-+")
_RAISED = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_NATION = re.compile(r"\b(us|imp)[ _]+(gal|gpm|mgd)\b", re.ASCII | re.IGNORECASE)
_THOUSAND = re.compile(r"(?<![0-9.])1000 ?(?:ft|feet)\b", re.ASCII)
_JOIN = re.compile(r" *([/·*⋅]) *| +")
_FACTOR = re.compile(r"([A-Za-z_µ°%]+)(?:(?:\^|\*\*)?([+-]?[1-9])(?![0-9]))?", re.ASCII)
_RAISED_TEXT = re.compile("[⁻⁺]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+")


class Unit(NamedTuple):
    """A unit that was read: ``value = number * factor + offset``, exactly."""

    printed: str
    factor: Fraction
    offset: Fraction
    dimension: Dimension
    angle: bool = False


class Flaw(NamedTuple):
    """Why a text is no unit: the code, the rest of "'5 x' …", and a way out or an empty string."""

    code: str
    reason: str
    hint: str = ""


class _Power(NamedTuple):
    """One name raised to a whole power; ``divided`` when it stands behind a ``/``."""

    name: str
    exponent: int
    divided: bool


def _instead(name: str) -> str:
    """Return the hint for a name that is not on the list."""
    known = INSTEAD.get(name)
    return f"write '{known}'" if known else nearest(name, list(WORDS))


def _factor(text: str, *, divided: bool) -> _Power | Flaw:
    """Read one name with its power."""
    match = _FACTOR.fullmatch(text)
    if match is None:
        return Flaw("unknown-unit", "has a unit that cannot be read", "write it as in 'm', 'L/s' or 'm^2/s'")
    name, exponent = match[1], int(match[2] or "1")
    if name in AMBIGUOUS:
        reason, hint = AMBIGUOUS[name]
        return Flaw("ambiguous-unit", f"does not say enough: {reason}", hint)
    if name not in WORDS:
        return Flaw("unknown-unit", f"has the unknown unit {quoted(name)}", _instead(name))
    return _Power(name, exponent, divided)


def _powers(text: str) -> list[_Power] | Flaw:
    """Split unit text into names with powers, in the order written."""
    plain = _RAISED_TEXT.sub(lambda raised: "^" + raised[0].translate(_LOWERED), text.replace("μ", "µ"))
    plain = _NATION.sub(lambda match: f"{match[1]}_{match[2]}".lower(), plain).replace("**", "^")
    plain = _THOUSAND.sub("thousand_ft", plain)
    pieces = _JOIN.split(plain)
    if len(pieces) > 2 * _MOST_FACTORS - 1:
        return Flaw("unknown-unit", f"has a unit of more than {_MOST_FACTORS} names")
    powers: list[_Power] = []
    for place in range(0, len(pieces), 2):
        divided = place > 0 and pieces[place - 1] == "/"
        if not divided and any(power.divided for power in powers):
            return Flaw(
                "ambiguous-unit",
                "does not say enough: what follows a '/' and a product may be above or below the line",
                "write every name below the line behind a '/' of its own, last: 'kg/m/s'",
            )
        power = _factor(pieces[place], divided=divided)
        if isinstance(power, Flaw):
            return power
        powers.append(power)
    return powers


def _printed(powers: list[_Power]) -> str:
    """Return the unit as printed: raised powers, ``·`` for a product."""
    written = ""
    for power in powers:
        join = ("/" if power.divided else "·") if written else ""
        raised = "" if power.exponent == 1 else str(power.exponent).translate(_RAISED)
        written += join + WORDS[power.name].printed + raised
    return written


@lru_cache(maxsize=4096)
def unit(text: str) -> Unit | Flaw:
    """Return the unit that a text names, or why it names none.

    Parameters
    ----------
    text : str
        Unit text without the number, such as ``m^2/s``; not trusted.

    Returns
    -------
    Unit or Flaw
        Exact factor and offset to SI with the dimension; or the flaw.
    """
    if len(text) > LONGEST_UNIT:
        return Flaw("unknown-unit", f"has a unit longer than {LONGEST_UNIT} characters")
    powers = _powers(text)
    if isinstance(powers, Flaw):
        return powers
    if any(WORDS[power.name].offset for power in powers):
        one = worth(powers[0].name)
        if len(powers) > 1 or powers[0].exponent != 1:
            return Flaw("ambiguous-unit", "uses a temperature scale within a product", "write 'K'")
        return Unit(_printed(powers), one.factor, one.offset, one.dimension)
    angle = any(WORDS[power.name].angle for power in powers)
    if angle and (len(powers) > 1 or powers[0].exponent != 1):
        return Flaw("unknown-unit", "uses an angle within a product", "write the angle alone: 'deg' or 'rad'")
    factor, dimension = Fraction(1), Dimension()
    for power in powers:
        exponent = -power.exponent if power.divided else power.exponent
        one = worth(power.name)
        factor *= one.factor**exponent
        dimension = dimension.times(one.dimension.power(Fraction(exponent)))
    return Unit(_printed(powers), factor, Fraction(0), dimension, angle)

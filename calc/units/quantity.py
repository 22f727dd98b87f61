"""Reading a quantity: number, optional space, unit."""

from __future__ import annotations

import math
import re
from fractions import Fraction
from typing import NamedTuple, NoReturn

from calc.kinds import ANGLE, Dimension, Kind
from calc.units.grammar import Flaw, Unit, unit
from calc.units.names import measured
from calc.units.trouble import UnitTrouble, quoted

LONGEST_TEXT = 160
_NUMBER = re.compile(r"([+-]?)(?=\.?[0-9])([0-9]*)(?:\.([0-9]*))?(?:[eE]([+-]?[0-9]+))?", re.ASCII)
_BEFORE_UNIT = re.compile(r"[ ]*(?=[A-Za-z°%µμ])", re.ASCII)
_NOT_FINITE = re.compile(r"[+-]?\.?(?:inf|infinity|nan)(?![A-Za-z])", re.ASCII | re.IGNORECASE)
_OTHER_BASE = re.compile(r"[+-]?0[xob][0-9a-f]", re.ASCII | re.IGNORECASE)
_NO_UNIT = Unit("", Fraction(1), Fraction(0), Dimension())
_NEAR = 50.0


class Quantity(NamedTuple):
    """A quantity that was read: ``value = number * factor + offset``.

    Attributes
    ----------
    value : float
        In the SI unit of the kind, rounded once from the exact product.
    number : float
        As written.
    number_text : str
        The digits as written.
    unit : str
        As written, with raised powers; empty for a bare pure number.
    factor, offset : float
        From the unit to SI; ``offset`` is in kelvin and zero for all but temperatures.
    """

    value: float
    number: float
    number_text: str
    unit: str
    factor: float
    offset: float


def read(text: str, kind: Kind) -> Quantity:
    """Read a quantity of the kind asked for.

    Parameters
    ----------
    text : str
        Number, optional space, unit: ``1.13e-6 m²/s``. A pure number may stand bare, with ``%``, or as a
        ratio such as ``5 m/km``.
    kind : Kind
        What the quantity must measure.

    Returns
    -------
    Quantity
        The value in SI with the number and unit as written.

    Raises
    ------
    UnitTrouble
        With one of the codes in `calc.units.trouble.CODES`.
    """
    text = text.strip(" ")
    match = _NUMBER.match(text) if len(text) <= LONGEST_TEXT else None
    if match is None or _OTHER_BASE.match(text):
        _refuse_text(text, kind)
    rest = text[match.end() :]
    if rest:
        gap = _BEFORE_UNIT.match(rest)
        if gap is None:
            _refuse_text(text, kind)
        found = unit(rest[gap.end() :])
        if isinstance(found, Flaw):
            raise UnitTrouble(found.code, f"{quoted(text)} {found.reason}", _expected(kind, match[0]), found.hint)
        if not _measures(found, kind):
            _refuse_dimension(text, kind, match[0], found)
    else:
        found = _NO_UNIT
        if kind.unit:
            raise UnitTrouble("bare-number", f"{quoted(text)} has no unit", _expected(kind, match[0]))
    value = _value(match, found)
    if not math.isfinite(value):
        raise UnitTrouble("not-finite", f"{quoted(text)} is too large to compute with", _expected(kind))
    number = float(match[0])
    return Quantity(value, number, match[0], found.printed, float(found.factor), float(found.offset))


def _value(match: re.Match[str], found: Unit) -> float:
    """Return the float nearest the exact value; infinite when there is none."""
    sign, whole, part, exponent = match.groups()
    if math.isinf(float(match[0])):
        return math.inf
    digits = int(whole + (part or ""))
    if not digits:
        return float(found.offset)
    power = int(exponent or "0") - len(part or "")
    if power < -2 * LONGEST_TEXT - 400:
        return float(found.offset)
    above, below = digits * found.factor.numerator, found.factor.denominator
    if sign == "-":
        above = -above
    if power >= 0:
        above *= 10**power
    else:
        below *= 10**-power
    if found.offset:
        return float(Fraction(above, below) + found.offset)
    try:
        return above / below
    except OverflowError:
        return math.inf


def _expected(kind: Kind, number_text: str = "") -> str:
    """Return "a length, such as '200 mm'", with the number written where it is a likely one."""
    likely, unit_text = re.fullmatch(r"(\S+) ?(.*)", kind.example).groups()  # type: ignore[union-attr]
    if number_text and not unit_text.startswith("deg"):
        ratio = float(number_text) / float(likely)
        if 1 / _NEAR <= ratio <= _NEAR:
            likely = number_text
    return f"{kind.phrase}, such as '{likely} {unit_text}".rstrip() + "'"


def _refuse_text(text: str, kind: Kind) -> NoReturn:
    """Raise for a text that is not number and unit."""
    if not text:
        raise UnitTrouble("not-a-quantity", "nothing is written here", _expected(kind))
    if _NOT_FINITE.match(text):
        raise UnitTrouble("not-finite", f"{quoted(text)} is not a finite number", _expected(kind))
    hint = ""
    if text[0] in "\N{MINUS SIGN}\N{EN DASH}\N{EM DASH}":
        hint = "write the minus sign as '-'"
    elif re.match(r"[+-]?[0-9]+,[0-9]", text, re.ASCII):
        hint = "write a point for decimals and nothing between thousands"
    elif re.match(r"[+-]?[0-9]+[_ ' ][0-9]", text, re.ASCII):
        hint = "write the digits of a number without gaps"
    raise UnitTrouble("not-a-quantity", f"{quoted(text)} is not a quantity", _expected(kind), hint)


def _refuse_dimension(text: str, kind: Kind, number_text: str, found: Unit) -> NoReturn:
    """Raise for a quantity of another kind."""
    name = _name(found)
    article = "an" if name[0] in "aeiou" else "a"
    raise UnitTrouble("wrong-dimension", f"{quoted(text)} is {article} {name}", _expected(kind, number_text))


def measures(text: str) -> str | None:
    """Return what a quantity or a unit measures, such as "mass".

    Parameters
    ----------
    text : str
        A quantity (``200 kg``) or a unit alone (``kg``).

    Returns
    -------
    str or None
        The name; None when the text has no unit or one that cannot be read.
    """
    text = text.strip(" ")[: LONGEST_TEXT + 1]
    match = _NUMBER.match(text)
    rest = text[match.end() :].lstrip(" ") if match else text
    found = unit(rest) if rest else None
    return _name(found) if isinstance(found, Unit) else None


def factor(unit_text: str, kind: Kind) -> float:
    """Return what an SI value is multiplied by to stand in another unit.

    Parameters
    ----------
    unit_text : str
        The unit to show, such as ``L/s``; empty for a pure number.
    kind : Kind
        What the value measures.

    Returns
    -------
    float
        1000.0 for ``L/s``: 0.012 m³/s is shown as 12 L/s.

    Raises
    ------
    UnitTrouble
        When the unit is unknown, of another kind, or a scale with a zero of its own.
    """
    found = _of_kind(unit_text, kind)
    if found.offset:
        reason = f"{quoted(unit_text)} has a zero of its own, so no factor leads to it"
        raise UnitTrouble("wrong-dimension", reason, _unit_of(kind))
    return float(1 / found.factor)


def scale(unit_text: str, kind: Kind) -> tuple[float, float]:
    """Return factor and zero by which an SI value is shown in a unit: ``shown = value * factor - zero``.

    Parameters
    ----------
    unit_text : str
        The unit to show, which may have a zero of its own: ``°F``; empty for a pure number.
    kind : Kind
        What the value measures.

    Returns
    -------
    factor, zero : float
        ``(1.8, 459.67)`` for ``°F``; the zero is in the unit shown, 0 for all but temperatures.

    Raises
    ------
    UnitTrouble
        When the unit is unknown or of another kind.
    """
    found = _of_kind(unit_text, kind)
    return float(1 / found.factor), float(found.offset / found.factor)


def _of_kind(unit_text: str, kind: Kind) -> Unit:
    """Return a unit that measures a kind."""
    found = unit(unit_text) if unit_text else _NO_UNIT
    if isinstance(found, Flaw):
        raise UnitTrouble(found.code, f"{quoted(unit_text)} {found.reason}", _unit_of(kind), found.hint)
    if not _measures(found, kind):
        reason = f"{quoted(unit_text)} is a unit of {_name(found)}"
        raise UnitTrouble("wrong-dimension", reason, _unit_of(kind))
    return found


def _measures(found: Unit, kind: Kind) -> bool:
    """Return whether a unit is one of a kind; an angle is a pure number, but none stands for the other."""
    return found.dimension == kind.dimension and found.angle == (kind.name == ANGLE.name)


def _name(found: Unit) -> str:
    return ANGLE.name if found.angle else measured(found.dimension)


def _unit_of(kind: Kind) -> str:
    """Return "a unit of length, such as 'm'"."""
    return f"a unit of {kind.name}, such as '{kind.unit or '%'}'"

"""What a quantity looks like, as a regular expression: for editors, which cannot ask the reader.

A pattern accepts every text that `calc.units.read` accepts for its kind. Of the others it refuses all whose number
cannot be read, all unit names that are not on the list, and all units of another kind that have one name, or two
with powers up to 3. What is built of more names is held to the list of names alone: a regular expression cannot add
up dimensions without end. The patterns are read alike by Python and by ECMAScript (flag ``u``), which JSON Schema
names.
"""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction
from functools import lru_cache

from calc.kinds import Dimension, Kind
from calc.units.registry import worth
from calc.units.words import WORDS

_DIGITS = r"(?:[0-9]+\.?[0-9]*|\.[0-9]+)"
_EXPONENT = "(?:[eE][+-]?[0-9]+)?"
ANY = f"[+-]?{_DIGITS}{_EXPONENT}"
"""A number."""
NOT_BELOW_ZERO = rf"(?:\+?{_DIGITS}|-(?:0+\.?0*|\.0+)){_EXPONENT}"
ABOVE_ZERO = rf"\+?(?=[0.]*[1-9]){_DIGITS}{_EXPONENT}"

_PRODUCT, _QUOTIENT = "(?: *[·*⋅] *| +)", " */ *"
_RAISED = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")
_TOP = 9
"""The greatest power that a name may have."""
_USUAL = 3
"""Powers up to this one are added up."""
_POWERS = [n for n in range(-_USUAL, _USUAL + 1) if n]
_EVERY_POWER = [n for n in range(-_TOP, _TOP + 1) if n]


def pattern(kind: Kind, number: str = ANY, *, differences: bool = False) -> str:
    """Return the pattern of a quantity of a kind.

    Parameters
    ----------
    kind : Kind
        What it measures; a pure number may stand without a unit.
    number : str
        `ANY`, `NOT_BELOW_ZERO` or `ABOVE_ZERO`.
    differences : bool
        Whether scales with a zero of their own are left out.
    """
    unit = _units(kind.dimension, scales=not differences)
    return f"^ *{number}{f' *(?:{unit})' if kind.unit else f'(?: *(?:{unit}))?'} *$"


def never_negative(kind: Kind, least: float) -> bool:
    """Return whether no negative number, in whatever unit of a kind, reaches a least value in SI."""
    scales = [worth(name) for name, word in WORDS.items() if word.offset]
    return least >= max((0.0, *(float(one.offset) for one in scales if one.dimension == kind.dimension)))


def _spelt(name: str, *, first: bool) -> str:
    """Return the pattern of a name in every spelling that is read."""
    if name == "thousand_ft":
        return name if first else f"{name}|1000 ?(?:ft|feet)"  # at the front, 1000 is the number
    nation, _, rest = name.partition("_")
    if rest:
        anyhow = ("".join(f"[{letter.upper()}{letter}]" for letter in part) for part in (nation, rest))
        return "[ _]+".join(anyhow)
    return name.replace("µ", "[µμ]")


@lru_cache(maxsize=1)
def _classes() -> dict[Dimension, tuple[str, ...]]:
    """Return the names that may be multiplied, by what they measure."""
    found: dict[Dimension, tuple[str, ...]] = {}
    for name, word in WORDS.items():
        if not word.offset:
            found[worth(name).dimension] = (*found.get(worth(name).dimension, ()), name)
    return found


def _names(names: Iterable[str], *, first: bool) -> str:
    return f"(?:{'|'.join(_spelt(name, first=first) for name in names)})"


def _power(powers: Iterable[int]) -> str:
    """Return the pattern of a power in every spelling that is read; nothing is 1."""
    parts = [_one_power(n) for n in powers]
    return parts[0] if len(parts) == 1 else f"(?:{'|'.join(parts)})"


def _one_power(n: int) -> str:
    sign, raised = (r"\+?", "⁺?") if n > 0 else ("-", "⁻")
    digit = str(abs(n))
    whole = rf"(?:(?:\^|\*\*)?{sign}{digit}|{raised}{digit.translate(_RAISED)})"
    return f"{whole}?" if n == 1 else whole


def _solving(wanted: Dimension, of: Dimension, powers: Iterable[int]) -> list[int]:
    """Return the powers of a dimension that give another."""
    return [n for n in powers if of.power(Fraction(n)) == wanted]


@lru_cache(maxsize=64)
def _units(wanted: Dimension, *, scales: bool) -> str:
    """Return the pattern of every unit of a dimension, without the number."""
    classes = _classes()
    ways = [
        _names(names, first=True) + _power(powers)
        for of, names in classes.items()
        if (powers := _solving(wanted, of, _EVERY_POWER))
    ]
    alone = [name for name, word in WORDS.items() if word.offset and worth(name).dimension == wanted]
    if scales and alone:
        ways.append(_names(alone, first=True) + _power([1]))
    for of, names in classes.items():
        pairs = [(n, _second(wanted.times(of.power(Fraction(-n))))) for n in _POWERS]
        if whole := "|".join(f"{_power([n])}{behind}" for n, behind in pairs if behind):
            ways.append(f"{_names(names, first=True)}(?:{whole})")
    return "|".join([*ways, _unusual()])


def _second(rest: Dimension) -> str:
    """Return the pattern of a second name with its join, so that its dimension is what is left; empty if none is."""
    behind = [
        f"{join}{_names(names, first=False)}{_power([sign * n for n in powers])}"
        for of, names in _classes().items()
        if (powers := _solving(rest, of, _POWERS))
        for join, sign in ((_PRODUCT, 1), (_QUOTIENT, -1))
    ]
    return f"(?:{'|'.join(behind)})" if behind else ""


@lru_cache(maxsize=1)
def _unusual() -> str:
    """Return the pattern of units of three names and more, or of two of which one has a high power."""
    known = [name for names in _classes().values() for name in names]
    power, high = _power(_EVERY_POWER), _power([n for n in _EVERY_POWER if abs(n) > _USUAL])
    first, later = _names(known, first=True), _names(known, first=False)
    join = f"(?:{_PRODUCT}|{_QUOTIENT})"
    two = f"{first}(?:{high}{join}{later}{power}|{power}{join}{later}{high})"
    more = f"{first}{power}(?:{_PRODUCT}{later}{power})*(?:{_QUOTIENT}{later}{power})*"
    return f"{two}|(?={first}{power}(?:{join}{later}{power}){{2}}){more}"

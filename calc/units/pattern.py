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

from calc.kinds import ANGLE, Dimension, Kind
from calc.units.registry import worth
from calc.units.words import WORDS

_DIGITS = r"(?:[0-9]+\.?[0-9]*|\.[0-9]+)"
_EXPONENT = "(?:[eE][+-]?[0-9]+)?"
_NUMBER = f"[+-]?{_DIGITS}{_EXPONENT}"
NUMBER = f"^ *{_NUMBER} *$"
"""A number without a unit."""
NOT_BELOW_ZERO = "^ *(?!-[0.]*[1-9])"
ABOVE_ZERO = r"^ *\+?[0.]*[1-9]"
"""What the sign and figures of a quantity must be; each says nothing of the rest."""

_PRODUCT, _QUOTIENT = "(?: *[·*⋅] *| +)", " */ *"
_RAISED = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")
_TOP = 9
"""The greatest power that a name may have."""
_USUAL = 3
"""Powers up to this one are added up."""
_POWERS = [n for n in range(-_USUAL, _USUAL + 1) if n]
_ANY_POWER = r"(?:(?:\^|\*\*)?[+-]?[1-9]|[⁻⁺]?[¹²³⁴-⁹])?"
_EVERY_POWER = [n for n in range(-_TOP, _TOP + 1) if n]


def quantity(kind: Kind, *, differences: bool = False) -> str:
    """Return the pattern of a quantity of a kind.

    Parameters
    ----------
    kind : Kind
        What it measures; a pure number may stand without a unit.
    differences : bool
        Whether scales with a zero of their own are left out.
    """
    unit = _angles() if kind is ANGLE else _units(kind.dimension, scales=not differences)
    return f"^ *{_NUMBER}{f' *(?:{unit})' if kind.unit else f'(?: *(?:{unit}))?'} *$"


def never_negative(kind: Kind, least: float) -> bool:
    """Return whether no negative number, in whatever unit of a kind, reaches a least value in SI."""
    return least >= max((0.0, *(float(worth(name).offset) for name in _scales(kind.dimension))))


def has_scales(kind: Kind) -> bool:
    """Return whether a kind has units with a zero of their own."""
    return bool(_scales(kind.dimension))


def _scales(dimension: Dimension) -> list[str]:
    return [name for name, word in WORDS.items() if word.offset and worth(name).dimension == dimension]


def _spelt(name: str, *, first: bool) -> str:
    """Return the pattern of a name in every spelling that is read."""
    if name == "thousand_ft":
        return name if first else f"{name}|1000 ?(?:ft|feet)(?![0-9])"  # at the front, 1000 is the number
    nation, _, rest = name.partition("_")
    if rest:
        anyhow = ("".join(f"[{letter.upper()}{letter}]" for letter in part) for part in (nation, rest))
        return f"{name}|{'[ _]+'.join(anyhow)}(?![0-9])"
    return name.replace("µ", "[µμ]")


@lru_cache(maxsize=1)
def _classes() -> dict[Dimension, tuple[str, ...]]:
    """Return the names that may be multiplied, by what they measure."""
    found: dict[Dimension, tuple[str, ...]] = {}
    for name, word in WORDS.items():
        if not (word.offset or word.angle):
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
    if scales and _scales(wanted):
        ways.append(_names(_scales(wanted), first=True) + _power([1]))
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


def _angles() -> str:
    """Return the pattern of units of angle, which stand alone."""
    return _names((name for name, word in WORDS.items() if word.angle), first=True) + _power([1])


@lru_cache(maxsize=1)
def _unusual() -> str:
    """Return the pattern of units of three names and more, or of two of which one has a high power."""
    known = [name for names in _classes().values() for name in names]
    first = _names(known, first=True) + _ANY_POWER
    later = _names(known, first=False) + _ANY_POWER
    join = f"(?:{_PRODUCT}|{_QUOTIENT})"
    two = f"(?=.*[{_USUAL + 1}-9⁴-⁹]){first}{join}{later}"
    return f"{two}|(?={first}(?:{join}{later}){{2}}){first}(?:{_PRODUCT}{later})*(?:{_QUOTIENT}{later})*"

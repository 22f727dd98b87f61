"""The worth of a whitelisted unit name, from pint; the only module that knows pint."""

from __future__ import annotations

from fractions import Fraction
from functools import lru_cache
from typing import Any, NamedTuple

import pint

from calc.kinds import Dimension
from calc.units.words import WORDS

_AXES = {"[length]": "length", "[mass]": "mass", "[time]": "time", "[temperature]": "temperature"}


class Worth(NamedTuple):
    """What one unit is in SI: ``value = number * factor + offset``.

    Attributes
    ----------
    factor, offset : Fraction
        Exact; ``offset`` is in kelvin and zero for all but temperatures.
    dimension : Dimension
        Exponents of the base units.
    """

    factor: Fraction
    offset: Fraction
    dimension: Dimension


@lru_cache(maxsize=1)
def _registry() -> pint.UnitRegistry[Any]:
    """Return pint's own definitions on fractions, without a cache folder or a user's settings."""
    return pint.UnitRegistry(cache_folder=None, non_int_type=Fraction)


@lru_cache(maxsize=len(WORDS))
def worth(name: str) -> Worth:
    """Return what a whitelisted unit is worth in SI.

    Parameters
    ----------
    name : str
        A key of `WORDS`.

    Returns
    -------
    Worth
        Exact factor and offset, and the dimension.
    """
    registry = _registry()
    word = WORDS[name]
    if word.offset:
        zero, one = (
            Fraction(registry.Quantity(Fraction(n), word.registry_name).to("kelvin").magnitude) for n in (0, 1)
        )
        return Worth(one - zero, zero, Dimension(temperature=Fraction(1)))
    quantity = (Fraction(1) * registry.parse_expression(word.registry_name)).to_base_units()
    axes = {_AXES[axis]: Fraction(power) for axis, power in quantity.dimensionality.items()}
    return Worth(Fraction(quantity.magnitude), Fraction(0), Dimension(**axes))

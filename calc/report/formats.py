"""Figures of pure numbers, and of numbers that keep the figures they were stated with."""

from __future__ import annotations

import math
import sys

from calc.report.numbers import Format

BY_QUANTITY = {
    "reynolds": Format(decimals=0),
    "darcy_f": Format(decimals=5),
    "equivalent_f": Format(decimals=5),
    "hazen_williams_c": Format(decimals=1),
    "manning_n": Format(decimals=4),
    "one_in": Format(decimals=0),
    "fitting_share": Format("%", decimals=1),
    "parallel": Format(decimals=0),
    "count": Format(decimals=0),
    "iterations": Format(decimals=0),
    "findings": Format(decimals=0),
    "found": Format(decimals=0),
    "unsourced": Format(decimals=0),
    "open_assumptions": Format(decimals=0),
    "laminar_below": Format(decimals=0),
    "turbulent_above": Format(decimals=0),
}
"""Pure numbers written otherwise than their kind."""

NAMED = {"hazen_williams_c": "Hazen–Williams C", "manning_n": "Manning n", "K_reverse": "K in reverse"}
"""Quantities that are not told by their names in the ledger."""


def quantity_words(quantity: str) -> str:
    """Return a quantity of the ledger in words."""
    return NAMED.get(quantity, quantity.replace("_", " "))


NOISE = 13
"""Figures beyond which a number that ends in zeros, or nearly so, is taken to have no more."""


def shortest(number: float, unit: str, most: int) -> Format:
    """Return a format that writes a number in a unit with the figures it has, at most ``most``.

    A value stated in this unit has its stated figures, whatever the last bits of its way to SI and back.
    """
    size = abs(float(number))
    text = f"{size:.{NOISE - 1}e}"
    if not math.isclose(float(text), size, rel_tol=4 * sys.float_info.epsilon):
        text = repr(size)
    mantissa = text.partition("e")[0].replace(".", "").strip("0")
    return Format(unit, significant=max(1, min(most, len(mantissa))))

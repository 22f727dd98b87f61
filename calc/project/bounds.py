"""Bounds of quantities: those a field declares, and those within which numbers stay computable."""

from __future__ import annotations

import math

from calc.components import Quantity
from calc.kinds import ANGLE, TEMPERATURE, Kind

COMPUTABLE: dict[str, tuple[float, float]] = {
    "pure number": (-1e9, 1e9),
    "length": (1e-3, 1e8),
    "bore": (1e-3, 100.0),
    "thickness": (0.0, 10.0),
    "roughness": (0.0, 100.0),
    "elevation": (-12_000.0, 12_000.0),
    "head": (-1e5, 1e5),
    "area": (0.0, 1e12),
    "flow": (-1e6, 1e6),
    "velocity": (-1e4, 1e4),
    "kinematic viscosity": (1e-9, 1e3),
    "dynamic viscosity": (1e-7, 1e5),
    "pressure": (-1e10, 1e10),
    "gradient": (-1e6, 1e6),
    "angle": (-1e3, 1e3),
}
"""By kind, in SI: far wider than any works, and narrow enough that no power of a value overflows."""

_SLACK = 1e-12
"""Relative; a bound in °C is not exact in kelvin."""


def limits(form: Quantity) -> tuple[float, float]:
    """Return the least and the greatest value of a form, in SI; ``above`` comes on top."""
    low, high = COMPUTABLE.get(form.kind.name, (-1e30, 1e30))
    return low if form.at_least is None else form.at_least, high if form.at_most is None else form.at_most


def outside(form: Quantity, si: float) -> str:
    """Return what is expected where a value lies outside its bounds, or an empty text where it lies within.

    Parameters
    ----------
    form : Quantity
        Declared bounds and kind.
    si : float
        The value, in SI.
    """
    kind = form.kind
    least, most = limits(form)
    slack = _SLACK * abs(si)
    if form.above is not None and si <= form.above:
        return f"{kind.phrase} above {show(form.above, kind)}"
    if least - slack <= si <= most + slack:
        return ""
    if form.at_least is not None and form.at_most is not None:
        return f"{kind.phrase} from {show(least, kind).partition(' ')[0]} to {show(most, kind)}"
    return f"{kind.phrase} of " + (f"at least {show(least, kind)}" if si < least else f"at most {show(most, kind)}")


def show(si: float, kind: Kind) -> str:
    """Return a bound with its unit."""
    if kind is ANGLE:
        return f"{round(math.degrees(si), 9):.12g}°"
    if kind is TEMPERATURE:
        return f"{round(si - 273.15, 9):.12g} °C"
    return f"{si:.12g} {kind.unit}".rstrip()

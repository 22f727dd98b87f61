"""What a dimension is called in messages."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from fractions import Fraction

    from calc.kinds import Dimension

_NAMES: dict[tuple[int | Fraction, ...], str] = {
    (0, 0, 0, 0): "pure number",
    (1, 0, 0, 0): "length",
    (2, 0, 0, 0): "area",
    (3, 0, 0, 0): "volume",
    (0, 1, 0, 0): "mass",
    (0, 0, 1, 0): "time",
    (0, 0, 0, 1): "temperature",
    (0, 0, -1, 0): "frequency",
    (1, 0, -1, 0): "velocity",
    (1, 0, -2, 0): "acceleration",
    (3, 0, -1, 0): "flow",
    (0, 1, -1, 0): "mass flow",
    (2, 0, -1, 0): "kinematic viscosity",
    (-1, 1, -1, 0): "dynamic viscosity",
    (-3, 1, 0, 0): "density",
    (-2, 1, -2, 0): "specific weight",
    (-1, 1, -2, 0): "pressure",
    (1, 1, -2, 0): "force",
    (2, 1, -2, 0): "energy",
    (2, 1, -3, 0): "power",
    (-5, 0, 2, 0): "resistance",
    (-2, 0, 1, 0): "rise of head lost with flow",
}


def measured(dimension: Dimension) -> str:
    """Return the name of what has this dimension: "mass", or "quantity in m⁴" where there is none."""
    exponents = (dimension.length, dimension.mass, dimension.time, dimension.temperature)
    return _NAMES.get(exponents, f"quantity in {dimension}")

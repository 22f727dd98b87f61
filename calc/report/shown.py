"""Units in which quantities are shown: for each kind the units allowed, the usual one of each system, and its figures.

One table: the fields of ``display`` in the schema, the formats of every table, drawing and screen follow from it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calc import kinds
from calc.kinds import Kind

SYSTEMS = ("SI", "US")


@dataclass(frozen=True, slots=True)
class Shown:
    """How one kind of quantity may be shown.

    Attributes
    ----------
    field : str
        The field of ``display`` that chooses its unit.
    kind : Kind
        What it measures.
    words : str
        What the field says, for schemas.
    usual : mapping of str to str
        By system, the unit where none is chosen.
    decimals : mapping of str to int
        By unit as printed, figures after the point in tables; a minus sign means significant figures instead.
    """

    field: str
    kind: Kind
    words: str
    usual: Mapping[str, str]
    decimals: Mapping[str, int]

    @property
    def spellings(self) -> dict[str, str]:
        """Every way in which a unit may be written, with the unit as printed."""
        found: dict[str, str] = {}
        for unit in self.decimals:
            plain = unit.translate(_LOWERED)
            found |= {unit: unit, plain: unit, **dict.fromkeys(SAME.get(unit, ()), unit)}
        return found


_LOWERED = str.maketrans("²³", "23")
SAME = {
    "ft³/s": ("cfs",),
    "MGD": ("mgd", "US mgd"),
    "gpm": ("US gpm",),
    "°C": ("degC",),
    "°F": ("degF",),
    "mm²/s": ("cSt",),
}
"""Other spellings of a unit that are accepted."""


SHOWN: tuple[Shown, ...] = (
    Shown(
        "flow",
        kinds.FLOW,
        "unit of flow",
        {"SI": "L/s", "US": "gpm"},
        {
            "L/s": 2,
            "L/min": 1,
            "m³/s": 5,
            "m³/h": 2,
            "m³/d": 1,
            "ML/d": 3,
            "gpm": 1,
            "ft³/s": 4,
            "MGD": 4,
        },
    ),
    Shown(
        "length",
        kinds.LENGTH,
        "unit of lengths of pipe",
        {"SI": "m", "US": "ft"},
        {"m": 1, "km": 4, "ft": 1, "mi": 4},
    ),
    Shown(
        "elevation",
        kinds.ELEVATION,
        "unit of levels and elevations",
        {"SI": "m", "US": "ft"},
        {"m": 2, "ft": 2},
    ),
    Shown("head", kinds.HEAD, "unit of heads and losses", {"SI": "m", "US": "ft"}, {"m": 3, "ft": 3}),
    Shown("bore", kinds.BORE, "unit of bores", {"SI": "mm", "US": "in"}, {"mm": 1, "m": 4, "in": 3, "ft": 4}),
    Shown(
        "roughness",
        kinds.ROUGHNESS,
        "unit of roughness heights",
        {"SI": "mm", "US": "ft"},
        {"mm": 3, "m": 6, "in": 5, "ft": 6},
    ),
    Shown(
        "velocity",
        kinds.VELOCITY,
        "unit of velocity",
        {"SI": "m/s", "US": "ft/s"},
        {"m/s": 3, "ft/s": 3},
    ),
    Shown(
        "pressure",
        kinds.PRESSURE,
        "unit of pressure",
        {"SI": "kPa", "US": "psi"},
        {"kPa": 1, "bar": 3, "MPa": 4, "Pa": 0, "psi": 2, "lbf/ft²": 1},
    ),
    Shown(
        "gradient",
        kinds.GRADIENT,
        "unit of gradients",
        {"SI": "m/km", "US": "ft/1000 ft"},
        {"m/km": 2, "ft/1000 ft": 2, "%": 3},
    ),
    Shown(
        "temperature",
        kinds.TEMPERATURE,
        "scale of temperature",
        {"SI": "°C", "US": "°F"},
        {"°C": 2, "°F": 2, "K": 2},
    ),
    Shown(
        "density",
        kinds.DENSITY,
        "unit of density",
        {"SI": "kg/m³", "US": "lb/ft³"},
        {"kg/m³": 2, "lb/ft³": 3, "slug/ft³": 5},
    ),
    Shown(
        "viscosity",
        kinds.KINEMATIC_VISCOSITY,
        "unit of kinematic viscosity",
        {"SI": "m²/s", "US": "ft²/s"},
        {"m²/s": -6, "mm²/s": 4, "ft²/s": -6},
    ),
)
"""Every kind whose unit may be chosen; a line here gives it a field of ``display``."""

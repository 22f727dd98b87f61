"""The usual way of writing each kind of quantity in a package."""

from __future__ import annotations

from dataclasses import replace

from calc import kinds
from calc.ledger import Column
from calc.report.numbers import Format

BY_KIND = {
    kinds.NUMBER: Format(decimals=3),
    kinds.LENGTH: Format("m", decimals=1),
    kinds.BORE: Format("mm", decimals=1),
    kinds.ROUGHNESS: Format("mm", decimals=3),
    kinds.ELEVATION: Format("m", decimals=2),
    kinds.HEAD: Format("m", decimals=3),
    kinds.AREA: Format("m²", decimals=4),
    kinds.VELOCITY: Format("m/s", decimals=3),
    kinds.ACCELERATION: Format("m/s²", decimals=5),
    kinds.KINEMATIC_VISCOSITY: Format("m²/s", significant=6),
    kinds.DYNAMIC_VISCOSITY: Format("Pa·s", significant=6),
    kinds.DENSITY: Format("kg/m³", decimals=2),
    kinds.PRESSURE: Format("kPa", decimals=1),
    kinds.TEMPERATURE: Format("K", decimals=2),
    kinds.TIME: Format("s", decimals=0),
    kinds.GRADIENT: Format("m/km", decimals=2),
    kinds.RESISTANCE: Format("s²/m⁵", significant=5),
}

FLOW_DECIMALS = {"L/s": 2, "m³/s": 5, "m³/h": 2, "ML/d": 3}
"""Decimals of a flow in the tables: about a hundredth of a litre a second in any unit."""
BRIEF, FULL = -1, 4
"""Decimals more than that: on the first page, and where flows are written in full to be added up."""
RESIDUAL = 1e-6
"""Residuals of head smaller than this, in metres, are written as less than it; those of flow by `flow_form`."""

BY_QUANTITY = {
    "reynolds": Format(decimals=0),
    "darcy_f": Format(decimals=5),
    "one_in": Format(decimals=0),
    "fitting_share": Format("%", decimals=1),
    "parallel": Format(decimals=0),
    "count": Format(decimals=0),
    "iterations": Format(decimals=0),
    "findings": Format(decimals=0),
    "unsourced": Format(decimals=0),
    "open_assumptions": Format(decimals=0),
    "laminar_below": Format(decimals=0),
    "turbulent_above": Format(decimals=0),
    "vapour_pressure": Format("kPa", decimals=3),
}
"""Quantities written otherwise than their kind."""

RESIDUALS = ("closing_error", "imbalance", "difference", "largest_energy_error", "largest_imbalance")


def flow_form(unit: str, more: int = 0, sign: str = "", *, residual: bool = False) -> Format:
    """Return a format of flows with so many decimals more than in the tables; a residual has a bound."""
    decimals = FLOW_DECIMALS[unit] + more
    return Format(unit, decimals, sign=sign, bound=10.0**-decimals if residual else None)


def usual(column: Column, flow_unit: str) -> Format:
    """Return the format in which a column is usually written."""
    quantity = column.quantity
    form = BY_QUANTITY.get(quantity)
    if form is None and column.kind is kinds.FLOW:
        form = Format(flow_unit, decimals=FLOW_DECIMALS.get(flow_unit, 3))
    if form is None:
        form = BY_KIND[column.kind]
    if quantity.endswith(RESIDUALS) and column.kind is kinds.FLOW and not column.of:
        form = flow_form(flow_unit, FULL, residual=True)
    elif quantity.endswith(RESIDUALS) and not column.of:
        form = replace(form, decimals=6, significant=None, bound=RESIDUAL)
    return form


def shortest(value: float, unit: str, most: int) -> Format:
    """Return a format that writes a stated value with the figures it has, at most ``most``."""
    mantissa = repr(float(abs(value))).partition("e")[0].replace(".", "").strip("0")
    return Format(unit, significant=max(1, min(most, len(mantissa))))

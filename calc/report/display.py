"""The display of a package: in which unit, with which figures, each of its quantities is written.

Tables, drawings and screens are in display units, chosen one by one or by their system. Worked lines are in the
coherent units of the system, in which formulas hold without factors; what is displayed otherwise is converted on a
line of its own (`calc.report.conversion`).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calc import kinds
from calc.components import Record
from calc.kinds import Kind
from calc.ledger import Column
from calc.report.formats import BY_QUANTITY
from calc.report.numbers import Format, shown
from calc.report.shown import SHOWN, SYSTEMS

BRIEF, FULL, FINE = -1, 4, 3
"""Decimals more than in tables: on the first page; of flows in full, to be added up; of residuals of head."""

BY_FIELD = {one.field: one for one in SHOWN}
FIELD_OF: dict[Kind, str] = {one.kind: one.field for one in SHOWN} | {kinds.THICKNESS: "bore"}

COHERENT_US = {
    "": "",
    "m": "ft",
    "m²": "ft²",
    "m³/s": "ft³/s",
    "m/s": "ft/s",
    "m/s²": "ft/s²",
    "m²/s": "ft²/s",
    "Pa·s": "lbf·s/ft²",
    "kg/m³": "slug/ft³",
    "Pa": "lbf/ft²",
    "K": "K",
    "s": "s",
    "s²/m⁵": "s²/ft⁵",
    "s/m²": "s/ft²",
    "rad": "rad",
}
"""The coherent US unit (foot, slug, second, pound-force) for each SI unit; temperatures are absolute in both."""

OTHER: dict[Kind, Format] = {
    kinds.NUMBER: Format(decimals=3),
    kinds.AREA: Format(decimals=4),
    kinds.ACCELERATION: Format(decimals=5),
    kinds.DYNAMIC_VISCOSITY: Format(significant=6),
    kinds.TIME: Format(decimals=0),
    kinds.RESISTANCE: Format(significant=5),
    kinds.LOSS_RATE: Format(significant=5),
}
"""Figures of kinds whose unit is not chosen: they are written in the coherent unit."""
USUAL_FIGURES = Format(significant=6)

MORE = {"vapour_pressure": 2}
"""Quantities written with more decimals than their kind."""

RESIDUALS = ("closing_error", "imbalance", "difference", "largest_energy_error", "largest_imbalance")


@dataclass(frozen=True)
class Display:
    """The units of a package.

    Attributes
    ----------
    system : str
        SI or US.
    units : mapping of str to str
        By field of ``display``, the unit as printed.
    beside : tuple of Display
        What tables of results show in columns beside, if anything.
    """

    system: str
    units: Mapping[str, str]
    beside: tuple[Display, ...] = ()

    @classmethod
    def of(cls, section: Record) -> Display:
        """Return the display that a project asks for, in the usual units of its system where it chooses none."""
        system = section.text("units", SYSTEMS[0])
        chosen = {one.field: section.text(one.field) for one in SHOWN}
        units = {one.field: one.spellings.get(chosen[one.field], one.usual[system]) for one in SHOWN}
        beside = (usual_of(section.text("beside")),) if "beside" in section.stated else ()
        return cls(system, units, beside)

    def unit(self, field: str) -> str:
        """Return the unit chosen for a field, as printed: ``display.unit("flow")``."""
        return self.units[field]

    def form(self, field: str, more: int = 0, sign: str = "", *, residual: bool = False) -> Format:
        """Return the format of a field with so many decimals more than in the tables; a residual has a bound."""
        unit = self.units[field]
        figures = BY_FIELD[field].decimals[unit]
        if figures < 0:
            return Format(unit, significant=-figures + more, sign=sign)
        decimals = figures + more
        return Format(unit, decimals, sign=sign, bound=10.0**-decimals if residual else None)

    def usual(self, column: Column) -> Format:
        """Return the format in which a column is usually written."""
        quantity, kind = column.quantity, column.kind
        if quantity in BY_QUANTITY and kind is kinds.NUMBER:
            return BY_QUANTITY[quantity]
        field = FIELD_OF.get(kind)
        if field is None:
            figures = OTHER.get(kind, USUAL_FIGURES)
            return Format(self.coherent(kind), figures.decimals, figures.significant)
        if quantity.endswith(RESIDUALS) and not column.of:
            return self.form(field, FULL if field == "flow" else FINE, residual=True)
        return self.form(field, MORE.get(quantity, 0))

    def coherent(self, kind: Kind) -> str:
        """Return the coherent unit of a kind, in which worked lines are written."""
        return kind.unit if self.system == "SI" else COHERENT_US[kind.unit]

    def coherent_units(self) -> dict[str, tuple[str, float]]:
        """Return for each SI unit the coherent unit of this system and the factor to it, where they differ."""
        units = {kind.unit: (self.coherent(kind), shown(1.0, kind, self.coherent(kind))) for kind in kinds.KINDS}
        return {si: told for si, told in units.items() if si != told[0]}

    def shown(self, value: float, field: str) -> float:
        """Return an SI value as a number in the unit of a field, for scales and marks of drawings."""
        return shown(value, BY_FIELD[field].kind, self.units[field])


def usual_of(system: str) -> Display:
    """Return the usual units of a system."""
    return Display(system, {one.field: one.usual[system] for one in SHOWN})


SI = usual_of(SYSTEMS[0])

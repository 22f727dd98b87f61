"""How quantities are written on a screen: with the figures that they have on paper."""

from __future__ import annotations

from dataclasses import replace

from calc.kinds import FLOW, GRADIENT, Kind
from calc.project import Project
from calc.report.formats import BY_KIND, FLOW_DECIMALS
from calc.report.numbers import Format, written

NONE = "–"


def flow_unit(project: Project) -> str:
    """Return the unit in which a project shows its flows, as printed."""
    return project.sections["display"].text("flow", "L/s").replace("m3", "m³")


def flow_text(flow: float, unit: str) -> str:
    """Return the size of a flow with its unit; one too small for the usual figures gets two that count."""
    text = written(abs(flow), FLOW, Format(unit, decimals=FLOW_DECIMALS[unit]))
    if flow and not any(figure in "123456789" for figure in text):
        text = written(abs(flow), FLOW, Format(unit, significant=2))
    return f"{text} {unit}"


def amount(value: float | None, kind: Kind, *, plus: bool = False) -> str:
    """Return a value in SI with the figures of its kind, without unit; a dash where there is none."""
    return NONE if value is None else written(value, kind, replace(BY_KIND[kind], sign="+" if plus else ""))


def with_unit(value: float, kind: Kind) -> str:
    """Return a value with its unit; a gradient also as 1 in n."""
    text = f"{amount(value, kind)} {BY_KIND[kind].unit}".rstrip()
    return f"{text} (1 in {1 / value:.0f})" if kind is GRADIENT and value > 0 else text

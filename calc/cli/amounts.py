"""How quantities are written on a screen: with the figures that they have on paper."""

from __future__ import annotations

from dataclasses import replace

from calc.kinds import FLOW, GRADIENT, Kind
from calc.project import Project
from calc.report.display import FIELD_OF, Display
from calc.report.numbers import written

NONE = "–"


def display_of(project: Project) -> Display:
    """Return the units in which a project is shown."""
    return Display.of(project.sections["display"])


def flow_text(flow: float, display: Display) -> str:
    """Return the size of a flow with its unit; one too small for the usual figures gets two that count."""
    form = display.form("flow")
    text = written(abs(flow), FLOW, form)
    if flow and not any(figure in "123456789" for figure in text):
        text = written(abs(flow), FLOW, replace(form, decimals=None, significant=2))
    return f"{text} {form.unit}"


def amount(value: float | None, kind: Kind, display: Display, *, plus: bool = False) -> str:
    """Return a value in SI with the figures of its kind, without unit; a dash where there is none."""
    return NONE if value is None else written(value, kind, display.form(FIELD_OF[kind], sign="+" if plus else ""))


def with_unit(value: float, kind: Kind, display: Display) -> str:
    """Return a value with its unit; a gradient also as 1 in n."""
    text = f"{amount(value, kind, display)} {display.unit(FIELD_OF[kind])}"
    return f"{text} (1 in {1 / value:.0f})" if kind is GRADIENT and value > 0 else text

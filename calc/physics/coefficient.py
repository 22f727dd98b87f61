"""Loss coefficients that follow from the form of a fitting, or from the flow at which it loses a stated pressure."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc.equation import Bound, Choice, Law, Reference, Regimes, equation
from calc.physics import symbols as s

WEISBACH = Reference("Weisbach 1855", "J. Weisbach, Die Experimental-Hydraulik, 1855, bends of round pipe; from memory")
BORDA = Reference("Borda–Carnot", "J.-C. de Borda, 1766, and L. Carnot, 1803, loss at a sudden widening; from memory")
TP_410 = Reference("TP-410", "Crane Technical Paper 410, resistance of changes of bore (from memory)")
IEC_60534 = Reference("IEC 60534", "IEC 60534, industrial-process control valves: flow coefficients (from memory)")
DEFINITION = Reference("definition", "Definition")


@equation(
    gives=s.COEFFICIENT,
    source=WEISBACH,
    valid="round bends of R/D from 0.5 up, turbulent flow; its friction along the bend is not in it",
    radius_ratio=s.RADIUS_RATIO,
    angle=s.ANGLE,
)
def bend_coefficient(*, radius_ratio, angle):
    """Loss coefficient of a bend."""
    return (0.131 + 1.847 * (1 / (2 * radius_ratio)) ** 3.5) * (2 * angle / np.pi)


@equation(gives=s.SMALLER_BORE, source=DEFINITION, valid="bore less than the bore onward", bore=s.BORE)
def bore_before(*, bore):
    """Smaller bore, that before the change."""
    return bore


@equation(gives=s.SMALLER_BORE, source=DEFINITION, valid="bore onward no more than the bore", onward_bore=s.ONWARD_BORE)
def bore_onward(*, onward_bore):
    """Smaller bore, that onward of the change."""
    return onward_bore


@equation(
    gives=s.BORE_RATIO,
    source=DEFINITION,
    valid="bore less than the bore onward",
    bore=s.BORE,
    onward_bore=s.ONWARD_BORE,
)
def ratio_widening(*, bore, onward_bore):
    """Ratio of bores, the smaller over the larger."""
    return bore / onward_bore


@equation(
    gives=s.BORE_RATIO,
    source=DEFINITION,
    valid="bore onward no more than the bore",
    bore=s.BORE,
    onward_bore=s.ONWARD_BORE,
)
def ratio_narrowing(*, bore, onward_bore):
    """Ratio of bores, the smaller over the larger."""
    return onward_bore / bore


@equation(gives=s.COEFFICIENT, source=BORDA, valid="sudden widening, on the smaller bore", bore_ratio=s.BORE_RATIO)
def sudden_widening(*, bore_ratio):
    """Loss coefficient of a sudden widening."""
    return (1 - bore_ratio**2) ** 2


@equation(gives=s.COEFFICIENT, source=TP_410, valid="sudden narrowing, on the smaller bore", bore_ratio=s.BORE_RATIO)
def sudden_narrowing(*, bore_ratio):
    """Loss coefficient of a sudden narrowing."""
    return 0.5 * (1 - bore_ratio**2)


@equation(
    gives=s.COEFFICIENT,
    source=TP_410,
    valid="whole angle up to 45°, on the smaller bore",
    angle=s.ANGLE,
    bore_ratio=s.BORE_RATIO,
)
def gradual_widening(*, angle, bore_ratio):
    """Loss coefficient of a gradual widening."""
    return 2.6 * np.sin(angle / 2) * (1 - bore_ratio**2) ** 2


@equation(
    gives=s.COEFFICIENT,
    source=TP_410,
    valid="whole angle up to 45°, on the smaller bore",
    angle=s.ANGLE,
    bore_ratio=s.BORE_RATIO,
)
def gradual_narrowing(*, angle, bore_ratio):
    """Loss coefficient of a gradual narrowing."""
    return 0.8 * np.sin(angle / 2) * (1 - bore_ratio**2)


@equation(
    gives=s.COEFFICIENT,
    source=TP_410,
    valid="whole angle above 45° and up to 180°, on the smaller bore",
    angle=s.ANGLE,
    bore_ratio=s.BORE_RATIO,
)
def steep_narrowing(*, angle, bore_ratio):
    """Loss coefficient of a steep narrowing."""
    return 0.5 * np.sqrt(np.sin(angle / 2)) * (1 - bore_ratio**2)


@equation(
    gives=s.COEFFICIENT,
    source=IEC_60534,
    valid="turbulent flow; Kv is the flow of water of 1000 kg/m³ at a pressure drop of 1 bar",
    bore=s.BORE,
    Kv=s.KV,
)
def coefficient_of_kv(*, bore, Kv):  # noqa: N803 - the name by which the trade knows it
    """Loss coefficient from Kv."""
    return 2 * (np.pi * bore**2 / (4 * Kv)) ** 2 * (100000 * s.PASCAL) / (1000 * s.KILOGRAM_PER_CUBIC_METRE)


@equation(
    gives=s.COEFFICIENT,
    source=IEC_60534,
    valid="turbulent flow; Cv is the flow of water of 999 kg/m³ at a pressure drop of 1 psi",
    bore=s.BORE,
    Cv=s.CV,
)
def coefficient_of_cv(*, bore, Cv):  # noqa: N803 - the name by which the trade knows it
    """Loss coefficient from Cv."""
    return 2 * (np.pi * bore**2 / (4 * Cv)) ** 2 * (6894.75729 * s.PASCAL) / (999 * s.KILOGRAM_PER_CUBIC_METRE)


STEEP = Bound(np.pi / 4, strict=True)
ONWARD = Bound("onward_bore")


def _by_bores(name: str, title: str, widening: Law, narrowing: Law) -> Regimes:
    """Return a law of a change of bore, by whether flow forward widens."""
    labels = ("forward it widens", "forward it narrows")
    return Regimes(name=name, title=title, by="bore", bounds=(ONWARD,), laws=(widening, narrowing), labels=labels)


WIDENING = Regimes(
    name="widening",
    title="Loss coefficient of a widening",
    by="angle",
    bounds=(STEEP,),
    laws=(gradual_widening, sudden_widening),
    labels=("gradual", "steep, as if sudden"),
)
NARROWING = Regimes(
    name="narrowing",
    title="Loss coefficient of a narrowing",
    by="angle",
    bounds=(STEEP,),
    laws=(gradual_narrowing, steep_narrowing),
    labels=("gradual", "steep"),
)


def _of_kinds(name: str, title: str, **laws: Law) -> Choice:
    """Return a law by the kind of fitting; None where a kind has no such value."""
    return Choice(name=name, title=title, by="by", laws={kind: laws.get(kind) for kind in KINDS})


KINDS = ("bend", "step", "taper", "Kv", "Cv")
"""The kinds of fitting whose coefficient follows from what is stated of them."""

_SMALLER = _by_bores("smaller_bore", "Smaller bore of a change of bore", bore_before, bore_onward)
_RATIO = _by_bores("bore_ratio", "Ratio of bores of a change of bore", ratio_widening, ratio_narrowing)
SMALLER_BORE = _of_kinds("smaller_bore", "Smaller bore of a change of bore", step=_SMALLER, taper=_SMALLER)
BORE_RATIO = _of_kinds("bore_ratio", "Ratio of bores of a change of bore", step=_RATIO, taper=_RATIO)
FORWARD = _of_kinds(
    "computed_coefficient",
    "Loss coefficient that follows from the form of a fitting",
    bend=bend_coefficient,
    step=_by_bores("step_forward", "Sudden change of bore", sudden_widening, sudden_narrowing),
    taper=_by_bores("taper_forward", "Gradual change of bore", WIDENING, NARROWING),
    Kv=coefficient_of_kv,
    Cv=coefficient_of_cv,
)
REVERSE = _of_kinds(
    "computed_coefficient_reverse",
    "Loss coefficient that follows from the form of a fitting, flow in reverse",
    step=_by_bores("step_reverse", "Sudden change of bore", sudden_narrowing, sudden_widening),
    taper=_by_bores("taper_reverse", "Gradual change of bore", NARROWING, WIDENING),
)
"""In reverse; where it says nothing the coefficient holds both ways."""

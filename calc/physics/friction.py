"""Friction in full round pipes: Darcy–Weisbach and the laws for its factor."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc import kinds
from calc.equation import Bound, Choice, Equation, Implicit, Law, Reference, Regimes, Symbol, equation
from calc.physics import symbols as s
from calc.physics.empirical import EMPIRICAL_LAWS

WEISBACH_1845 = Reference("Weisbach 1845", "J. Weisbach, Lehrbuch der Ingenieur- und Maschinen-Mechanik, Vieweg, 1845")
POISEUILLE_1840 = Reference(
    "Poiseuille 1840",
    "J. L. M. Poiseuille, Recherches expérimentales sur le mouvement des liquides, 1840; G. Hagen, 1839",
)
COLEBROOK_1939 = Reference(
    "Colebrook 1939",
    "C. F. Colebrook, Turbulent flow in pipes, with particular reference to the transition region between "
    "the smooth and rough pipe laws, J. Institution of Civil Engineers 11, 1939",
)
SWAMEE_JAIN_1976 = Reference(
    "Swamee & Jain 1976",
    "P. K. Swamee, A. K. Jain, Explicit equations for pipe-flow problems, J. Hydraulics Division ASCE 102(5), 1976",
)
HAALAND_1983 = Reference(
    "Haaland 1983",
    "S. E. Haaland, Simple and explicit formulas for the friction factor in turbulent pipe flow, "
    "J. Fluids Engineering 105, 1983",
)
DEFINITION = Reference("definition", "Definition")
CONVENTION = Reference("convention", "Convention of this program, stated here; no law is established in this range")
PROJECT = Reference("project input", "Project input")


@equation(
    gives=s.FRICTION_LOSS,
    source=WEISBACH_1845,
    valid="steady flow in a full round pipe; f is Darcy f",
    factor=s.FACTOR,
    length=s.LENGTH,
    bore=s.BORE,
    velocity=s.VELOCITY,
    gravity=s.GRAVITY,
)
def darcy_weisbach(*, factor, length, bore, velocity, gravity):
    """Friction loss, Darcy–Weisbach."""
    return factor * (length / bore) * (velocity * np.abs(velocity) / (2 * gravity))


@equation(
    gives=s.FRICTION_LOSS,
    source=POISEUILLE_1840,
    valid="laminar flow, Re below Re_L",
    viscosity=s.VISCOSITY,
    length=s.LENGTH,
    flow_each=s.FLOW_EACH,
    gravity=s.GRAVITY,
    bore=s.BORE,
)
def hagen_poiseuille(*, viscosity, length, flow_each, gravity, bore):
    """Friction loss in laminar flow, Hagen–Poiseuille."""
    return 128 * viscosity * length * flow_each / (np.pi * gravity * bore**4)


@equation(gives=s.FACTOR, source=PROJECT, valid="as given, at every Reynolds number", friction_factor=s.FACTOR_GIVEN)
def fixed(*, friction_factor):
    """Darcy f, fixed."""
    return friction_factor


@equation(gives=s.FACTOR, source=POISEUILLE_1840, valid="laminar flow, Re below Re_L", reynolds=s.REYNOLDS)
def laminar_factor(*, reynolds):
    """Darcy f in laminar flow."""
    return 64 / reynolds


@equation(gives=s.FACTOR_LAMINAR, source=POISEUILLE_1840, valid="at Re_L", laminar_below=s.LAMINAR_BELOW)
def factor_at_laminar_limit(*, laminar_below):
    """Darcy f at the end of laminar flow."""
    return 64 / laminar_below


@equation(
    gives=s.FACTOR,
    source=CONVENTION,
    valid="Re_L to Re_T; flow is unsettled there and any value is an estimate",
    factor_laminar=s.FACTOR_LAMINAR,
    factor_turbulent=s.FACTOR_TURBULENT,
    reynolds=s.REYNOLDS,
    laminar_below=s.LAMINAR_BELOW,
    turbulent_above=s.TURBULENT_ABOVE,
)
def transition_factor(*, factor_laminar, factor_turbulent, reynolds, laminar_below, turbulent_above):
    """Darcy f in the transition, log f linear in log Re."""
    share = np.log(reynolds / laminar_below) / np.log(turbulent_above / laminar_below)
    return factor_laminar * (factor_turbulent / factor_laminar) ** share


@equation(
    gives=s.FACTOR,
    source=SWAMEE_JAIN_1976,
    valid="5 000 ≤ Re ≤ 10⁸, 10⁻⁶ ≤ ε/D ≤ 10⁻²",
    roughness=s.ROUGHNESS,
    bore=s.BORE,
    reynolds=s.REYNOLDS,
)
def swamee_jain(*, roughness, bore, reynolds):
    """Darcy f, Swamee–Jain."""
    return 0.25 / np.log10(roughness / (3.7 * bore) + 5.74 / reynolds**0.9) ** 2


@equation(
    gives=s.FACTOR,
    source=HAALAND_1983,
    valid="4 000 ≤ Re ≤ 10⁸, ε/D ≤ 0.05",
    roughness=s.ROUGHNESS,
    bore=s.BORE,
    reynolds=s.REYNOLDS,
)
def haaland(*, roughness, bore, reynolds):
    """Darcy f, Haaland."""
    return 1 / (-1.8 * np.log10((roughness / (3.7 * bore)) ** 1.11 + 6.9 / reynolds)) ** 2


@equation(
    gives=s.FACTOR,
    source=COLEBROOK_1939,
    valid="Re ≥ 4 000, ε/D ≤ 0.05",
    factor=s.FACTOR,
    roughness=s.ROUGHNESS,
    bore=s.BORE,
    reynolds=s.REYNOLDS,
)
def colebrook_white_residual(*, factor, roughness, bore, reynolds):
    """Colebrook–White, zero at the factor."""
    return 1 / np.sqrt(factor) + 2 * np.log10(roughness / (3.7 * bore) + 2.51 / (reynolds * np.sqrt(factor)))


colebrook_white = Implicit(
    name="colebrook_white",
    title="Darcy f, Colebrook–White",
    residual=colebrook_white_residual,
    unknown="factor",
    gives=s.FACTOR,
    start=haaland,
)

ROUGH_PIPE_LAWS: dict[str, Law] = {
    "colebrook-white": colebrook_white,
    "swamee-jain": swamee_jain,
    "haaland": haaland,
}
"""Laws that take a roughness height and hold above the transition. A new one is a line here."""

LAW_NAMES = (*ROUGH_PIPE_LAWS, "fixed", *EMPIRICAL_LAWS)
"""Every friction law, as written in ``friction`` and ``law``."""

_WITHOUT_FACTOR = dict.fromkeys(EMPIRICAL_LAWS)
"""Laws for which no factor is defined."""

AT_TURBULENT_LIMIT = Choice(
    "factor_turbulent", "Darcy f of the law at Re_T", "by", {**ROUGH_PIPE_LAWS, "fixed": None, **_WITHOUT_FACTOR}
)


def _regimes(law: Law) -> Regimes:
    return Regimes(
        name="friction_factor",
        title="Darcy f",
        by="reynolds",
        bounds=(Bound(0.0, strict=True), Bound("laminar_below"), Bound("turbulent_above")),
        laws=(None, laminar_factor, transition_factor, law),
        labels=("at rest", "laminar", "transition", "turbulent"),
    )


FRICTION_FACTOR = Choice(
    "friction_factor",
    "Darcy f",
    "by",
    {**{name: _regimes(law) for name, law in ROUGH_PIPE_LAWS.items()}, "fixed": fixed, **_WITHOUT_FACTOR},
)

_LOSS = Regimes(
    name="friction_loss",
    title="Friction loss",
    by="reynolds",
    bounds=(Bound("laminar_below"),),
    laws=(hagen_poiseuille, darcy_weisbach),
    labels=("laminar", "above laminar"),
)

FRICTION_LOSS = Choice(
    "friction_loss",
    "Friction loss",
    "by",
    {**dict.fromkeys(ROUGH_PIPE_LAWS, _LOSS), "fixed": darcy_weisbach, **EMPIRICAL_LAWS},
)


@equation(
    gives=s.FACTOR_EQUIVALENT,
    source=WEISBACH_1845,
    valid="water in motion; for comparing an empirical law with Darcy–Weisbach",
    friction_loss=s.FRICTION_LOSS,
    bore=s.BORE,
    length=s.LENGTH,
    gravity=s.GRAVITY,
    velocity=s.VELOCITY,
)
def equivalent_factor(*, friction_loss, bore, length, gravity, velocity):
    """Darcy f that gives the same loss."""
    return friction_loss * (bore / length) * (2 * gravity / (velocity * np.abs(velocity)))


@equation(
    gives=s.GRADIENT,
    source=WEISBACH_1845,
    valid="uniform pipe",
    friction_loss=s.FRICTION_LOSS,
    length=s.LENGTH,
)
def friction_gradient(*, friction_loss, length):
    """Friction gradient."""
    return np.abs(friction_loss) / length


@equation(
    gives=Symbol("N", kinds.NUMBER, "length in which friction takes one unit of head"),
    source=DEFINITION,
    valid="water in motion",
    length=s.LENGTH,
    friction_loss=s.FRICTION_LOSS,
)
def one_in_length(*, length, friction_loss):
    """Friction gradient, as one in N."""
    return length / np.abs(friction_loss)


@equation(
    gives=Symbol("S_m", kinds.NUMBER, "share of fittings and ends in the head lost"),
    source=DEFINITION,
    valid="water in motion",
    fitting_loss=s.FITTING_LOSS,
    head_loss=s.HEAD_LOSS,
)
def share_of_fittings(*, fitting_loss, head_loss):
    """Share of fittings in the loss."""
    return fitting_loss / head_loss


def in_motion(law: Equation) -> Regimes:
    """Return a law that holds where water moves; at rest it defines no value."""
    return Regimes(
        name=law.name,
        title=law.title,
        by="reynolds",
        bounds=(Bound(0.0, strict=True),),
        laws=(None, law),
        labels=("at rest", "in motion"),
    )


ONE_IN = in_motion(one_in_length)
FITTING_SHARE = in_motion(share_of_fittings)
EQUIVALENT_FACTOR = Choice(
    "equivalent_factor",
    "Darcy f that gives the same loss",
    "by",
    {**dict.fromkeys((*ROUGH_PIPE_LAWS, "fixed")), **dict.fromkeys(EMPIRICAL_LAWS, in_motion(equivalent_factor))},
)
"""For laws that know no Darcy f; the others have their own."""

"""Heads, losses and pressures along a pipe: the balance of energy."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

from calc.equation import Reference, equation
from calc.physics import symbols as s

BERNOULLI_1738 = Reference("Bernoulli 1738", "D. Bernoulli, Hydrodynamica, Dulsecker, 1738")
HYDROSTATICS = Reference("hydrostatics", "Law of hydrostatics, incompressible liquid")


@equation(
    gives=s.HEAD_LOSS,
    source=BERNOULLI_1738,
    valid="steady flow",
    friction_loss=s.FRICTION_LOSS,
    fitting_loss=s.FITTING_LOSS,
)
def head_loss(*, friction_loss, fitting_loss):
    """Head lost in a branch."""
    return friction_loss + fitting_loss


@equation(gives=s.HEAD_LOSS, source=BERNOULLI_1738, valid="nothing flows", head_from=s.HEAD_FROM, head_to=s.HEAD_TO)
def head_across(*, head_from, head_to):
    """Difference of head across a shut pipe."""
    return head_from - head_to


@equation(
    gives=s.CLOSING_ERROR,
    source=BERNOULLI_1738,
    valid="steady flow",
    head_from=s.HEAD_FROM,
    head_to=s.HEAD_TO,
    head_loss=s.HEAD_LOSS,
)
def closing_error(*, head_from, head_to, head_loss):
    """Energy closing error along a branch."""
    return head_from - head_to - head_loss


@equation(
    gives=s.PRESSURE_HEAD,
    source=HYDROSTATICS,
    valid="gauge; velocity head not deducted",
    head=s.HEAD,
    elevation=s.ELEVATION,
)
def pressure_head(*, head, elevation):
    """Pressure head at a node."""
    return head - elevation


@equation(
    gives=s.PRESSURE,
    source=HYDROSTATICS,
    valid="gauge",
    density=s.DENSITY,
    gravity=s.GRAVITY,
    pressure_head=s.PRESSURE_HEAD,
)
def pressure(*, density, gravity, pressure_head):
    """Pressure at a node."""
    return density * gravity * pressure_head

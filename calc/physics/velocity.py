"""Mean velocity, Reynolds number and velocity head."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc.equation import Reference, equation
from calc.physics import symbols as s

DEFINITION = Reference("definition", "Definition")
REYNOLDS_1883 = Reference(
    "Reynolds 1883",
    "O. Reynolds, An experimental investigation of the circumstances which determine whether the motion of "
    "water shall be direct or sinuous, Phil. Trans. Royal Society 174, 1883",
)


@equation(
    gives=s.FLOW_EACH,
    source=DEFINITION,
    valid="identical pipes side by side",
    flow=s.FLOW,
    parallel=s.PARALLEL,
)
def flow_each(*, flow, parallel):
    """Flow in each pipe."""
    return flow / parallel


@equation(gives=s.VELOCITY, source=DEFINITION, valid="full pipe", flow_each=s.FLOW_EACH, bore=s.BORE)
def mean_velocity(*, flow_each, bore):
    """Mean velocity."""
    return 4 * flow_each / (np.pi * bore**2)


@equation(gives=s.SPEED, source=DEFINITION, valid="any flow", velocity=s.VELOCITY)
def speed(*, velocity):
    """Velocity without its sign."""
    return np.abs(velocity)


@equation(
    gives=s.REYNOLDS,
    source=REYNOLDS_1883,
    valid="round pipe",
    velocity=s.VELOCITY,
    bore=s.BORE,
    viscosity=s.VISCOSITY,
)
def reynolds_number(*, velocity, bore, viscosity):
    """Reynolds number."""
    return np.abs(velocity) * bore / viscosity


@equation(
    gives=s.VELOCITY_HEAD,
    source=DEFINITION,
    valid="uniform velocity over the section (energy coefficient 1)",
    velocity=s.VELOCITY,
    gravity=s.GRAVITY,
)
def velocity_head(*, velocity, gravity):
    """Velocity head."""
    return velocity**2 / (2 * gravity)

"""Losses at fittings and pipe ends, by loss coefficients on a stated velocity head."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc.equation import Bound, Reference, Regimes, equation
from calc.physics import symbols as s

PRACTICE = Reference("practice", "Loss coefficient on the velocity head in the fitting's own bore; common practice")


@equation(
    gives=s.COEFFICIENT,
    source=PRACTICE,
    valid="flow from 'from' to 'to'",
    coefficient_forward=s.COEFFICIENT_FORWARD,
)
def forward_coefficient(*, coefficient_forward):
    """Loss coefficient, flow forward."""
    return coefficient_forward


@equation(
    gives=s.COEFFICIENT,
    source=PRACTICE,
    valid="flow from 'to' to 'from'",
    coefficient_reverse=s.COEFFICIENT_REVERSE,
)
def reverse_coefficient(*, coefficient_reverse):
    """Loss coefficient, flow in reverse."""
    return coefficient_reverse


COEFFICIENT = Regimes(
    name="coefficient",
    title="Loss coefficient for the direction of flow",
    by="flow_each",
    bounds=(Bound(0.0),),
    laws=(reverse_coefficient, forward_coefficient),
    labels=("in reverse", "forward"),
)


@equation(
    gives=s.FITTING_LOSS,
    source=PRACTICE,
    valid="turbulent flow, fittings far enough apart not to disturb one another",
    count=s.COUNT,
    coefficient=s.COEFFICIENT,
    velocity=s.VELOCITY,
    gravity=s.GRAVITY,
)
def fitting_loss(*, count, coefficient, velocity, gravity):
    """Loss at a fitting."""
    return count * coefficient * (velocity * np.abs(velocity) / (2 * gravity))

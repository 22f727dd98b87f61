"""Greatest and least mean velocity in a pipe."""

from __future__ import annotations

from typing import TypeVar

from calc.criteria.criterion import Criterion, Outcome, margin_above, margin_below
from calc.equation import Evaluator
from calc.kinds import VELOCITY
from calc.physics.velocity import speed

T = TypeVar("T")


def _speed(on: Evaluator[T], outcome: Outcome[T]) -> T:
    return on.apply("pipes.speed", speed, velocity=outcome.velocity)


VELOCITY_MAX = Criterion("velocity-max", "Greatest velocity", "pipes", "at most", {VELOCITY: _speed}, margin_below)
VELOCITY_MIN = Criterion("velocity-min", "Least velocity", "pipes", "at least", {VELOCITY: _speed}, margin_above)

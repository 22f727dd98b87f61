"""Greatest friction gradient in a pipe."""

from __future__ import annotations

from typing import TypeVar

from calc.criteria.criterion import Criterion, Outcome, margin_below
from calc.equation import Evaluator
from calc.kinds import GRADIENT
from calc.physics.friction import friction_gradient

T = TypeVar("T")


def _gradient(on: Evaluator[T], outcome: Outcome[T]) -> T:
    return on.apply(
        "pipes.friction_gradient",
        friction_gradient,
        friction_loss=outcome.friction_loss,
        length=outcome.length,
    )


GRADIENT_MAX = Criterion(
    "gradient-max",
    "Greatest friction gradient",
    "pipes",
    "at most",
    {GRADIENT: _gradient},
    margin_below,
)

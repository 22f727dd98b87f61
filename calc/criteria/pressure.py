"""Least and greatest pressure at a junction, judged as pressure head."""

from __future__ import annotations

from typing import TypeVar

from calc.criteria.criterion import Criterion, Outcome, margin_above, margin_below
from calc.equation import Evaluator
from calc.kinds import HEAD, PRESSURE

T = TypeVar("T")


def _pressure_head(on: Evaluator[T], outcome: Outcome[T]) -> T:  # noqa: ARG001 - the form of every criterion
    return outcome.pressure_head


PRESSURE_MIN = Criterion(
    "pressure-min",
    "Least pressure",
    "junctions",
    "at least",
    (HEAD, PRESSURE),
    _pressure_head,
    margin_above(HEAD),
)
PRESSURE_MAX = Criterion(
    "pressure-max",
    "Greatest pressure",
    "junctions",
    "at most",
    (HEAD, PRESSURE),
    _pressure_head,
    margin_below(HEAD),
)

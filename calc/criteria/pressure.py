"""Least and greatest pressure at a junction, judged in the kind in which the limit is given: a head or a pressure."""

from __future__ import annotations

from typing import TypeVar

from calc.criteria.criterion import Criterion, Outcome, margin_above, margin_below
from calc.equation import Evaluator
from calc.kinds import HEAD, PRESSURE

T = TypeVar("T")


def _pressure_head(on: Evaluator[T], outcome: Outcome[T]) -> T:  # noqa: ARG001 - the form of every criterion
    return outcome.pressure_head


def _pressure(on: Evaluator[T], outcome: Outcome[T]) -> T:  # noqa: ARG001 - the form of every criterion
    return outcome.pressure


_VALUES = {HEAD: _pressure_head, PRESSURE: _pressure}

PRESSURE_MIN = Criterion(
    "pressure-min",
    "Least pressure",
    "junctions",
    "at least",
    _VALUES,
    margin_above,
)
PRESSURE_MAX = Criterion(
    "pressure-max",
    "Greatest pressure",
    "junctions",
    "at most",
    _VALUES,
    margin_below,
)

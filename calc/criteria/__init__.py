"""Criteria: limits that a project sets, each a law on results with a margin that is positive when it is met.

Limits are inputs with a source, never defaults. A criterion is written against an `Evaluator`, so that
studies can judge arrays and the accountant ledger columns. Criteria are independent of one another; a new one
is a file here and a line in ``ALL``.
"""

from calc.criteria.criterion import Criterion, Outcome
from calc.criteria.gradient import GRADIENT_MAX
from calc.criteria.pressure import PRESSURE_MAX, PRESSURE_MIN
from calc.criteria.velocity import VELOCITY_MAX, VELOCITY_MIN

ALL: tuple[Criterion, ...] = (VELOCITY_MAX, VELOCITY_MIN, PRESSURE_MIN, PRESSURE_MAX, GRADIENT_MAX)
"""Every criterion, in the order in which packages list them."""

__all__ = ["ALL", "Criterion", "Outcome"]

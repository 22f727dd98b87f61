"""What every criterion declares."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any, Generic, TypeVar

from calc.equation import Equation, Reference, Symbol, equation
from calc.kinds import Kind

T = TypeVar("T")

PROJECT_CRITERION = Reference("project criterion", "Limit set by the project")


@dataclass(frozen=True)
class Outcome(Generic[T]):
    """The results that criteria judge.

    Rows are pipes for the first three, junctions with an elevation for the last two.
    """

    velocity: T
    friction_loss: T
    length: T
    pressure_head: T
    pressure: T


@dataclass(frozen=True)
class Criterion:
    """A limit on one quantity of one group of components.

    Attributes
    ----------
    id : str
        As written in ``criteria``.
    title : str
        In the trade's words.
    group : str
        The components it applies to.
    sense : str
        ``at most`` or ``at least``.
    values : mapping of Kind to callable
        By each kind in which the limit may be given, from an evaluator and an `Outcome` to the quantity judged, of
        that same kind; never negative for speeds and gradients.
    margin : callable
        From a kind to the equation of the margin in it, from ``value`` and ``limit``; the criterion is met when it
        is not negative.
    """

    id: str
    title: str
    group: str
    sense: str
    values: Mapping[Kind, Callable[[Any, Outcome[Any]], Any]]
    margin: Callable[[Kind], Equation]

    @property
    def kinds(self) -> tuple[Kind, ...]:
        """The kinds in which the limit may be given."""
        return tuple(self.values)


@cache
def margin_below(kind: Kind) -> Equation:
    """Return the margin of a value under a limit, for a kind of quantity."""

    @equation(
        gives=Symbol("M", kind, "margin, positive when the criterion is met"),
        source=PROJECT_CRITERION,
        valid="value at most the limit",
        limit=Symbol("x_lim", kind, "limit"),
        value=Symbol("x", kind, "value judged"),
    )
    def margin_below_limit(*, limit: Any, value: Any) -> Any:  # noqa: ANN401
        """Margin below a limit."""
        return limit - value

    return margin_below_limit


@cache
def margin_above(kind: Kind) -> Equation:
    """Return the margin of a value over a limit, for a kind of quantity."""

    @equation(
        gives=Symbol("M", kind, "margin, positive when the criterion is met"),
        source=PROJECT_CRITERION,
        valid="value at least the limit",
        value=Symbol("x", kind, "value judged"),
        limit=Symbol("x_lim", kind, "limit"),
    )
    def margin_above_limit(*, value: Any, limit: Any) -> Any:  # noqa: ANN401
        """Margin above a limit."""
        return value - limit

    return margin_above_limit

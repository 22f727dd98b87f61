"""How bracketing chooses the next trial head: one equation for each rule, from earlier rows of the table.

A checker repeats a row by putting the heads and imbalances of the rows it cites into its rule. Point a is
the latest trial kept, b the end of the bracket across the root from it, c the point dropped last.
"""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc import kinds
from calc.equation import Equation, Reference, Symbol, equation
from calc.physics.symbols import HEAD
from calc.solve.solution import Trials

LEVEL = Symbol("z_r", kinds.ELEVATION, "level of a reservoir")
START = Symbol("H_0", kinds.HEAD, "head given to start from")
HEAD_LOW = Symbol("H_low", kinds.HEAD, "low end of the bracket")
HEAD_HIGH = Symbol("H_high", kinds.HEAD, "high end of the bracket")
HEAD_A = Symbol("H_a", kinds.HEAD, "trial head at point a, the latest kept")
HEAD_B = Symbol("H_b", kinds.HEAD, "trial head at point b, across the root")
HEAD_C = Symbol("H_c", kinds.HEAD, "trial head at point c, dropped last")
IMBALANCE_A = Symbol("F_a", kinds.FLOW, "imbalance at point a")
IMBALANCE_B = Symbol("F_b", kinds.FLOW, "imbalance at point b")
IMBALANCE_C = Symbol("F_c", kinds.FLOW, "imbalance at point c")
STEP = Symbol("s", kinds.HEAD, "step of the trial head")

BRACKETING = Reference("bracketing", "Bracketing of the one root of a function that falls throughout; common practice")
FALSE_POSITION = Reference("false position", "Rule of false position; common practice")
CHANDRUPATLA_1997 = Reference(
    "Chandrupatla 1997",
    "T. R. Chandrupatla, A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear "
    "function without using derivatives, Advances in Engineering Software 28(3), 1997",
)


@equation(gives=HEAD, source=BRACKETING, valid="any level of a reservoir at the junction", level=LEVEL)
def at_level(*, level):
    """Trial at the level of a reservoir."""
    return level


@equation(gives=HEAD, source=BRACKETING, valid="any head", start=START)
def as_given(*, start):
    """Trial at the head given in the inputs."""
    return start


@equation(gives=HEAD, source=BRACKETING, valid="s doubles each time", head_low=HEAD_LOW, step=STEP)
def widened_below(*, head_low, step):
    """Trial below the lowest head so far."""
    return head_low - step


@equation(gives=HEAD, source=BRACKETING, valid="s doubles each time", head_high=HEAD_HIGH, step=STEP)
def widened_above(*, head_high, step):
    """Trial above the highest head so far."""
    return head_high + step


@equation(
    gives=HEAD,
    source=FALSE_POSITION,
    valid="F_a and F_b of opposite signs",
    head_a=HEAD_A,
    head_b=HEAD_B,
    imbalance_a=IMBALANCE_A,
    imbalance_b=IMBALANCE_B,
)
def false_position(*, head_a, head_b, imbalance_a, imbalance_b):
    """Trial where the line through two points crosses zero."""
    return head_a + (head_b - head_a) * (imbalance_a / (imbalance_a - imbalance_b))


@equation(
    gives=HEAD,
    source=CHANDRUPATLA_1997,
    valid="F_a and F_b of opposite signs, the three points on a curve that a parabola follows",
    head_a=HEAD_A,
    head_b=HEAD_B,
    head_c=HEAD_C,
    imbalance_a=IMBALANCE_A,
    imbalance_b=IMBALANCE_B,
    imbalance_c=IMBALANCE_C,
)
def inverse_quadratic(*, head_a, head_b, head_c, imbalance_a, imbalance_b, imbalance_c):
    """Trial where the parabola in F through three points crosses zero."""
    share_b = imbalance_a / (imbalance_b - imbalance_a) * (imbalance_c / (imbalance_b - imbalance_c))
    share_c = imbalance_a / (imbalance_c - imbalance_a) * (imbalance_b / (imbalance_c - imbalance_b))
    return head_a + (head_b - head_a) * share_b + (head_c - head_a) * share_c


@equation(gives=HEAD, source=BRACKETING, valid="any bracket", head_a=HEAD_A, head_b=HEAD_B)
def halved(*, head_a, head_b):
    """Trial half-way between two points."""
    return (head_a + head_b) / 2


@equation(gives=HEAD, source=BRACKETING, valid="root nearer than s", head_a=HEAD_A, step=STEP)
def closed_below(*, head_a, step):
    """Trial just below a point, to close the bracket."""
    return head_a - step


@equation(gives=HEAD, source=BRACKETING, valid="root nearer than s", head_a=HEAD_A, step=STEP)
def closed_above(*, head_a, step):
    """Trial just above a point, to close the bracket."""
    return head_a + step


@dataclass(frozen=True)
class Rule:
    """A rule of the trial table.

    Attributes
    ----------
    equation : Equation
        Gives the trial head.
    places : tuple
        For each input of the equation its name, the column of the table (``level`` and ``start`` are inputs
        of the case) and where the row stands in ``uses``; None for the row itself.
    """

    equation: Equation
    places: tuple[tuple[str, str, int | None], ...]


_HEADS = tuple((f"head_{letter}", "head", place) for place, letter in enumerate("abc"))
_IMBALANCES = tuple((f"imbalance_{letter}", "imbalance", place) for place, letter in enumerate("abc"))
_STEP = ("step", "step", None)

RULES: dict[str, Rule] = {
    "level": Rule(at_level, (("level", "level", None),)),
    "start": Rule(as_given, (("start", "start", None),)),
    "widened below": Rule(widened_below, (("head_low", "head", 0), _STEP)),
    "widened above": Rule(widened_above, (("head_high", "head", 0), _STEP)),
    "false position": Rule(false_position, (*_HEADS[:2], *_IMBALANCES[:2])),
    "inverse quadratic": Rule(inverse_quadratic, (*_HEADS, *_IMBALANCES)),
    "halved": Rule(halved, _HEADS[:2]),
    "closed below": Rule(closed_below, (_HEADS[0], _STEP)),
    "closed above": Rule(closed_above, (_HEADS[0], _STEP)),
}
"""Every rule by the word that the table prints."""


def inputs_of(trials: Trials, row: int, level: float, start: float) -> dict[str, float]:
    """Return what the rule of a row takes, by name, read from the rows it cites.

    Parameters
    ----------
    trials : Trials
        The table.
    row : int
        The row to repeat.
    level, start : float
        Level of the row's reservoir and head given to start from, m; read by those two rules alone.
    """
    given = {"level": level, "start": start}
    taken = {}
    for name, column, place in RULES[trials.rule[row]].places:
        at = row if place is None else trials.uses[row][place]
        taken[name] = given[column] if column in given else float(np.asarray(getattr(trials, column))[at])
    return taken

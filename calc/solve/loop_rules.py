"""How a loop is corrected: one equation for each figure of its table, from the flows and losses of its pipes.

A checker repeats a correction by putting the flows and losses printed for the pipes of the loop into these rules. All
flows and losses of a loop are reckoned in its sense: positive where water goes the way in which the loop is walked.
"""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

from __future__ import annotations

from typing import TypeVar

import numpy as np

from calc import kinds
from calc.components.pipe import PipeResults, PipeTerms, TransitionLimits
from calc.equation import Bound, Choice, Equation, Evaluator, Reference, Regimes, Symbol, equation
from calc.physics import symbols as s
from calc.physics.friction import ROUGH_PIPE_LAWS

EXPONENT = Symbol("n_h", kinds.NUMBER, "power of the flow to which the head lost goes")
RATE = Symbol("r_h", kinds.LOSS_RATE, "rise of the head lost with the flow")
LOSS_SUM = Symbol("Σ_h", kinds.HEAD, "head lost along a path, in its sense")
HIGHER = Symbol("z_1", kinds.ELEVATION, "level where a path begins")
LOWER = Symbol("z_2", kinds.ELEVATION, "level where a path ends")
EXCESS = Symbol("E", kinds.HEAD, "head lost round a loop in its sense, of a path less the fall of level along it")
RATE_SUM = Symbol("Σ_r", kinds.LOSS_RATE, "sum of the rises round a loop")
CORRECTION = Symbol("ΔQ", kinds.FLOW, "correction of the flows of a loop, in its sense")

CROSS_1936 = Reference(
    "Cross 1936",
    "H. Cross, Analysis of flow in networks of conduits or conductors, Bulletin 286, Engineering Experiment Station, "
    "University of Illinois, 1936",
)
EXPONENTS = Reference(
    "exponents", "Exponents of flow in the laws as stated, friction and fittings weighted by their losses"
)
QUADRATIC = 2.0
"""Exponent of a loss that goes with the square of the flow: f as found, Manning, a fixed f, fittings."""


@equation(
    gives=EXPONENT,
    source=EXPONENTS,
    valid="water in motion, Re below Re_L",
    friction_loss=s.FRICTION_LOSS,
    head_loss=s.HEAD_LOSS,
)
def laminar_exponent(*, friction_loss, head_loss):
    """Exponent of the loss in laminar flow."""
    return 2 - friction_loss / head_loss


@equation(
    gives=EXPONENT,
    source=EXPONENTS,
    valid="Re from Re_L to Re_T",
    friction_loss=s.FRICTION_LOSS,
    head_loss=s.HEAD_LOSS,
    factor_laminar=s.FACTOR_LAMINAR,
    factor_turbulent=s.FACTOR_TURBULENT,
    laminar_below=s.LAMINAR_BELOW,
    turbulent_above=s.TURBULENT_ABOVE,
)
def transition_exponent(*, friction_loss, head_loss, factor_laminar, factor_turbulent, laminar_below, turbulent_above):
    """Exponent of the loss in the transition."""
    rise = np.log(factor_turbulent / factor_laminar) / np.log(turbulent_above / laminar_below)
    return 2 + friction_loss / head_loss * rise


@equation(
    gives=EXPONENT,
    source=EXPONENTS,
    valid="water in motion",
    friction_loss=s.FRICTION_LOSS,
    head_loss=s.HEAD_LOSS,
    hazen_williams_flow_exponent=s.HAZEN_WILLIAMS_FLOW_EXPONENT,
)
def hazen_williams_exponent(*, friction_loss, head_loss, hazen_williams_flow_exponent):
    """Exponent of the loss by Hazen–Williams."""
    return 2 - friction_loss / head_loss * (2 - hazen_williams_flow_exponent)


_BY_REGIME = Regimes(
    name="loss_exponent",
    title="Exponent of the loss",
    by="reynolds",
    bounds=(Bound("laminar_below"), Bound("turbulent_above")),
    laws=(laminar_exponent, transition_exponent, None),
    labels=("laminar", "transition", "turbulent"),
)

LOSS_EXPONENT = Choice(
    "loss_exponent",
    "Exponent of the loss",
    "by",
    {
        **dict.fromkeys(ROUGH_PIPE_LAWS, _BY_REGIME),
        "fixed": None,
        "hazen-williams": hazen_williams_exponent,
        "manning": None,
    },
)
"""Where it defines none, the exponent is `QUADRATIC`."""

T = TypeVar("T")


def loss_exponent(on: Evaluator[T], pipe: PipeTerms[T], limits: TransitionLimits[T], results: PipeResults[T]) -> T:
    """Return the exponent of the loss of each pipe, where its law defines one.

    Parameters
    ----------
    on : Evaluator
        Arrays in the solver, columns in the ledger.
    pipe, limits : PipeTerms, TransitionLimits
        Inputs of the chain, in SI.
    results : PipeResults
        What the chain gave for them; their Reynolds numbers and losses are taken.
    """
    return on.apply(
        "pipes.loss_exponent",
        LOSS_EXPONENT,
        by=pipe.law,
        reynolds=results.reynolds,
        laminar_below=pipe.laminar_below,
        turbulent_above=pipe.turbulent_above,
        friction_loss=results.friction_loss,
        head_loss=results.head_loss,
        factor_laminar=limits.laminar,
        factor_turbulent=limits.turbulent,
        hazen_williams_flow_exponent=pipe.constants.hazen_williams_flow_exponent,
    )


@equation(
    gives=RATE,
    source=CROSS_1936,
    valid="water in motion; a pipe at rest adds nothing to the sum",
    exponent=EXPONENT,
    head_loss=s.HEAD_LOSS,
    flow=s.FLOW,
)
def loss_rate(*, exponent, head_loss, flow):
    """Rise of the head lost with the flow."""
    return exponent * head_loss / flow


@equation(
    gives=EXCESS,
    source=CROSS_1936,
    valid="a path from one reservoir to another",
    loss=LOSS_SUM,
    higher=HIGHER,
    lower=LOWER,
)
def path_excess(*, loss, higher, lower):
    """Head lost along a path beyond the fall of level."""
    return loss - (higher - lower)


@equation(
    gives=CORRECTION,
    source=CROSS_1936,
    valid="loops corrected one after the other, each with the flows just corrected",
    excess=EXCESS,
    rate_sum=RATE_SUM,
)
def loop_correction(*, excess, rate_sum):
    """Correction of the flows of a loop."""
    return -excess / rate_sum


LOOP_RULES: tuple[Equation, ...] = (
    laminar_exponent,
    transition_exponent,
    hazen_williams_exponent,
    loss_rate,
    path_excess,
    loop_correction,
)
"""Every rule of loop correction, in the order in which a table is filled."""

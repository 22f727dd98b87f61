"""A pipe: its fields, and the chain of laws from its flow to the head it loses."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Generic, TypeVar

from calc.components.fields import Count, Ends, Field, Fittings, Flag, Name, Node, Quantity, Schema, Word
from calc.equation import Evaluator, Labels
from calc.equation.evaluation import Rows
from calc.kinds import BORE, HEAD, LENGTH, NUMBER, PRESSURE, ROUGHNESS, THICKNESS
from calc.physics import energy, fitting, friction, velocity

SET_BORE = "set 'bore' in the case, as a plain bore such as '384.4 mm'"

SCHEMA = Schema(
    "pipes",
    "pipe",
    (
        Field("from", Node(), required=True, words="node at which the pipe begins"),
        Field("to", Node(), required=True, words="node at which the pipe ends"),
        Field("length", Quantity(LENGTH, above=0.0), required=True, words="length along the pipe"),
        Field("bore", Quantity(BORE, above=0.0), words="bore"),
        Field("size", Name(), words="nominal size in the standard's table", example="DN400", fixed=SET_BORE),
        Field("standard", Name(), words="standard of the pipe", example="EN 545", fixed=SET_BORE),
        Field("class", Name(), words="class of the pipe in the standard's table", example="C40", fixed=SET_BORE),
        Field("outside_diameter", Quantity(BORE, above=0.0), words="outside diameter", fixed=SET_BORE),
        Field("wall", Quantity(THICKNESS, above=0.0), words="wall thickness", example="6 mm", fixed=SET_BORE),
        Field("lining", Quantity(THICKNESS, at_least=0.0), words="lining thickness", example="5 mm", fixed=SET_BORE),
        Field("roughness", Quantity(ROUGHNESS, at_least=0.0, table="roughness"), words="roughness height"),
        Field("friction_factor", Quantity(NUMBER, above=0.0), words="Darcy f, fixed", example="0.02"),
        Field(
            "hazen_williams_c",
            Quantity(NUMBER, at_least=10.0, at_most=200.0, table="hazen-williams"),
            words="Hazen–Williams C",
            example="130",
        ),
        Field(
            "manning_n",
            Quantity(NUMBER, at_least=0.005, at_most=0.1, table="manning"),
            words="Manning n",
            example="0.011",
        ),
        Field("law", Word(friction.LAW_NAMES), words="friction law"),
        Field("ends", Ends(), words="losses at reservoir ends"),
        Field("fittings", Fittings(), words="fittings"),
        Field("parallel", Count(), words="identical pipes in parallel"),
        Field("open", Flag(), words="whether it is open"),
        Field("pressure_rating", Quantity(PRESSURE, above=0.0), words="pressure rating"),
    ),
    excludes=(
        ("bore", "size"),
        ("bore", "outside_diameter"),
        ("bore", "wall"),
        ("bore", "lining"),
        ("size", "outside_diameter"),
    ),
    either=(("bore", "size", "outside_diameter"),),
)

LAW_INPUT = {
    **dict.fromkeys(friction.ROUGH_PIPE_LAWS, "roughness"),
    "fixed": "friction_factor",
    "hazen-williams": "hazen_williams_c",
    "manning": "manning_n",
}
"""The field that each friction law needs."""

LAW_CONSTANTS = {"hazen-williams": "hazen_williams", "manning": "manning"}
"""The group under ``constants`` that an empirical law takes."""

T = TypeVar("T")


@dataclass(frozen=True)
class FittingTerms(Generic[T]):
    """Inputs of the fittings and ends of all pipes, one row each; ``pipe`` is the row of its pipe."""

    rows: tuple[str, ...]
    pipe: Rows
    count: T
    coefficient_forward: T
    coefficient_reverse: T
    bore: T


@dataclass(frozen=True)
class EmpiricalConstants(Generic[T]):
    """Constants of the empirical laws in SI, one row for all; NaN or absent where no pipe follows the law."""

    hazen_williams_coefficient: T
    hazen_williams_flow_exponent: T
    hazen_williams_bore_exponent: T
    manning_coefficient: T
    manning_bore_exponent: T


@dataclass(frozen=True)
class PipeTerms(Generic[T]):
    """Inputs of the chain for all pipes, one row each; from ``viscosity`` on there is one row for all.

    Attributes
    ----------
    roughness, friction_factor, hazen_williams_c, manning_n : T
        NaN (arrays) or absent (columns) where the law does not use it.
    law : Labels
        The friction law of each pipe.
    """

    rows: tuple[str, ...]
    length: T
    bore: T
    roughness: T
    friction_factor: T
    hazen_williams_c: T
    manning_n: T
    parallel: T
    law: Labels
    fittings: FittingTerms[T]
    viscosity: T
    gravity: T
    laminar_below: T
    turbulent_above: T
    constants: EmpiricalConstants[T]


@dataclass(frozen=True)
class TransitionLimits(Generic[T]):
    """Darcy f at the two ends of the transition; the same for every flow."""

    laminar: T
    turbulent: T


@dataclass(frozen=True)
class PipeResults(Generic[T]):
    """What the chain gives, in its order.

    Losses and velocity carry the sign of the flow; flow is that of one of n parallel pipes.
    """

    flow_each: T
    velocity: T
    reynolds: T
    friction_factor: T
    friction_loss: T
    fitting_velocity: T
    fitting_coefficient: T
    each_fitting_loss: T
    fitting_loss: T
    head_loss: T


def transition_limits(on: Evaluator[T], pipe: PipeTerms[T]) -> TransitionLimits[T]:
    """Return Darcy f at the ends of the transition, for pipes whose law has one."""
    laminar = pipe.laminar_below  # read by no law unless some pipe has a transition
    if any(pipe.law.words[code] in friction.ROUGH_PIPE_LAWS for code in set(pipe.law.codes.tolist())):
        laminar = on.apply("constants.factor_laminar", friction.factor_at_laminar_limit, laminar_below=laminar)
    return TransitionLimits(
        laminar,
        on.apply(
            "pipes.factor_turbulent",
            friction.AT_TURBULENT_LIMIT,
            by=pipe.law,
            roughness=pipe.roughness,
            bore=pipe.bore,
            reynolds=pipe.turbulent_above,
        ),
    )


def losses(on: Evaluator[T], pipe: PipeTerms[T], limits: TransitionLimits[T], flow: T) -> PipeResults[T]:
    """Return the head that full pipes lose, and all that lies between, from their flows.

    Parameters
    ----------
    on : Evaluator
        Arrays in the solver, columns in the ledger.
    pipe : PipeTerms
        Inputs, in SI.
    limits : TransitionLimits
        From `transition_limits` on the same inputs.
    flow : T
        Flow of each row, total of its parallel pipes, m³/s, positive from ``from`` to ``to``.
    """
    each = on.apply("pipes.flow_each", velocity.flow_each, flow=flow, parallel=pipe.parallel)
    mean = on.apply("pipes.velocity", velocity.mean_velocity, flow_each=each, bore=pipe.bore)
    reynolds = on.apply(
        "pipes.reynolds", velocity.reynolds_number, velocity=mean, bore=pipe.bore, viscosity=pipe.viscosity
    )
    factor = on.apply(
        "pipes.darcy_f",  # not the word of the input, which stands beside it
        friction.FRICTION_FACTOR,
        by=pipe.law,
        reynolds=reynolds,
        roughness=pipe.roughness,
        bore=pipe.bore,
        friction_factor=pipe.friction_factor,
        laminar_below=pipe.laminar_below,
        turbulent_above=pipe.turbulent_above,
        factor_laminar=limits.laminar,
        factor_turbulent=limits.turbulent,
    )
    friction_loss = on.apply(
        "pipes.friction_loss",
        friction.FRICTION_LOSS,
        by=pipe.law,
        reynolds=reynolds,
        laminar_below=pipe.laminar_below,
        factor=factor,
        length=pipe.length,
        bore=pipe.bore,
        velocity=mean,
        gravity=pipe.gravity,
        viscosity=pipe.viscosity,
        flow_each=each,
        hazen_williams_c=pipe.hazen_williams_c,
        manning_n=pipe.manning_n,
        **vars(pipe.constants),
    )
    fitted = _fitting_losses(on, pipe, each)
    head = on.apply("pipes.head_loss", energy.head_loss, friction_loss=friction_loss, fitting_loss=fitted[-1])
    return PipeResults(each, mean, reynolds, factor, friction_loss, *fitted, head)


def _fitting_losses(on: Evaluator[T], pipe: PipeTerms[T], each: T) -> tuple[T, T, T, T]:
    part = pipe.fittings
    through = on.gather(each, part.pipe, part.rows)
    mean = on.apply("fittings.velocity", velocity.mean_velocity, flow_each=through, bore=part.bore)
    coefficient = on.apply(
        "fittings.coefficient",
        fitting.COEFFICIENT,
        flow_each=through,
        coefficient_forward=part.coefficient_forward,
        coefficient_reverse=part.coefficient_reverse,
    )
    loss = on.apply(
        "fittings.loss",
        fitting.fitting_loss,
        count=part.count,
        coefficient=coefficient,
        velocity=mean,
        gravity=pipe.gravity,
    )
    return mean, coefficient, loss, on.total("pipes.fitting_loss", HEAD, loss, part.pipe, pipe.rows)

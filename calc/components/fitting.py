"""A fitting: its fields, and the laws by which its coefficients follow from its form or its flow coefficient."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Generic, TypeVar

from calc.components.fields import Count, Field, Quantity, Schema, Word
from calc.components.stated import Stated
from calc.equation import Evaluator, Labels
from calc.kinds import ANGLE, BORE, FLOW, NUMBER
from calc.physics import coefficient

HALF_TURN = 3.141592653589794
"""180° in radians, and the last digit more: the bound itself is allowed."""

SCHEMA = Schema(
    "fittings",
    "fitting",
    (
        Field("kind", Word(()), words="kind in the shipped table, or bend, step or taper"),
        Field("K", Quantity(NUMBER, at_least=0.0), words="loss coefficient, flow forward"),
        Field("K_reverse", Quantity(NUMBER, at_least=0.0), words="loss coefficient, flow in reverse"),
        Field("Kv", Quantity(FLOW, at_least=1e-7, bare="m³/h"), words="Kv, flow at 1 bar; m³/h unless a unit stands"),
        Field("Cv", Quantity(FLOW, at_least=1e-7, bare="gpm"), words="Cv, flow at 1 psi; US gpm unless a unit stands"),
        Field(
            "angle",
            Quantity(ANGLE, above=0.0, at_most=HALF_TURN),
            words="angle through which a bend turns, or whole angle between the sides of a taper",
        ),
        Field(
            "radius_ratio",
            Quantity(NUMBER, at_least=0.5, at_most=100.0),
            words="radius of a bend's centreline over its bore",
            example="1.5",
        ),
        Field("onward_bore", Quantity(BORE, above=0.0), words="bore to which a step or taper leads, flow forward"),
        Field("count", Count(), words="number of like fittings"),
        Field("bore", Quantity(BORE, above=0.0), words="bore on which K stands, or before a change of bore"),
    ),
    excludes=(("kind", "K"), ("kind", "Kv"), ("kind", "Cv"), ("K", "Kv"), ("K", "Cv"), ("Kv", "Cv")),
    either=(("kind", "K", "Kv", "Cv"),),
)
"""The options of ``kind`` are the entries of the shipped table, which the reader supplies, and the computed kinds."""

NEEDS = {
    "bend": ("angle", "radius_ratio"),
    "step": ("onward_bore",),
    "taper": ("onward_bore", "angle"),
    "Kv": ("Kv",),
    "Cv": ("Cv",),
}
"""What each computed kind takes."""

FLOW_COEFFICIENTS = ("Kv", "Cv")
"""Computed kinds that are no words of ``kind``: their field says it."""

ON_ANY_BORE = ("bend",)
"""Computed kinds whose coefficient is the same on any bore."""

FORM_FIELDS = ("angle", "radius_ratio", "onward_bore")
"""Fields of which only a computed kind makes anything."""


def computed_kind(stated: Mapping[str, Stated]) -> str:
    """Return the computed kind of a fitting, by what is stated of it; empty where its coefficients are stated."""
    for name in FLOW_COEFFICIENTS:
        if name in stated:
            return name
    kind = stated["kind"].text if "kind" in stated else ""
    return kind if kind in NEEDS else ""


T = TypeVar("T")


@dataclass(frozen=True)
class FormTerms(Generic[T]):
    """What is stated of fittings of a computed kind, one row each; NaN or absent where a kind does not take it."""

    kind: Labels
    bore: T
    onward_bore: T
    angle: T
    radius_ratio: T
    Kv: T
    Cv: T


@dataclass(frozen=True)
class Coefficients(Generic[T]):
    """What follows, NaN or absent where nothing does: ``forward`` then holds both ways, and the bore itself serves."""

    forward: T
    reverse: T
    smaller_bore: T


def coefficients(on: Evaluator[T], part: FormTerms[T]) -> Coefficients[T]:
    """Return the loss coefficients of fittings of computed kinds, on the smaller bore where the bore changes.

    Parameters
    ----------
    on : Evaluator
        Arrays in the solver, columns in the ledger.
    part : FormTerms
        In SI; ``bore`` is that of the case.
    """
    kind, bore, onward = part.kind, part.bore, part.onward_bore
    smaller = on.apply("fittings.smaller_bore", coefficient.SMALLER_BORE, by=kind, bore=bore, onward_bore=onward)
    ratio = on.apply("fittings.bore_ratio", coefficient.BORE_RATIO, by=kind, bore=bore, onward_bore=onward)
    form = {"bore": bore, "onward_bore": onward, "bore_ratio": ratio, "angle": part.angle}
    forward = on.apply(
        "fittings.K",
        coefficient.FORWARD,
        by=kind,
        **form,
        radius_ratio=part.radius_ratio,
        Kv=part.Kv,
        Cv=part.Cv,
    )
    reverse = on.apply("fittings.K_reverse", coefficient.REVERSE, by=kind, **form)
    return Coefficients(forward, reverse, smaller)

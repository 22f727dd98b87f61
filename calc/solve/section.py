"""The section ``solver`` of a project: how its cases are to be solved."""

from __future__ import annotations

from calc.components import Field, Quantity, Word
from calc.kinds import ELEVATION, FLOW
from calc.project import Project
from calc.project.section import SectionSchema
from calc.solve.solution import METHODS, NARROWINGS, Settings

SOLVER = SectionSchema(
    "solver",
    (
        Field("method", Word(METHODS), words="way to solve; bracketing for one junction and newton else if not said"),
        Field("narrowing", Word(NARROWINGS), words="way to narrow a bracket", default=Settings().narrowing),
        Field(
            "tolerance",
            Quantity(FLOW, above=0.0),
            words="largest imbalance accepted at a junction",
            example="1e-6 L/s",
            default="1e-6 L/s",
        ),
    ),
    by_node=(Field("start", Quantity(ELEVATION), words="head to begin from"),),
    words="how the cases are solved; all of it may be left out",
)


def settings_of(project: Project) -> Settings:
    """Return the settings that a project states, the rest by default."""
    section = project.sections["solver"]
    plain = Settings()
    return Settings(
        method=section.text("method"),
        narrowing=section.text("narrowing", plain.narrowing),
        tolerance=section.number("tolerance") if "tolerance" in section.stated else plain.tolerance,
        start={part.id: part.number("value") for part in section.parts.get("start", ())},
    )

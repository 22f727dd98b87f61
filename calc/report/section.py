"""The section ``display`` of a project: units and paper of its package."""

from calc.components import Field, Word
from calc.project.section import SectionSchema
from calc.report.shown import SHOWN, SYSTEMS

DISPLAY = SectionSchema(
    "display",
    (
        Field("units", Word(SYSTEMS), words="system of units; each quantity may have a unit of its own", default="SI"),
        Field(
            "beside",
            Word(SYSTEMS),
            words="system of units of parallel columns beside results",
        ),
        *(Field(one.field, Word(tuple(one.spellings)), words=one.words) for one in SHOWN),
        Field("paper", Word(("A4", "Letter")), words="paper", default="A4"),
    ),
    words="units and paper of the package; what is given stays in the units in which it stands",
)

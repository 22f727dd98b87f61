"""The section ``display`` of a project: units and paper of its package."""

from calc.components import Field, Word
from calc.project.section import Later, SectionSchema

FLOW_UNITS = ("L/s", "m³/s", "m3/s", "m³/h", "m3/h", "ML/d")

DISPLAY = SectionSchema(
    "display",
    (
        Field("units", Word(("SI",)), words="system of units"),
        Field("flow", Word(FLOW_UNITS), words="unit of flow"),
        Field("paper", Word(("A4", "Letter")), words="paper"),
    ),
    later=(Later("units", "US", "state inputs in any unit; packages are printed in SI"),),
)

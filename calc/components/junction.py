"""A junction: where pipes meet, with an elevation and perhaps a withdrawal."""

from calc.components.fields import Field, Quantity, Schema
from calc.kinds import ELEVATION, FLOW

SCHEMA = Schema(
    "junctions",
    "junction",
    (
        Field("elevation", Quantity(ELEVATION), words="elevation of the pipe"),
        Field("withdrawal", Quantity(FLOW), words="flow withdrawn"),
        Field("inflow", Quantity(FLOW), words="flow brought in"),
    ),
    excludes=(("withdrawal", "inflow"),),
)

"""A reservoir: a body of water with a level that the calculation takes as given."""

from calc.components.fields import Field, Quantity, Schema
from calc.kinds import ELEVATION

SCHEMA = Schema(
    "reservoirs",
    "reservoir",
    (
        Field("level", Quantity(ELEVATION), required=True, words="water level"),
        Field("low", Quantity(ELEVATION), words="lowest operating level"),
        Field("high", Quantity(ELEVATION), words="highest operating level"),
    ),
)

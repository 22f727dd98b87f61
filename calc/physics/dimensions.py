"""The bore of a pipe from its outside dimensions."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

from calc.equation import Reference, equation
from calc.physics import symbols as s

DEFINITION = Reference("definition", "Definition")


@equation(
    gives=s.BORE,
    source=DEFINITION,
    valid="round pipe; wall and lining as the standard tabulates them, which may be nominal or least",
    outside_diameter=s.OUTSIDE_DIAMETER,
    wall=s.WALL,
    lining=s.LINING,
)
def bore_within(*, outside_diameter, wall, lining):
    """Bore within wall and lining."""
    return outside_diameter - 2 * (wall + lining)

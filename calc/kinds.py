"""Kinds of quantity: what a number measures, its SI unit and the words used to ask for one."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction


@dataclass(frozen=True, slots=True)
class Dimension:
    """Exponents of length, mass, time and temperature."""

    length: Fraction = Fraction(0)
    mass: Fraction = Fraction(0)
    time: Fraction = Fraction(0)
    temperature: Fraction = Fraction(0)

    def times(self, other: Dimension) -> Dimension:
        """Return the dimension of a product."""
        return Dimension(
            self.length + other.length,
            self.mass + other.mass,
            self.time + other.time,
            self.temperature + other.temperature,
        )

    def power(self, n: Fraction) -> Dimension:
        """Return the dimension of a power."""
        return Dimension(self.length * n, self.mass * n, self.time * n, self.temperature * n)

    def __str__(self) -> str:
        """Return the base units with their exponents, such as ``m³ s⁻¹``; ``1`` for a pure number."""
        raised = str.maketrans("0123456789-/", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻ᐟ")
        parts = zip(("m", "kg", "s", "K"), (self.length, self.mass, self.time, self.temperature), strict=True)
        written = [unit if power == 1 else unit + str(power).translate(raised) for unit, power in parts if power]
        return " ".join(written) or "1"


def _dimension(length: int = 0, mass: int = 0, time: int = 0, temperature: int = 0) -> Dimension:
    return Dimension(Fraction(length), Fraction(mass), Fraction(time), Fraction(temperature))


@dataclass(frozen=True, slots=True)
class Kind:
    """A kind of quantity.

    Attributes
    ----------
    name : str
        The word used in messages: "expected a length".
    unit : str
        SI unit, as printed; empty for a pure number.
    dimension : Dimension
        Exponents of the base units.
    example : str
        A quantity of this kind as a user would write it.
    """

    name: str
    unit: str
    dimension: Dimension
    example: str

    @property
    def phrase(self) -> str:
        """Return the name with its article: "a length", "an area"."""
        return f"{'an' if self.name[0] in 'aeiou' else 'a'} {self.name}"


NUMBER = Kind("pure number", "", _dimension(), "2.5")
LENGTH = Kind("length", "m", _dimension(1), "1850 m")
BORE = Kind("bore", "m", _dimension(1), "384.4 mm")
THICKNESS = Kind("thickness", "m", _dimension(1), "6 mm")
ROUGHNESS = Kind("roughness", "m", _dimension(1), "0.15 mm")
ELEVATION = Kind("elevation", "m", _dimension(1), "171.0 m")
HEAD = Kind("head", "m", _dimension(1), "10 m")
AREA = Kind("area", "m²", _dimension(2), "250 m²")
FLOW = Kind("flow", "m³/s", _dimension(3, 0, -1), "12 L/s")
VELOCITY = Kind("velocity", "m/s", _dimension(1, 0, -1), "2.5 m/s")
ACCELERATION = Kind("acceleration", "m/s²", _dimension(1, 0, -2), "9.81 m/s²")
KINEMATIC_VISCOSITY = Kind("kinematic viscosity", "m²/s", _dimension(2, 0, -1), "1.13e-6 m²/s")
DYNAMIC_VISCOSITY = Kind("dynamic viscosity", "Pa·s", _dimension(-1, 1, -1), "1.1e-3 Pa·s")
DENSITY = Kind("density", "kg/m³", _dimension(-3, 1), "999.7 kg/m³")
PRESSURE = Kind("pressure", "Pa", _dimension(-1, 1, -2), "350 kPa")
TEMPERATURE = Kind("temperature", "K", _dimension(0, 0, 0, 1), "10 degC")
TIME = Kind("time", "s", _dimension(0, 0, 1), "6 h")
GRADIENT = Kind("gradient", "", _dimension(), "0.005")
ANGLE = Kind("angle", "rad", _dimension(), "45 deg")
RESISTANCE = Kind("resistance", "s²/m⁵", _dimension(-5, 0, 2), "850 s²/m⁵")
LOSS_RATE = Kind("rise of head lost with flow", "s/m²", _dimension(-2, 0, 1), "120 s/m²")

KINDS: tuple[Kind, ...] = (
    NUMBER,
    LENGTH,
    BORE,
    THICKNESS,
    ROUGHNESS,
    ELEVATION,
    HEAD,
    AREA,
    FLOW,
    VELOCITY,
    ACCELERATION,
    KINEMATIC_VISCOSITY,
    DYNAMIC_VISCOSITY,
    DENSITY,
    PRESSURE,
    TEMPERATURE,
    TIME,
    GRADIENT,
    ANGLE,
    RESISTANCE,
    LOSS_RATE,
)
"""Every kind; one line here is all that a new kind needs."""

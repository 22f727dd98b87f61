"""Properties of water from its temperature, and of air from the altitude: published correlations."""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc.equation import Reference, equation
from calc.physics import symbols as s

KELL_1975 = Reference(
    "Kell 1975",
    "G. S. Kell, Density, thermal expansivity, and compressibility of liquid water from 0 to 150 °C, "
    "J. Chemical and Engineering Data 20(1), 1975",
)
IAPWS_SR6 = Reference(
    "IAPWS SR6-08",
    "International Association for the Properties of Water and Steam, Revised supplementary release on "
    "properties of liquid water at 0.1 MPa, SR6-08(2011)",
)
WAGNER_PRUSS_1993 = Reference(
    "Wagner & Pruss 1993",
    "W. Wagner, A. Pruss, International equations for the saturation properties of ordinary water substance, "
    "J. Physical and Chemical Reference Data 22(3), 1993",
)
ISO_2533 = Reference("ISO 2533", "ISO 2533, Standard atmosphere, 1975")
DEFINITION = Reference("definition", "Definition")


@equation(gives=s.DENSITY, source=KELL_1975, valid="0 to 150 °C at one atmosphere", temperature=s.TEMPERATURE)
def density(*, temperature):
    """Density of water."""
    t = temperature / s.KELVIN - 273.15
    rising = 999.83952 + 16.945176 * t - 7.9870401e-3 * t**2 - 46.170461e-6 * t**3
    falling = 105.56302e-9 * t**4 - 280.54253e-12 * t**5
    return (rising + falling) / (1 + 16.87985e-3 * t) * s.KILOGRAM_PER_CUBIC_METRE


@equation(gives=s.DYNAMIC_VISCOSITY, source=IAPWS_SR6, valid="−20 to 110 °C at 0.1 MPa", temperature=s.TEMPERATURE)
def dynamic_viscosity(*, temperature):
    """Dynamic viscosity of water."""
    t = temperature / (300 * s.KELVIN)
    return (280.68e-6 * t**-1.9 + 511.45e-6 * t**-7.7 + 61.131e-6 * t**-19.6 + 0.45903e-6 * t**-40) * s.PASCAL_SECOND


@equation(
    gives=s.VISCOSITY,
    source=DEFINITION,
    valid="any liquid",
    dynamic_viscosity=s.DYNAMIC_VISCOSITY,
    density=s.DENSITY,
)
def kinematic_viscosity(*, dynamic_viscosity, density):
    """Kinematic viscosity."""
    return dynamic_viscosity / density


@equation(gives=s.VAPOUR_PRESSURE, source=WAGNER_PRUSS_1993, valid="0.01 to 373.9 °C", temperature=s.TEMPERATURE)
def vapour_pressure(*, temperature):
    """Vapour pressure of water."""
    share = temperature / (647.096 * s.KELVIN)
    t = 1 - share
    power = (
        -7.85951783 * t
        + 1.84408259 * t**1.5
        - 11.7866497 * t**3
        + 22.6807411 * t**3.5
        - 15.9618719 * t**4
        + 1.80122502 * t**7.5
    )
    return 22064000 * s.PASCAL * np.exp(power / share)


@equation(
    gives=s.GEOPOTENTIAL_ALTITUDE,
    source=ISO_2533,
    valid="−2 000 to 80 000 m above sea level",
    altitude=s.ALTITUDE,
)
def geopotential_altitude(*, altitude):
    """Geopotential altitude, the height that would need the same work in uniform gravity."""
    return 6356766 * s.METRE * altitude / (6356766 * s.METRE + altitude)


@equation(
    gives=s.ATMOSPHERIC_PRESSURE,
    source=ISO_2533,
    valid="−2 000 to 11 000 m above sea level",
    geopotential_altitude=s.GEOPOTENTIAL_ALTITUDE,
)
def atmospheric_pressure(*, geopotential_altitude):
    """Atmospheric pressure at an altitude."""
    return 101325 * s.PASCAL * (1 - 0.0065 * (geopotential_altitude / s.METRE) / 288.15) ** 5.25588

"""Units against published definitions.

Sources, from memory: the 1959 agreement on yard and pound (1 yd = 0.9144 m, 1 lb = 0.45359237 kg), as in
NIST SP 811 (2008), appendix B; the US gallon of 231 in³; the imperial gallon of 4.54609 L (UK Units of
Measurement Regulations 1995); standard gravity 9.80665 m/s² (3rd CGPM, 1901); the Celsius scale (BIPM, SI
Brochure, 9th edition, 2.3.1).
"""

from __future__ import annotations

import pytest

from calc import kinds
from calc.kinds import Kind
from calc.units import factor, read

EXACT = [
    ("1 ft", kinds.LENGTH, 0.3048),
    ("1 in", kinds.LENGTH, 0.0254),
    ("1 yd", kinds.LENGTH, 0.9144),
    ("1 mi", kinds.LENGTH, 1609.344),
    ("1 ha", kinds.AREA, 10_000.0),
    ("1 h", kinds.TIME, 3600.0),
    ("1 d", kinds.TIME, 86_400.0),
    ("1 L/s", kinds.FLOW, 0.001),
    ("86.4 ML/d", kinds.FLOW, 1.0),
    ("3600 m3/h", kinds.FLOW, 1.0),
    ("1 us_gal/s", kinds.FLOW, 3.785411784e-3),
    ("60 gpm", kinds.FLOW, 3.785411784e-3),
    ("60 US gpm", kinds.FLOW, 3.785411784e-3),
    ("1 imp gal/s", kinds.FLOW, 4.54609e-3),
    ("60 imp gpm", kinds.FLOW, 4.54609e-3),
    ("0.0864 us_mgd", kinds.FLOW, 3.785411784e-3),
    ("1 cfs", kinds.FLOW, 0.028316846592),
    ("1 ft³/s", kinds.FLOW, 0.028316846592),
    ("1 bar", kinds.PRESSURE, 100_000.0),
    ("1 atm", kinds.PRESSURE, 101_325.0),
    ("1 kgf/cm^2", kinds.PRESSURE, 98_066.5),
    ("1 lb/ft3", kinds.DENSITY, 0.45359237 / 0.3048**3),
    ("1 cP", kinds.DYNAMIC_VISCOSITY, 0.001),
    ("1 cSt", kinds.KINEMATIC_VISCOSITY, 1e-6),
    ("0 degC", kinds.TEMPERATURE, 273.15),
    ("100 °C", kinds.TEMPERATURE, 373.15),
    ("32 degF", kinds.TEMPERATURE, 273.15),
    ("212 degF", kinds.TEMPERATURE, 373.15),
    ("-459.67 degF", kinds.TEMPERATURE, 0.0),
    ("5 m/km", kinds.GRADIENT, 0.005),
    ("5 %", kinds.NUMBER, 0.05),
]


@pytest.mark.parametrize(("text", "kind", "value"), EXACT)
def test_units_are_worth_what_is_published(text: str, kind: Kind, value: float) -> None:
    assert read(text, kind).value == pytest.approx(value, rel=1e-15, abs=1e-300)


def test_pound_per_square_inch() -> None:
    # NIST SP 811, appendix B, from memory: 6894.757 Pa; more digits from the definitions of its parts.
    assert read("1 psi", kinds.PRESSURE).value == pytest.approx(6894.757293168, rel=1e-12)
    assert read("1 psi", kinds.PRESSURE).value == pytest.approx(0.45359237 * 9.80665 / 0.0254**2, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "value"),
    [("384.4 mm", 0.3844), ("0.15 mm", 0.00015), ("1.2 km", 1200.0), ("214.60 m", 214.6), ("3 mm", 0.003)],
)
def test_decimal_units_are_rounded_once(text: str, value: float) -> None:
    assert read(text, kinds.LENGTH).value == value


@pytest.mark.parametrize(
    ("unit", "kind", "expected"),
    [
        ("mm", kinds.BORE, 1000.0),
        ("m", kinds.HEAD, 1.0),
        ("L/s", kinds.FLOW, 1000.0),
        ("kPa", kinds.PRESSURE, 0.001),
        ("ft", kinds.LENGTH, 1 / 0.3048),
        ("ft³/s", kinds.FLOW, 1 / 0.028316846592),
        ("%", kinds.NUMBER, 100.0),
        ("", kinds.NUMBER, 1.0),
    ],
)
def test_display_factors(unit: str, kind: Kind, expected: float) -> None:
    assert factor(unit, kind) == pytest.approx(expected, rel=1e-15)

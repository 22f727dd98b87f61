"""The whitelist: unit names that may be written, how each is printed, and its name for the registry."""

from __future__ import annotations

from typing import NamedTuple


class Word(NamedTuple):
    """One unit name.

    Attributes
    ----------
    printed : str
        The form used on paper.
    registry_name : str
        Expression that the registry evaluates; ours, never the user's.
    offset : bool
        Whether the scale has a zero of its own; such a unit stands alone.
    angle : bool
        Whether it measures an angle, which is a pure number and yet never stands for one; it stands alone.
    """

    printed: str
    registry_name: str
    offset: bool = False
    angle: bool = False


def _words(rows: str) -> dict[str, Word]:
    """Return the words of lines ``registry name: written written …``; each is printed as written."""
    found: dict[str, Word] = {}
    for row in rows.strip().splitlines():
        registry_name, written = row.split(":")
        found.update({word: Word(word, registry_name.strip()) for word in written.split()})
    return found


WORDS: dict[str, Word] = {
    **_words("""
        meter: m meter meters metre metres
        millimeter: mm
        centimeter: cm
        decimeter: dm
        kilometer: km
        inch: in inch inches
        foot: ft foot feet
        yard: yd
        mile: mi mile miles
        hectare: ha
        liter: L l litre litres liter liters
        milliliter: mL ml
        megaliter: ML
        second: s sec
        minute: min
        hour: h hr
        day: d day days
        gram: g
        milligram: mg
        kilogram: kg
        tonne: t
        pound: lb
        slug: slug
        newton: N
        kilonewton: kN
        pound_force: lbf
        kilogram_force: kgf
        pascal: Pa
        millipascal: mPa
        hectopascal: hPa
        kilopascal: kPa
        megapascal: MPa
        bar: bar
        millibar: mbar
        standard_atmosphere: atm
        psi: psi
        poise: P
        centipoise: cP
        stokes: St
        centistokes: cSt
        joule: J
        kilojoule: kJ
        kilowatt_hour: kWh
        watt: W
        kilowatt: kW
        megawatt: MW
        horsepower: hp
        kelvin: K
        percent: %
        foot ** 3 / second: cfs
        US_liquid_gallon / minute: gpm
    """),
    "um": Word("µm", "micrometer"),
    "µm": Word("µm", "micrometer"),
    "thousand_ft": Word("1000 ft", "1000 * foot"),
    "us_gal": Word("US gal", "US_liquid_gallon"),
    "us_gpm": Word("US gpm", "US_liquid_gallon / minute"),
    "us_mgd": Word("US mgd", "10 ** 6 * US_liquid_gallon / day"),
    "imp_gal": Word("imp gal", "imperial_gallon"),
    "imp_gpm": Word("imp gpm", "imperial_gallon / minute"),
    "imp_mgd": Word("imp mgd", "10 ** 6 * imperial_gallon / day"),
    "degC": Word("°C", "degC", offset=True),
    "°C": Word("°C", "degC", offset=True),
    "degF": Word("°F", "degF", offset=True),
    "deg": Word("°", "degree", angle=True),
    "°": Word("°", "degree", angle=True),
    "rad": Word("rad", "radian", angle=True),
    "°F": Word("°F", "degF", offset=True),
}
"""``gpm`` is the US gallon per minute, as common practice has it; all else is as pint defines it."""

_GALLONS = "the US and the imperial gallon differ"
AMBIGUOUS: dict[str, tuple[str, str]] = {
    "gal": (_GALLONS, "write 'us_gal' or 'imp_gal'"),
    "gallon": (_GALLONS, "write 'us_gal' or 'imp_gal'"),
    "gallons": (_GALLONS, "write 'us_gal' or 'imp_gal'"),
    "gpd": (_GALLONS, "write 'us_gal/d' or 'imp_gal/d'"),
    "mgd": (_GALLONS, "write 'us_mgd' or 'imp_mgd'"),
    "MGD": (_GALLONS, "write 'us_mgd' or 'imp_mgd'"),
    "ton": ("the short, the long and the metric ton differ", "write 't' for 1000 kg"),
    "tons": ("the short, the long and the metric ton differ", "write 't' for 1000 kg"),
    "psia": ("pressures are gauge, and this one is absolute", "write the gauge pressure in 'psi'"),
    "bara": ("pressures are gauge, and this one is absolute", "write the gauge pressure in 'bar'"),
}
"""Names that do not say enough: the reason, and what to write instead."""

INSTEAD: dict[str, str] = {
    "lps": "L/s",
    "LPS": "L/s",
    "lpm": "L/min",
    "cms": "m³/s",
    "cumec": "m³/s",
    "cumecs": "m³/s",
    "cmh": "m³/h",
    "MLD": "ML/d",
    "mld": "ML/d",
    "cfm": "ft³/min",
    "mtr": "m",
    "mtrs": "m",
    "M": "m",
    "KM": "km",
    "ltr": "L",
    "ltrs": "L",
    "sqm": "m²",
    "cum": "m³",
    "C": "degC",
    "F": "degF",
    "celsius": "degC",
    "Celsius": "degC",
    "fahrenheit": "degF",
    "psig": "psi",
    "barg": "bar",
    "KPA": "kPa",
    "Kpa": "kPa",
    "kpa": "kPa",
    "lbs": "lb",
    "sq": "m²",
    "degree": "deg",
    "degrees": "deg",
    "radian": "rad",
    "radians": "rad",
}
"""Names in use that are not read, and the name to write."""

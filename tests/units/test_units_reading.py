"""Reading quantities: spelling, problems in plain words, hostile text."""

from __future__ import annotations

import math
import subprocess
import sys
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calc import kinds
from calc.kinds import KINDS, Kind
from calc.problems import CalcError
from calc.units import Quantity, UnitTrouble, factor, measures, read
from calc.units.grammar import Unit, unit
from calc.units.trouble import CODES
from calc.units.words import AMBIGUOUS, INSTEAD, WORDS


def trouble(text: str, kind: Kind) -> UnitTrouble:
    with pytest.raises(UnitTrouble) as caught:
        read(text, kind)
    assert isinstance(caught.value, CalcError)
    assert caught.value.code in CODES
    return caught.value


def test_a_quantity_keeps_what_was_written() -> None:
    assert read("384.40 mm", kinds.BORE) == Quantity(0.3844, 384.4, "384.40", "mm", 0.001, 0.0)
    assert read("10 degC", kinds.TEMPERATURE) == Quantity(283.15, 10.0, "10", "°C", 1.0, 273.15)
    assert read("2.5", kinds.NUMBER) == Quantity(2.5, 2.5, "2.5", "", 1.0, 0.0)


@pytest.mark.parametrize(
    "text",
    ["9.81 m/s²", "9.81 m/s^2", "9.81 m/s**2", "9.81m/s2", "9.81  m / s / s", "9.81 m·s⁻²", "9.81 m*s^-2"],
)
def test_powers_have_many_spellings(text: str) -> None:
    quantity = read(text, kinds.ACCELERATION)
    assert quantity.value == 9.81
    assert quantity.unit in {"m/s²", "m/s/s", "m·s⁻²"}


@pytest.mark.parametrize("text", ["1e-3 Pa·s", "1E-3 Pa*s", ".001 Pa s", "+1.e-3 Pa s", "1 mPa·s", "0.01 P"])
def test_products_have_many_spellings(text: str) -> None:
    assert read(text, kinds.DYNAMIC_VISCOSITY).value == 0.001


def test_both_micro_signs_are_one() -> None:
    for sign in ("\N{MICRO SIGN}", "\N{GREEK SMALL LETTER MU}", "u"):
        assert read(f"150 {sign}m", kinds.ROUGHNESS).unit == "\N{MICRO SIGN}m"
        assert read(f"150 {sign}m", kinds.ROUGHNESS).value == 0.00015


@pytest.mark.parametrize(
    ("text", "kind", "code", "found", "expected", "hint"),
    [
        ("200 kg", kinds.BORE, "wrong-dimension", "'200 kg' is a mass", "a bore, such as '200 mm'", ""),
        ("30 psi", kinds.HEAD, "wrong-dimension", "'30 psi' is a pressure", "a head, such as '30 m'", ""),
        (
            "3 ft4",
            kinds.AREA,
            "wrong-dimension",
            "'3 ft4' is a quantity in m⁴",
            "an area, such as '250 m²'",
            "",
        ),
        ("200", kinds.BORE, "bare-number", "'200' has no unit", "a bore, such as '200 mm'", ""),
        ("9000000", kinds.BORE, "bare-number", "'9000000' has no unit", "a bore, such as '384.4 mm'", ""),
        (
            "5 lps",
            kinds.FLOW,
            "unknown-unit",
            "'5 lps' has the unknown unit 'lps'",
            "a flow, such as '5 L/s'",
            "write 'L/s'",
        ),
        (
            "90 mtr",
            kinds.LENGTH,
            "unknown-unit",
            "'90 mtr' has the unknown unit 'mtr'",
            "a length, such as '90 m'",
            "write 'm'",
        ),
        (
            "90 metrs",
            kinds.LENGTH,
            "unknown-unit",
            "'90 metrs' has the unknown unit 'metrs'",
            "a length, such as '90 m'",
            "did you mean 'metres'?",
        ),
        (
            "7 gal",
            kinds.AREA,
            "ambiguous-unit",
            "'7 gal' does not say enough: the US and the imperial gallon differ",
            "an area, such as '7 m²'",
            "write 'us_gal' or 'imp_gal'",
        ),
        (
            ".inf",
            kinds.NUMBER,
            "not-finite",
            "'.inf' is not a finite number",
            "a pure number, such as '2.5'",
            "",
        ),
        ("45", kinds.ANGLE, "bare-number", "'45' has no unit", "an angle, such as '45 deg'", ""),
        ("45 %", kinds.ANGLE, "wrong-dimension", "'45 %' is a pure number", "an angle, such as '45 deg'", ""),
        ("2 deg", kinds.NUMBER, "wrong-dimension", "'2 deg' is an angle", "a pure number, such as '2'", ""),
        (
            "3 rad/s",
            kinds.ANGLE,
            "unknown-unit",
            "'3 rad/s' uses an angle within a product",
            "an angle, such as '45 deg'",
            "write the angle alone: 'deg' or 'rad'",
        ),
        ("no", kinds.TIME, "not-a-quantity", "'no' is not a quantity", "a time, such as '6 h'", ""),
        ("", kinds.TIME, "not-a-quantity", "nothing is written here", "a time, such as '6 h'", ""),
    ],
)
def test_problems_in_plain_words(text: str, kind: Kind, code: str, found: str, expected: str, hint: str) -> None:
    raised = trouble(text, kind)
    assert (raised.code, raised.found, raised.expected, raised.hint) == (code, found, expected, hint)


@pytest.mark.parametrize(
    ("code", "texts"),
    [
        (
            "not-finite",
            ["inf m", "-inf", "nan m", "NaN", "Infinity m", "1e400 m", "1e308 km", "9e999999999999 m"],
        ),
        (
            "not-a-quantity",
            [
                "1_000 m",
                "5 __import__",
                "0x1F m",
                "1,5 m",
                "12:30",
                "9**9**9",
                "1.2.3 m",
                "- 5 m",
                "\u22125 m",
                "m",
                "\N{ARABIC-INDIC DIGIT ONE} m",
                "1 000 m",
                "'5' m",
                "5 (m)",
                "~",
                "1" * 161,
                "5\nm",
                "5 /m",
            ],
        ),
        (
            "unknown-unit",
            [
                "5 m**9**9",
                "5 m^",
                "5 m^99",
                "5 m^0",
                "5 m^1.5",
                "5 m//s",
                "5 m/",
                "5 x",
                "5 m\n",
                "5 m.s",
                "5 pint",
                "5 kilofoot",
                "5 m m m m m m m",
                "5 " + "m" * 61,
            ],
        ),
        (
            "ambiguous-unit",
            [
                "5 gal/min",
                "5 MGD",
                "5 ton",
                "5 psia",
                "5 kg/m s",
                "5 kg/m·s",
                "5 m/s*s",
                "5 degC/m",
                "5 degC²",
            ],
        ),
    ],
)
def test_hostile_and_slack_texts(code: str, texts: list[str]) -> None:
    for text in texts:
        assert trouble(text, kinds.LENGTH).code == code, text


def test_a_number_beyond_floats_is_zero_or_refused_at_once() -> None:
    assert read("1e-999999999 m", kinds.LENGTH).value == 0.0
    assert read("0e999999999 m", kinds.LENGTH).value == 0.0
    assert read("1e-999999999 degC", kinds.TEMPERATURE).value == 273.15
    assert read("1e-320 km", kinds.LENGTH).value == pytest.approx(1e-317)


@given(st.text(max_size=200), st.sampled_from(KINDS))
def test_any_text_is_a_quantity_or_a_trouble(text: str, kind: Kind) -> None:
    raised: UnitTrouble | None = None
    try:
        assert math.isfinite(read(text, kind).value)
    except UnitTrouble as caught:
        raised = caught
    if raised is not None:
        assert raised.code in CODES
        assert raised.found.isprintable()
        assert len(raised.found) < 250
    assert measures(text) is None or measures(text)


@given(st.text(alphabet="mskgL²³⁻^*/·. 1290e-+%°C", max_size=24), st.sampled_from(KINDS))
def test_any_text_of_unit_letters_is_a_quantity_or_a_trouble(text: str, kind: Kind) -> None:
    try:
        quantity = read(text, kind)
    except UnitTrouble:
        return
    again = read(f"{quantity.number_text} {quantity.unit}", kind)
    assert again == quantity


NUMBERS = st.floats(-1e9, 1e9, allow_nan=False)


@given(NUMBERS, st.sampled_from(sorted(WORDS)))
def test_the_value_is_the_float_nearest_the_exact_product(number: float, name: str) -> None:
    found = unit(name)
    assert isinstance(found, Unit)
    kind = kinds.ANGLE if found.angle else Kind("thing", "x", found.dimension, "1 x")
    quantity = read(f"{number!r} {name}", kind)
    assert quantity.number == number
    assert quantity.value == float(Fraction(repr(number)) * found.factor + found.offset)
    assert quantity.value == pytest.approx(number * quantity.factor + quantity.offset, rel=1e-14, abs=1e-9)


@given(NUMBERS, st.sampled_from(["mm", "ft", "km", "in", "m"]))
def test_the_display_factor_leads_back(number: float, name: str) -> None:
    value = read(f"{number!r} {name}", kinds.LENGTH).value
    assert value * factor(name, kinds.LENGTH) == pytest.approx(number, rel=1e-14, abs=1e-300)


def test_every_example_reads_as_its_own_kind_and_no_other() -> None:
    for kind in KINDS:
        quantity = read(kind.example, kind)
        assert math.isfinite(quantity.value)
        for other in KINDS:
            if other.dimension != kind.dimension:
                assert trouble(kind.example, other).code in {"wrong-dimension", "bare-number"}


def test_every_kind_is_shown_in_its_own_unit() -> None:
    for kind in KINDS:
        assert factor(kind.unit, kind) == 1.0


def test_the_lists_of_names_agree() -> None:
    assert not set(WORDS) & set(AMBIGUOUS)
    assert not set(WORDS) & set(INSTEAD)
    assert not set(AMBIGUOUS) & set(INSTEAD)
    for name in [*WORDS, *INSTEAD.values()]:
        assert isinstance(unit(name), Unit), name
    for name, word in WORDS.items():
        printed, plain = unit(word.printed), unit(name)
        assert printed == plain, name


def test_a_wrong_display_unit_is_refused() -> None:
    for text, kind, code in [
        ("kg", kinds.LENGTH, "wrong-dimension"),
        ("", kinds.LENGTH, "wrong-dimension"),
        ("degC", kinds.TEMPERATURE, "wrong-dimension"),
        ("gal", kinds.AREA, "ambiguous-unit"),
        ("zz", kinds.AREA, "unknown-unit"),
    ]:
        with pytest.raises(UnitTrouble) as caught:
            factor(text, kind)
        assert caught.value.code == code


def test_what_a_unit_measures() -> None:
    assert measures("200 kg") == "mass"
    assert measures("350 kPa") == "pressure"
    assert measures("kPa") == "pressure"
    assert measures("75 kW") == "power"
    assert measures("5 degC") == "temperature"
    for text in ("200", "", "gal", "zz", "5 zz", "nan"):
        assert measures(text) is None


def test_definitions_are_read_when_a_unit_is_first_asked_for() -> None:
    code = (
        "import calc.units.registry as r, calc.units as u, calc.kinds as k;"
        "assert r._registry.cache_info().currsize == 0;"
        "u.read('2.5', k.NUMBER); assert r._registry.cache_info().currsize == 0;"
        "u.read('2.5 m', k.LENGTH); u.read('2.5 ft', k.LENGTH); assert r._registry.cache_info().misses == 1"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0

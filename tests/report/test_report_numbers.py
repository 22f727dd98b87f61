"""How numbers are written, and read back: the rules by themselves, and against `decimal`."""

from __future__ import annotations

import math
from dataclasses import replace
from decimal import ROUND_HALF_EVEN, Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pages import Figures

from calc import kinds
from calc.report.numbers import MINUS, THIN, Format, last_place, parsed, raised, read_back, written
from calc.units import factor

UNITS = ((kinds.FLOW, "L/s"), (kinds.FLOW, "m³/h"), (kinds.HEAD, "m"), (kinds.PRESSURE, "kPa"), (kinds.BORE, "mm"))
SIGNS = ("", "+", "size", "turned")

values = st.floats(-1e9, 1e9, allow_nan=False).filter(lambda x: x == 0 or abs(x) > 1e-15)
wide = st.floats(1e-12, 1e15) | st.floats(-1e15, -1e-12)
places = st.builds(lambda n: Format(decimals=n), st.integers(0, 9))
figures = st.builds(lambda n: Format(significant=n), st.integers(1, 12))


@given(values, places | figures)
def test_a_value_reads_back_within_half_a_last_place(value: float, form: Format) -> None:
    text = written(value, kinds.NUMBER, form)
    assert abs(read_back(text) - value) <= 0.5 * last_place(text) * (1 + 1e-9) + 1e-12 * abs(value)


@given(wide, figures)
def test_a_value_carries_as_many_figures_as_asked(value: float, form: Format) -> None:
    text = written(value, kinds.NUMBER, form)
    mantissa = text.partition(" × ")[0].strip(MINUS + "+").replace(THIN, "")
    digits = mantissa.replace(".", "").lstrip("0")
    whole = "." not in mantissa  # whole figures are written all
    assert len(digits) == form.significant or (whole and len(digits) > (form.significant or 0))
    assert math.isclose(read_back(text), value, rel_tol=0.51 * 10.0 ** (1 - (form.significant or 1)))


@given(values | wide, places | figures)
def test_texts_read_alike_by_the_program_and_by_the_tests(value: float, form: Format) -> None:
    text = written(value, kinds.NUMBER, form)
    read = Figures.read(text)
    assert math.isclose(read.value, read_back(text), rel_tol=1e-15)
    assert math.isclose(read.last, last_place(text), rel_tol=1e-12)


@given(st.integers(-(10**9), 10**9), st.integers(0, 6))
def test_decimals_are_those_of_decimal(thousandths: int, places: int) -> None:
    # a multiple of 1/1024 is exact in binary: rounding half to even is then that of decimal
    value = thousandths / 1024
    expected = Decimal(value).quantize(Decimal(1).scaleb(-places), rounding=ROUND_HALF_EVEN)
    text = written(value, kinds.NUMBER, Format(decimals=places))
    assert Decimal(text.replace(THIN, "").replace(MINUS, "-")) == expected


@given(values, st.integers(0, 6), st.sampled_from(SIGNS))
def test_signs_follow_their_rule(value: float, places: int, sign: str) -> None:
    text = written(value, kinds.NUMBER, Format(decimals=places, sign=sign))
    zero = not any(digit in text for digit in "123456789")
    told = value if sign != "turned" else -value
    if zero or sign == "size":
        assert text[0].isdigit()
    elif told < 0:
        assert text[0] == MINUS
    else:
        assert text[0] == "+" if sign in ("+", "turned") else text[0].isdigit()


@pytest.mark.parametrize("value", [0.0, -0.0, 1e-9, -1e-9])
@pytest.mark.parametrize("sign", SIGNS)
def test_zero_has_no_sign(value: float, sign: str) -> None:
    assert written(value, kinds.NUMBER, Format(decimals=3, sign=sign)) == "0.000"


@pytest.mark.parametrize(
    ("value", "form", "text"),
    [  # by hand, after NIST SP 811 section 10.5.3: digits in threes, no comma; four digits need no gap
        (1234.5, Format(decimals=1), "1234.5"),
        (12345.6, Format(decimals=1), f"12{THIN}345.6"),
        (-1234567.0, Format(decimals=0), f"{MINUS}1{THIN}234{THIN}567"),
        (123456.7, Format(significant=4), f"123{THIN}457"),
        (0.0013059, Format(significant=6), "0.00130590"),
        (1.30629e-6, Format(significant=6), f"1.30629 × 10^{MINUS}6"),
        (3.0e8, Format(significant=3), "3.00 × 10^8"),
        (9.9996e6, Format(significant=4), f"9{THIN}999{THIN}600"),
        (0.00099996, Format(significant=4), f"1.000 × 10^{MINUS}3"),
        (99.96, Format(significant=3), "100"),
        (0.0, Format(significant=4), "0"),
        (4e-7, Format(decimals=6, bound=1e-6), f"< 1 × 10^{MINUS}6"),
        (-4e-7, Format(decimals=6, bound=1e-6), f"< 1 × 10^{MINUS}6"),
        (0.0, Format(decimals=6, bound=1e-6), f"< 1 × 10^{MINUS}6"),
        (-2e-6, Format(decimals=6, bound=1e-6), f"{MINUS}0.000002"),
        (0.5, Format(decimals=3, bound=0.001), "0.500"),
    ],
)
def test_values_are_written_as_by_hand(value: float, form: Format, text: str) -> None:
    assert written(value, kinds.NUMBER, form) == text


@settings(deadline=None)  # the first use of a unit is slow
@given(values, st.sampled_from(UNITS), st.integers(0, 6))
def test_a_value_is_written_in_the_unit_of_its_format(value: float, unit: tuple[kinds.Kind, str], places: int) -> None:
    kind, name = unit
    text = written(value, kind, Format(name, decimals=places))
    assert abs(read_back(text) - value * factor(name, kind)) <= 0.5 * last_place(text) + 1e-12 * abs(value) * factor(
        name, kind
    )


def test_factors_of_units_are_exact_definitions() -> None:
    # SI brochure (9th edition): prefixes, litre, minute and hour are exact
    assert factor("L/s", kinds.FLOW) == pytest.approx(1000, rel=1e-15)
    assert factor("m³/h", kinds.FLOW) == pytest.approx(3600, rel=1e-15)
    assert factor("ML/d", kinds.FLOW) == pytest.approx(86.4, rel=1e-15)
    assert factor("kPa", kinds.PRESSURE) == pytest.approx(1e-3, rel=1e-15)


@given(
    st.sampled_from(("", "L/s", "m³/s", "Pa·s", "kg/m³", "%")),
    places | figures,
    st.sampled_from(SIGNS),
    st.none() | st.floats(1e-12, 1.0),
)
def test_a_format_survives_being_one_word(unit: str, form: Format, sign: str, bound: float | None) -> None:
    held = replace(form, unit=unit, sign=sign, bound=bound)
    assert parsed(held.spec) == held


@pytest.mark.parametrize(
    ("text", "set_"),
    [
        (f"1.3 × 10^{MINUS}6", "1.3 × 10⁻⁶"),
        ("2.00 × 10^17", "2.00 × 10¹⁷"),
        ("0.50", "0.50"),
        (f"< 1 × 10^{MINUS}6", "< 1 × 10⁻⁶"),
    ],
)
def test_drawings_raise_the_power(text: str, set_: str) -> None:
    assert raised(text) == set_


@given(wide, figures)
def test_raising_loses_no_figure(value: float, form: Format) -> None:
    text = written(value, kinds.NUMBER, form)
    down = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789" + MINUS)
    assert raised(text).translate(down) == text.replace("^", "")

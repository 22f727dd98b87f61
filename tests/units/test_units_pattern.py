"""Patterns of quantities against the reader: what it reads they match; what has one name or two they tell apart."""

from __future__ import annotations

import re
from itertools import product

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calc.kinds import BORE, DENSITY, FLOW, GRADIENT, KINDS, LENGTH, NUMBER, PRESSURE, TEMPERATURE, Kind
from calc.units import UnitTrouble, pattern, read
from calc.units.words import AMBIGUOUS, INSTEAD, WORDS

PATTERNS = {kind: re.compile(pattern.quantity(kind)) for kind in KINDS}
POWERS = ("", "2", "^2", "**2", "²", "-1", "^-1", "⁻¹", "3", "³", "-2", "^+1", "⁺¹")


def is_read(text: str, kind: Kind) -> bool:
    try:
        read(text, kind)
    except UnitTrouble:
        return False
    return True


def matches(text: str, kind: Kind) -> bool:
    return PATTERNS[kind].search(text) is not None


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.name)
def test_one_name_with_a_power_is_told_apart(kind: Kind) -> None:
    names = [*WORDS, *AMBIGUOUS, *INSTEAD, "us gal", "US  gpm", "imp MGD", "μm", "1000 ft", "furlong", ""]
    for name, power in product(names, POWERS):
        text = f"2.5 {name}{power}"
        assert matches(text, kind) == is_read(text, kind), text


@pytest.mark.parametrize("kind", [LENGTH, FLOW, PRESSURE, DENSITY, GRADIENT, TEMPERATURE], ids=lambda kind: kind.name)
@pytest.mark.parametrize("join", ["/", " / ", "*", "·", " ", " ⋅ "])
def test_two_names_are_told_apart(kind: Kind, join: str) -> None:
    some = ["m", "mm", "ft", "L", "us_gal", "s", "h", "kg", "lb", "N", "kPa", "K", "degC", "%", "P", "gpm", "1000 ft"]
    for (one, other), (first, second) in product(product(some, some), product(("", "²", "^-1"), ("", "3", "⁻²"))):
        text = f"7e-1 {one}{first}{join}{other}{second}"
        assert matches(text, kind) == is_read(text, kind), text


@given(
    st.lists(st.tuples(st.sampled_from(sorted(WORDS)), st.sampled_from(POWERS)), min_size=1, max_size=6),
    st.lists(st.sampled_from(["/", " / ", "*", "·", " ", " * "]), min_size=5, max_size=5),
    st.sampled_from(KINDS),
)
@settings(max_examples=400, deadline=None)
def test_what_is_read_matches(names: list[tuple[str, str]], joins: list[str], kind: Kind) -> None:
    text = "3 " + "".join(f"{join}{name}{power}" for join, (name, power) in zip(["", *joins], names, strict=False))
    assert matches(text, kind) or not is_read(text, kind)


NUMBERS = [
    "1",
    "-1",
    "+1",
    "0",
    "-0.0",
    "1.",
    ".5",
    "1e3",
    "1E-3",
    "-1e+3",
    "1,5",
    "1 000",
    "0x10",
    "1e",
    "e3",
    "--1",
    "",
    "−1",
]


@pytest.mark.parametrize("kind", [NUMBER, BORE, TEMPERATURE], ids=lambda kind: kind.name)
@pytest.mark.parametrize("number", NUMBERS)
def test_numbers_are_told_apart(kind: Kind, number: str) -> None:
    for unit in ("", " mm", "degC", "%", " "):
        text = f"{number}{unit}"
        assert matches(text, kind) == is_read(text, kind), text


@pytest.mark.parametrize(
    ("sign", "accepted"),
    [
        (pattern.ABOVE_ZERO, {"1", "+1", "1.", ".5", "1e3", "0.001", "00.1"}),
        (pattern.NOT_BELOW_ZERO, {"1", "+1", "1.", ".5", "1e3", "0.001", "00.1", "0", "-0.0", "0e5", "-0"}),
    ],
)
def test_signs_are_told_apart(sign: str, accepted: set[str]) -> None:
    numbers = ["1", "+1", "1.", ".5", "1e3", "0.001", "00.1", "0", "-0.0", "0e5", "-0", "-1", "-.5", "-1e-3", "-0.01"]
    assert {number for number in numbers if re.search(sign, f"{number} m")} == accepted


def test_no_negative_number_is_warm_enough() -> None:
    """0 °F is 255.37 K and 0 °C 273.15 K; a level may well be negative."""
    assert pattern.never_negative(TEMPERATURE, 273.16)
    assert not pattern.never_negative(TEMPERATURE, 270.0)
    assert pattern.never_negative(LENGTH, 0.0)
    assert not pattern.never_negative(LENGTH, -10.0)

"""Computed loss coefficients against handbook tables, closed forms and an open library; sources stand in the data."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from fluids.fittings import (
    Cv_to_K,
    Kv_to_K,
    bend_rounded,
    contraction_conical,
    diffuser_conical,
    diffuser_sharp,
)

from calc.components.fitting import NEEDS, Coefficients, FormTerms, coefficients
from calc.equation import ARRAYS, Labels, Value, value_of
from calc.physics import coefficient

PUBLISHED = Path(__file__).parents[1] / "published"
GPM = 231 * 0.0254**3 / 60
"""One US gallon a minute: 231 cubic inches of 25.4 mm, exact."""
RIGHT = math.pi / 2


def rows(name: str, *prefixes: str) -> list[dict[str, Any]]:
    found = yaml.safe_load((PUBLISHED / f"{name}.yaml").read_text(encoding="utf-8"))
    chosen = [row for row in found if str(row["id"]).startswith(prefixes)]
    assert chosen
    return chosen


def both_ways(kind: str, **stated: float) -> tuple[float, float]:
    """Return K forward and in reverse of one fitting, by the chain that the solver runs."""
    names = ("bore", "onward_bore", "angle", "radius_ratio", "Kv", "Cv")
    held: dict[str, Value] = {name: np.array([stated.get(name, np.nan)]) for name in names}
    labels = Labels(coefficient.KINDS, np.array([coefficient.KINDS.index(kind)]))
    got: Coefficients[Value] = coefficients(ARRAYS, FormTerms(labels, **held))
    forward, reverse = (float(value_of(one)[0]) for one in (got.forward, got.reverse))
    return forward, forward if math.isnan(reverse) else reverse


def test_every_computed_kind_has_its_law() -> None:
    assert tuple(NEEDS) == coefficient.KINDS


@pytest.mark.parametrize("row", rows("fittings", "K-BC", "K-EXP"), ids=lambda row: row["id"])
def test_a_sudden_widening(row: dict[str, Any]) -> None:
    wanted = row["expected"]["K"]
    small = math.sqrt(row["inputs"]["A1_A2"]) or 1e-9
    assert both_ways("step", bore=small, onward_bore=1.0)[0] == pytest.approx(wanted["value"], rel=wanted["rtol"])
    assert both_ways("step", bore=1.0, onward_bore=small)[1] == pytest.approx(wanted["value"], rel=wanted["rtol"])


def test_a_sudden_narrowing_lies_above_the_handbook_table_and_near_it() -> None:
    """The straight line of TP-410 is simpler than the table, and never below it by more than its rounding."""
    (row,) = rows("fittings", "K-CONTR-TAB")
    for ratio, wanted in zip(row["data"]["d/D"], row["data"]["K"], strict=True):
        got, back = both_ways("step", bore=1.0, onward_bore=ratio)
        assert wanted - 0.005 <= got <= 1.16 * wanted
        assert back == pytest.approx((1 - ratio**2) ** 2, rel=1e-12)


@pytest.mark.parametrize("row", rows("tables", "K-CC"), ids=lambda row: row["id"])
def test_a_sudden_narrowing_lies_above_weisbachs_contraction(row: dict[str, Any]) -> None:
    """K = (1/Cc - 1)² leaves out the loss before the contracted section, and is the lower bound."""
    lower = row["expected"]["value"]["value"]
    assert (1 / row["data"]["Cc"] - 1) ** 2 == pytest.approx(lower, abs=2e-5)
    got = both_ways("step", bore=1.0, onward_bore=math.sqrt(row["data"]["A2_A1"]))[0]
    assert lower <= got <= lower + 0.09


@pytest.mark.parametrize("ratio", [0.3, 0.5, 0.8, 0.95])
def test_changes_of_bore_agree_with_an_open_library(ratio: float) -> None:
    """fluids: Borda–Carnot and TP-410 by code of its own."""
    forward, reverse = both_ways("step", bore=ratio, onward_bore=1.0)
    assert forward == pytest.approx(diffuser_sharp(Di1=ratio, Di2=1.0), rel=1e-12)
    assert reverse == pytest.approx(contraction_conical(1.0, ratio, angle=180.0, method="Crane"), rel=1e-12)
    for degrees in (10.0, 30.0, 44.0, 60.0, 120.0, 180.0):
        wide, narrow = both_ways("taper", bore=ratio, onward_bore=1.0, angle=math.radians(degrees))
        # the library too gives both on the velocity head of the smaller bore
        assert wide == pytest.approx(diffuser_conical(ratio, 1.0, angle=degrees, method="Crane"), rel=1e-9)
        assert narrow == pytest.approx(contraction_conical(1.0, ratio, angle=degrees, method="Crane"), rel=1e-9)
        turned = both_ways("taper", bore=1.0, onward_bore=ratio, angle=math.radians(degrees))
        assert turned == pytest.approx((narrow, wide), rel=1e-12)


def test_a_taper_of_180_degrees_is_a_step_and_narrowing_meets_at_45_degrees() -> None:
    step = both_ways("step", bore=0.2, onward_bore=0.3)
    assert both_ways("taper", bore=0.2, onward_bore=0.3, angle=math.pi) == pytest.approx(step, rel=1e-12)
    just, above = (both_ways("taper", bore=0.2, onward_bore=0.3, angle=math.pi / 4 + turn) for turn in (0.0, 1e-9))
    assert above == pytest.approx(just, rel=0.011)  # the two forms of TP-410 meet within about a hundredth


@pytest.mark.parametrize("ratio", [1.0, 1.5, 2.0, 4.0])
@pytest.mark.parametrize("degrees", [30.0, 45.0, 90.0])
def test_bends_lie_among_the_forms_of_an_open_library(degrees: float, ratio: float) -> None:
    """fluids gives bends of 0.3 m in turbulent flow by five sources; Weisbach's stays within a quarter of them."""
    methods = ("Rennels", "Crane", "Miller", "Swamee", "Ito")
    others = [
        bend_rounded(0.3, degrees, fd=0.015, bend_diameters=ratio, Re=1e6, roughness=5e-5, method=method)
        for method in methods
    ]
    got = both_ways("bend", angle=math.radians(degrees), radius_ratio=ratio)[0]
    assert 0.75 * min(others) <= got <= 1.25 * max(others)


@pytest.mark.parametrize(
    ("name", "ratio", "degrees", "slack"),
    [
        ("K-bend90_short_r_D_1", 1.0, 90.0, 0.01),
        ("K-bend90_long_r_D_1.5", 1.5, 90.0, 0.0),
        ("K-bend45_short", 1.0, 45.0, 0.0),
    ],
)
def test_bends_lie_in_the_ranges_of_the_handbook(name: str, ratio: float, degrees: float, slack: float) -> None:
    """Weisbach's 0.294 for a right angle of R/D 1 lies below the table's 0.3 by its rounding."""
    (row,) = rows("tables", name)
    got = both_ways("bend", angle=math.radians(degrees), radius_ratio=ratio)[0]
    assert row["data"]["K_min"] - slack <= got <= row["data"]["K_max"]


def test_a_bend_by_weisbachs_table() -> None:
    """Weisbach's own ξ for 90° and r/R of 0.1 … 1.0, from memory: 0.131, 0.138, 0.158, 0.206, 0.294, …, 1.978."""
    table = {0.1: 0.131, 0.2: 0.138, 0.3: 0.158, 0.4: 0.206, 0.5: 0.294, 0.6: 0.440, 0.7: 0.661, 0.8: 0.977, 1.0: 1.978}
    for share, wanted in table.items():
        assert both_ways("bend", angle=RIGHT, radius_ratio=1 / (2 * share))[0] == pytest.approx(wanted, abs=0.001)


@pytest.mark.parametrize("row", rows("fittings", "VA-09", "VA-10"), ids=lambda row: row["id"])
def test_flow_coefficients(row: dict[str, Any]) -> None:
    wanted = row["expected"]["value"]
    stated = {"VA-09": {"bore": 0.1, "Kv": 200 / 3600}, "VA-10": {"bore": 4 * 0.0254, "Cv": 400 * GPM}}[row["id"]]
    got = both_ways(row["id"].replace("VA-09", "Kv").replace("VA-10", "Cv"), **stated)
    assert got == pytest.approx((wanted["value"], wanted["value"]), rel=wanted["rtol"])


def test_kv_and_cv_of_one_valve_agree() -> None:
    """Kv = 0.865 Cv (IEC 60534, from memory; 0.1 %), and the library's own conversions."""
    (row,) = rows("fittings", "VA-11")
    ratio = row["expected"]["value"]["value"]
    by_cv = both_ways("Cv", bore=0.25, Cv=1000 * GPM)[0]
    assert both_ways("Kv", bore=0.25, Kv=ratio * 1000 / 3600)[0] == pytest.approx(by_cv, rel=3e-3)
    assert by_cv == pytest.approx(Cv_to_K(1000, 0.25), rel=2e-3)
    assert both_ways("Kv", bore=0.25, Kv=865 / 3600)[0] == pytest.approx(Kv_to_K(865, 0.25), rel=2e-3)


def test_units_change_nothing() -> None:
    """Ratios have no unit: bores in inches give what bores in metres give."""
    metres = both_ways("taper", bore=0.3, onward_bore=0.2, angle=0.4)
    inches = both_ways("taper", bore=0.3 / 0.0254, onward_bore=0.2 / 0.0254, angle=0.4)
    assert inches == pytest.approx(metres, rel=1e-14)

"""Hazen–Williams and Manning against published values, a reference library and exact relations."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from fluids.open_flow import V_Manning

from calc.equation import Labels, Slope, evaluate, value_of
from calc.physics import empirical, friction
from calc.project.shipped import defaults

PUBLISHED = Path(__file__).parents[1] / "published"
CASES = yaml.safe_load((PUBLISHED / "friction.yaml").read_text(encoding="utf-8"))
HAZEN_WILLIAMS = [case for case in CASES if case["method"] == "hw"]
MANNING = [case for case in CASES if case["method"] == "manning_full"]
CUBIC_FOOT = 0.3048**3


def shipped(path: str) -> float:
    return defaults()[f"constants.{path}"].si


def by_hazen_williams(flow: float, bore: float, c: float, length: float = 1.0, **constants: float) -> float:
    given = {
        "hazen_williams_coefficient": shipped("hazen_williams.coefficient"),
        "hazen_williams_flow_exponent": shipped("hazen_williams.flow_exponent"),
        "hazen_williams_bore_exponent": shipped("hazen_williams.bore_exponent"),
    } | constants
    return float(empirical.hazen_williams.body(flow_each=flow, bore=bore, length=length, hazen_williams_c=c, **given))


def by_manning(flow: float, bore: float, n: float, length: float = 1.0) -> float:
    return float(
        empirical.manning.body(
            manning_coefficient=shipped("manning.coefficient"),
            manning_bore_exponent=shipped("manning.bore_exponent"),
            manning_n=n,
            flow_each=flow,
            bore=bore,
            length=length,
        )
    )


def test_the_cases_are_there() -> None:
    assert len(HAZEN_WILLIAMS) == 7
    assert len(MANNING) == 8


@pytest.mark.parametrize("case", HAZEN_WILLIAMS, ids=lambda case: case["id"])
def test_forms_in_other_units_give_the_same_loss(case: dict[str, Any]) -> None:
    inputs, expected = case["inputs"], case["expected"]
    loss = by_hazen_williams(inputs["Q_m3s"], inputs["D_m"], inputs["C"], inputs["L_m"])
    held = [one for name, one in expected.items() if name in ("h", "h_velocity_form")]
    assert held
    for one in held:
        assert loss * one["scale"] == pytest.approx(one["value"], rel=one["rtol"])


@pytest.mark.parametrize("case", MANNING, ids=lambda case: case["id"])
def test_a_published_conveyance_loses_its_gradient(case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    (name, published), *more = case["expected"].items()
    assert not more
    flow = published["value"] * CUBIC_FOOT * (np.sqrt(inputs["S"]) if name == "conveyance_cfs" else 1.0)
    # the gradient goes with the square of the flow
    assert by_manning(flow, inputs["D_m"], inputs["n"]) == pytest.approx(inputs["S"], rel=2.02 * published["rtol"])


@pytest.mark.parametrize("bore", [0.15, 0.6, 2.0])
@pytest.mark.parametrize("gradient", [1e-4, 0.02])
def test_manning_is_that_of_the_library(bore: float, gradient: float) -> None:
    # fluids.open_flow.V_Manning, V = R^(2/3) S^(1/2) / n with R = D/4 in a full round pipe
    flow = V_Manning(Rh=bore / 4, S=gradient, n=0.013) * np.pi / 4 * bore**2
    assert by_manning(flow, bore, 0.013) == pytest.approx(gradient, rel=1e-10)


def test_the_constants_shipped_are_those_of_the_laws_in_velocity() -> None:
    # Manning: exact. Hazen–Williams: V = 0.849 C R^0.63 S^0.54 in SI (common practice), 0.849 to three figures.
    assert shipped("manning.coefficient") == pytest.approx(4 ** (10 / 3) / np.pi**2, rel=1e-11)
    assert shipped("manning.bore_exponent") == pytest.approx(16 / 3, rel=1e-11)
    assert shipped("hazen_williams.flow_exponent") == pytest.approx(1 / 0.54, abs=5e-4)
    assert shipped("hazen_williams.bore_exponent") == pytest.approx(2.63 / 0.54, abs=5e-5)
    exact = (4 / np.pi / 0.849 * 4**0.63) ** (1 / 0.54)
    assert shipped("hazen_williams.coefficient") == pytest.approx(exact, rel=2e-3)


def test_what_doubling_the_flow_and_roughening_the_pipe_do() -> None:
    # 2^1.852 = 3.61 and 1.3^1.852 = 1.626; two equal pipes carry what one 2^(1.852/4.8704) = 1.302 as wide does
    one = by_hazen_williams(0.05, 0.3, 130.0)
    assert by_hazen_williams(0.10, 0.3, 130.0) / one == pytest.approx(3.61, rel=1e-3)
    assert by_hazen_williams(0.05, 0.3, 100.0) / one == pytest.approx(1.626, rel=1e-3)
    assert by_hazen_williams(0.10, 0.3 * 1.302, 130.0) == pytest.approx(one, rel=3e-3)
    assert by_manning(0.10, 0.3, 0.011) == pytest.approx(4 * by_manning(0.05, 0.3, 0.011), rel=1e-14)


def test_other_constants_are_those_of_the_project() -> None:
    # By hand, for 1 m: ln(0.1/130) = -7.17012, x 1.85 = -13.26472; ln 0.25 = -1.386294, x 4.87 = -6.751252;
    # their difference is -6.513468, and 10.5088 x exp(-6.513468) = 10.5088 x 1.48333e-3 = 0.0155880.
    other = {"hazen_williams_coefficient": 10.5088}
    other |= {"hazen_williams_flow_exponent": 1.85, "hazen_williams_bore_exponent": 4.87}
    assert by_hazen_williams(0.1, 0.25, 130.0, **other) == pytest.approx(0.0155880, rel=2e-5)


def law_of(word: str, flow: Any) -> Any:  # noqa: ANN401
    inputs = {
        "by": Labels((word,), np.zeros(1, dtype=np.int64)),
        "flow_each": flow,
        "reynolds": np.zeros(3),
        "length": np.array([100.0]),
        "bore": np.array([0.2]),
        "hazen_williams_c": np.array([120.0]),
        "hazen_williams_coefficient": np.array([10.67]),
        "hazen_williams_flow_exponent": np.array([1.852]),
        "hazen_williams_bore_exponent": np.array([4.8704]),
        "manning_n": np.array([0.012]),
        "manning_coefficient": np.array([10.2936]),
        "manning_bore_exponent": np.array([5.33333]),
    }
    return evaluate(friction.FRICTION_LOSS, inputs)


@pytest.mark.parametrize("word", list(empirical.EMPIRICAL_LAWS))
def test_at_rest_nothing_is_lost_and_the_slope_is_zero(word: str) -> None:
    got = law_of(word, Slope(np.array([0.0, 0.02, -0.02]), np.ones(3)))
    assert got.value[0] == 0.0
    assert got.slope[0] == 0.0
    assert got.value[1] == -got.value[2] > 0.0
    assert got.slope[1] == got.slope[2] > 0.0


@pytest.mark.parametrize("word", list(empirical.EMPIRICAL_LAWS))
def test_no_factor_is_defined_and_the_equivalent_one_gives_the_loss_back(word: str) -> None:
    by = Labels((word,), np.zeros(1, dtype=np.int64))
    flow = np.array([0.02, -0.02, 0.0])
    assert np.all(np.isnan(value_of(evaluate(friction.FRICTION_FACTOR, {"by": by, "reynolds": np.full(3, 1e5)}))))
    loss, mean = value_of(law_of(word, flow)), flow / (np.pi / 4 * 0.2**2)
    inputs = {"by": by, "reynolds": np.abs(mean) * 0.2 / 1e-6, "friction_loss": loss, "velocity": mean}
    inputs |= {"bore": np.array([0.2]), "length": np.array([100.0]), "gravity": np.array([9.81])}
    factor = value_of(evaluate(friction.EQUIVALENT_FACTOR, inputs))
    assert np.isnan(factor[2])
    again = friction.darcy_weisbach.body(factor=factor[:2], length=100.0, bore=0.2, velocity=mean[:2], gravity=9.81)
    np.testing.assert_allclose(again, loss[:2], rtol=1e-14)

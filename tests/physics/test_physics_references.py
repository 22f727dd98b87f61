"""Single laws against reference libraries and against what must hold of them."""

from __future__ import annotations

from itertools import pairwise

import fluids
import numpy as np
import pytest
from fluids.atmosphere import ATMOSPHERE_1976
from iapws import IAPWS95
from iapws._iapws import _Liquid

from calc.equation import Labels, Slope, evaluate, value_of
from calc.physics import energy, fitting, friction, velocity, water

KELVIN = np.linspace(273.16, 372.0, 12)


def test_density_of_water_is_that_of_iapws_95() -> None:
    # Kell's correlation is on the temperature scale of 1968; the reference is IAPWS-95 by the iapws library.
    expected = [IAPWS95(T=float(kelvin), P=0.101325).rho for kelvin in KELVIN]
    np.testing.assert_allclose(water.density.body(temperature=KELVIN), expected, rtol=3e-5)


def test_viscosity_of_water_is_that_of_its_release() -> None:
    # IAPWS SR6-08 at 0.1 MPa by the iapws library: the same formula in other hands.
    expected = [_Liquid(float(kelvin), 0.1)["mu"] for kelvin in KELVIN if kelvin < 383]
    np.testing.assert_allclose(water.dynamic_viscosity.body(temperature=KELVIN), expected, rtol=1e-12)


def test_vapour_pressure_of_water_is_that_of_iapws_95() -> None:
    # Wagner & Pruss 1993 agrees with the saturation line of IAPWS-95 within some 0.01 %.
    expected = [1e6 * IAPWS95(T=float(kelvin), x=0).P for kelvin in KELVIN]
    np.testing.assert_allclose(water.vapour_pressure.body(temperature=KELVIN), expected, rtol=2e-4)


@pytest.mark.parametrize("altitude", [-400.0, 0.0, 1000.0, 2500.0, 5000.0])
def test_atmospheric_pressure_is_that_of_the_standard_atmosphere(altitude: float) -> None:
    # US Standard Atmosphere 1976 by the fluids library, the same as ISO 2533 below 32 km.
    reference = ATMOSPHERE_1976(altitude)
    height = water.geopotential_altitude.body(altitude=np.array([altitude]))
    assert height[0] == pytest.approx(reference.H, abs=0.1)
    pressure = water.atmospheric_pressure.body(geopotential_altitude=height)
    assert pressure[0] == pytest.approx(reference.P, rel=1e-5)


def test_kinematic_viscosity_is_a_quotient() -> None:
    got = water.kinematic_viscosity.body(dynamic_viscosity=np.array([1e-3]), density=np.array([998.0]))
    assert got[0] == 1e-3 / 998.0


@pytest.mark.parametrize("reynolds", [4e3, 2.5e4, 7e5, 1e8])
@pytest.mark.parametrize("rough", [0.0, 1e-5, 1e-3, 4e-2])
def test_friction_factors_are_those_of_the_library(reynolds: float, rough: float) -> None:
    # The fluids library: Colebrook-White in closed form; Swamee-Jain, Haaland as published.
    inputs = {"reynolds": np.array([reynolds]), "roughness": np.array([rough]), "bore": np.ones(1)}
    got = value_of(evaluate(friction.colebrook_white, inputs))[0]
    assert got == pytest.approx(fluids.friction.Colebrook(reynolds, rough), rel=1e-12)
    haaland = friction.haaland.body(**inputs)[0]
    assert haaland == pytest.approx(fluids.friction.Haaland(reynolds, rough), rel=1e-12)
    swamee = friction.swamee_jain.body(**inputs)[0]
    # The library's constants stand at other places: 5.74/Re^0.9 as (6.97/Re)^0.9, equal within 0.05 %.
    assert swamee == pytest.approx(fluids.friction.Swamee_Jain_1976(reynolds, rough), rel=1e-3)


LAWS = (*friction.ROUGH_PIPE_LAWS, "fixed")


def factor_of(law: str, reynolds: np.ndarray, rough: float = 2e-3) -> np.ndarray:  # type: ignore[type-arg]
    count = len(reynolds)
    inputs = {
        "reynolds": reynolds,
        "roughness": np.full(count, rough),
        "bore": np.ones(count),
        "friction_factor": np.full(count, 0.02),
        "laminar_below": np.array([2000.0]),
        "turbulent_above": np.array([4000.0]),
        "factor_laminar": np.array([64 / 2000.0]),
        "by": Labels(LAWS, np.array([LAWS.index(law)])),
    }
    at_limit = {**inputs, "reynolds": np.array([4000.0] * count)}
    inputs["factor_turbulent"] = value_of(evaluate(friction.AT_TURBULENT_LIMIT, at_limit))
    return value_of(evaluate(friction.FRICTION_FACTOR, inputs))


@pytest.mark.parametrize("law", friction.ROUGH_PIPE_LAWS)
def test_the_factor_is_continuous_at_both_ends_of_the_transition(law: str) -> None:
    below, at, above = (factor_of(law, limit * np.array([1 - 1e-12, 1.0, 1 + 1e-12])) for limit in (2e3, 3e3, 4e3))
    for three in (below, at, above):
        assert np.ptp(three) <= 1e-11 * three[1]
    assert below[1] == pytest.approx(64 / 2000, rel=1e-15)
    assert above[1] == pytest.approx(factor_of(law, np.array([4000.0 * (1 + 1e-15)]))[0], rel=1e-12)


@pytest.mark.parametrize("law", friction.ROUGH_PIPE_LAWS)
def test_in_the_transition_log_f_is_linear_in_log_reynolds(law: str) -> None:
    # The convention stated in every package: a straight line from (2000, 64/2000) to (4000, f of the law).
    reynolds = np.geomspace(2000.0, 4000.0, 9)
    logs = np.log(factor_of(law, reynolds))
    np.testing.assert_allclose(np.diff(logs, 2), 0.0, atol=1e-13)
    middle = np.sqrt(64 / 2000 * factor_of(law, np.array([4000.0]))[0])
    assert np.exp(logs[4]) == pytest.approx(middle, rel=1e-13)


def test_below_the_transition_the_factor_is_that_of_laminar_flow_whatever_the_law() -> None:
    reynolds = np.array([1.0, 500.0, 1999.0])
    for law in friction.ROUGH_PIPE_LAWS:
        np.testing.assert_allclose(factor_of(law, reynolds), 64 / reynolds, rtol=1e-15)
    np.testing.assert_array_equal(factor_of("fixed", reynolds), 0.02)


def test_at_rest_no_factor_is_defined_and_nothing_is_lost() -> None:
    assert np.isnan(factor_of("colebrook-white", np.array([0.0]))[0])
    assert factor_of("fixed", np.array([0.0]))[0] == 0.02
    assert loss_of("colebrook-white", np.array([0.0]))[0] == 0.0
    assert loss_of("fixed", np.array([0.0]))[0] == 0.0


def loss_of(law: str, flow: np.ndarray) -> np.ndarray:  # type: ignore[type-arg]
    """Return the friction loss of a 100 m pipe of 100 mm."""
    bore, nu, gravity = np.array([0.1]), np.array([1e-6]), np.array([9.81])
    mean = velocity.mean_velocity.body(flow_each=flow, bore=bore)
    reynolds = velocity.reynolds_number.body(velocity=mean, bore=bore, viscosity=nu)
    inputs = {
        "reynolds": reynolds,
        "factor": factor_of(law, reynolds, 1e-4),
        "length": np.array([100.0]),
        "bore": bore,
        "velocity": mean,
        "gravity": gravity,
        "viscosity": nu,
        "flow_each": flow,
        "laminar_below": np.array([2000.0]),
        "by": Labels(LAWS, np.array([LAWS.index(law)])),
    }
    return value_of(evaluate(friction.FRICTION_LOSS, inputs))


@pytest.mark.parametrize("law", LAWS)
def test_a_loss_turns_its_sign_with_the_flow(law: str) -> None:
    flow = np.array([1e-6, 1e-4, 2.3e-4, 1e-3, 2e-2])  # laminar, transition and turbulent
    np.testing.assert_array_equal(loss_of(law, -flow), -loss_of(law, flow))
    assert np.all(loss_of(law, flow) > 0)


@pytest.mark.parametrize("law", LAWS)
def test_a_loss_rises_with_the_flow(law: str) -> None:
    losses = loss_of(law, np.geomspace(1e-6, 1.0, 400))
    assert all(low < high for low, high in pairwise(losses.tolist()))


def test_laminar_loss_is_the_same_by_factor_and_directly() -> None:
    flow = np.array([5e-5])
    mean = velocity.mean_velocity.body(flow_each=flow, bore=np.array([0.1]))
    reynolds = velocity.reynolds_number.body(velocity=mean, bore=np.array([0.1]), viscosity=np.array([1e-6]))
    by_factor = friction.darcy_weisbach.body(
        factor=friction.laminar_factor.body(reynolds=reynolds),
        length=np.array([100.0]),
        bore=np.array([0.1]),
        velocity=mean,
        gravity=np.array([9.81]),
    )
    assert loss_of("haaland", flow)[0] == pytest.approx(by_factor[0], rel=1e-14)


def test_a_fitting_loses_by_the_coefficient_of_the_direction() -> None:
    flow = np.array([-0.02, 0.0, 0.02])
    coefficient = value_of(
        evaluate(
            fitting.COEFFICIENT,
            {
                "flow_each": flow,
                "coefficient_forward": np.array([1.5, 1.5, 1.5]),
                "coefficient_reverse": np.array([4.0, 4.0, 4.0]),
            },
        )
    )
    np.testing.assert_array_equal(coefficient, [4.0, 1.5, 1.5])
    mean = velocity.mean_velocity.body(flow_each=flow, bore=np.array([0.1]))
    loss = fitting.fitting_loss.body(
        count=np.array([2.0]), coefficient=coefficient, velocity=mean, gravity=np.array([9.81])
    )
    # By hand: V = 0.02/0.00785398 = 2.546479 m/s, V^2/2g = 0.3305074 m; twice 1.5 and twice 4.
    np.testing.assert_allclose(loss, [-8 * 0.3305074, 0.0, 3 * 0.3305074], rtol=2e-6)


def test_heads_and_pressures() -> None:
    # By hand: 10 m of water at 1000 kg/m3 and 9.81 m/s2 is 98.1 kPa.
    ten = np.array([10.0])
    pressure = energy.pressure.body(density=np.array([1000.0]), gravity=np.array([9.81]), pressure_head=ten)
    assert pressure[0] == pytest.approx(98100.0, rel=1e-15)
    assert energy.pressure_head.body(head=np.array([31.0]), elevation=ten)[0] == 21.0
    closing = energy.closing_error.body(head_from=np.array([31.0]), head_to=ten, head_loss=np.array([20.5]))
    assert closing[0] == 0.5


def test_the_slope_of_a_loss_is_its_central_difference_through_every_regime() -> None:
    flow = np.array([3e-5, 2.3e-4, 1e-3, 2e-2])
    step = 1e-6 * flow
    for law in LAWS:
        difference = (loss_of(law, flow + step) - loss_of(law, flow - step)) / (2 * step)
        mean = Slope(flow, np.ones_like(flow))
        bore = np.array([0.1])
        each = velocity.mean_velocity.body(flow_each=mean, bore=bore)
        reynolds = velocity.reynolds_number.body(velocity=each, bore=bore, viscosity=np.array([1e-6]))
        got = _sloped(law, mean, each, reynolds)
        np.testing.assert_allclose(got.slope, difference, rtol=1e-7)


def _sloped(law: str, flow: Slope, mean: Slope, reynolds: Slope) -> Slope:
    count = len(flow.value)
    inputs = {
        "reynolds": reynolds,
        "roughness": np.full(count, 1e-4),
        "bore": np.ones(count),
        "friction_factor": np.full(count, 0.02),
        "laminar_below": np.array([2000.0]),
        "turbulent_above": np.array([4000.0]),
        "factor_laminar": np.array([64 / 2000.0]),
        "by": Labels(LAWS, np.array([LAWS.index(law)])),
    }
    at_limit = {**inputs, "reynolds": np.full(count, 4000.0)}
    inputs["factor_turbulent"] = value_of(evaluate(friction.AT_TURBULENT_LIMIT, at_limit))
    factor = evaluate(friction.FRICTION_FACTOR, inputs)
    rest = {
        "factor": factor,
        "length": np.array([100.0]),
        "bore": np.array([0.1]),
        "velocity": mean,
        "gravity": np.array([9.81]),
        "viscosity": np.array([1e-6]),
        "flow_each": flow,
    }
    got = evaluate(friction.FRICTION_LOSS, {**inputs, **rest})
    assert isinstance(got, Slope)
    return got

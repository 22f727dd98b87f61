"""Friction of the second opinion against tables and general-purpose libraries."""

from __future__ import annotations

import json
import math
from collections.abc import Callable
from pathlib import Path

import fluids
import mpmath  # type: ignore[import-untyped]
import numpy as np
import pytest

from calc.second import Works
from calc.second.friction import TURBULENT, Pipes, colebrook_white, head_loss, prepare
from calc.second.works import LAWS

Build = Callable[..., Works]
# Darcy f to 25 digits; each row is held to the equation below before it is used.
GRID = json.loads((Path(__file__).parents[1] / "published" / "colebrook_grid.json").read_text())
GRAVITY, VISCOSITY = 9.80665, 1.3e-6


def flow_at(reynolds: float, bore: float) -> float:
    return reynolds * math.pi * bore * VISCOSITY / 4.0


def one_pipe(build: Build, **pipe: object) -> Pipes:
    made = build([10.0, 0.0], [{"start": 0, "end": 1, **pipe}], gravity=GRAVITY, viscosity=VISCOSITY)
    return prepare(made)


def test_the_table_satisfies_colebrook_white() -> None:
    with mpmath.workdps(30):
        for row in GRID["rows"]:
            root = mpmath.sqrt(mpmath.mpf(row["f"]))
            inside = mpmath.mpf(row["rel_rough"]) / mpmath.mpf("3.7")
            inside += mpmath.mpf("2.51") / (mpmath.mpf(row["Re"]) * root)
            assert abs(1 / root + 2 * mpmath.log10(inside)) < mpmath.mpf("1e-21")


def test_colebrook_white_is_exact() -> None:
    reynolds = np.array([float(row["Re"]) for row in GRID["rows"]])
    relative = np.array([float(row["rel_rough"]) for row in GRID["rows"]])
    expected = np.array([float(row["f"]) for row in GRID["rows"]])
    assert len(expected) > 100
    np.testing.assert_allclose(colebrook_white(reynolds, relative)[0], expected, rtol=1e-13)


@pytest.mark.parametrize(("law", "method"), [("swamee-jain", "Swamee_Jain_1976"), ("haaland", "Haaland")])
@pytest.mark.parametrize("reynolds", [4e3, 7e4, 3e6, 1e8])
@pytest.mark.parametrize("relative", [0.0, 1e-5, 3e-3, 0.05])
def test_explicit_laws_agree_with_a_library(law: str, method: str, reynolds: float, relative: float) -> None:
    # Source: the fluids library, friction_factor; it writes Swamee–Jain as (6.97/Re)^0.9, and 6.97^0.9 is
    # 5.74 to three figures only.
    expected = fluids.friction_factor(Re=reynolds, eD=relative, Method=method)
    got = TURBULENT[law](np.array([reynolds]), np.array([relative]))[0][0]
    assert got == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("reynolds", [4e3, 7e4, 3e6, 1e8])
@pytest.mark.parametrize("relative", [0.0, 1e-5, 3e-3, 0.05])
def test_explicit_laws_are_as_stated(reynolds: float, relative: float) -> None:
    # 1/√f = −1.8 log₁₀((ε/3.7D)^1.11 + 6.9/Re) and f = 0.25/log₁₀(ε/3.7D + 5.74/Re^0.9)², 30 digits.
    with mpmath.workdps(30):
        rough, speed = mpmath.mpf(relative) / mpmath.mpf("3.7"), mpmath.mpf(reynolds)
        haaland = mpmath.mpf("1.8") * mpmath.log10(rough ** mpmath.mpf("1.11") + mpmath.mpf("6.9") / speed)
        swamee = mpmath.log10(rough + mpmath.mpf("5.74") / speed ** mpmath.mpf("0.9"))
        expected = {"haaland": float(haaland**-2), "swamee-jain": float(0.25 / swamee**2)}
    for law, value in expected.items():
        got = TURBULENT[law](np.array([reynolds]), np.array([relative]))[0][0]
        assert got == pytest.approx(value, rel=1e-13)


@pytest.mark.parametrize("reynolds", [1e-3, 1.0, 1500.0, 1999.999])
def test_laminar_flow_is_hagen_poiseuille(build: Build, reynolds: float) -> None:
    pipes = one_pipe(build, length=37.0, bore=0.021, roughness=1e-4)
    flow = flow_at(reynolds, 0.021)
    loss, slope = head_loss(pipes, np.array([flow]))
    exact = 128.0 * VISCOSITY * 37.0 / (math.pi * GRAVITY * 0.021**4)
    assert loss[0] == pytest.approx(exact * flow, rel=1e-14)
    assert slope[0] == pytest.approx(exact, rel=1e-14)


@pytest.mark.parametrize("law", sorted(TURBULENT))
def test_transition_is_straight_in_logarithms(build: Build, law: str) -> None:
    pipes = one_pipe(build, length=50.0, bore=0.04, roughness=2e-4, law=law)

    def factor(reynolds: float) -> float:
        flow = flow_at(reynolds, 0.04)
        velocity = flow / (math.pi / 4.0 * 0.04**2)
        return float(head_loss(pipes, np.array([flow]))[0][0]) * 2.0 * GRAVITY * 0.04 / (50.0 * velocity**2)

    turbulent = TURBULENT[law](np.array([4000.0]), np.array([0.005]))[0][0]
    assert factor(2000.0 * (1 - 1e-12)) == pytest.approx(0.032, rel=1e-10)
    assert factor(2000.0 * (1 + 1e-12)) == pytest.approx(0.032, rel=1e-10)
    assert factor(4000.0 * (1 - 1e-12)) == pytest.approx(turbulent, rel=1e-10)
    assert factor(4000.0 * (1 + 1e-12)) == pytest.approx(turbulent, rel=1e-10)
    # Half way in ln Re lies the geometric mean of the two ends.
    assert factor(math.sqrt(2000.0 * 4000.0)) == pytest.approx(math.sqrt(0.032 * turbulent), rel=1e-12)


def test_a_fixed_factor_holds_at_every_reynolds_number(build: Build) -> None:
    pipes = one_pipe(build, length=50.0, bore=0.04, factor=0.03)
    for reynolds in (0.1, 1000.0, 3000.0, 1e6):
        flow = flow_at(reynolds, 0.04)
        velocity = flow / (math.pi / 4.0 * 0.04**2)
        expected = 0.03 * 50.0 / 0.04 * velocity**2 / (2.0 * GRAVITY)
        assert head_loss(pipes, np.array([flow]))[0][0] == pytest.approx(expected, rel=1e-13)


def test_fittings_know_the_direction_and_parallel_pipes_share(build: Build) -> None:
    alone = one_pipe(build, length=50.0, bore=0.1, factor=0.02, loss_forward=40.0, loss_reverse=90.0)
    three = one_pipe(build, length=50.0, bore=0.1, factor=0.02, loss_forward=40.0, loss_reverse=90.0, parallel=3)
    friction = 8.0 * 0.02 * 50.0 / (math.pi**2 * GRAVITY * 0.1**5)
    for sign, fittings in ((1.0, 40.0), (-1.0, 90.0)):
        expected = sign * (friction + fittings) * 0.02**2
        assert head_loss(alone, np.array([sign * 0.02]))[0][0] == pytest.approx(expected, rel=1e-13)
        assert head_loss(three, np.array([sign * 0.06]))[0][0] == pytest.approx(expected, rel=1e-13)


@pytest.mark.parametrize("reynolds", [0.1, 1000.0, 3000.0, 1e6])
def test_empirical_laws_are_as_stated_at_every_reynolds_number(build: Build, reynolds: float) -> None:
    # h = 10.67 L Q^1.852 / (C^1.852 D^4.8704) and h = 10.2936 n² L Q² / D^(16/3), 30 digits
    flow = flow_at(reynolds, 0.04)
    with mpmath.workdps(30):
        q, bore = mpmath.mpf(flow), mpmath.mpf("0.04")
        exponent, narrowing = mpmath.mpf("1.852"), mpmath.mpf("4.8704")
        expected = {
            "hazen-williams": mpmath.mpf("10.67") * 50 * (q / 120) ** exponent / bore**narrowing,
            "manning": mpmath.mpf(4) ** (mpmath.mpf(10) / 3)
            / mpmath.pi**2
            * mpmath.mpf("0.012") ** 2
            * 50
            * q**2
            / bore ** (mpmath.mpf(16) / 3),
        }
    for law, value in expected.items():
        pipes = one_pipe(build, length=50.0, bore=0.04, law=law, hazen_williams_c=120.0, manning_n=0.012)
        for sign in (1.0, -1.0):
            assert head_loss(pipes, np.array([sign * flow]))[0][0] == pytest.approx(sign * float(value), rel=1e-13)


@pytest.mark.parametrize("law", LAWS)
@pytest.mark.parametrize("reynolds", [300.0, 2500.0, 3900.0, 5000.0, 1e5, 1e8])
@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_the_slope_is_that_of_the_loss(build: Build, law: str, reynolds: float, sign: float) -> None:
    pipes = one_pipe(
        build,
        length=80.0,
        bore=0.25,
        roughness=3e-4,
        factor=0.02,
        hazen_williams_c=110.0,
        manning_n=0.013,
        law=law,
        loss_forward=60.0,
        loss_reverse=85.0,
        parallel=2,
    )
    flow = sign * 2.0 * flow_at(reynolds, 0.25)
    step = 1e-5 * flow
    ends = [float(head_loss(pipes, np.array([flow + side * step]))[0][0]) for side in (1.0, -1.0)]
    slope = head_loss(pipes, np.array([flow]))[1][0]
    assert slope == pytest.approx((ends[0] - ends[1]) / (2.0 * step), rel=1e-8)


def test_nothing_is_lost_at_rest(build: Build) -> None:
    raised = [{"law": "hazen-williams", "hazen_williams_c": 120.0}, {"law": "manning", "manning_n": 0.012}]
    for pipe in ({"roughness": 1e-4}, {"factor": 0.02}, *raised):
        loss, slope = head_loss(one_pipe(build, **pipe), np.array([0.0]))
        assert loss[0] == 0.0
        assert slope[0] >= 0.0

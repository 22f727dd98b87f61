"""Single laws against published values; the source of each stands in ``tests/published``."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml

from calc.components.liquid import LiquidTerms, liquid
from calc.equation import ARRAYS, Value, evaluate, value_of
from calc.physics import energy, friction, velocity, water

PUBLISHED = Path(__file__).parents[1] / "published"


def cases(name: str, *methods: str) -> list[dict[str, Any]]:
    found = yaml.safe_load((PUBLISHED / f"{name}.yaml").read_text(encoding="utf-8"))
    chosen = [case for case in found if case["method"] in methods]
    assert chosen
    return chosen


def compare(got: dict[str, float], case: dict[str, Any], *, tolerance: dict[str, float] | None = None) -> None:
    """Hold what was got to what is published; what the program does not compute is left out by name."""
    held = 0
    for name, published in case["expected"].items():
        if name not in got:
            continue
        held += 1
        value = got[name] * published.get("scale", 1.0)
        if "max" in published:
            assert abs(value) <= published["max"], name
            continue
        within = published.get("rtol") if tolerance is None else tolerance[name]
        assert value == pytest.approx(published["value"], rel=within, abs=published.get("atol")), name
    assert held == len(got)


def colebrook(reynolds: float, rough: float) -> float:
    inputs = {"reynolds": np.array([reynolds]), "roughness": np.array([rough]), "bore": np.ones(1)}
    return float(value_of(evaluate(friction.colebrook_white, inputs))[0])


def named(case: dict[str, Any]) -> str:
    return str(case["id"])


def test_colebrook_to_25_digits() -> None:
    # Computed with mpmath at 40 digits; rel. 1e-13 leaves some ulp for another processor.
    rows = json.loads((PUBLISHED / "colebrook_grid.json").read_text(encoding="utf-8"))["rows"]
    assert len(rows) == 130
    reynolds = np.array([row["Re"] for row in rows])
    rough = np.array([float(row["rel_rough"]) for row in rows])
    inputs = {"reynolds": reynolds, "roughness": rough * 0.3, "bore": np.full(130, 0.3)}
    got = value_of(evaluate(friction.colebrook_white, inputs))
    np.testing.assert_allclose(got, [float(row["f"]) for row in rows], rtol=1e-13, atol=0)


@pytest.mark.parametrize("case", cases("friction", "colebrook"), ids=named)
def test_chart_readings(case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    compare({"f": colebrook(inputs["Re"], inputs["rel_rough"])}, case)


@pytest.mark.parametrize("case", cases("friction", "rough_turbulent"), ids=named)
def test_rough_limit(case: dict[str, Any]) -> None:
    compare({"f": colebrook(1e13, case["inputs"]["rel_rough"])}, case)


@pytest.mark.parametrize("case", cases("friction", "smooth_prandtl"), ids=named)
def test_smooth_limit(case: dict[str, Any]) -> None:
    compare({"f": colebrook(case["inputs"]["Re"], 0.0)}, case)


@pytest.mark.parametrize("case", cases("friction", "dw_pipe"), ids=named)
def test_worked_pipes(case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    bore, length, flow, nu, gravity = (np.array([inputs[name]]) for name in ("D_m", "L_m", "Q_m3s", "nu_m2s", "g"))
    mean = velocity.mean_velocity.body(flow_each=flow, bore=bore)
    reynolds = velocity.reynolds_number.body(velocity=mean, bore=bore, viscosity=nu)
    given = inputs.get("f")
    factor = np.array([given or colebrook(float(reynolds[0]), inputs.get("eps_m", 0.0) / inputs["D_m"])])
    loss = friction.darcy_weisbach.body(factor=factor, length=length, bore=bore, velocity=mean, gravity=gravity)
    drop = energy.pressure.body(density=np.array([inputs["rho"]]), gravity=gravity, pressure_head=loss)
    got = {"V": mean[0], "Re": reynolds[0], "f": factor[0], "h": loss[0], "dp_Pa": drop[0]}
    compare({name: float(value) for name, value in got.items() if name in case["expected"]}, case)


@pytest.mark.parametrize("case", cases("friction", "laminar"), ids=named)
def test_laminar_loss(case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    mean = inputs["Re"] * inputs["nu_m2s"] / inputs["D_m"]
    loss = friction.hagen_poiseuille.body(
        viscosity=inputs["nu_m2s"],
        length=1.0,
        flow_each=mean * math.pi / 4 * inputs["D_m"] ** 2,
        gravity=9.81,
        bore=inputs["D_m"],
    )
    compare({"V": mean, "h_per_m": float(loss)}, case)


@pytest.mark.parametrize("case", cases("friction", "approx_error"), ids=named)
def test_error_of_swamee_jain(case: dict[str, Any]) -> None:
    compare({"max_abs_pct": 100 * largest_error(friction.swamee_jain.body, case["inputs"])}, case)


def test_error_of_haaland() -> None:
    # Haaland 1983 states about 1.5 % of Colebrook-White for 4e3 <= Re <= 1e8 and eps/D <= 0.05 (from memory).
    limits = {"Re_min": 4e3, "Re_max": 1e8, "rr_min": 1e-6, "rr_max": 5e-2}
    error = largest_error(friction.haaland.body, limits)
    assert 0.005 < error < 0.0151


def largest_error(body: Any, limits: dict[str, Any]) -> float:  # noqa: ANN401
    reynolds, rough = np.meshgrid(
        np.geomspace(limits["Re_min"], limits["Re_max"], 60),
        np.geomspace(limits["rr_min"], limits["rr_max"], 40),
    )
    inputs = {"reynolds": reynolds.ravel(), "roughness": rough.ravel(), "bore": np.ones(reynolds.size)}
    exact = value_of(evaluate(friction.colebrook_white, inputs))
    return float(np.max(np.abs(body(**inputs) / exact - 1)))


@pytest.mark.parametrize("case", cases("discharge", "cw_explicit"), ids=named)
def test_a_discharge_from_a_gradient_loses_that_gradient(case: dict[str, Any]) -> None:
    # For a given gradient Colebrook-White is explicit in V; the other way round it must give the gradient back.
    inputs, mean = case["inputs"], case["expected"]["V"]["value"]
    factor = colebrook(mean * inputs["D_m"] / inputs["nu_m2s"], inputs["eps_m"] / inputs["D_m"])
    loss = friction.darcy_weisbach.body(
        factor=factor, length=1.0, bore=inputs["D_m"], velocity=mean, gravity=inputs["g"]
    )
    # V is given to 7 digits and the loss goes with about V squared.
    assert float(loss) == pytest.approx(inputs["S"], rel=3 * 1e-6)


def water_at(celsius: float, altitude: float = 0.0) -> dict[str, float]:
    stated: LiquidTerms[Value] = LiquidTerms(altitude=np.array([altitude]), temperature=np.array([celsius + 273.15]))
    got = liquid(ARRAYS, stated)
    mu = water.dynamic_viscosity.body(temperature=np.array([celsius + 273.15]))
    named_values = {"rho": got.density, "nu": got.viscosity, "pv": got.vapour_pressure, "mu": mu}
    return {name: float(value_of(value)[0]) for name, value in named_values.items()}


@pytest.mark.parametrize("case", cases("water", "water"), ids=named)
def test_water(case: dict[str, Any]) -> None:
    got = {name: value for name, value in water_at(case["inputs"]["T_C"]).items() if name in case["expected"]}
    # The library values stand to six digits; the laws used here are of older, simpler correlations, for which
    # rho 0.05 %, viscosity 1 %, vapour pressure 1 % are common practice. Handbook values bring their own.
    library = case["source_class"] == "library"
    wide = {"rho": 5e-4, "mu": 1e-2, "nu": 1e-2, "pv": 1e-2}
    compare(got, case, tolerance=wide if library else None)


@pytest.mark.parametrize("case", cases("water", "atmosphere"), ids=named)
def test_the_standard_atmosphere(case: dict[str, Any]) -> None:
    altitude = np.array([case["inputs"]["alt_m"]])
    if case["inputs"]["kind"] == "geometric":
        altitude = water.geopotential_altitude.body(altitude=altitude)
    pressure = water.atmospheric_pressure.body(geopotential_altitude=altitude)
    compare({"p": float(pressure[0])}, case)

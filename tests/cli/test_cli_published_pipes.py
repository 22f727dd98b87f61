"""Published single pipes through the command: worked examples, readings, tables and exact discharges."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest
from contract import PUBLISHED, SHIPPED, Works, between, compare, named, published

FRICTION = published("friction")
DISCHARGE = published("discharge")


def drawn_off(works: Works, name: str, flow: float, entry: dict[str, Any]) -> None:
    """Add a pipe whose flow is drawn off at its end."""
    works.reservoirs.setdefault("pond", 0.0)
    works.junction(f"end-{name}", flow)
    works.pipe(name, "pond", f"end-{name}", entry)


@pytest.mark.parametrize("case", [c for c in FRICTION.values() if c["method"] == "dw_pipe"], ids=named)
def test_worked_pipes(tmp_path: Path, case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    works = Works.of(inputs)
    drawn_off(works, "main", inputs["Q_m3s"], inputs)
    told = works.solved(tmp_path)
    loss = told.of("main", "friction_loss")
    got = {"V": told.of("main", "velocity"), "h": loss, "Re": told.of("main", "reynolds")}
    drop = loss * inputs["rho"] * inputs["g"]
    got |= {"f": told.of("main", "friction_factor"), "dp_Pa": drop, "P_loss_W": drop * inputs["Q_m3s"]}
    compare(got, case["expected"])


@pytest.mark.parametrize("law", ["hw", "manning_full"])
def test_empirical_laws_in_their_usual_units(tmp_path: Path, law: str) -> None:
    cases = [case for case in FRICTION.values() if case["method"] == law]
    works = Works()
    for case in cases:
        inputs = case["inputs"]
        if law == "hw":
            drawn_off(works, case["id"], inputs["Q_m3s"], {**inputs, "law": "HW"})
            continue
        works.reservoirs |= {"high": 100 * inputs["S"], "low": 0.0}
        works.pipe(case["id"], "high", "low", {**inputs, "L_m": 100.0, "law": "manning"})
    told = works.solved(tmp_path)
    assert len(cases) == {"hw": 7, "manning_full": 8}[law]
    for case in cases:
        if law == "hw":
            loss = told.of(case["id"], "friction_loss")
            expected = {n: e for n, e in case["expected"].items() if n in ("h", "h_velocity_form")}
            assert expected
            compare(dict.fromkeys(expected, loss), expected)
        else:
            flow = told.of(case["id"]) / 0.3048**3
            compare({"Q_cfs": flow, "conveyance_cfs": flow / math.sqrt(case["inputs"]["S"])}, case["expected"])


def flow_at(reynolds: float, bore: float, viscosity: float) -> float:
    return reynolds * viscosity * math.pi * bore / 4


def test_readings_of_the_chart_and_its_limits(tmp_path: Path) -> None:
    # Colebrook–White at the reading; its smooth and its rough limit, the latter at Re = 1e10
    methods = ("colebrook", "smooth_prandtl", "rough_turbulent")
    cases = [case for case in FRICTION.values() if case["method"] in methods]
    works = Works()
    for case in cases:
        inputs = case["inputs"]
        flow = flow_at(inputs.get("Re", 1e10), 1.0, 1e-6)
        drawn_off(works, case["id"], flow, {"D_m": 1.0, "eps_m": inputs.get("rel_rough", 0.0)})
    told = works.solved(tmp_path)
    assert len(cases) == 16
    for case in cases:
        compare({"f": told.of(case["id"], "friction_factor")}, case["expected"])


def test_the_factor_over_its_whole_range(tmp_path: Path) -> None:
    rows = json.loads((PUBLISHED / "colebrook_grid.json").read_text(encoding="utf-8"))["rows"]
    works = Works()
    for k, row in enumerate(rows):
        drawn_off(works, f"pipe-{k}", flow_at(row["Re"], 1.0, 1e-6), {"D_m": 1.0, "eps_m": float(row["rel_rough"])})
    told = works.solved(tmp_path)
    assert len(rows) == 130
    for k, row in enumerate(rows):
        assert told.of(f"pipe-{k}", "friction_factor") == pytest.approx(float(row["f"]), rel=1e-10)


@pytest.mark.parametrize("case", [c for c in FRICTION.values() if c["method"] == "approx_error"], ids=named)
def test_an_approximation_is_as_near_as_is_claimed(tmp_path: Path, case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    assert inputs["formula"] == "swamee_jain"
    works = Works()
    steps = [k / 4 for k in range(5)]
    for k in steps:
        for j in steps:
            reynolds = inputs["Re_min"] * (inputs["Re_max"] / inputs["Re_min"]) ** k
            entry = {"D_m": 1.0, "eps_m": inputs["rr_min"] * (inputs["rr_max"] / inputs["rr_min"]) ** j}
            drawn_off(works, f"exact-{k}-{j}".replace(".", ""), flow_at(reynolds, 1.0, 1e-6), entry)
            works.junction(f"end-{k}-{j}".replace(".", ""), flow_at(reynolds, 1.0, 1e-6))
            name = f"near-{k}-{j}".replace(".", "")
            works.pipe(name, "pond", f"end-{k}-{j}".replace(".", ""), entry, ", law: swamee-jain")
    told = works.solved(tmp_path)
    near = [name for name in works.pipes if name.startswith("near")]
    factors = [(told.of(n, "friction_factor"), told.of(n.replace("near", "exact"), "friction_factor")) for n in near]
    apart = max(abs(one / exact - 1) for one, exact in factors)
    assert 0.3 < 100 * apart <= case["expected"]["max_abs_pct"]["max"]


def test_laminar_loss(tmp_path: Path) -> None:
    case = FRICTION["FF-LAM-03"]
    inputs = case["inputs"]
    works = Works.of(inputs)
    flow = flow_at(inputs["Re"], inputs["D_m"], inputs["nu_m2s"])
    drawn_off(works, "tube", flow, {"D_m": inputs["D_m"], "eps_m": 1e-5})
    told = works.solved(tmp_path)
    loss = told.of("tube", "friction_loss")
    compare({"V": told.of("tube", "velocity"), "h_per_m": loss, "h_per_m_HP": loss}, case["expected"])


@pytest.mark.parametrize("case", DISCHARGE.values(), ids=named)
def test_discharge_at_a_gradient(tmp_path: Path, case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    works = between(inputs, 1000 * inputs["S"])
    works.pipe("main", "high", "low", {**inputs, "L_m": 1000.0})
    told = works.solved(tmp_path)
    velocity = told.of("main", "velocity")
    compare({"V": velocity, "V_iterated": velocity, "Q": told.of("main")}, case["expected"])


FITTINGS = {
    "K-EXP-25": (0.05, "kind: step, onward_bore: 0.2 m"),
    "K-EXP-50": (0.1, "kind: step, onward_bore: 0.2 m"),
    "K-EXP-75": (0.15, "kind: step, onward_bore: 0.2 m"),
    "K-BC-25": (0.1, "kind: step, onward_bore: 0.2 m"),
    "K-FL-03": (0.1, "kind: step, onward_bore: 0.2 m"),
    "VA-09": (0.1, "Kv: 200"),
    "VA-10": (4 * 0.0254, "Cv: 400"),
}
"""Bore of the pipe and YAML of the fitting, for cases that state the ratio of areas or a flow coefficient."""


def test_coefficients_of_fittings(tmp_path: Path) -> None:
    cases = published("fittings")
    works = Works()
    for name, (bore, fitting) in FITTINGS.items():
        works.reservoirs.setdefault("pond", 0.0)
        works.junction(f"end-{name}", 0.004)
        works.pipe(name, "pond", f"end-{name}", {"L_m": 1.0, "D_m": bore, "f": 0.02}, f", fittings: [{{{fitting}}}]")
        ratio = cases[name]["inputs"].get("A1_A2")
        assert ratio is None or ratio == pytest.approx((bore / 0.2) ** 2)
    told = works.solved(tmp_path)
    for name in FITTINGS:
        heads = told.of(name, "velocity") ** 2 / (2 * works.gravity)
        (expected,) = cases[name]["expected"].values()
        compare({"K": told.of(name, "fitting_loss") / heads}, {"K": expected})


def test_the_shipped_constants_are_those_of_the_cases() -> None:
    # tests/published/README: Hazen–Williams 10.67, 1.852, 4.8704 unless a case states its own
    assert SHIPPED == (10.67, 1.852, 4.8704)

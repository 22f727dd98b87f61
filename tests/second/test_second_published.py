"""The second opinion against published networks and networks exact by construction."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from scipy.optimize import brentq

from calc.second import Works, evaluate, form_opinion

Build = Callable[..., Works]
PUBLISHED = Path(__file__).parents[1] / "published"
# 6 by 6 grids with four reservoirs: heads and pipes were chosen, flows and withdrawals follow from them.
GRIDS = [json.loads((PUBLISHED / f"grid_{name}_6x6.json").read_text(encoding="utf-8")) for name in ("dw", "hw")]
NAMES = ["Darcy-Weisbach", "Hazen-Williams"]
TWO_LOOPS = yaml.safe_load((PUBLISHED / "networks.yaml").read_text(encoding="utf-8"))
CASES = yaml.safe_load((PUBLISHED / "branching.yaml").read_text(encoding="utf-8"))
# Stars of pipes; their sources stand in the file.
STARS = [
    case
    for case in CASES
    if case["method"] == "star_junction"
    and all(pipe["law"] != "r" and "hpump" not in pipe for pipe in case["inputs"]["pipes"])
]
EXTERNAL = [case for case in STARS if case["expected_origin"] != "own-solution"]
# Inputs from outside, answers computed on two other routes: not external answers.
RECOMPUTED = [case for case in STARS if case["expected_origin"] == "own-solution"]


def pipe_of(entry: dict[str, Any], start: int, end: int) -> dict[str, Any]:
    law, name, key = {
        "f": ("fixed", "factor", "f"),
        "eps": ("colebrook-white", "roughness", "eps_m"),
        "HW": ("hazen-williams", "hazen_williams_c", "C"),
        "manning": ("manning", "manning_n", "n"),
    }[entry["law"]]
    return {"start": start, "end": end, "length": entry["L_m"], "bore": entry["D_m"], "law": law, name: entry[key]}


def star(build: Build, case: dict[str, Any]) -> Works:
    inputs = case["inputs"]
    entries = inputs["pipes"]
    return build(
        [*(entry["H_m"] for entry in entries), None],
        [pipe_of(entry, place, len(entries)) for place, entry in enumerate(entries)],
        gravity=inputs["g"],
        viscosity=inputs.get("nu_m2s", 1e-6),
    )


def compare(got: dict[str, float], expected: dict[str, Any]) -> None:
    assert expected
    for name, published in expected.items():
        value = got[name] * published.get("scale", 1.0)
        # What is stated holds alone: without atol the default of 1e-12 is below any digit published.
        assert value == pytest.approx(published["value"], rel=published.get("rtol"), abs=published.get("atol")), name


def results(case: dict[str, Any], works: Works) -> dict[str, float]:
    opinion = form_opinion(works)
    assert opinion.converged
    got = {"H_J": float(opinion.head[-1])}
    for place, entry in enumerate(case["inputs"]["pipes"]):
        flow = float(opinion.flow[place])
        got |= {f"Q_{entry['id']}": flow, f"V_{entry['id']}": flow / (np.pi / 4.0 * entry["D_m"] ** 2)}
    return got


def test_the_cases_are_there() -> None:
    assert {case["id"] for case in EXTERNAL} == {"BR-02", "BR-03", "BR-12", "BR-18", "BR-20", "BR-27"}
    assert {case["id"] for case in RECOMPUTED} == {"BR-06", "BR-09"}


@pytest.mark.parametrize("case", EXTERNAL, ids=lambda case: str(case["id"]))
def test_published_reservoirs(build: Build, case: dict[str, Any]) -> None:
    compare(results(case, star(build, case)), case["expected"])


@pytest.mark.parametrize("case", RECOMPUTED, ids=lambda case: str(case["id"]))
def test_published_inputs_recomputed(build: Build, case: dict[str, Any]) -> None:
    compare(results(case, star(build, case)), case["expected"])


def test_a_level_found_from_a_known_inflow(build: Build) -> None:
    # The level of C at which A gives 60 L/s. Inputs from memory of a textbook, answer recomputed.
    case = next(case for case in CASES if case["id"] == "BR-07")
    inputs = case["inputs"]
    pipes = [pipe_of(entry, place, 3) for place, entry in enumerate(inputs["pipes"])]

    def flows(level: float) -> np.ndarray[Any, np.dtype[np.float64]]:
        works = build([inputs["H_A_m"], inputs["H_B_m"], level, None], pipes, gravity=inputs["g"])
        return form_opinion(works).flow

    level = brentq(lambda trial: flows(trial)[0] - inputs["Q_A_m3s"], 0.0, 38.0, xtol=1e-9)
    found = flows(level)
    compare({"H_C": level, "Q_B": found[1], "Q_C": -found[2]}, case["expected"])


def grid_of(build: Build, grid: dict[str, Any]) -> Works:
    number = {name: place for place, name in enumerate(grid["nodes"])}
    return build(
        [node.get("H") for node in grid["nodes"].values()],
        [pipe_of(link, number[link["a"]], number[link["b"]]) for link in grid["links"]],
        [node.get("q", 0.0) for node in grid["nodes"].values()],
        gravity=grid["g"],
        viscosity=grid.get("nu_m2s", 1e-6),
    )


@pytest.mark.parametrize("grid", GRIDS, ids=NAMES)
def test_a_grid_exact_by_construction(build: Build, grid: dict[str, Any]) -> None:
    opinion = form_opinion(grid_of(build, grid))
    assert opinion.converged
    flows = [grid["flows_m3s"][link["id"]] for link in grid["links"]]
    heads = [grid["heads_m"][name] for name in grid["nodes"]]
    assert len(flows) == 60
    np.testing.assert_allclose(opinion.flow, flows, rtol=0.0, atol=1e-10 * max(flows))
    np.testing.assert_allclose(opinion.head, heads, rtol=0.0, atol=1e-9)


@pytest.mark.parametrize("grid", GRIDS, ids=NAMES)
def test_the_constructed_grid_satisfies_its_own_evaluation(build: Build, grid: dict[str, Any]) -> None:
    flows = np.array([grid["flows_m3s"][link["id"]] for link in grid["links"]])
    heads = np.array([grid["heads_m"][name] for name in grid["nodes"]])
    told = evaluate(grid_of(build, grid), flows, heads)
    assert told.largest_energy_error < 1e-11
    assert told.largest_imbalance < 1e-14
    heads[7] += 0.01
    assert evaluate(grid_of(build, grid), flows, heads).largest_energy_error == pytest.approx(0.01, rel=1e-6)


@pytest.mark.parametrize("case", TWO_LOOPS, ids=lambda case: str(case["id"]))
def test_two_loops_by_the_constants_of_each_design(build: Build, case: dict[str, Any]) -> None:
    inputs = case["inputs"]
    names = [*inputs["nodes_H_m"], *inputs["withdrawal_m3h"]]
    pipes = [
        {
            "start": names.index(link["a"]),
            "end": names.index(link["b"]),
            "length": link["L_m"],
            "bore": 0.0254 * link["D_in"],
            "law": "hazen-williams",
            "hazen_williams_c": inputs["C"],
        }
        for link in inputs["links"]
    ]
    works = build(
        [inputs["nodes_H_m"].get(name) for name in names],
        pipes,
        [inputs["withdrawal_m3h"].get(name, 0.0) / 3600.0 for name in names],
        hazen_williams=(inputs["omega"], inputs["n"], inputs["m"]),
    )
    head = dict(zip(names, form_opinion(works).head.tolist(), strict=True))
    got = {f"p_{name}": head[name] - elevation for name, elevation in inputs["elev_m"].items()}
    margin = min(got.values()) - inputs["hmin_m"]
    compare({**got, "min_margin": margin, "feasible": float(margin >= 0.0)}, case["expected"])

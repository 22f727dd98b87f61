"""Published systems and systems exact by construction; sources stand beside each case in tests/published."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml
from solve_cases import CONSTANTS, Pipe, network, resisting

from calc.solve import METHODS, Settings, Solution, solve

PUBLISHED = Path(__file__).parents[1] / "published"
GRIDS = {name: json.loads((PUBLISHED / f"grid_{name}_6x6.json").read_text(encoding="utf-8")) for name in ("dw", "hw")}
TWO_LOOPS = yaml.safe_load((PUBLISHED / "networks.yaml").read_text(encoding="utf-8"))
CASES = {
    case["id"]: case
    for name in ("branching.yaml", "systems.yaml")
    for case in yaml.safe_load((PUBLISHED / name).read_text(encoding="utf-8"))
}
STARS = [
    case
    for case in CASES.values()
    if case["method"] == "star_junction" and not any("hpump" in pipe for pipe in case["inputs"]["pipes"])
]
NETS = [case for case in CASES.values() if case["method"] == "net"]


def pipe_of(entry: dict[str, Any], start: str, end: str) -> Pipe:
    if entry["law"] == "r" and entry.get("n", 2) == 2:
        return resisting(start, end, entry["r"])
    if entry["law"] == "r":
        # h = r Q^1.852 is Hazen–Williams with k L = r C^a D^b
        assert entry["n"] == CONSTANTS["hazen_williams_flow_exponent"]
        length = entry["r"] * 100**1.852 * 0.3**4.8704 / CONSTANTS["hazen_williams_coefficient"]
        return Pipe(start, end, length, 0.3, hazen_williams_c=100.0)
    name, key = {
        "f": ("factor", "f"),
        "eps": ("roughness", "eps_m"),
        "HW": ("hazen_williams_c", "C"),
        "manning": ("manning_n", "n"),
    }[entry["law"]]
    return Pipe(start, end, entry["L_m"], entry["D_m"], **{name: entry[key]})


def compare(case: dict[str, Any], got: dict[str, float]) -> None:
    assert set(got) >= set(case["expected"])
    for name, expected in case["expected"].items():
        value = got[name] * expected.get("scale", 1)
        limits = {"rel": expected.get("rtol", 0.0), "abs": expected.get("atol", 0.0)}
        assert value == pytest.approx(expected["value"], **limits), (case["id"], name)


def test_the_cases_are_those_meant() -> None:
    stars = {"BR-02", "BR-03", "BR-05", "BR-06", "BR-09", "BR-12", "BR-18", "BR-20", "BR-27", "BR-30"}
    assert {case["id"] for case in STARS} == stars
    assert {case["id"] for case in NETS} == {"BR-25", "LP-03", "LP-04", "LP-05", "LP-06"}
    assert [case["id"] for case in TWO_LOOPS] == ["NB-TL-01", "NB-TL-02", "NB-TL-03", "NB-TL-04"]


@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("case", STARS, ids=lambda case: case["id"])
def test_a_star_has_its_published_flows(case: dict[str, Any], method: str) -> None:
    inputs = case["inputs"]
    pipes = {pipe["id"]: pipe for pipe in inputs["pipes"]}
    made = network(
        {name: pipe["H_m"] for name, pipe in pipes.items()},
        {"J": inputs.get("demand_m3s", 0.0)},
        [pipe_of(pipe, name, "J") for name, pipe in pipes.items()],
        viscosity=inputs.get("nu_m2s", 1e-6),
        gravity=inputs.get("g", 9.81),
    )
    found = solve(made, Settings(method=method))
    assert found.reason == ""
    got = {"H_J": float(found.head[-1])}
    for i, (name, pipe) in enumerate(pipes.items()):
        got[f"Q_{name}"] = float(found.flow[i])
        got[f"V_{name}"] = float(found.flow[i]) / (np.pi / 4 * pipe.get("D_m", np.nan) ** 2)
    compare(case, got)


@pytest.mark.parametrize("method", METHODS[1:])
@pytest.mark.parametrize("case", NETS, ids=lambda case: case["id"])
def test_a_network_has_its_exact_flows(case: dict[str, Any], method: str) -> None:
    nodes = case["inputs"]["nodes"]
    made = network(
        {name: node["H"] for name, node in nodes.items() if "H" in node},
        {name: node["q"] for name, node in nodes.items() if "q" in node},
        [pipe_of(link, link["a"], link["b"]) for link in case["inputs"]["links"]],
    )
    found = solve(made, Settings(method=method))
    assert found.reason == ""
    got = {f"H_{name}": float(found.head[i]) for i, name in enumerate(made.nodes)}
    got |= {f"Q_{link['id']}": float(found.flow[i]) for i, link in enumerate(case["inputs"]["links"])}
    compare(case, got)


@pytest.mark.parametrize("name", list(GRIDS))
def test_a_grid_of_sixty_pipes_is_exact(name: str) -> None:
    grid = GRIDS[name]
    levels = {name: node["H"] for name, node in grid["nodes"].items() if "H" in node}
    withdrawals = {name: node["q"] for name, node in grid["nodes"].items() if "q" in node}
    pipes = [pipe_of(link, link["a"], link["b"]) for link in grid["links"]]
    made = network(levels, withdrawals, pipes, viscosity=grid.get("nu_m2s", 1e-6), gravity=grid["g"])
    found = solve(made)
    assert len(pipes) == 60
    assert found.head == pytest.approx([{**grid["heads_m"], **levels}[name] for name in made.nodes], abs=1e-9)
    assert found.flow == pytest.approx([grid["flows_m3s"][link["id"]] for link in grid["links"]], abs=1e-11)


@pytest.mark.parametrize("method", METHODS[1:])
@pytest.mark.parametrize("case", TWO_LOOPS, ids=lambda case: case["id"])
def test_two_loops_have_their_published_pressure_heads(case: dict[str, Any], method: str) -> None:
    inputs = case["inputs"]
    made = network(
        inputs["nodes_H_m"],
        {name: taken / 3600 for name, taken in inputs["withdrawal_m3h"].items()},
        [
            Pipe(link["a"], link["b"], link["L_m"], 0.0254 * link["D_in"], hazen_williams_c=inputs["C"])
            for link in inputs["links"]
        ],
        hazen_williams_coefficient=inputs["omega"],
        hazen_williams_flow_exponent=inputs["n"],
        hazen_williams_bore_exponent=inputs["m"],
    )
    found = solve(made, Settings(method=method))
    assert found.reason == ""
    heads = dict(zip(made.nodes, found.head.tolist(), strict=True))
    pressures = {f"p_{name}": heads[name] - elevation for name, elevation in inputs["elev_m"].items()}
    margin = min(pressures.values()) - inputs["hmin_m"]
    compare(case, {**pressures, "min_margin": margin, "feasible": float(margin >= 0)})


def between(pipes: list[Pipe], junctions: list[str], fall: float, **constants: float) -> Solution:
    return solve(network({"a": fall, "b": 0.0}, dict.fromkeys(junctions, 0.0), pipes, **constants))


def test_three_pipes_in_series() -> None:
    case = CASES["SP-01"]
    ends = ["a", "j", "k", "b"]
    pipes = [
        Pipe(ends[i], ends[i + 1], entry["L_m"], entry["D_m"], factor=entry["f"])
        for i, entry in enumerate(case["inputs"]["pipes"])
    ]
    flow = between(pipes, ["j", "k"], case["inputs"]["h_m"]).flow
    assert flow == pytest.approx([flow[0]] * 3, abs=1e-10)
    compare(case, {"Q": float(flow[0]), "V1": float(flow[0]) / (np.pi / 4 * 0.3**2)})


def test_three_pipes_in_parallel() -> None:
    case = CASES["SP-05"]
    pipes = [pipe_of(entry, "a", "b") for entry in case["inputs"]["pipes"]]
    flow = between(pipes, [], case["inputs"]["h_m"], viscosity=case["inputs"]["nu_m2s"]).flow
    got = {f"Q_{i + 1}": float(q) for i, q in enumerate(flow)}
    compare(case, {**got, "Q_total": float(flow.sum())})


def test_a_siphon_and_the_pressure_at_its_summit() -> None:
    case = CASES["SI-01"]
    inputs = case["inputs"]
    lengths = (inputs["L_up_m"], inputs["L_m"] - inputs["L_up_m"])
    pipes = [
        Pipe(start, end, length, inputs["D_m"], factor=inputs["f"])
        for (start, end), length in zip((("a", "summit"), ("summit", "b")), lengths, strict=True)
    ]
    found = between(pipes, ["summit"], inputs["dH_m"])
    speed = float(found.flow[0]) / (np.pi / 4 * inputs["D_m"] ** 2)
    pressure = float(found.head[2]) - (inputs["dH_m"] + inputs["z_summit_m"]) - speed**2 / (2 * inputs["g"])
    compare(case, {"V": speed, "Q": float(found.flow[0]), "p_summit_m": pressure})


def test_an_inflow_known_from_one_branch_gives_the_third_level() -> None:
    # The flow drawn at C is the published one; the level there and the other flows must come out.
    case = CASES["BR-07"]
    inputs, expected = case["inputs"], case["expected"]
    ends = (("A", "J"), ("B", "J"), ("J", "C"))
    pipes = [pipe_of(entry, *pair) for entry, pair in zip(inputs["pipes"], ends, strict=True)]
    made = network({"A": inputs["H_A_m"], "B": inputs["H_B_m"]}, {"J": 0.0, "C": expected["Q_C"]["value"]}, pipes)
    found = solve(made)
    assert found.flow[0] == pytest.approx(inputs["Q_A_m3s"], rel=expected["Q_C"]["rtol"])
    compare(case, {"Q_B": found.flow[1], "Q_C": found.flow[2], "H_C": found.head[3]})

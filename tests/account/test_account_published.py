"""Published and exact systems through project folders, from the text to ``results.json``."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest
import yaml
from accounts import accounted

from calc.account import Account, results

PUBLISHED = Path(__file__).parents[1] / "published"
STARS = [
    case
    for case in yaml.safe_load((PUBLISHED / "branching.yaml").read_text(encoding="utf-8"))
    if case["method"] == "star_junction"
    and all(pipe["law"] in {"f", "eps"} and "hpump" not in pipe for pipe in case["inputs"]["pipes"])
]
SYSTEMS = {case["id"]: case for case in yaml.safe_load((PUBLISHED / "systems.yaml").read_text(encoding="utf-8"))}
GRID = json.loads((PUBLISHED / "grid_dw_6x6.json").read_text(encoding="utf-8"))


def named(case: dict[str, Any]) -> str:
    """Return the id, and where the answer comes from: one computed by us is no external answer."""
    return f"{case['id']}-{case['expected_origin']}"


def compare(got: dict[str, float], expected: dict[str, Any]) -> None:
    assert got.keys() >= expected.keys()
    for name, published in expected.items():
        value = got[name] * published.get("scale", 1.0)
        within, apart = published.get("rtol"), published.get("atol")
        assert value == pytest.approx(published["value"], rel=within, abs=apart), name


def pipe(entry: dict[str, Any], start: str, end: str) -> str:
    law = (
        f"law: fixed, friction_factor: {entry['f']!r}"
        if entry.get("law", "f") == "f"
        else f"roughness: {entry['eps_m']!r} m"
    )
    return f"{{from: {start}, to: {end}, length: {entry['L_m']!r} m, bore: {entry['D_m']!r} m, {law}}}"


def constants(inputs: dict[str, Any]) -> str:
    nu = inputs.get("nu_m2s", 1e-6)
    return f"site: {{gravity: {inputs['g']!r} m/s²}}\nfluid: {{density: 1000 kg/m³, viscosity: {nu!r} m²/s}}\n"


def solved(folder: Path, text: str) -> tuple[Account, dict[str, Any]]:
    account = accounted(folder, text)
    assert account.solved
    assert account.confirmed
    told: dict[str, Any] = results(account)["cases"]["base"]
    return account, told


def test_the_cases_are_there() -> None:
    assert {case["id"] for case in STARS} == {"BR-02", "BR-03", "BR-06", "BR-09", "BR-12"}
    assert {"SP-01", "SP-05", "LP-03", "LP-05"} <= set(SYSTEMS)


@pytest.mark.parametrize("case", STARS, ids=named)
def test_reservoirs_at_one_junction(tmp_path: Path, case: dict[str, Any]) -> None:
    entries = case["inputs"]["pipes"]
    text = constants(case["inputs"]) + "reservoirs:\n"
    text += "".join(f"  pond-{entry['id']}: {{level: {entry['H_m']!r} m}}\n" for entry in entries)
    text += "junctions: {cross: {}}\npipes:\n"
    text += "".join(f"  main-{entry['id']}: {pipe(entry, 'pond-' + entry['id'], 'cross')}\n" for entry in entries)
    _, told = solved(tmp_path, text)
    got = {"H_J": told["nodes"]["cross"]["head"]}
    for entry in entries:
        branch = told["branches"][f"main-{entry['id']}"]
        got |= {f"Q_{entry['id']}": branch["flow"], f"V_{entry['id']}": branch["velocity"]}
    compare(got, case["expected"])


def test_three_pipes_in_series(tmp_path: Path) -> None:
    case = SYSTEMS["SP-01"]
    nodes = ("high", "one", "two", "low")
    text = (
        constants(case["inputs"]) + f"reservoirs: {{high: {{level: {case['inputs']['h_m']} m}}, low: {{level: 0 m}}}}\n"
    )
    text += "junctions: {one: {}, two: {}}\npipes:\n"
    for k, entry in enumerate(case["inputs"]["pipes"]):
        text += f"  part-{k}: {pipe(entry, nodes[k], nodes[k + 1])}\n"
    _, told = solved(tmp_path, text)
    branches = told["branches"]
    compare({"Q": branches["part-1"]["flow"], "V1": branches["part-0"]["velocity"]}, case["expected"])


def test_a_siphon(tmp_path: Path) -> None:
    case = SYSTEMS["SI-01"]
    inputs = case["inputs"]
    length, up = inputs["L_m"], inputs["L_up_m"]
    part = {"D_m": inputs["D_m"], "f": inputs["f"], "law": "f"}
    text = constants(inputs) + f"reservoirs: {{high: {{level: {inputs['dH_m']} m}}, low: {{level: 0 m}}}}\n"
    text += f"junctions: {{summit: {{elevation: {inputs['dH_m'] + inputs['z_summit_m']} m}}}}\npipes:\n"
    text += f"  rising: {pipe({**part, 'L_m': up}, 'high', 'summit')}\n"
    text += f"  falling: {pipe({**part, 'L_m': length - up}, 'summit', 'low')}\n"
    _, told = solved(tmp_path, text)
    branch, summit = told["branches"]["rising"], told["nodes"]["summit"]
    # Our pressure head leaves the velocity head in; the published one has it deducted.
    gauge = summit["pressure_head"] - summit["velocity_head"]
    compare({"V": branch["velocity"], "Q": branch["flow"], "p_summit_m": gauge}, case["expected"])


def test_three_pipes_in_parallel(tmp_path: Path) -> None:
    case = SYSTEMS["SP-05"]
    text = constants(case["inputs"]) + "reservoirs: {high: {level: 20.3 m}, low: {level: 0 m}}\npipes:\n"
    text += "".join(f"  way-{entry['id']}: {pipe(entry, 'high', 'low')}\n" for entry in case["inputs"]["pipes"])
    assert case["inputs"]["h_m"] == 20.3
    _, told = solved(tmp_path, text)
    got = {f"Q_{entry['id']}": told["branches"][f"way-{entry['id']}"]["flow"] for entry in case["inputs"]["pipes"]}
    compare({**got, "Q_total": sum(got.values())}, case["expected"])


def resisting(link: dict[str, Any], bore: float = 0.3, factor: float = 0.02) -> dict[str, Any]:
    """Return a pipe with f fixed whose loss is r·Q²: r = 8 f L / (g π² D⁵)."""
    length = link["r"] * 9.81 * math.pi**2 * bore**5 / (8 * factor)
    return {**link, "law": "f", "f": factor, "D_m": bore, "L_m": length}


@pytest.mark.parametrize("name", ["LP-03", "LP-05"])
def test_loops_of_quadratic_resistances(tmp_path: Path, name: str) -> None:
    case = SYSTEMS[name]
    inputs = case["inputs"]
    assert all(link.get("n", 2.0) == 2.0 for link in inputs["links"])
    text = constants(inputs) + "reservoirs:\n"
    text += "".join(f"  node-{n}: {{level: {node['H']!r} m}}\n" for n, node in inputs["nodes"].items() if "H" in node)
    text += "junctions:\n"
    for n, node in inputs["nodes"].items():
        if "q" in node:
            text += f"  node-{n}: {{withdrawal: {node['q']!r} m³/s}}\n"
    text += "pipes:\n"
    for link in inputs["links"]:
        text += f"  link-{link['id']}: {pipe(resisting(link), 'node-' + link['a'], 'node-' + link['b'])}\n"
    account, told = solved(tmp_path, text)
    assert account.cases["base"].solution.method == ("bracketing" if name == "LP-03" else "newton")
    got = {f"Q_{link['id']}": told["branches"][f"link-{link['id']}"]["flow"] for link in inputs["links"]}
    got |= {f"H_{n}": told["nodes"][f"node-{n}"]["head"] for n in inputs["nodes"]}
    compare(got, case["expected"])


def test_a_grid_exact_by_construction(tmp_path: Path) -> None:
    text = constants(GRID) + "reservoirs:\n"
    text += "".join(f"  n{n}: {{level: {node['H']!r} m}}\n" for n, node in GRID["nodes"].items() if "H" in node)
    text += "junctions:\n"
    for n, node in GRID["nodes"].items():
        if "q" in node:
            text += f"  n{n}: {{withdrawal: {node['q']!r} m³/s}}\n"
    text += "pipes:\n"
    for k, link in enumerate(GRID["links"]):
        text += f"  link-{k}: {pipe(link, 'n' + link['a'], 'n' + link['b'])}\n"
    account, told = solved(tmp_path, text)
    for k, link in enumerate(GRID["links"]):
        flow = GRID["flows_m3s"][link["id"]]
        assert told["branches"][f"link-{k}"]["flow"] == pytest.approx(flow, rel=1e-8, abs=1e-11)
    for n, head in GRID["heads_m"].items():
        assert told["nodes"][f"n{n}"]["head"] == pytest.approx(head, abs=1e-8)
    assert len(account.cases["base"].paths) == 2

"""``results.json``: the contract of its keys, its numbers against the ledger, and what is told of a failed case."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import pytest
from accounts import Draft, accounted

from calc.account import Account, results

TOP = {"format", "project", "digest", "cases", "verdicts", "not_judged", "findings", "studies"}
CASE = {
    "converged",
    "method",
    "iterations",
    "nodes",
    "branches",
    "balance",
    "second_opinion",
    "history",
}
BRANCH = {
    "kind",
    "from",
    "to",
    "flow",
    "velocity",
    "head_loss",
    "friction_loss",
    "fitting_loss",
    "reynolds",
    "friction_factor",
    "state",
}


def told(account: Account) -> dict[str, Any]:
    """Return the results as another program reads them: strict JSON, without NaN."""
    read: dict[str, Any] = json.loads(json.dumps(results(account), allow_nan=False))
    return read


def test_the_keys_of_the_contract(demonstration: Account) -> None:
    found = told(demonstration)
    assert set(found) == TOP
    assert found["format"] == "headtrace-results/1"
    assert found["project"]["number"] == "OTM-HY-014"
    assert found["project"]["revision"] == "P01"
    assert re.fullmatch(r"sha256:[0-9a-f]{64}", found["digest"])
    assert list(found["cases"]) == ["base", "drawdown", "peak", "outage"]
    for case in found["cases"].values():
        assert set(case) == CASE
        assert case["converged"] is True
        assert case["method"] == "bracketing"
        assert case["iterations"] == len(case["history"])
        assert set(case["balance"]) == {"largest_imbalance", "largest_energy_error"}
        assert case["second_opinion"]["agrees"] is True
        assert {"method", "largest_flow_difference", "largest_head_difference"} <= set(case["second_opinion"])
        for branch in case["branches"].values():
            assert set(branch) == BRANCH
        for node in case["nodes"].values():
            extra = {"outflow"} if node["kind"] == "reservoir" else {"withdrawal", "pressure_head", "pressure"}
            assert {"kind", "head", *extra} <= set(node)
    for verdict in found["verdicts"]:
        assert {"criterion", "subject", "case", "value", "limit", "unit", "met"} <= set(verdict)
    for finding in found["findings"]:
        assert set(finding) == {"id", "subject", "place", "text"}
        assert re.fullmatch(r"[\w.]+:\d+", finding["place"])


def test_the_numbers_are_the_ledgers(demonstration: Account) -> None:
    found, ledger = told(demonstration), demonstration.ledger
    for case, held in found["cases"].items():
        for name, branch in held["branches"].items():
            assert branch["flow"] == ledger.spot(f"pipes.{name}.flow@{case}").value
            if branch["state"] == "open":
                assert branch["velocity"] == ledger.spot(f"pipes.{name}.velocity@{case}").value
                assert branch["friction_factor"] == ledger.spot(f"pipes.{name}.darcy_f@{case}").value
        node = held["nodes"]["marl-cross"]
        assert node["head"] == ledger.spot(f"junctions.marl-cross.head@{case}").value
        assert node["withdrawal"] == ledger.spot(f"junctions.marl-cross.withdrawal@{case}").value
        assert held["nodes"]["vell"]["head"] == ledger.spot(f"reservoirs.vell.level@{case}").value


def test_each_line_of_the_results_holds_together(demonstration: Account) -> None:
    # By the laws of arithmetic alone: continuity, energy, pressure from head.
    for held in told(demonstration)["cases"].values():
        nodes, branches = held["nodes"], held["branches"]
        balance = dict.fromkeys(nodes, 0.0)
        for branch in branches.values():
            balance[branch["from"]] -= branch["flow"]
            balance[branch["to"]] += branch["flow"]
            drop = nodes[branch["from"]]["head"] - nodes[branch["to"]]["head"]
            assert branch["head_loss"] == pytest.approx(drop, abs=1e-8)
            if branch["state"] == "open":
                assert branch["head_loss"] == pytest.approx(branch["friction_loss"] + branch["fitting_loss"], abs=1e-12)
        for name, node in nodes.items():
            leaves = -node["outflow"] if node["kind"] == "reservoir" else node["withdrawal"]
            assert balance[name] == pytest.approx(leaves, abs=1e-9)
        assert nodes["marl-cross"]["pressure_head"] == pytest.approx(nodes["marl-cross"]["head"] - 171.42, abs=1e-9)


def test_a_shut_branch_is_told_as_such(demonstration: Account) -> None:
    branch = told(demonstration)["cases"]["outage"]["branches"]["upper-main"]
    assert branch["state"] == "shut"
    assert branch["flow"] == branch["velocity"] == branch["reynolds"] == 0.0
    assert branch["friction_factor"] is None
    nodes = told(demonstration)["cases"]["outage"]["nodes"]
    assert branch["head_loss"] == pytest.approx(nodes["upper-ostrel"]["head"] - nodes["marl-cross"]["head"])


def test_the_middle_branch_turns_round_between_cases(demonstration: Account) -> None:
    found = told(demonstration)["cases"]
    signs = {case: found[case]["branches"]["sedge-link"]["flow"] > 0 for case in found}
    assert set(signs.values()) == {True, False}


def test_a_case_without_a_solution_tells_why_and_no_numbers(tmp_path: Path) -> None:
    account = accounted(
        tmp_path,
        """
        reservoirs: {mere: {level: 60 m}}
        junctions: {cross: {withdrawal: 15 L/s}, edge: {}}
        pipes:
          main: {from: mere, to: cross, length: 900 m, bore: 250 mm, roughness: 0.1 mm}
          link: {from: cross, to: edge, length: 900 m, bore: 250 mm, roughness: 0.1 mm}
        cases: {cut: {with: {pipes.main.open: false}}}
        """,
    )
    found = told(account)["cases"]
    assert found["base"]["converged"]
    assert set(found["cut"]) == {"converged", "method", "iterations", "reason", "history"}
    assert found["cut"]["converged"] is False
    assert "cross" in found["cut"]["reason"]


@pytest.mark.parametrize("seed", range(50, 54))
def test_random_works_are_told_without_nan(tmp_path: Path, seed: int) -> None:
    found = told(accounted(tmp_path, Draft(seed).text()))
    assert all(case["converged"] for case in found["cases"].values())


def test_the_digest_changes_with_an_input_and_not_without(tmp_path: Path) -> None:
    text = Draft(60).text()
    first, again = (accounted(tmp_path / name, text).digest for name in ("one", "two"))
    other = accounted(tmp_path / "three", text.replace("temperature: 25 degC", "temperature: 26 degC")).digest
    assert first == again != other


def test_a_branch_at_rest_has_no_factor(tmp_path: Path) -> None:
    account = accounted(
        tmp_path,
        """
        reservoirs: {mere: {level: 60 m}, tarn: {level: 60 m}}
        pipes: {main: {from: mere, to: tarn, length: 900 m, bore: 250 mm, roughness: 0.1 mm, fittings: [{K: 2}]}}
        """,
    )
    branch = told(account)["cases"]["base"]["branches"]["main"]
    assert branch["flow"] == branch["head_loss"] == branch["friction_loss"] == branch["fitting_loss"] == 0.0
    assert branch["friction_factor"] is None
    assert branch["state"] == "open"

"""The verification record: its cases against where they come from, and that it fails when it must."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path

import pytest
import yaml

import calc.verification.running as running_module
from calc import verification
from calc.kinds import FLOW, NUMBER
from calc.ledger import Judged, Ledger, Library, Program, replay, trace
from calc.physics import friction
from calc.project import read_project
from calc.verification import Check, enter_checks, run
from calc.verification.reading import read_cases

PUBLISHED = Path(__file__).parents[1] / "published"
DATA = Path(verification.__file__).parents[1] / "data" / "verification"
CLASSES = {"from-memory", "open-page", "closed-form", "library", "computed"}


@pytest.fixture(scope="module")
def checks() -> tuple[Check, ...]:
    return run()


def by_id(checks: tuple[Check, ...]) -> dict[str, Check]:
    return {check.id: check for check in checks}


def test_every_check_passes_and_says_what_it_rests_on(checks: tuple[Check, ...]) -> None:
    assert len(checks) >= 20
    for check in checks:
        assert check.passed, check.id
        assert check.source
        assert check.title
        assert check.source_class in CLASSES
        assert 0 <= abs(check.difference) <= check.allowed
        assert check.stated.mark.file == "calc/data/verification.yaml"
    assert len(by_id(checks)) == len(checks)


def test_every_sort_of_evidence_is_there(checks: tuple[Check, ...]) -> None:
    cases = {check.id.partition("/")[0] for check in checks}
    assert {
        "colebrook-smooth",
        "water-10",
        "laminar-link",
        "three-levels",
        "three-levels-us",
        "ladder",
        "grid",
    } <= cases
    assert {case.works for case in read_cases() if case.works} == {path.name for path in DATA.iterdir()}


def test_the_factors_are_those_of_the_published_grid(checks: tuple[Check, ...]) -> None:
    rows = json.loads((PUBLISHED / "colebrook_grid.json").read_text(encoding="utf-8"))["rows"]
    digits = {(row["Re"], float(row["rel_rough"])): row["f"] for row in rows}
    for name, key in (("smooth", (4e3, 0.0)), ("middle", (1e5, 1e-3)), ("rough", (1e8, 5e-2))):
        check = by_id(checks)[f"colebrook-{name}/friction_factor"]
        assert check.stated.written == digits[key]


def test_the_reservoirs_are_those_of_the_published_cases(checks: tuple[Check, ...]) -> None:
    published = {c["id"]: c for c in yaml.safe_load((PUBLISHED / "branching.yaml").read_text(encoding="utf-8"))}
    pairs = {
        "three-levels": ("BR-02", {"1": "highest", "2": "middle", "3": "lowest"}),
        "three-levels-us": ("BR-03", {"A": "highest", "B": "middle", "C": "lowest"}),
    }
    for folder, (name, mains) in pairs.items():
        case = published[name]
        project = read_project(DATA / folder, ())
        assert project.site.number("gravity") == pytest.approx(case["inputs"]["g"], rel=1e-12)
        for entry in case["inputs"]["pipes"]:
            pipe = project.pipes[f"{mains[entry['id']]}-main"]
            assert pipe.number("length") == pytest.approx(entry["L_m"], rel=1e-12)
            assert pipe.number("bore") == pytest.approx(entry["D_m"], rel=1e-12)
            level = project.reservoirs[mains[entry["id"]]].number("level")
            assert level == pytest.approx(entry["H_m"], rel=1e-12)
            friction_of = ("friction_factor", "f") if entry["law"] == "f" else ("roughness", "eps_m")
            assert pipe.number(friction_of[0]) == pytest.approx(entry[friction_of[1]], rel=1e-12)
            check = by_id(checks)[f"{folder}/pipes-{mains[entry['id']]}-main-flow"]
            expected = case["expected"][f"Q_{entry['id']}"]
            assert check.expected * expected.get("scale", 1.0) == pytest.approx(expected["value"], rel=1e-9)
            assert check.allowed <= expected["rtol"] * abs(check.expected) * (1 + 1e-12)


def test_the_ladder_is_exact_by_construction() -> None:
    # Heads and flows of case LP-05; each pipe loses h = 8 f L Q^2 / (g pi^2 D^5), and each junction balances.
    head = {"source": 60, "birch": 54, "cedar": 48, "dale": 52, "elder": 47, "fern": 40}
    flow = {
        "source-birch": 0.09,
        "source-dale": 0.06,
        "birch-cedar": 0.05,
        "birch-elder": 0.02,
        "dale-elder": 0.05,
        "cedar-fern": 0.02,
        "elder-fern": 0.03,
    }
    project = read_project(DATA / "ladder", ())
    assert project.pipes.keys() == flow.keys()
    left = {name: -record.number("withdrawal") for name, record in project.junctions.items()}
    for name, pipe in project.pipes.items():
        start, end = pipe.text("from"), pipe.text("to")
        number = pipe.number
        loss = 8 * number("friction_factor") * number("length") * flow[name] ** 2
        loss /= 9.81 * math.pi**2 * number("bore") ** 5
        assert loss == pytest.approx(head[start] - head[end], rel=1e-13)
        left[end] += flow[name]
        if start in left:
            left[start] -= flow[name]
    assert list(left.values()) == pytest.approx([0.0] * 5, abs=1e-15)


def test_the_grid_is_the_published_one() -> None:
    grid = json.loads((PUBLISHED / "grid_dw_6x6.json").read_text(encoding="utf-8"))
    project = read_project(DATA / "grid", ())
    assert len(project.pipes) == len(grid["links"]) == 60
    for link, pipe in zip(grid["links"], project.pipes.values(), strict=True):
        assert pipe.text("from") == f"node-{link['a'].replace('_', '-')}"
        assert pipe.text("to") == f"node-{link['b'].replace('_', '-')}"
        assert [pipe.number(name) for name in ("length", "bore", "roughness")] == [
            link[name] for name in ("L_m", "D_m", "eps_m")
        ]
    for name, node in grid["nodes"].items():
        own = f"node-{name.replace('_', '-')}"
        if "H" in node:
            assert project.reservoirs[own].number("level") == node["H"]
        else:
            assert project.junctions[own].number("withdrawal") == node["q"]


def test_laminar_flow_is_the_closed_form(checks: tuple[Check, ...]) -> None:
    check = by_id(checks)["laminar-link/pipes-link-flow"]
    assert check.expected == pytest.approx(math.pi * 9.81 * 0.1**4 * 0.5 / (128 * 1e-4 * 100), rel=1e-15)


def test_a_fault_makes_checks_fail(monkeypatch: pytest.MonkeyPatch) -> None:
    body = friction.darcy_weisbach.body
    monkeypatch.setattr(type(friction.darcy_weisbach), "__setattr__", object.__setattr__)
    monkeypatch.setattr(friction.darcy_weisbach, "body", lambda **given: 1.01 * body(**given))
    failed = {check.id.partition("/")[0] for check in run() if not check.passed}
    assert {"ladder", "grid"} <= failed
    assert "colebrook-smooth" not in failed


def test_a_case_without_a_solution_does_not_pass(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(running_module, "_works", lambda _: {})
    checks = run()
    lost = [check for check in checks if check.id.startswith("ladder/")]
    assert lost
    assert not any(check.passed for check in lost)
    ledger = Ledger()
    enter_checks(ledger, checks)
    assert "ladder/junctions-elder-head" not in {row for column in ledger.columns for row in column.rows}


def test_a_failed_check_is_a_verdict_in_the_ledger(checks: tuple[Check, ...]) -> None:
    spoilt = tuple(replace(check, got=2 * check.got) for check in checks[:1]) + checks[1:]
    ledger = Ledger()
    enter_checks(ledger, spoilt)
    assert replay(ledger)[1] == []
    verdicts = {check.id: ledger.spot(f"verification.{check.id}.passed").value for check in spoilt}
    assert verdicts == {check.id: float(check.passed) for check in spoilt}
    assert verdicts[spoilt[0].id] == 0.0


def test_the_record_stands_in_the_ledger_with_its_origins(checks: tuple[Check, ...]) -> None:
    ledger = Ledger()
    enter_checks(ledger, checks)
    origins = {column.name: type(column.origin) for column in ledger.columns}
    assert origins["verification.expected"] is Library
    assert origins["verification.got"] is Program
    assert origins["verification.passed"] is Judged
    assert {column.kind for column in ledger.columns} >= {NUMBER, FLOW}
    for check in checks:
        for name in ("expected", "got", "difference", "allowed"):
            spot = ledger.spot(f"verification.{check.id}.{name}")
            assert spot.value == pytest.approx(getattr(check, name), rel=1e-15, abs=0)
            assert spot.id == f"verification.{check.id}.{name}"
    text = "\n".join(trace(ledger, ledger.spot("verification.three-levels/pipes-middle-main-flow.passed")))
    assert "shipped as '-0.325 m³/s' at calc/data/verification.yaml:" in text
    assert "V. L. Streeter, E. B. Wylie" in text

"""The verification record: what it holds, what is run for a project, and that it fails when it must."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from accounts import PROJECTS, accounted

import calc.verification.running as running_module
from calc import pipeline, verification
from calc.kinds import FLOW, NUMBER
from calc.ledger import Judged, Ledger, Library, Program, replay, trace
from calc.physics import friction
from calc.physics.friction import LAW_NAMES
from calc.solve.solution import METHODS
from calc.verification import TITLES, Check, enter_checks, in_use, run
from calc.verification.reading import read_cases

DATA = Path(verification.__file__).parents[1] / "data" / "verification"
CLASSES = {"from-memory", "open-page", "closed-form", "library", "computed", "own-solution"}


def test_every_check_passes_and_says_what_it_rests_on(checks: dict[str, Check]) -> None:
    assert len(checks) >= 20
    for check in checks.values():
        assert check.passed, check.id
        assert check.source
        assert check.title
        assert check.source_class in CLASSES
        assert 0 <= abs(check.difference) <= check.allowed
        assert check.stated.mark.file == "calc/data/verification.yaml"
    assert len(checks) == len(run())


def test_every_sort_of_evidence_is_there(checks: dict[str, Check]) -> None:
    cases = {name.partition("/")[0] for name in checks}
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


def test_a_case_concerns_what_its_works_use() -> None:
    assert set(TITLES) >= {*LAW_NAMES, *METHODS}
    told = {word for case in read_cases() for word in case.concerns}
    assert told == set(TITLES)
    for case in read_cases():
        if case.works:
            used = in_use(pipeline.account(DATA / case.works))
            assert set(case.concerns) <= set(used), case.id
        elif "law" in case.given:
            assert case.concerns == (case.given["law"],)


def test_only_what_concerns_a_project_is_run(tmp_path: Path) -> None:
    text = """\
        fluid: {density: 998 kg/m³, viscosity: 1e-6 m²/s}
        reservoirs: {high: {level: 30 m}, low: {level: 10 m}}
        junctions: {cross: {}}
        pipes:
          upper: {from: high, to: cross, length: 900 m, bore: 300 mm, law: hazen-williams, hazen_williams_c: 120}
          lower: {from: cross, to: low, length: 800 m, bore: 300 mm, law: fixed, friction_factor: 0.02}
        cases: {rough: {with: {pipes.lower.law: manning, pipes.lower.manning_n: 0.012}}}
        """
    used = in_use(accounted(tmp_path, text))
    assert used == ("fixed", "hazen-williams", "manning", "bracketing")
    run_for = {check.id.partition("/")[0]: check.concerns for check in run(used)}
    assert run_for["five-levels"] == ("hazen-williams",)
    assert run_for["ladder"] == ("fixed",)
    assert run_for["three-levels-us"] == ()
    assert {"three-levels", "four-levels", "manning-capacities", "two-loops", "ladder"} <= run_for.keys()
    assert not {"colebrook-smooth", "water-10", "laminar-link", "grid", "haaland-middle"} & run_for.keys()
    general = {check.id.partition("/")[0] for check in run(())}
    assert general == {check.id.partition("/")[0] for check in run() if not check.concerns} == {"three-levels-us"}


@pytest.mark.parametrize("folder", PROJECTS, ids=lambda folder: folder.name)
def test_the_demos_show_evidence_for_each_law_and_method(folder: Path) -> None:
    used = in_use(pipeline.account(folder))
    assert {word for check in run(used) for word in check.concerns} == set(used)


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


def test_a_failed_check_is_a_verdict_in_the_ledger(checks: dict[str, Check]) -> None:
    first, *others = checks.values()
    spoilt = (replace(first, got=2 * first.got), *others)
    ledger = Ledger()
    enter_checks(ledger, spoilt)
    assert replay(ledger)[1] == []
    verdicts = {check.id: ledger.spot(f"verification.{check.id}.passed").value for check in spoilt}
    assert verdicts == {check.id: float(check.passed) for check in spoilt}
    assert verdicts[spoilt[0].id] == 0.0


def test_the_record_stands_in_the_ledger_with_its_origins(checks: dict[str, Check]) -> None:
    ledger = Ledger()
    enter_checks(ledger, tuple(checks.values()))
    origins = {column.name: type(column.origin) for column in ledger.columns}
    assert origins["verification.expected"] is Library
    assert origins["verification.got"] is Program
    assert origins["verification.passed"] is Judged
    assert {column.kind for column in ledger.columns} >= {NUMBER, FLOW}
    for check in checks.values():
        for name in ("expected", "got", "difference", "allowed"):
            spot = ledger.spot(f"verification.{check.id}.{name}")
            assert spot.value == pytest.approx(getattr(check, name), rel=1e-15, abs=0)
            assert spot.id == f"verification.{check.id}.{name}"
    text = "\n".join(trace(ledger, ledger.spot("verification.three-levels/pipes-middle-main-flow.passed")))
    assert "shipped as '-0.325 m³/s' at calc/data/verification.yaml:" in text
    assert "V. L. Streeter, E. B. Wylie" in text

"""The verification record: its cases against where they come from, and that it fails when it must."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import mpmath  # type: ignore[import-untyped]
import pytest
import yaml
from accounts import PROJECTS, accounted

import calc.verification.running as running_module
from calc import pipeline, verification
from calc.kinds import FLOW, NUMBER
from calc.ledger import Judged, Ledger, Library, Program, replay, trace
from calc.physics import friction
from calc.physics.friction import LAW_NAMES
from calc.project import read_project
from calc.solve.solution import METHODS
from calc.verification import TITLES, Check, enter_checks, in_use, run
from calc.verification.reading import read_cases

PUBLISHED = Path(__file__).parents[1] / "published"
DATA = Path(verification.__file__).parents[1] / "data" / "verification"
PUBLISHED_CASES: dict[str, dict[str, Any]] = {
    case["id"]: case
    for name in ("branching", "friction", "networks")
    for case in yaml.safe_load((PUBLISHED / f"{name}.yaml").read_text(encoding="utf-8"))
}
CLASSES = {"from-memory", "open-page", "closed-form", "library", "computed", "own-solution"}


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


STARS = {
    "three-levels": ("BR-02", {"1": "highest", "2": "middle", "3": "lowest"}),
    "three-levels-us": ("BR-03", {"A": "highest", "B": "middle", "C": "lowest"}),
    "five-levels": ("BR-20", {letter: letter.lower() for letter in "ABCDE"}),
    "four-levels": ("BR-18", {letter: letter.lower() for letter in "ABCD"}),
}
FRICTION = {
    "f": ("friction_factor", "f"),
    "eps": ("roughness", "eps_m"),
    "HW": ("hazen_williams_c", "C"),
    "manning": ("manning_n", "n"),
}


@pytest.mark.parametrize("folder", STARS)
def test_the_reservoirs_are_those_of_the_published_cases(folder: str, checks: tuple[Check, ...]) -> None:
    name, mains = STARS[folder]
    case = PUBLISHED_CASES[name]
    project = read_project(DATA / folder, ())
    assert project.site.number("gravity") == pytest.approx(case["inputs"]["g"], rel=1e-12)
    assert len(project.pipes) == len(case["inputs"]["pipes"])
    for entry, pipe in zip(case["inputs"]["pipes"], project.pipes.values(), strict=True):
        main, pond = pipe.id, pipe.text("from")
        assert mains[entry["id"]] in main
        assert pipe.number("length") == pytest.approx(entry["L_m"], rel=1e-12)
        assert pipe.number("bore") == pytest.approx(entry["D_m"], rel=1e-12)
        assert project.reservoirs[pond].number("level") == pytest.approx(entry["H_m"], rel=1e-12)
        field, key = FRICTION[entry["law"]]
        assert pipe.number(field) == pytest.approx(entry[key], rel=1e-12)
        held(by_id(checks)[f"{folder}/pipes-{main}-flow"], case["expected"][f"Q_{entry['id']}"])


def held(check: Check, published: dict[str, float]) -> None:
    """Assert that a check expects what was published, and allows no more than the publication does."""
    assert check.expected * published.get("scale", 1.0) == pytest.approx(published["value"], rel=1e-9)
    within = published.get("rtol", 0.0) * abs(check.expected) + published.get("atol", 0.0)
    assert check.allowed <= within * (1 + 1e-9)


def test_the_two_loops_are_the_published_ones(checks: tuple[Check, ...]) -> None:
    case = PUBLISHED_CASES["NB-TL-01"]
    inputs, project = case["inputs"], read_project(DATA / "two-loops", ())
    constants = project.constants["hazen_williams"]
    names = ("coefficient", "flow_exponent", "bore_exponent")
    assert [constants.number(name) for name in names] == [inputs[name] for name in ("omega", "n", "m")]
    assert project.reservoirs["node-1"].number("level") == inputs["nodes_H_m"]["1"]
    assert len(project.junctions) == len(inputs["withdrawal_m3h"]) == 6
    for name, flow in inputs["withdrawal_m3h"].items():
        junction = project.junctions[f"node-{name}"]
        assert junction.number("withdrawal") * 3600 == pytest.approx(flow, rel=1e-12)
        assert junction.number("elevation") == inputs["elev_m"][name]
        held(by_id(checks)[f"two-loops/junctions-node-{name}-pressure_head"], case["expected"][f"p_{name}"])
    for link, pipe in zip(inputs["links"], project.pipes.values(), strict=True):
        assert (pipe.text("from"), pipe.text("to")) == (f"node-{link['a']}", f"node-{link['b']}")
        assert pipe.number("length") == link["L_m"]
        assert pipe.number("bore") == pytest.approx(0.0254 * link["D_in"], rel=1e-15)
        assert pipe.number("hazen_williams_c") == inputs["C"]


def test_the_two_junctions_are_those_of_the_exact_case(checks: tuple[Check, ...]) -> None:
    case = PUBLISHED_CASES["BR-25"]
    project = read_project(DATA / "two-junctions", ())
    names = {"A": "pond-a", "B": "pond-b", "Cc": "pond-c", "Dd": "pond-d", "J": "junction-j", "K": "junction-k"}
    for node, stated in case["inputs"]["nodes"].items():
        group, field = ("reservoirs", "level") if "H" in stated else ("junctions", "withdrawal")
        assert project.group(group)[names[node]].number(field) == pytest.approx(*stated.values(), rel=1e-12)
    for link, pipe in zip(case["inputs"]["links"], project.pipes.values(), strict=True):
        assert pipe.id == f"main-{link['id'].lower()}"
        assert (pipe.text("from"), pipe.text("to")) == (names[link["a"]], names[link["b"]])
        stated = [pipe.number(name) for name in ("length", "bore", "hazen_williams_c")]
        assert stated == pytest.approx([link["L_m"], link["D_m"], link["C"]], rel=1e-12)
    for name in ("AJ", "JK", "KD"):
        held(by_id(checks)[f"two-junctions/pipes-main-{name.lower()}-flow"], case["expected"][f"Q_{name}"])
    for name in "JK":
        held(
            by_id(checks)[f"two-junctions/junctions-junction-{name.lower()}-head"],
            {**case["expected"][f"H_{name}"]},
        )


SINGLE = {
    "hazen-williams-forms": {
        "six-inch": ("HW-FORM-02", "h_velocity_form"),
        "twelve-inch": ("HW-FORM-04", "h_velocity_form"),
        "twenty-four-inch": ("HW-FORM-06", "h_velocity_form"),
        "fire-main": ("HW-FIRE-01", "h"),
    },
    "manning-capacities": {
        "twelve-inch": ("MN-CONV-01", "conveyance_cfs"),
        "eighteen-inch": ("MN-CONV-03", "conveyance_cfs"),
        "twenty-four-inch": ("MN-US-24", "Q_cfs"),
        "thirty-six-inch": ("MN-CONV-06", "conveyance_cfs"),
        "forty-eight-inch": ("MN-CONV-08", "conveyance_cfs"),
    },
}
CUBIC_FOOT = 0.3048**3


@pytest.mark.parametrize(("folder", "pipe"), [(folder, pipe) for folder, pipes in SINGLE.items() for pipe in pipes])
def test_single_pipes_are_the_published_ones(folder: str, pipe: str, checks: tuple[Check, ...]) -> None:
    name, key = SINGLE[folder][pipe]
    case = PUBLISHED_CASES[name]
    inputs, published = case["inputs"], dict(case["expected"][key])
    project = read_project(DATA / folder, ())
    stated = project.pipes[pipe]
    assert stated.number("bore") == pytest.approx(inputs["D_m"], rel=1e-12)
    if folder == "manning-capacities":
        assert stated.number("manning_n") == inputs["n"]
        fall = project.reservoirs["high"].number("level") - project.reservoirs["low"].number("level")
        assert fall / stated.number("length") == pytest.approx(inputs["S"], rel=1e-12)
        published["scale"] = 1 / CUBIC_FOOT
        published["value"] *= math.sqrt(inputs["S"]) if key == "conveyance_cfs" else 1.0
        (check,) = (one for one in checks if one.id.endswith(f"/pipes-{pipe}-flow") and folder_of(one) == folder)
    else:
        assert stated.number("hazen_williams_c") == inputs["C"]
        assert stated.number("length") == pytest.approx(inputs["L_m"], rel=1e-12)
        withdrawal = project.junctions[stated.text("to")].number("withdrawal")
        assert withdrawal == pytest.approx(inputs["Q_m3s"], rel=1e-8)
        check = by_id(checks)[f"{folder}/pipes-{pipe}-friction_loss"]
        assert check.source_class == case["expected_origin"] == "own-solution"
    held(check, published)


def folder_of(check: Check) -> str:
    (case,) = (case for case in read_cases() if case.id == check.id.partition("/")[0])
    return case.works


def test_explicit_factors_are_those_of_their_equations(checks: tuple[Check, ...]) -> None:
    # mpmath at 40 digits: 0.25/lg²(k/3.7 + 5.74/Re^0.9), 1/(1.8 lg((k/3.7)^1.11 + 6.9/Re))², and Colebrook–White
    lg = mpmath.log10
    with mpmath.workdps(40):

        def swamee_jain(re: Any, k: Any) -> Any:  # noqa: ANN401
            return mpmath.mpf("0.25") / lg(k / mpmath.mpf("3.7") + mpmath.mpf("5.74") / re ** mpmath.mpf("0.9")) ** 2

        def haaland(re: Any, k: Any) -> Any:  # noqa: ANN401
            rough = (k / mpmath.mpf("3.7")) ** mpmath.mpf("1.11")
            return (mpmath.mpf("1.8") * lg(rough + mpmath.mpf("6.9") / re)) ** -2

        def colebrook(re: Any, k: Any) -> Any:  # noqa: ANN401
            one = lambda x: x + 2 * lg(k / mpmath.mpf("3.7") + mpmath.mpf("2.51") * x / re)  # noqa: E731
            return mpmath.findroot(one, mpmath.mpf(8)) ** -2

        middle, near = (mpmath.mpf("1e5"), mpmath.mpf("1e-3")), (mpmath.mpf("2e6"), mpmath.mpf("1e-4"))
        expected = {
            "swamee-jain-middle": swamee_jain(*middle),
            "haaland-middle": haaland(*middle),
            "swamee-jain-near-colebrook": colebrook(*near),
            "haaland-near-colebrook": colebrook(*near),
        }
        for name, value in expected.items():
            written = by_id(checks)[f"{name}/friction_factor"].stated.written
            assert mpmath.almosteq(mpmath.mpf(written), value, rel_eps=mpmath.mpf("1e-24")), name


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
    assert run_for["three-levels-us"] == ("fixed", "bracketing")
    assert {"four-levels", "manning-capacities", "two-loops", "ladder"} <= run_for.keys()
    assert not {"colebrook-smooth", "water-10", "laminar-link", "grid", "haaland-middle"} & run_for.keys()
    assert [check.id for check in run(())] == [check.id for check in run() if not check.concerns]


@pytest.mark.parametrize("folder", PROJECTS, ids=lambda folder: folder.name)
def test_the_demos_show_evidence_for_each_law_and_method(folder: Path) -> None:
    used = in_use(pipeline.account(folder))
    assert {word for check in run(used) for word in check.concerns} == set(used)


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

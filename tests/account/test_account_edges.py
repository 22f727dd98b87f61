"""Accounts at the edges of what is usual: many branches, a second opinion that fails, nothing to judge."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from accounts import accounted

from calc import pipeline, second
from calc.account.opinion import works_of
from calc.ledger import Program, replay, trace
from calc.problems import ProblemsFound


def star(branches: int, more: str = "") -> str:
    ponds = "".join(f"  pond-{k}: {{level: {30 + k} m}}\n" for k in range(branches))
    mains = "".join(
        f"  main-{k}: {{from: pond-{k}, to: cross, length: {300 + 50 * k} m, bore: 200 mm, roughness: 0.1 mm}}\n"
        for k in range(branches)
    )
    return f"reservoirs:\n{ponds}junctions: {{cross: {{withdrawal: 20 L/s}}}}\npipes:\n{mains}{more}"


def test_above_twelve_branches_the_history_keeps_sums(tmp_path: Path) -> None:
    account = accounted(tmp_path, star(14))
    ledger = account.ledger
    first = ledger.spot("junctions.cross.imbalance@base#1")
    assert isinstance(first.column.origin, Program)
    assert not ledger.find("pipes.flow_toward", "base", "main-0")
    assert replay(ledger)[1] == []
    lines = list(trace(ledger, ledger.spot("junctions.cross.imbalance@base")))
    assert any(line.strip() == "and 3 more" for line in lines)
    assert account.confirmed


def test_up_to_twelve_branches_the_history_keeps_each(tmp_path: Path) -> None:
    ledger = accounted(tmp_path, star(12)).ledger
    flows = [ledger.spot(f"pipes.main-{k}.flow_toward@base#1").value for k in range(12)]
    assert ledger.spot("junctions.cross.imbalance@base#1").value == pytest.approx(sum(flows) - 0.02, rel=1e-12)


def test_a_second_opinion_without_an_answer_does_not_agree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    original = second.form_opinion
    monkeypatch.setattr(
        second, "form_opinion", lambda works: replace(original(works), converged=False, reason="a loop still lacks 1 m")
    )
    account = accounted(tmp_path, star(3))
    assert not account.confirmed
    agreement = account.cases["base"].agreement
    assert agreement is not None
    assert agreement.flow_difference is None
    assert any("a loop still lacks 1 m" in one.text for one in account.findings)


def test_a_criterion_with_nothing_to_judge_has_no_governing_case(tmp_path: Path) -> None:
    account = accounted(tmp_path, star(3, "criteria: {pressure-min: {limit: 10 m}}\n"))
    (held,) = account.verdicts
    assert held.verdicts == ()
    assert held.governing is None
    assert held.least_margin is None


def test_what_the_second_opinion_is_told_is_the_networks_own(tmp_path: Path) -> None:
    text = star(3).replace("roughness: 0.1 mm}", "roughness: 0.1 mm, fittings: [{K: 3, K_reverse: 5, count: 2}]}", 1)
    held = accounted(tmp_path, text).cases["base"]
    works = works_of(held.network)
    area = np.pi / 4 * 0.2**2
    np.testing.assert_allclose(works.loss_forward, [6 / (2 * 9.80665 * area**2), 0, 0], rtol=1e-14)
    np.testing.assert_allclose(works.loss_reverse, [10 / (2 * 9.80665 * area**2), 0, 0], rtol=1e-14)


def test_bracketing_for_two_junctions_is_refused_where_it_is_asked_for(tmp_path: Path) -> None:
    text = star(3).replace("cross: {withdrawal: 20 L/s}", "cross: {}, edge: {}")
    text += (
        "  spur: {from: cross, to: edge, length: 10 m, bore: 200 mm, roughness: 0.1 mm}\nsolver: {method: bracketing}\n"
    )
    with pytest.raises(ProblemsFound) as caught:
        accounted(tmp_path, text)
    (problem,) = caught.value.problems
    assert problem.code == "unsuited-method"
    assert problem.path == "solver.method"
    assert problem.mark.line == len(text.splitlines())


def test_stages_are_told_in_their_order(tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(star(3, "cases: {low: {with: {reservoirs.pond-0.level: 29 m}}}\n"))
    said: list[str] = []
    pipeline.account(tmp_path, said.append)
    assert said == ["reading", "solving base", "solving low", "entering the ledger"]


CASES = """
cases:
  drawn: {times: {"junctions.*.withdrawal": 1.5}}
  doubled: {after: drawn, times: {"junctions.*.withdrawal": 2}}
  twice: {times: {"junctions.*.withdrawal": 1.5, "junctions.cross.withdrawal": 2}}
  reset: {after: drawn, with: {junctions.cross.withdrawal: 4 L/s}}
  wide: {with: {pipes.main-0.bore: 300 mm}, times: {"pipes.*.roughness": 3}}
  pairs: {with: {pipes.main-1.parallel: 2, pipes.main-2.law: haaland}}
  heavy: {with: {site.gravity: 9.7 m/s², site.altitude: 500 m, fluid.temperature: 25 degC}}
  limits: {with: {constants.transition.laminar_below: 1800}}
"""


def test_every_way_to_change_an_input_reaches_solver_and_ledger_alike(tmp_path: Path) -> None:
    account = accounted(tmp_path, star(3, CASES))
    assert account.solved
    assert account.confirmed
    assert replay(account.ledger)[1] == []
    drawn = {
        case: account.ledger.spot(f"junctions.cross.withdrawal@{case}").value
        for case in ("base", "drawn", "doubled", "twice", "reset", "wide")
    }
    assert drawn == pytest.approx(
        {"base": 0.02, "drawn": 0.03, "doubled": 0.06, "twice": 0.06, "reset": 0.004, "wide": 0.02}
    )
    for case, held in account.cases.items():
        assert held.columns is not None
        for name in ("length", "bore", "roughness", "parallel", "gravity", "laminar_below", "viscosity"):
            np.testing.assert_allclose(
                getattr(held.columns.terms, name).values, getattr(held.network.pipes, name), rtol=1e-15, err_msg=case
            )
    text = "\n".join(trace(account.ledger, account.ledger.spot("junctions.cross.withdrawal@twice")))
    assert text.count("y = k_c * y_0") == 2
    assert "given as '20 L/s'" in text


LIQUIDS = """
cases:
  dense: {times: {fluid.density: 1.1}}
  thick: {after: dense, times: {fluid.viscosity: 2}}
  other: {with: {fluid.density: 850 kg/m³}}
"""


@pytest.mark.parametrize(
    ("fluid", "viscosity"),
    [
        # with a temperature nothing is stated that a factor could multiply
        ("temperature: 20 degC", {"base": 1.0, "dense": 1.0, "thick": 1.0}),
        ("density: 900 kg/m³, viscosity: 1e-5 m²/s", {"base": 1.0, "dense": 1.0, "thick": 2.0, "other": 1.0}),
        (
            "density: 900 kg/m³, viscosity: 9e-3 Pa·s",
            {"base": 1.0, "dense": 1 / 1.1, "thick": 2 / 1.1, "other": 90 / 85},
        ),
    ],
)
def test_a_liquid_changes_by_what_is_stated_of_it(tmp_path: Path, fluid: str, viscosity: dict[str, float]) -> None:
    lines = [line for line in LIQUIDS.splitlines() if line.partition(":")[0].strip() in ("cases", *viscosity)]
    account = accounted(tmp_path, star(3, f"fluid: {{{fluid}}}\n" + "\n".join(lines)))
    assert account.confirmed
    base = account.ledger.spot("fluid.viscosity@base").value
    for case, factor in viscosity.items():
        got = account.ledger.spot(f"fluid.viscosity@{case}").value
        assert got == pytest.approx(factor * base, rel=1e-12), case
        assert got == account.cases[case].network.pipes.viscosity[0]


def test_a_factor_on_a_withdrawal_leaves_an_inflow_alone(tmp_path: Path) -> None:
    text = star(
        3, 'cases: {peak: {times: {"junctions.*.withdrawal": 1.5}}, more: {times: {"junctions.*.inflow": 3}}}\n'
    )
    account = accounted(tmp_path, text.replace("withdrawal: 20 L/s", "inflow: 20 L/s"))
    drawn = {case: account.ledger.spot(f"junctions.cross.withdrawal@{case}").value for case in account.cases}
    assert drawn == pytest.approx({"base": -0.02, "peak": -0.02, "more": -0.06})
    assert account.confirmed
    for held in account.cases.values():
        assert held.network.withdrawal[-1] == pytest.approx(drawn[held.id])


def test_a_fitting_on_its_pipes_bore_goes_with_it(tmp_path: Path) -> None:
    text = star(3, "cases: {wide: {with: {pipes.main-0.bore: 300 mm}}}\n").replace(
        "roughness: 0.1 mm}", "roughness: 0.1 mm, fittings: [{K: 3}, {K: 3, bore: 150 mm}]}", 1
    )
    account = accounted(tmp_path, text)
    for case, bore in (("base", 0.2), ("wide", 0.3)):
        flow = account.ledger.spot(f"pipes.main-0.flow@{case}").value
        for part, own in ((1, bore), (2, 0.15)):
            speed = account.ledger.spot(f"fittings.main-0/{part}.velocity@{case}").value
            assert speed == pytest.approx(flow / (np.pi / 4 * own**2), rel=1e-12)
    assert account.confirmed

"""Criteria judged: values, limits, margins and verdicts of a small case by hand."""

from __future__ import annotations

from pathlib import Path

import pytest
from accounts import accounted

from calc.account import Account, CriterionVerdict
from calc.criteria import ALL
from calc.equation import ARRAYS, value_of
from calc.ledger import replay, trace

# Between two reservoirs with f fixed everything follows by hand: 6 m over 0.02·1000/0.2 + 0.5 + 1 velocity heads.
WORKS = """
site: {gravity: 9.81 m/s²}
fluid: {density: 998 kg/m³, viscosity: 1e-6 m²/s}
friction: fixed
reservoirs: {upper: {level: 46 m}, lower: {level: 40 m}}
junctions:
  half-way: {elevation: 5 m}
  unsurveyed: {}
pipes:
  first: {from: upper, to: half-way, length: 500 m, bore: 200 mm, friction_factor: 0.02, ends: {from: square}}
  second: {from: half-way, to: unsurveyed, length: 300 m, bore: 200 mm, friction_factor: 0.02}
  third: {from: unsurveyed, to: lower, length: 200 m, bore: 200 mm, friction_factor: 0.02, ends: {to: square}}
cases:
  higher: {with: {reservoirs.upper.level: 52 m}}
  shut: {with: {pipes.first.open: false}}
"""
SPEED = (6 * 19.62 / (0.02 * 1000 / 0.2 + 0.5 + 1.0)) ** 0.5
PER_METRE = 0.02 / 0.2 * SPEED**2 / 19.62
HEAD = 46 - (0.02 * 500 / 0.2 + 0.5) * SPEED**2 / 19.62


def judged(tmp_path: Path, criteria: str) -> tuple[Account, dict[str, CriterionVerdict]]:
    account = accounted(tmp_path, WORKS, criteria=f"criteria:\n{criteria}")
    assert replay(account.ledger)[1] == []
    return account, {one.id: one for one in account.verdicts}


def test_velocity_at_most(tmp_path: Path) -> None:
    _, found = judged(tmp_path, "  velocity-max: {limit: 1.1 m/s, applies_to: pipes.second, cases: base}")
    (verdict,) = found["velocity-max"].verdicts
    assert verdict.value.value == pytest.approx(SPEED, rel=1e-10)
    assert verdict.limit.value == 1.1
    assert verdict.margin.value == pytest.approx(1.1 - SPEED, rel=1e-8)
    assert (verdict.path, verdict.case, verdict.met) == ("pipes.second", "base", True)


def test_velocity_at_least_is_judged_without_sign_and_governs_where_least(tmp_path: Path) -> None:
    _, found = judged(tmp_path, "  velocity-min: {limit: 1.2 m/s, cases: [base, higher]}")
    held = found["velocity-min"]
    assert len(held.verdicts) == 6
    assert held.governing is not None
    assert held.governing.case == "base"
    assert not held.met
    assert held.least_margin is not None
    assert held.least_margin.value == pytest.approx(SPEED - 1.2, rel=1e-8)
    assert held.least_margin.id == "criteria.velocity-min.least_margin"
    higher = {one.met for one in held.verdicts if one.case == "higher"}
    assert higher == {True}  # 12 m give sqrt(2) times the speed, 1.523 m/s


def test_gradient_at_most(tmp_path: Path) -> None:
    _, found = judged(tmp_path, "  gradient-max: {limit: 5 m/km, cases: base}")
    held = found["gradient-max"]
    assert [one.value.value for one in held.verdicts] == pytest.approx([PER_METRE] * 3, rel=1e-9)
    assert [one.margin.value for one in held.verdicts] == pytest.approx([0.005 - PER_METRE] * 3, rel=1e-7)
    assert held.met is (PER_METRE <= 0.005)


def test_pressure_as_head_is_judged_where_the_elevation_is_known(tmp_path: Path) -> None:
    _, found = judged(tmp_path, "  pressure-min: {limit: 38.5 m, cases: base}")
    (verdict,) = found["pressure-min"].verdicts
    assert verdict.path == "junctions.half-way"
    assert verdict.value.value == pytest.approx(HEAD - 5, abs=1e-8)
    assert verdict.margin.value == pytest.approx(HEAD - 43.5, abs=1e-8)
    assert not verdict.met


def test_a_limit_in_bar_is_judged_as_a_pressure(tmp_path: Path) -> None:
    account, found = judged(tmp_path, "  pressure-max: {limit: 6.0 bar, cases: base}")
    (verdict,) = found["pressure-max"].verdicts
    assert verdict.limit.value == 600000.0
    # By hand: a pressure head of HEAD - 5 m in a liquid of 998 kg/m3 under 9.81 m/s2, 9790.38 Pa a metre.
    assert verdict.value.value == pytest.approx((HEAD - 5) * 9790.38, abs=1e-3)
    assert verdict.margin.value == pytest.approx(600000 - (HEAD - 5) * 9790.38, abs=1e-3)
    text = "\n".join(trace(account.ledger, verdict.margin))
    assert "p = ρ * g * h_p" in text
    assert "given as '6.0 bar' at criteria.yaml:2:25, 6 × 100000" in text


def test_a_limit_means_the_same_as_a_head_and_as_a_pressure(tmp_path: Path) -> None:
    met = []
    for limit in (f"{HEAD - 5.001!r} m", f"{(HEAD - 5.001) * 9790.38!r} Pa", f"{(HEAD - 4.999) * 9790.38!r} Pa"):
        _, found = judged(tmp_path, f"  pressure-min: {{limit: {limit}, cases: base}}")
        met.append(found["pressure-min"].met)
    assert met == [True, True, False]


def test_a_limit_that_is_exactly_met_is_met(tmp_path: Path) -> None:
    account, _ = judged(tmp_path, "")
    speed = account.ledger.spot("pipes.first.velocity@base").value
    _, found = judged(tmp_path, f"  velocity-max: {{limit: {speed!r} m/s, cases: base, applies_to: pipes.first}}")
    (verdict,) = found["velocity-max"].verdicts
    assert verdict.margin.value == 0.0
    assert verdict.met


def test_a_shut_pipe_has_no_speed_to_judge(tmp_path: Path) -> None:
    _, found = judged(tmp_path, '  velocity-min: {limit: 0.1 m/s, applies_to: "pipes.*", cases: shut}')
    assert [one.subject for one in found["velocity-min"].verdicts] == ["second", "third"]
    assert not found["velocity-min"].met


def test_patterns_choose_their_subjects_in_the_order_of_the_files(tmp_path: Path) -> None:
    _, found = judged(tmp_path, '  velocity-max: {limit: 3 m/s, applies_to: [pipes.third, "pipes.f*"], cases: base}')
    assert [one.subject for one in found["velocity-max"].verdicts] == ["first", "third"]


def test_two_criteria_on_one_quantity_share_its_number(tmp_path: Path) -> None:
    account, found = judged(
        tmp_path, "  velocity-max: {limit: 3 m/s, cases: base}\n  velocity-min: {limit: 0.1 m/s, cases: base}"
    )
    ids = [{one.value.id for one in held.verdicts} for held in found.values()]
    assert ids[0] == ids[1]
    assert account.met


def test_every_criterion_is_judged_on_arrays_as_on_columns(tmp_path: Path) -> None:
    from calc.criteria import Outcome  # noqa: PLC0415 - used here alone

    criteria = """
  velocity-max: {limit: 3 m/s}
  velocity-min: {limit: 0.1 m/s}
  pressure-min: {limit: 20 m}
  pressure-max: {limit: 600 kPa}
  gradient-max: {limit: 10 m/km}
"""
    account, found = judged(tmp_path, criteria)
    assert set(found) == {criterion.id for criterion in ALL}
    columns = account.cases["base"].columns
    assert columns is not None
    views = Outcome(
        columns.results.velocity,
        columns.results.friction_loss,
        columns.terms.length,
        columns.pressure_head,
        columns.pressure,
    )
    arrays = Outcome(*(view.values for view in vars(views).values()))
    for criterion in ALL:
        kind = found[criterion.id].verdicts[0].limit.column.kind
        values = value_of(criterion.values[kind](ARRAYS, arrays)).tolist()
        told = [one.value.value for one in found[criterion.id].verdicts if one.case == "base"]
        assert told == pytest.approx(values, rel=1e-15)
        assert criterion.sense in ("at most", "at least")
        limit = found[criterion.id].verdicts[0].limit.value
        margin = criterion.margin(kind).body(value=values[0], limit=limit)
        assert margin == pytest.approx(limit - values[0] if criterion.sense == "at most" else values[0] - limit)

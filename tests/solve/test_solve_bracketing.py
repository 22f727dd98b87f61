"""Bracketing the head of one junction: closed forms, limits, levels, starts and cases without an answer."""

from __future__ import annotations

import numpy as np
import pytest
from solve_cases import Pipe, network, random_pipe, random_star, resisting

from calc.components.network import Network
from calc.problems import CalcError
from calc.solve import NARROWINGS, Settings, solve

BISECTION = Settings(narrowing="bisection")
THREE = {"upper": 214.60, "middle": 203.25, "lower": 188.10}


def three(withdrawal: float = 0.0) -> Network:
    pipes = [
        Pipe("upper", "j", 1850.0, 0.3844, 1.5e-4),
        Pipe("j", "middle", 940.0, 0.25, 1.5e-4, fittings=[(3, 0.3, 0.3)]),
        Pipe("lower", "j", 2210.0, 0.3, 3e-4),
    ]
    return network(THREE, {"j": withdrawal}, pipes)


@pytest.mark.parametrize("narrowing", NARROWINGS)
def test_two_pipes_in_line_against_their_closed_form(narrowing: str) -> None:
    # Q = √((z₁ − z₂)/(r₁ + r₂)), H = z₁ − r₁Q²
    case = network({"a": 80.0, "b": 55.0}, {"j": 0.0}, [resisting("a", "j", 300.0), resisting("j", "b", 700.0)])
    found = solve(case, Settings(narrowing=narrowing))
    assert found.converged
    assert found.method == "bracketing"
    assert found.head == pytest.approx([80.0, 55.0, 72.5], abs=1e-8)
    assert found.flow == pytest.approx([np.sqrt(0.025)] * 2, abs=1e-10)


@pytest.mark.parametrize("narrowing", NARROWINGS)
@pytest.mark.parametrize(("withdrawal", "expected"), [(0.08, 214.60 - 6.4), (-0.08, 214.60 + 6.4)])
def test_one_reservoir_feeds_or_takes(narrowing: str, withdrawal: float, expected: float) -> None:
    # H = z − rW|W| with r = 1000 s²/m⁵
    case = network({"a": 214.60}, {"j": withdrawal}, [resisting("a", "j", 1000.0)])
    found = solve(case, Settings(narrowing=narrowing))
    assert found.head[1] == pytest.approx(expected, abs=1e-8)
    assert found.flow[0] == pytest.approx(withdrawal, abs=1e-11)


def test_head_falls_kilometres_below_ground() -> None:
    # r = 8 f L/(π² g D⁵) for D = 0.05 m, f = 0.03, L = 2000 m; H = z − rW²
    resistance = 8 * 0.03 * 2000.0 / (np.pi**2 * 9.81 * 0.05**5)
    case = network({"a": 30.0}, {"j": 0.02}, [Pipe("a", "j", 2000.0, 0.05, factor=0.03)])
    found = solve(case)
    assert found.head[1] == pytest.approx(30.0 - resistance * 0.02**2, rel=1e-12)
    assert found.head[1] < -5000
    assert found.iterations <= 25


def test_equal_branches_meet_half_way() -> None:
    case = network({"a": 30.0, "b": 10.0}, {"j": 0.0}, [Pipe("a", "j", roughness=1e-4), Pipe("j", "b", roughness=1e-4)])
    assert solve(case).head[2] == pytest.approx(20.0, abs=1e-9)


def test_level_of_the_middle_reservoir_is_found_at_its_own_row() -> None:
    # the criterion (z_a − z_b)/(z_b − z_c) = r_a/r_c with r = 300 and 700 gives z_b = 80 − 0.3·50 = 65
    pipes = [resisting("a", "j", 300.0), resisting("b", "j", 950.0), resisting("c", "j", 700.0)]
    found = solve(network({"a": 80.0, "b": 65.0, "c": 30.0}, {"j": 0.0}, pipes))
    assert found.head[3] == 65.0
    assert found.flow[1] == 0.0
    assert found.trials is not None
    assert found.trials.rule[found.trials.accepted] == "level"
    assert found.iterations == 1


@pytest.mark.parametrize("given", [{"factor": 0.02}, {"roughness": 1e-4}])
def test_still_water_is_exact(given: dict[str, float]) -> None:
    case = network({"a": 41.3, "b": 41.3}, {"j": 0.0}, [Pipe("a", "j", **given), Pipe("j", "b", **given)])
    found = solve(case)
    assert found.head.tolist() == [41.3, 41.3, 41.3]
    assert found.flow.tolist() == [0.0, 0.0]


def test_equal_levels_with_a_withdrawal_share_it() -> None:
    pipes = [resisting("a", "j", 400.0), resisting("b", "j", 900.0)]
    found = solve(network({"a": 30.0, "b": 30.0}, {"j": 0.1}, pipes))
    # Q₁/Q₂ = √(r₂/r₁) = 3/2
    assert found.flow == pytest.approx([0.06, 0.04], abs=1e-10)
    assert found.head[2] == pytest.approx(30.0 - 400.0 * 0.06**2, abs=1e-9)


def test_an_inflow_lifts_the_head_above_all_levels() -> None:
    found = solve(three(-0.9))
    assert found.converged
    assert found.head[3] > 214.60
    toward = found.flow * np.array([1.0, -1.0, 1.0])
    assert np.all(toward < 0)
    assert toward.sum() == pytest.approx(-0.9, abs=1e-9)


def test_a_shut_branch_carries_nothing_and_counts_for_nothing() -> None:
    pipes = [resisting("a", "j", 300.0), resisting("j", "b", 700.0)]
    shut = [*pipes, Pipe("c", "j", factor=0.02, open=False)]
    without = solve(network({"a": 80.0, "b": 55.0}, {"j": 0.0}, pipes))
    found = solve(network({"a": 80.0, "b": 55.0, "c": 500.0}, {"j": 0.0}, shut))
    assert found.flow[2] == 0.0
    assert found.flow[:2].tolist() == without.flow.tolist()
    assert found.head[3] == without.head[2]
    assert found.trials is not None
    assert np.all(found.trials.flows[:, 2] == 0.0)


def test_a_pipe_between_two_reservoirs_is_solved_beside_the_junction() -> None:
    pipes = [resisting("a", "j", 300.0), resisting("j", "b", 700.0), resisting("b", "a", 1000.0)]
    found = solve(network({"a": 80.0, "b": 55.0}, {"j": 0.0}, pipes))
    assert found.flow[2] == pytest.approx(-np.sqrt(0.025), rel=1e-14)
    assert found.trials is not None
    assert found.trials.branches.tolist() == [0, 1]


def test_flows_are_resolved_where_a_float_of_head_is_too_coarse() -> None:
    # A stub of 3 m bore and 0.1 m length: r = 3.4e-7 s²/m⁵, so the last digit of 214.60 m is 3e-4 m³/s.
    stub = Pipe("a", "j", 0.1, 3.0, factor=0.01)
    found = solve(network({"a": 214.60, "b": 180.0}, {"j": 0.0}, [stub, resisting("j", "b", 1000.0)]))
    resistance = 8 * 0.01 * 0.1 / (np.pi**2 * 9.81 * 3.0**5)
    assert np.sqrt(np.spacing(214.60) / resistance) > 1e-4
    assert found.converged
    assert found.tests[0].value <= 1e-9
    assert found.flow == pytest.approx([np.sqrt(34.6 / (1000.0 + resistance))] * 2, abs=1e-10)


@pytest.mark.parametrize("narrowing", NARROWINGS)
@pytest.mark.parametrize("start", [-1e6, 0.0, 188.10, 200.0, 214.60, 1e6])
def test_any_start_leads_to_the_same_head(start: float, narrowing: str) -> None:
    plain = solve(three(0.03))
    found = solve(three(0.03), Settings(narrowing=narrowing, start={"j": start}))
    assert found.converged
    assert found.head == pytest.approx(plain.head, abs=2e-9)
    assert found.flow == pytest.approx(plain.flow, abs=2e-9)
    assert found.trials is not None
    assert found.trials.head[0] == start
    assert found.trials.rule[0] == "start"


@pytest.mark.parametrize("withdrawal", [0.6, -2.0])
@pytest.mark.parametrize("start", [-1e6, 1e6])
def test_any_start_is_safe_when_the_head_lies_outside_the_levels(start: float, withdrawal: float) -> None:
    found = solve(three(withdrawal), Settings(start={"j": start}))
    assert found.head == pytest.approx(solve(three(withdrawal)).head, abs=2e-9)
    assert found.iterations <= 25


def test_both_stopping_tests_are_stated_and_met() -> None:
    found = solve(three(0.03), Settings(tolerance=1e-8))
    imbalance, width, energy = found.tests
    assert (imbalance.limit, imbalance.unit) == (1e-8, "m³/s")
    assert (width.limit, width.unit) == (1e-9, "m")
    assert energy.unit == "m"
    assert all(test.met and test.words for test in found.tests)


@pytest.mark.parametrize("withdrawal", [0.0, 0.02])
def test_no_open_path_means_no_answer_even_without_withdrawal(withdrawal: float) -> None:
    case = network({"a": 80.0}, {"marl-cross": withdrawal}, [Pipe("a", "marl-cross", factor=0.02, open=False)])
    found = solve(case)
    assert not found.converged
    assert "marl-cross" in found.reason
    assert np.all(np.isnan(found.head))
    assert np.all(np.isnan(found.flow))


def test_the_limit_is_loud_and_keeps_the_history() -> None:
    found = solve(three(0.03), Settings(narrowing="bisection", limit=7))
    assert not found.converged
    assert "7 trials" in found.reason
    assert found.trials is not None
    assert len(found.trials.head) == found.iterations == 7
    assert found.trials.accepted == -1
    assert np.all(np.isnan(found.head))


def test_a_tolerance_below_rounding_is_loud() -> None:
    found = solve(three(0.03), Settings(tolerance=1e-40))
    assert not found.converged
    assert "imbalance" in found.reason
    assert np.all(np.isnan(found.flow))


@pytest.mark.parametrize(
    ("settings", "words"),
    [
        (Settings(method="guess"), "guess"),
        (Settings(narrowing="thirds"), "thirds"),
        (Settings(tolerance=0.0), "tolerance"),
        (Settings(limit=0), "limit"),
    ],
)
def test_settings_without_sense_are_refused(settings: Settings, words: str) -> None:
    with pytest.raises(CalcError, match=words):
        solve(three(), settings)


def test_bracketing_is_refused_for_two_unknown_heads() -> None:
    case = network({"a": 9.0}, {"j": 0.0, "k": 0.0}, [Pipe("a", "j", factor=0.02), Pipe("j", "k", factor=0.02)])
    with pytest.raises(CalcError, match="has 2"):
        solve(case, Settings(method="bracketing"))


@pytest.mark.parametrize("seed", range(40))
def test_both_methods_and_both_narrowings_agree(seed: int) -> None:
    case = random_star(np.random.default_rng(seed))
    found = [solve(case), solve(case, BISECTION), solve(case, Settings(method="newton"))]
    assert [other.reason for other in found] == ["", "", ""]
    span = float(np.ptp(found[0].head))
    for other in found[1:]:
        assert other.flow == pytest.approx(found[0].flow, abs=2e-9)
        assert other.head == pytest.approx(found[0].head, abs=2e-9 + 1e-9 * span)


def by_hand(pipe: Pipe, difference: float) -> float:
    """Flow from ``start`` to ``end`` with fixed f: Darcy–Weisbach and the fittings solved for Q."""
    forward = sum(count * k for count, k, _ in pipe.fittings)
    back = sum(count * k for count, _, k in pipe.fittings)
    lost = pipe.factor * pipe.length / pipe.bore + (forward if difference > 0 else back)
    speed = np.sign(difference) * np.sqrt(2 * 9.81 * abs(difference) / lost)
    return float(pipe.parallel * np.pi / 4 * pipe.bore**2 * speed)


@pytest.mark.parametrize("seed", range(8))
def test_heads_are_certified_by_signs_computed_by_hand(seed: int) -> None:
    rng = np.random.default_rng(seed)
    for _ in range(25):
        levels = {name: float(rng.uniform(100.0, 140.0)) for name in "abcd"[: int(rng.integers(1, 5))]}
        pipes = [random_pipe(rng, name, "j", "fixed") for name in levels]
        withdrawal = float(rng.normal() * rng.choice([0.0, 1e-3, 0.05]))
        head = float(solve(network(levels, {"j": withdrawal}, pipes)).head[-1])
        below, above = (
            sum(by_hand(pipe, levels[pipe.start] - (head + side)) for pipe in pipes) - withdrawal
            for side in (-2e-9 - 1e-13 * abs(head), 2e-9 + 1e-13 * abs(head))
        )
        assert below >= 0 >= above

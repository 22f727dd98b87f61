"""Loop correction: its loops and start, every row by Hardy Cross's own formula, agreement with Newton, limits."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from solve_cases import Pipe, balances, network, random_net, random_star, resisting

from calc.components.network import Network
from calc.physics.friction import LAW_NAMES
from calc.problems import CalcError
from calc.solve import MOST_LOOPS, MOST_PIPES, Corrections, Settings, Solution, solve
from calc.solve.branch import Branches
from calc.solve.loop_method import LoopMethod
from calc.solve.loop_rules import LOSS_EXPONENT

LOOPS = Settings(method="loop-correction")
NEWTON = Settings(method="newton")


def small_net(seed: int, law: str = "") -> Network:
    """Return the first random network of a seed that a hand would take on."""
    rng = np.random.default_rng(seed)
    while True:
        case = network(*random_net(rng, law))
        if len(case.open) <= MOST_PIPES and len(case.open) - len(case.unknown) <= MOST_LOOPS:
            return case


def table_of(found: Solution) -> Corrections:
    assert found.corrections is not None
    return found.corrections


def agree(case: Network, settings: Settings = LOOPS) -> Solution:
    """Solve by both methods and compare as the second opinion is compared."""
    ours, newton = solve(case, settings), solve(case, NEWTON)
    assert newton.converged
    assert ours.reason == ""
    assert np.max(np.abs(ours.flow - newton.flow)) <= 1e-7 * np.max(np.abs(newton.flow)) + 1e-9
    assert np.max(np.abs(ours.head - newton.head)) <= 1e-7 * np.ptp(newton.head) + 1e-9
    assert np.max(np.abs(balances(case, ours.flow)), initial=0.0) < 1e-12
    return ours


@pytest.mark.parametrize("seed", range(60))
def test_random_networks_have_the_flows_of_newton(seed: int) -> None:
    agree(small_net(seed))


@pytest.mark.parametrize("law", LAW_NAMES)
@pytest.mark.parametrize("seed", range(100, 106))
def test_random_networks_of_one_law_have_the_flows_of_newton(seed: int, law: str) -> None:
    agree(small_net(seed, law))


@pytest.mark.parametrize("seed", range(30))
def test_random_stars_have_the_flows_of_newton(seed: int) -> None:
    agree(random_star(np.random.default_rng(seed)))


def ladder() -> tuple[Network, list[float], list[float]]:
    """Return a ladder of four loops made from its answer: whole flows, and heads from which the resistances follow."""
    heads = {
        "a": 60.0,
        "b": 52.0,
        "c": 47.5,
        "d": 44.0,
        "e": 41.0,
        "f": 55.0,
        "g": 48.5,
        "h": 45.0,
        "i": 42.5,
        "j": 38.0,
    }
    flows = {
        "ab": 90.0,
        "bc": 50.0,
        "cd": 30.0,
        "de": 12.0,
        "af": 60.0,
        "fg": 70.0,
        "gh": 40.0,
        "hi": 25.0,
        "ij": 15.0,
        "fb": 5.0,
        "gc": 8.0,
        "hd": 6.0,
        "ei": -4.0,
    }
    pipes, drawn = [], dict.fromkeys(heads, 0.0)
    for way, litres in flows.items():
        flow = litres / 1000
        pipes.append(resisting(way[0], way[1], (heads[way[0]] - heads[way[1]]) / (flow * abs(flow))))
        drawn[way[0]] -= flow
        drawn[way[1]] += flow
    levels = {"a": heads["a"], "j": heads["j"]}
    made = network(levels, {name: drawn[name] for name in heads if name not in levels}, pipes)
    return made, [heads[name] for name in made.nodes], [litres / 1000 for litres in flows.values()]


def test_a_ladder_is_exact_by_construction() -> None:
    case, heads, flows = ladder()
    found = solve(case, LOOPS)
    assert found.reason == ""
    assert found.flow == pytest.approx(flows, abs=1e-9)
    assert found.head == pytest.approx(heads, abs=1e-8)
    loops = table_of(found).loops
    assert len(loops) == len(flows) - len(case.unknown)
    assert {loop.path for loop in loops} == {True, False}


@pytest.mark.parametrize("seed", range(40))
def test_loops_are_walks_each_with_a_pipe_of_its_own(seed: int) -> None:
    case = small_net(seed)
    loops = table_of(solve(case, LOOPS)).loops
    assert len(loops) == int(np.sum(case.open)) - len(case.unknown)
    reservoirs = set(np.flatnonzero(~np.isnan(case.level)).tolist())
    for k, loop in enumerate(loops):
        for pipe, sign, walked in zip(loop.pipes, loop.signs, pairwise(loop.nodes), strict=True):
            ends = (int(case.start[pipe]), int(case.end[pipe]))
            assert walked == (ends if sign > 0 else ends[::-1])
        assert len(set(loop.pipes)) == len(loop.pipes)
        assert not any(loop.closing in earlier.pipes for earlier in loops[:k])
        if loop.path:
            assert {loop.nodes[0], loop.nodes[-1]} <= reservoirs
            assert case.level[loop.nodes[0]] >= case.level[loop.nodes[-1]]


@pytest.mark.parametrize("seed", range(40))
def test_continuity_holds_from_the_start_and_flows_are_the_start_and_the_corrections(seed: int) -> None:
    case = small_net(seed)
    found = solve(case, LOOPS)
    held = table_of(found)
    assert np.max(np.abs(balances(case, held.start)), initial=0.0) < 1e-14
    flow = held.start.copy()
    for c, k in enumerate(held.loop.tolist()):
        assert held.flow[c] == pytest.approx(flow, abs=1e-15)
        assert np.max(np.abs(balances(case, held.flow[c]))) < 1e-13
        for pipe, sign in zip(held.loops[k].pipes, held.loops[k].signs, strict=True):
            flow[pipe] += sign * held.change[c]
    assert found.flow == pytest.approx(flow, abs=1e-15)


def test_closing_flows_are_assumed_with_two_figures_and_water_moves_from_the_start() -> None:
    for seed in range(40):
        held = table_of(solve(small_net(seed), LOOPS))
        for loop in held.loops:
            digits = f"{abs(held.start[loop.closing]):.12e}".split("e")[0].replace(".", "").rstrip("0")
            assert len(digits) <= 2
        assert not held.loops or np.any(held.start[[loop.closing for loop in held.loops]] != 0)


def test_every_correction_is_that_of_hardy_cross() -> None:
    # ΔQ = −Σ r Q|Q| / Σ 2 r|Q|, of a path less the fall of level (Cross 1936); r from the ladder's own numbers
    case, heads, flows = ladder()
    resistance = [
        (heads[int(a)] - heads[int(b)]) / (q * abs(q)) for a, b, q in zip(case.start, case.end, flows, strict=True)
    ]
    held = table_of(solve(case, LOOPS))
    assert len(held.change) >= 3 * len(held.loops)
    for c, k in enumerate(held.loop.tolist()):
        loop = held.loops[k]
        fall = float(case.level[loop.nodes[0]] - case.level[loop.nodes[-1]]) if loop.path else 0.0
        loss = rates = 0.0
        for pipe, sign in zip(loop.pipes, loop.signs, strict=True):
            q = float(held.flow[c, pipe])
            loss += sign * resistance[pipe] * q * abs(q)
            rates += 2 * resistance[pipe] * abs(q)
        assert held.loss[c] == pytest.approx(loss, rel=1e-11, abs=1e-11)
        assert held.excess[c] == pytest.approx(loss - fall, rel=1e-9, abs=1e-11)
        assert held.rate[c] == pytest.approx(rates, rel=1e-11)
        assert held.change[c] == pytest.approx(-(loss - fall) / rates, rel=1e-9, abs=1e-13)
    assert np.array_equal(held.loop, np.tile(np.arange(len(held.loops)), int(held.sweep[-1])))


@pytest.mark.parametrize(
    ("pipe", "flow"),
    [
        (Pipe("a", "b", factor=0.02, fittings=[(2.0, 1.5, 4.0)]), 0.03),
        (Pipe("a", "b", manning_n=0.012, fittings=[(1.0, 3.0, 4.0)]), -0.03),
        (Pipe("a", "b", 400.0, hazen_williams_c=110.0, fittings=[(3.0, 2.0, 1.0)]), -0.05),
        (Pipe("a", "b", 30.0, 0.05, roughness=1e-4, fittings=[(3.0, 2.0, 1.0)]), 2e-5),
        (Pipe("a", "b", 30.0, 0.05, roughness=1e-4, fittings=[(3.0, 2.0, 1.0)]), 1.2e-4),
        (Pipe("a", "b", 30.0, 0.05, roughness=1e-4, law="haaland"), -1.1e-4),
    ],
)
def test_the_rise_is_the_derivative_of_the_loss_where_the_power_is_known(pipe: Pipe, flow: float) -> None:
    # laminar, transition, Hazen–Williams, Manning and fixed f lose by powers of the flow: n h/Q is dh/dQ
    case = network({"a": 30.0, "b": 20.0}, {}, [pipe])
    branches = Branches(case)
    loss, derivative = branches.losses(np.array([flow]))
    lost, rate = LoopMethod(case, branches).evaluate(np.array([flow]))
    assert lost == pytest.approx(loss, rel=1e-13)
    assert rate == pytest.approx(derivative, rel=1e-12)


@pytest.mark.parametrize("roughness", [0.0, 1e-4, 5e-3])
def test_in_turbulent_flow_the_rise_is_a_little_more_than_the_derivative(roughness: float) -> None:
    case = network({"a": 30.0, "b": 20.0}, {}, [Pipe("a", "b", roughness=roughness)])
    branches = Branches(case)
    for flow in (0.002, 0.02, 0.2, 2.0):
        _, derivative = branches.losses(np.array([flow]))
        _, rate = LoopMethod(case, branches).evaluate(np.array([flow]))
        assert 1.0 <= rate[0] / derivative[0] < 1.2


def test_every_law_says_to_which_power_it_goes() -> None:
    assert set(LOSS_EXPONENT.laws) == set(LAW_NAMES)


def test_two_reservoirs_and_no_junction() -> None:
    # Q = √((z₁ − z₂)/r)
    found = solve(network({"a": 40.0, "b": 50.0}, {}, [resisting("a", "b", 1000.0)]), LOOPS)
    assert found.flow[0] == pytest.approx(-0.1, rel=1e-10)
    (loop,) = table_of(found).loops
    assert loop.path
    assert loop.signs == (-1,)
    assert found.iterations == table_of(found).sweep[-1]


def test_without_a_loop_continuity_is_all() -> None:
    pipes = [resisting("a", "j", 200.0), resisting("k", "j", 500.0)]
    found = solve(network({"a": 70.0}, {"j": 0.01, "k": 0.02}, pipes), LOOPS)
    assert found.converged
    assert found.iterations == 0
    assert found.flow == pytest.approx([0.03, -0.02], abs=1e-15)
    assert found.head == pytest.approx([70.0, 69.82, 69.62], abs=1e-12)


GIVEN = [{"factor": 0.02}, {"roughness": 2e-4}, {"hazen_williams_c": 120.0}, {"manning_n": 0.012}]
given = pytest.mark.parametrize("stated", GIVEN, ids=lambda stated: next(iter(stated)))


@given
def test_still_water_stays_still(stated: dict[str, float]) -> None:
    pairs = [("a", "j"), ("j", "k"), ("k", "b"), ("j", "b")]
    case = network({"a": 41.3, "b": 41.3}, {"j": 0.0, "k": 0.0}, [Pipe(*pair, **stated) for pair in pairs])
    found = solve(case, LOOPS)
    assert found.converged
    assert np.all(found.flow == 0.0)
    assert np.all(table_of(found).change == 0.0)
    assert found.head.tolist() == [41.3] * 4


@given
def test_the_bridge_of_a_symmetric_loop_and_a_loop_without_outlet_are_still(stated: dict[str, float]) -> None:
    pairs = [("a", "j"), ("a", "k"), ("j", "b"), ("k", "b"), ("j", "k")]
    pairs += [("k", "l"), ("l", "m"), ("m", "k")]
    case = network({"a": 90.0, "b": 60.0}, dict.fromkeys("jklm", 0.0), [Pipe(*pair, **stated) for pair in pairs])
    found = agree(case)
    assert np.all(np.abs(found.flow[4:]) < 1e-9)
    assert found.head[2:] == pytest.approx([75.0] * 4, abs=1e-6)


def test_a_start_that_would_leave_water_at_rest_sets_it_moving() -> None:
    pipes = [resisting("a", "j", 300.0), resisting("j", "b", 700.0)]
    case = network({"a": 90.0, "b": 60.0}, {"j": 0.0}, pipes)
    found = solve(case, replace(LOOPS, start={"j": 60.0}))
    assert found.flow == pytest.approx([np.sqrt(0.03)] * 2, rel=1e-9)
    assert np.all(table_of(found).start != 0)


def test_a_shut_pipe_closes_no_loop_and_carries_nothing() -> None:
    pipes = [resisting("a", "j", 200.0), resisting("j", "k", 500.0), Pipe("a", "k", roughness=1e-4, open=False)]
    found = solve(network({"a": 70.0}, {"j": 0.01, "k": 0.02}, pipes), LOOPS)
    assert found.flow.tolist() == pytest.approx([0.03, 0.02, 0.0], abs=1e-15)
    assert table_of(found).loops == ()


def test_junctions_shut_off_are_named() -> None:
    pipes = [resisting("a", "j", 200.0), Pipe("j", "mere", factor=0.02, open=False)]
    found = solve(network({"a": 70.0}, {"j": 0.01, "mere": 0.0}, pipes), LOOPS)
    assert not found.converged
    assert "mere" in found.reason
    assert found.corrections is None


def test_a_search_given_up_keeps_its_table_and_says_why() -> None:
    case, _, _ = ladder()
    found = solve(case, replace(LOOPS, limit=2))
    assert not found.converged
    assert found.iterations == 2
    assert found.reason.startswith("not settled in 2 sweeps; largest correction in the last sweep ")
    assert np.all(np.isnan(found.flow))
    assert np.all(np.isnan(found.head))
    assert len(table_of(found).change) == 2 * len(table_of(found).loops)
    assert len(table_of(found).error) == 2
    assert any(not test.met for test in found.tests)


def test_more_than_a_hand_takes_on_is_refused() -> None:
    rungs = [resisting("a", "b", 100.0 + k) for k in range(MOST_LOOPS)]
    assert solve(network({"a": 9.0, "b": 2.0}, {}, rungs), LOOPS).converged
    with pytest.raises(CalcError, match="12 loops"):
        solve(network({"a": 9.0, "b": 2.0}, {}, [*rungs, resisting("a", "b", 50.0)]), LOOPS)
    names = [f"j{k}" for k in range(MOST_PIPES + 1)]
    string = [resisting(one, other, 10.0) for one, other in zip(["a", *names], names, strict=False)]
    with pytest.raises(CalcError, match="40 pipes"):
        solve(network({"a": 9.0}, dict.fromkeys(names, 0.0), string), LOOPS)


def test_the_order_of_the_pipes_does_not_matter() -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(4))
    first = solve(network(levels, withdrawals, pipes), LOOPS)
    second = solve(network(levels, withdrawals, pipes[::-1]), LOOPS)
    assert first.converged
    assert second.flow[::-1] == pytest.approx(first.flow, rel=1e-7, abs=1e-9)

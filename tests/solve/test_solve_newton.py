"""Newton's method on networks: closed forms, zero flow, loops, limits and cases without an answer."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from solve_cases import Array, Pipe, balances, network, random_net, resisting

from calc.solve import Settings, solve
from calc.solve.branch import Branches

NEWTON = Settings(method="newton")


def test_two_reservoirs_and_no_junction() -> None:
    # Q = √((z₁ − z₂)/r)
    found = solve(network({"a": 50.0, "b": 40.0}, {}, [resisting("b", "a", 1000.0)]))
    assert found.converged
    assert found.method == "newton"
    assert found.flow[0] == pytest.approx(-0.1, rel=1e-14)
    assert found.head.tolist() == [50.0, 40.0]
    assert found.steps is not None
    assert len(found.steps.iteration) == 1


def test_a_dead_end_carries_nothing_and_keeps_the_head() -> None:
    pipes = [
        resisting("a", "j", 300.0),
        resisting("j", "b", 700.0),
        Pipe("j", "k", factor=0.02),
        Pipe("k", "l", factor=0.02),
    ]
    found = solve(network({"a": 80.0, "b": 55.0}, {"j": 0.0, "k": 0.0, "l": 0.0}, pipes))
    assert found.flow[:2] == pytest.approx([np.sqrt(0.025)] * 2, rel=1e-10)
    assert np.all(np.abs(found.flow[2:]) < 1e-12)
    assert found.head[2:] == pytest.approx([72.5] * 3, abs=1e-9)


@pytest.mark.parametrize("given", [{"factor": 0.02}, {"roughness": 2e-4}])
def test_the_bridge_of_a_symmetric_loop_is_still(given: dict[str, float]) -> None:
    pairs = [("a", "j"), ("a", "k"), ("j", "b"), ("k", "b"), ("j", "k")]
    pipes = [Pipe(*pair, **given) for pair in pairs]
    found = solve(network({"a": 90.0, "b": 60.0}, {"j": 0.0, "k": 0.0}, pipes))
    assert found.converged
    assert abs(found.flow[4]) < 1e-12
    assert found.head[2:] == pytest.approx([75.0, 75.0], abs=1e-9)


@pytest.mark.parametrize("given", [{"factor": 0.02}, {"roughness": 2e-4}])
@pytest.mark.parametrize("method", ["newton", ""])
def test_still_water_is_exact(given: dict[str, float], method: str) -> None:
    pipes = [
        Pipe("a", "j", **given),
        Pipe("j", "k", **given),
        Pipe("k", "b", **given),
        Pipe("j", "b", **given),
    ]
    found = solve(network({"a": 41.3, "b": 41.3}, {"j": 0.0, "k": 0.0}, pipes), Settings(method=method))
    assert found.converged
    assert np.all(np.abs(found.flow) < 1e-12)
    assert found.head == pytest.approx([41.3] * 4, abs=1e-12)


def test_one_reservoir_without_withdrawals_is_at_rest() -> None:
    for seed in range(20):
        levels, withdrawals, pipes = random_net(np.random.default_rng(seed))
        found = solve(
            network(
                {"r0": levels["r0"], **dict.fromkeys(levels, levels["r0"])},
                dict.fromkeys(withdrawals, 0.0),
                pipes,
            )
        )
        assert found.reason == ""
        assert np.all(np.abs(found.flow) < 1e-12)
        assert found.head == pytest.approx(levels["r0"], abs=1e-9)


def test_a_withdrawal_from_a_string_is_summed_along_it() -> None:
    # all flows by continuity, heads by adding up r Q²
    pipes = [resisting("a", "j", 200.0), resisting("k", "j", 500.0), resisting("k", "l", 900.0)]
    found = solve(network({"a": 70.0}, {"j": 0.01, "k": 0.02, "l": 0.03}, pipes))
    assert found.flow == pytest.approx([0.06, -0.05, 0.03], abs=1e-12)
    drops = np.cumsum([200 * 0.06**2, 500 * 0.05**2, 900 * 0.03**2])
    assert found.head[1:] == pytest.approx(70.0 - drops, abs=1e-9)


def test_a_shut_pipe_carries_exactly_nothing() -> None:
    pipes = [
        resisting("a", "j", 200.0),
        resisting("j", "k", 500.0),
        Pipe("a", "k", roughness=1e-4, open=False),
    ]
    found = solve(network({"a": 70.0}, {"j": 0.01, "k": 0.02}, pipes))
    assert found.flow[2] == 0.0
    assert found.flow[1] == pytest.approx(0.02, abs=1e-12)


def test_junctions_shut_off_are_named() -> None:
    pipes = [
        resisting("a", "j", 200.0),
        Pipe("j", "k", factor=0.02, open=False),
        Pipe("k", "mere", factor=0.02),
    ]
    found = solve(network({"a": 70.0}, {"j": 0.01, "k": 0.0, "mere": 0.0}, pipes))
    assert not found.converged
    assert "k, mere" in found.reason
    assert "j," not in found.reason
    assert np.all(np.isnan(found.head))
    assert np.all(np.isnan(found.flow))


def test_many_junctions_shut_off_are_counted() -> None:
    names = [f"n{i}" for i in range(8)]
    pipes = [Pipe("a", name, factor=0.02, open=False) for name in names]
    found = solve(network({"a": 70.0}, dict.fromkeys(names, 0.0), pipes))
    assert found.reason.startswith("no open path joins junctions n0, n1, n2, n3, n4 and 3 more")


def test_the_limit_is_loud_and_keeps_the_history() -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(4))
    found = solve(network(levels, withdrawals, pipes), Settings(limit=2))
    assert not found.converged
    assert "2 iterations" in found.reason
    assert found.iterations == 2
    assert found.steps is not None
    assert len(found.steps.iteration) == 3
    assert np.all(np.isnan(found.head))
    assert np.all(np.isnan(found.flow))


def test_water_beyond_all_numbers_is_loud() -> None:
    pipes = [Pipe("a", "j", 1e5, 0.005, factor=0.05), Pipe("j", "k", 1e5, 0.005, factor=0.05)]
    found = solve(network({"a": 70.0}, {"j": 1e200, "k": 1e200}, pipes))
    assert not found.converged
    assert found.reason
    assert np.all(np.isnan(found.flow))


@pytest.mark.parametrize("seed", range(60))
def test_random_networks_conserve_mass_and_close_energy(seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed))
    case = network(levels, withdrawals, pipes)
    found = solve(case, NEWTON)
    assert found.reason == ""
    assert np.all(np.abs(balances(case, found.flow)) <= 1e-9)
    lost, _ = Branches(case).losses(found.flow)
    closing = np.abs(found.head[case.start] - found.head[case.end] - lost)
    assert np.all(closing <= 1e-9 * np.ptp(found.head) + 1e-12)
    assert found.iterations <= 40


@pytest.mark.parametrize("seed", range(30))
def test_head_differences_satisfy_colebrook_white_as_printed(seed: int) -> None:
    # f from the solved heads and flows by Darcy–Weisbach, put into Colebrook–White by hand
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed), "colebrook-white")
    case = network(levels, withdrawals, [Pipe(p.start, p.end, p.length, p.bore, p.roughness) for p in pipes])
    found = solve(case, NEWTON)
    bore, length, roughness = case.pipes.bore, case.pipes.length, case.pipes.roughness
    speed = np.abs(found.flow) / (np.pi / 4 * bore**2)
    drop = np.abs(found.head[case.start] - found.head[case.end])
    turbulent = (speed * bore / 1e-6 > 4000) & (drop > 1e-3)
    assert np.any(turbulent)
    factor = drop[turbulent] * bore[turbulent] * 2 * 9.81 / (length[turbulent] * speed[turbulent] ** 2)
    inside = roughness[turbulent] / (3.7 * bore[turbulent]) + 2.51 / (
        speed[turbulent] * bore[turbulent] / 1e-6 * np.sqrt(factor)
    )
    assert 1 / np.sqrt(factor) == pytest.approx(-2 * np.log10(inside), rel=1e-6)


def test_steps_are_all_there_and_shrink_quadratically() -> None:
    found = solve(network({"a": 120.0, "b": 100.0, "c": 80.0}, {"j": 0.0, "k": 0.01}, star()), NEWTON)
    steps = found.steps
    assert steps is not None
    assert steps.iteration.tolist() == list(range(found.iterations + 1))
    assert steps.head is not None
    assert steps.flow is not None
    assert np.array_equal(steps.head[-1], found.head)
    assert np.array_equal(steps.flow[-1], found.flow)
    assert np.isnan(steps.flow_change[0])
    change = np.max(np.abs(np.diff(steps.flow, axis=0)), axis=1)
    assert change == pytest.approx(steps.flow_change[1:], rel=1e-12)
    assert np.all(steps.share[1:] == 1.0)
    scaled = steps.flow_change[-3:] / np.max(np.abs(found.flow))
    assert scaled[1] < 5 * scaled[0] ** 2 + 1e-12
    assert scaled[2] < 5 * scaled[1] ** 2 + 1e-12


def star() -> list[Pipe]:
    return [
        Pipe("a", "j", 1000.0, 0.3, 8.7e-5),
        Pipe("b", "j", 4000.0, 0.5, 9e-5),
        Pipe("k", "c", 2000.0, 0.4, 9.2e-5),
        Pipe("j", "k", 500.0, 0.4, 9.2e-5),
    ]


def test_large_networks_keep_norms_only() -> None:
    names = {f"n{i}": 0.001 for i in range(14)}
    chain = ["a", *names]
    pipes = [resisting(x, y, 100.0) for x, y in pairwise(chain)]
    steps = solve(network({"a": 70.0}, names, pipes)).steps
    assert steps is not None
    assert steps.head is None
    assert steps.flow is None
    assert len(steps.imbalance) == len(steps.iteration)


@pytest.mark.parametrize("start", [{"j": 1e6}, {"j": -1e6, "k": 1e6}, {"k": 100.0}])
def test_any_start_leads_to_the_same_heads(start: dict[str, float]) -> None:
    case = network({"a": 120.0, "b": 100.0, "c": 80.0}, {"j": 0.0, "k": 0.01}, star())
    plain, found = solve(case), solve(case, Settings(start=start))
    assert found.reason == ""
    assert found.flow == pytest.approx(plain.flow, abs=2e-10)
    assert found.head == pytest.approx(plain.head, abs=1e-8)
    assert found.steps is not None
    assert found.steps.head is not None
    assert all(found.steps.head[0][case.nodes.index(name)] == head for name, head in start.items())


def test_all_pipes_are_evaluated_once_a_step(monkeypatch: pytest.MonkeyPatch) -> None:
    plain, calls = Branches.losses, []

    def counted(self: Branches, flow: Array) -> tuple[Array, Array]:
        calls.append(flow)
        return plain(self, flow)

    monkeypatch.setattr(Branches, "losses", counted)
    found = solve(network({"a": 120.0, "b": 100.0, "c": 80.0}, {"j": 0.0, "k": 0.01}, star()))
    assert len(calls) == found.iterations + 2  # the start, and the linear pipes it rests on


@pytest.mark.parametrize("seed", range(3))
def test_a_step_too_long_is_shortened_on_the_way(seed: int) -> None:
    # bores from 5 mm to 3 m and lengths from 0.1 m to 100 km side by side
    rng = np.random.default_rng(seed)
    shares = []
    for _ in range(60):
        levels, withdrawals, pipes = random_net(rng)
        bores, lengths = 10 ** rng.uniform(-2.3, 0.5, len(pipes)), 10 ** rng.uniform(-1, 5, len(pipes))
        extreme = [
            replace(p, length=float(length), bore=float(bore), parallel=1.0, fittings=())
            for p, bore, length in zip(pipes, bores, lengths, strict=True)
        ]
        found = solve(network(levels, dict.fromkeys(withdrawals, 0.0), extreme))
        assert found.reason == ""
        assert found.steps is not None
        shares.append(np.nanmin(found.steps.share, initial=1.0))
    assert min(shares) < 1.0

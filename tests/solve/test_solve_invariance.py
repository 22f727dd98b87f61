"""What may not change the answer, and what must change it in proportion."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from solve_cases import Pipe, network, random_net

from calc.solve import solve

SEEDS = range(12)


@pytest.mark.parametrize("seed", SEEDS)
def test_order_and_names_change_nothing(seed: int) -> None:
    rng = np.random.default_rng(seed)
    levels, withdrawals, pipes = random_net(rng)
    plain = solve(network(levels, withdrawals, pipes))
    new = {name: f"x{i}" for i, name in enumerate(rng.permutation([*levels, *withdrawals]))}
    order = rng.permutation(len(pipes))
    shuffled = [replace(pipes[i], start=new[pipes[i].start], end=new[pipes[i].end]) for i in order]
    case = network(
        {new[k]: v for k, v in reversed(levels.items())},
        {new[k]: v for k, v in reversed(withdrawals.items())},
        shuffled,
    )
    found = solve(case)
    assert found.flow == pytest.approx(plain.flow[order], abs=1e-10)
    names = [*levels, *withdrawals]
    again = [found.head[case.nodes.index(new[name])] for name in names]
    assert again == pytest.approx(plain.head, abs=1e-7)


@pytest.mark.parametrize("seed", SEEDS)
def test_turning_a_pipe_round_turns_its_sign(seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed))
    plain = solve(network(levels, withdrawals, pipes))
    turned = [
        replace(p, start=p.end, end=p.start, fittings=[(n, back, on) for n, on, back in p.fittings]) for p in pipes
    ]
    found = solve(network(levels, withdrawals, turned))
    assert found.flow == pytest.approx(-plain.flow, abs=1e-10)
    assert found.head == pytest.approx(plain.head, abs=1e-7)


@pytest.mark.parametrize("seed", SEEDS)
def test_with_fixed_factors_fourfold_heads_double_the_flows(seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed), "fixed")
    plain = solve(network(levels, withdrawals, pipes))
    found = solve(network({k: 4 * v for k, v in levels.items()}, {k: 2 * v for k, v in withdrawals.items()}, pipes))
    assert found.flow == pytest.approx(2 * plain.flow, abs=2e-10)
    assert found.head == pytest.approx(4 * plain.head, abs=1e-7)


@pytest.mark.parametrize("seed", SEEDS)
@pytest.mark.parametrize(("law", "power"), [("hazen-williams", 1.852), ("manning", 2.0)])
def test_with_a_power_of_the_flow_heads_scale_by_that_power(law: str, power: float, seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed), law)
    pipes = [replace(pipe, fittings=()) for pipe in pipes]  # what fittings lose goes with the square
    plain = solve(network(levels, withdrawals, pipes))
    more = {k: 3**power * v for k, v in levels.items()}
    found = solve(network(more, {k: 3 * v for k, v in withdrawals.items()}, pipes))
    assert found.flow == pytest.approx(3 * plain.flow, abs=3e-10)
    assert found.head == pytest.approx(3**power * plain.head, abs=1e-7, rel=1e-9)


@pytest.mark.parametrize("seed", SEEDS)
@pytest.mark.parametrize("law", ["hazen-williams", "manning"])
def test_viscosity_and_gravity_change_nothing_in_empirical_laws(law: str, seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed), law)
    pipes = [replace(pipe, fittings=()) for pipe in pipes]
    plain = solve(network(levels, withdrawals, pipes))
    found = solve(network(levels, withdrawals, pipes, viscosity=1e-4, gravity=9.7))
    assert found.flow == pytest.approx(plain.flow, abs=1e-10)
    assert found.head == pytest.approx(plain.head, abs=1e-7)


@pytest.mark.parametrize("seed", SEEDS)
def test_a_coefficient_is_a_power_of_every_roughness(seed: int) -> None:
    # k/C^1.852: a coefficient 2^1.852 times as large is C twice as large, and four times Manning's is half of n
    rng = np.random.default_rng(seed)
    levels, withdrawals, pipes = random_net(rng, str(rng.choice(["hazen-williams", "manning"])))
    plain = solve(network(levels, withdrawals, pipes))
    other = [replace(p, hazen_williams_c=2 * p.hazen_williams_c, manning_n=p.manning_n / 2) for p in pipes]
    more = {"hazen_williams_coefficient": 2**1.852 * 10.67, "manning_coefficient": 4 ** (13 / 3) / np.pi**2}
    found = solve(network(levels, withdrawals, other, **more))
    assert found.flow == pytest.approx(plain.flow, abs=1e-10)
    assert found.head == pytest.approx(plain.head, abs=1e-7)


@pytest.mark.parametrize("seed", SEEDS)
def test_lifting_the_datum_lifts_the_heads(seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(seed))
    plain = solve(network(levels, withdrawals, pipes))
    found = solve(network({k: v + 1024.0 for k, v in levels.items()}, withdrawals, pipes))
    assert found.flow == pytest.approx(plain.flow, abs=1e-9)
    assert found.head == pytest.approx(plain.head + 1024.0, abs=1e-7)


def test_parallel_pipes_count_as_so_many_single_ones() -> None:
    levels, withdrawals = {"a": 60.0, "b": 20.0}, {"j": 0.01}
    one = Pipe("a", "j", 800.0, 0.2, 1e-4, fittings=[(1, 2.0, 1.0)])
    down = Pipe("j", "b", 900.0, 0.3, 1e-4)
    joined = solve(network(levels, withdrawals, [replace(one, parallel=3.0), down]))
    single = solve(network(levels, withdrawals, [one, one, one, down]))
    assert joined.flow[0] == pytest.approx(single.flow[:3].sum(), rel=1e-12)
    assert joined.head == pytest.approx(single.head, abs=1e-9)

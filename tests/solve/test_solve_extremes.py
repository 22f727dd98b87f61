"""Newton's method where wide short pipes lie among narrow long ones: rounding may not hold up a step.

The networks are invented; that they have an answer follows from theory: with losses that rise with flow the heads
exist and are unique (Collins et al. 1978, from memory). What is held here is that few steps lead there.
"""

from __future__ import annotations

import numpy as np
import pytest
from solve_cases import Pipe, balances, network

from calc.components.network import Network
from calc.solve import Settings, solve

NEWTON = Settings(method="newton")
FEW = 20
"""Steps; well-conditioned networks of this size take five to ten."""


def pipe(
    start: str, end: str, length: float, bore: float, rough: float, law: str = "colebrook-white", parallel: int = 1
) -> Pipe:
    """Return a pipe, in metres; ``rough`` is its roughness, or its Darcy f where that is fixed."""
    roughness, factor = (np.nan, rough) if law == "fixed" else (rough, np.nan)
    return Pipe(start, end, length, bore, roughness, factor, law, parallel)


RING = network(
    {"a": 100.0, "b": 61.379704},
    {"j": 0.0576, "k": -0.0031, "l": 0.0},
    [
        pipe("b", "a", 327.55048, 0.0827271, 0.00017860036),
        pipe("j", "a", 5.3550995, 0.050767839, 0.00018705469),
        pipe("k", "j", 185.46057, 1.6396445, 2.9594672e-05),
        pipe("l", "j", 2.5357541, 0.034897618, 0.00017748713),
        pipe("k", "j", 24.479353, 2.8148864, 3.4651073e-05),
    ],
)
"""Two wide pipes side by side behind a narrow one: flow turns in their ring at a cost below rounding."""

RING_OF_MAINS = network(
    {"a": 100.0, "b": 43.937},
    {"j": 0.016, "k": 0.0125, "l": 0.0299},
    [
        pipe("b", "a", 43511.0, 0.057026, 0.00028892),
        pipe("j", "b", 2.0581, 0.10085, 1.8639e-06),
        pipe("k", "j", 15.133, 1.792, 7.7793e-05),
        pipe("l", "a", 0.79741, 0.058248, 3.4093e-05),
        pipe("k", "j", 97.742, 0.30999, 3.333e-06),
    ],
)
"""The same of usual bores."""

STRING = network(
    {"a": 1.79, "b": 196.98},
    {
        "j0": 0.0395,
        "j1": 0.0,
        "j2": 0.0,
        "j3": 0.0161,
        "j4": 0.0,
        "j5": 1e-07,
        "j6": 0.025,
        "j7": 0.0,
        "j8": 0.0,
        "j9": 0.0488,
        "j10": 1e-07,
        "j11": 0.0,
        "j12": 0.0,
        "j13": 1e-07,
        "j14": 0.0,
        "j15": 0.0829,
        "j16": 0.0,
        "j17": 0.0819,
        "j18": 1e-07,
        "j19": 1e-07,
    },
    [
        pipe("j2", "j10", 50940.0, 0.03339, 0.001335, "haaland", 1),
        pipe("j10", "j17", 102.0, 0.04352, 0.006677, "fixed", 1),
        pipe("j17", "j3", 34.36, 0.4957, 0.0004957, "haaland", 1),
        pipe("j16", "j17", 11120.0, 0.03526, 0.00141, "swamee-jain", 1),
        pipe("j17", "j6", 951.6, 0.273, 0.0, "swamee-jain", 2),
        pipe("j7", "j3", 71.15, 0.3296, 0.01834, "fixed", 1),
        pipe("j10", "j13", 87.45, 0.02443, 0.0009772, "colebrook-white", 1),
        pipe("j17", "j4", 0.7785, 2.528, 0.0, "haaland", 2),
        pipe("j8", "j16", 146.3, 0.2626, 0.01512, "fixed", 2),
        pipe("j18", "j3", 75.58, 0.1308, 0.005231, "swamee-jain", 1),
        pipe("j9", "j8", 13350.0, 0.06283, 6.283e-06, "colebrook-white", 1),
        pipe("j13", "j1", 28.1, 0.2323, 0.0, "swamee-jain", 1),
        pipe("j0", "j3", 1736.0, 0.06881, 6.881e-06, "haaland", 2),
        pipe("j12", "j2", 147.6, 0.07297, 7.297e-05, "haaland", 1),
        pipe("j13", "j11", 29.02, 1.926, 0.006502, "fixed", 1),
        pipe("j19", "j13", 48.16, 0.02859, 2.859e-06, "haaland", 1),
        pipe("a", "j19", 13240.0, 0.2137, 0.0, "colebrook-white", 1),
        pipe("j18", "j5", 47000.0, 0.3758, 0.02615, "fixed", 1),
        pipe("b", "j10", 68410.0, 0.124, 1.24e-05, "swamee-jain", 1),
        pipe("a", "j15", 0.654, 0.06741, 1.5e-06, "colebrook-white", 1),
        pipe("b", "j14", 56920.0, 2.655, 0.1062, "swamee-jain", 2),
        pipe("j8", "j7", 65.88, 0.02743, 2.743e-05, "haaland", 5),
        pipe("j7", "j14", 0.9343, 0.2488, 0.0, "swamee-jain", 1),
    ],
    viscosity=1.003e-6,
)
"""A pipe of 2.5 m bore and 0.8 m length at the end of many kilometres of narrow ones."""


@pytest.mark.parametrize("works", [RING, RING_OF_MAINS, STRING], ids=["ring", "ring of mains", "string"])
def test_wide_short_pipes_do_not_hold_up_the_steps(works: Network) -> None:
    found = solve(works, NEWTON)
    assert found.reason == ""
    assert found.iterations <= FEW
    assert np.max(np.abs(balances(works, found.flow))) <= NEWTON.tolerance


@pytest.mark.parametrize("seed", range(60))
def test_random_networks_with_rings_settle_in_few_steps(seed: int) -> None:
    # bores from 20 mm to 3 m and lengths from 0.3 m to 100 km side by side, with rings of two and more pipes
    rng = np.random.default_rng(seed)
    nodes = ["a", "b", "j", "k", "l"]
    ends = [(nodes[i], nodes[int(rng.integers(i))]) for i in range(1, len(nodes))]
    ends += [(str(x), str(y)) for x, y in (rng.choice(nodes, 2, replace=False) for _ in range(2))]
    pipes = [pipe(x, y, 10 ** rng.uniform(-0.5, 5), 10 ** rng.uniform(-1.7, 0.5), 1e-4) for x, y in ends]
    levels = {"a": 100.0, "b": float(rng.uniform(20, 180))}
    found = solve(network(levels, {name: float(rng.uniform(-0.05, 0.1)) for name in nodes[2:]}, pipes), NEWTON)
    assert found.reason == ""
    assert found.iterations <= FEW

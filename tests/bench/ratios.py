"""Speed as ratios against a peer in the same process; run by hand, never asserted: ``python tests/bench/ratios.py``.

Each line says what was done, how many at once, and how many times longer the peer took. Seeds are printed.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

import fluids
import numpy as np
from scipy.optimize import brentq, root

sys.path.insert(0, str(Path(__file__).parents[1] / "solve"))
from solve_cases import network, random_pipe, random_star

from calc.account.opinion import works_of
from calc.components.network import Network
from calc.equation import evaluate
from calc.physics.friction import colebrook_white
from calc.second import form_opinion
from calc.solve import Settings, solve
from calc.solve.branch import Branches

SEED = 20261
ROUNDS = 3


def seconds(call: Callable[[], object]) -> float:
    """Return the least time of a few rounds."""
    taken = []
    for _ in range(ROUNDS):
        begun = time.perf_counter()
        call()
        taken.append(time.perf_counter() - begun)
    return min(taken)


def say(what: str, own: float, peer: float, named: str) -> None:
    print(f"{what}: {own * 1e3:.2f} ms; {named} takes {peer / own:.1f} times as long")


def friction(rng: np.random.Generator) -> None:
    reynolds = 10 ** rng.uniform(3.7, 8, 20_000)
    roughness, bore = rng.uniform(1e-5, 1e-3, 20_000), rng.uniform(0.1, 1.0, 20_000)
    inputs = {"reynolds": reynolds, "roughness": roughness, "bore": bore}
    rows = list(zip(reynolds.tolist(), (roughness / bore).tolist(), strict=True))
    own = seconds(lambda: evaluate(colebrook_white, inputs))
    peer = seconds(lambda: [fluids.friction.Colebrook(re, ratio) for re, ratio in rows])
    say("Colebrook–White, 20 000 factors", own, peer, "fluids.friction.Colebrook in a loop")


def star(rng: np.random.Generator) -> None:
    cases = [random_star(rng) for _ in range(30)]

    def by_brentq(case: Network) -> float:
        branches, junction = Branches(case), int(case.unknown[0])

        def balance(head: float) -> float:
            at = case.level.copy()
            at[junction] = head
            flow = branches.flows(at[case.start] - at[case.end])
            return float(np.where(case.end == junction, flow, -flow).sum() - case.withdrawal[junction])

        levels = case.level[~np.isnan(case.level)]
        low, high = float(levels.min()), float(levels.max())
        while balance(low) < 0:
            low -= max(high - low, 1.0)
        while balance(high) > 0:
            high += max(high - low, 1.0)
        return float(brentq(balance, low, high, xtol=1e-12, rtol=1e-14))

    own = seconds(lambda: [solve(case, Settings(method="bracketing")) for case in cases])
    peer = seconds(lambda: [by_brentq(case) for case in cases])
    say("bracketing, 30 stars with their tables", own, peer, "scipy.optimize.brentq on the same balance")


def grid(rng: np.random.Generator, side: int) -> Network:
    names = [f"j{i}-{j}" for i in range(side) for j in range(side)]
    pipes = [random_pipe(rng, f"j{i}-{j}", f"j{i + 1}-{j}") for i in range(side - 1) for j in range(side)]
    pipes += [random_pipe(rng, f"j{i}-{j}", f"j{i}-{j + 1}") for i in range(side) for j in range(side - 1)]
    pipes += [random_pipe(rng, "upper", names[0]), random_pipe(rng, names[-1], "lower")]
    withdrawals = {name: float(rng.uniform(0, 2e-4)) for name in names}
    return network({"upper": 214.6, "lower": 183.05}, withdrawals, pipes)


def looped(rng: np.random.Generator, side: int, *, general: bool) -> None:
    case = grid(rng, side)
    own = seconds(lambda: solve(case, Settings()))
    count = len(case.start)
    works = works_of(case)
    say(f"Newton, {count} pipes", own, seconds(lambda: form_opinion(works)), "the second opinion by loop flows")
    if not general:
        return
    branches, unknown = Branches(case), case.unknown
    inside = np.searchsorted(unknown, np.arange(len(case.nodes)))

    def residual(heads: np.ndarray) -> np.ndarray:
        at = case.level.copy()
        at[unknown] = heads
        flow = branches.flows(at[case.start] - at[case.end])
        sums = -case.withdrawal[unknown]
        for node, sign in ((case.end, 1.0), (case.start, -1.0)):
            free = np.isnan(case.level[node])
            np.add.at(sums, inside[node[free]], sign * flow[free])
        return sums

    begin = np.full(len(unknown), 200.0)
    found = root(residual, begin, method="hybr")
    peer = seconds(lambda: root(residual, begin, method="hybr"))
    say(f"Newton, {count} pipes", own, peer, f"scipy.optimize.root (found: {found.success})")


def main() -> None:
    print(f"seed {SEED}, least of {ROUNDS} rounds each")
    rng = np.random.default_rng(SEED)
    friction(rng)
    star(rng)
    looped(rng, 5, general=True)
    looped(rng, 40, general=False)


if __name__ == "__main__":
    main()

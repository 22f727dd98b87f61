"""Random networks, and networks most of which is at rest, solved both ways: the two share no code."""

from __future__ import annotations

import numpy as np
import pytest
from solve_cases import Pipe, network, random_net

from calc import second
from calc.account.opinion import works_of
from calc.components import Network
from calc.solve import Settings, Solution, solve

NEWTON = Settings(method="newton")
SIDE = 12


def assert_confirmed(case: Network, found: Solution) -> None:
    """Hold both to what two solutions may differ by."""
    opinion = second.form_opinion(works_of(case))
    assert (found.reason, opinion.reason) == ("", "")
    most = 1e-6 * float(np.max(np.abs(found.flow))) + 1e-9
    np.testing.assert_allclose(opinion.flow, found.flow, rtol=0.0, atol=most)
    levels = case.level[~np.isnan(case.level)]
    np.testing.assert_allclose(opinion.head, found.head, rtol=0.0, atol=1e-6 * float(np.ptp(levels)) + 1e-6)


@pytest.mark.parametrize("seed", range(25))
@pytest.mark.parametrize("law", ["hazen-williams", "manning", ""])
def test_random_networks(law: str, seed: int) -> None:
    levels, withdrawals, pipes = random_net(np.random.default_rng(500 + seed), law)
    case = network(levels, withdrawals, pipes)
    assert_confirmed(case, solve(case, NEWTON))


@pytest.mark.parametrize("seed", range(10))
def test_constants_of_a_project_reach_both(seed: int) -> None:
    rng = np.random.default_rng(900 + seed)
    levels, withdrawals, pipes = random_net(rng, str(rng.choice(["hazen-williams", "manning"])))
    constants = {
        "hazen_williams_coefficient": rng.uniform(9.0, 12.0),
        "hazen_williams_flow_exponent": rng.uniform(1.8, 1.9),
        "hazen_williams_bore_exponent": rng.uniform(4.8, 4.95),
        "manning_coefficient": rng.uniform(9.0, 12.0),
        "manning_bore_exponent": rng.uniform(5.2, 5.4),
    }
    case = network(levels, withdrawals, pipes, **constants)
    found = solve(case, NEWTON)
    assert_confirmed(case, found)
    plain = solve(network(levels, withdrawals, pipes), NEWTON)
    assert float(np.max(np.abs(found.flow - plain.flow))) > 1e-6 * float(np.max(np.abs(plain.flow)))


def hanging(rng: np.random.Generator, pipe: Pipe, *, ragged: bool) -> list[Pipe]:
    """Return a grid of loops that hangs on one junction between two reservoirs, so that nothing moves in it."""
    names = [[f"{i}-{j}" for j in range(SIDE)] for i in range(SIDE)]
    pairs = [(names[i][j], names[i + 1][j]) for i in range(SIDE - 1) for j in range(SIDE)]
    pairs += [(names[i][j], names[i][j + 1]) for i in range(SIDE) for j in range(SIDE - 1)]

    def laid(start: str, end: str) -> Pipe:
        length, bore = (rng.uniform(50.0, 5000.0), rng.choice([0.05, 0.1, 0.3, 1.0])) if ragged else (200.0, 0.2)
        return Pipe(
            start,
            end,
            float(length),
            float(bore),
            factor=pipe.factor,
            hazen_williams_c=pipe.hazen_williams_c,
            manning_n=pipe.manning_n,
        )

    return [laid(*pair) for pair in (*pairs, ("a", "hub"), ("b", "hub"), ("hub", "0-0"))]


@pytest.mark.parametrize("ragged", [False, True], ids=["alike", "ragged"])
@pytest.mark.parametrize("drawn", [0.0, 1e-7, 0.01])
@pytest.mark.parametrize(
    "pipe",
    [Pipe("a", "b", factor=0.02), Pipe("a", "b", hazen_williams_c=120.0), Pipe("a", "b", manning_n=0.012)],
    ids=lambda pipe: pipe.label,
)
def test_hundreds_of_pipes_at_rest(pipe: Pipe, drawn: float, ragged: bool) -> None:  # noqa: FBT001
    rng = np.random.default_rng(3)
    pipes = hanging(rng, pipe, ragged=ragged)
    junctions = {name: 0.0 for one in pipes for name in (one.start, one.end) if name not in ("a", "b")}
    case = network({"a": 100.0, "b": 90.0}, {**junctions, "hub": drawn}, pipes)
    for start in ({}, {name: float(rng.uniform(80.0, 110.0)) for name in junctions}):
        found = solve(case, Settings(method="newton", start=start))
        assert_confirmed(case, found)
        resting = np.abs(found.flow[:-3])
        assert len(resting) == 2 * SIDE * (SIDE - 1)
        assert float(np.max(resting)) < 1e-10
        assert found.iterations <= 40


@pytest.mark.parametrize("given", [{"hazen_williams_c": 120.0}, {"manning_n": 0.012}])
def test_equal_levels_leave_everything_at_rest(given: dict[str, float]) -> None:
    pipes = [Pipe("a", "j", **given), Pipe("j", "k", **given), Pipe("k", "b", **given), Pipe("j", "b", **given)]
    case = network({"a": 70.0, "b": 70.0}, {"j": 0.0, "k": 0.0}, pipes)
    found = solve(case, NEWTON)
    assert found.flow.tolist() == [0.0] * 4
    assert found.head.tolist() == [70.0] * 4
    assert_confirmed(case, found)

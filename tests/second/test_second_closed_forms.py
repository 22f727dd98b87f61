"""The second opinion against closed forms."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest

from calc.second import Works, evaluate, form_opinion

Build = Callable[..., Works]
GRAVITY = 9.80665


def drag(factor: float, length: float, bore: float) -> float:
    """Return Darcy–Weisbach's h / (Q |Q|), in s²/m⁵."""
    return 8.0 * factor * length / (math.pi**2 * GRAVITY * bore**5)


def test_one_pipe_between_two_reservoirs(build: Build) -> None:
    works = build([214.6, 183.0], [{"start": 0, "end": 1, "length": 1850, "bore": 0.3844, "factor": 0.02}])
    opinion = form_opinion(works)
    assert opinion.converged
    assert opinion.reason == ""
    assert opinion.flow[0] == pytest.approx(math.sqrt(31.6 / drag(0.02, 1850, 0.3844)), rel=1e-12)
    assert opinion.head.tolist() == [214.6, 183.0]


def test_colebrook_white_is_explicit_in_the_loss(build: Build) -> None:
    # Given h: Re√f = √(2 g D³ h/L)/ν, so that V = −2 √(2 g D h/L) log₁₀(ε/3.7D + 2.51/(Re√f)).
    length, bore, roughness, loss, viscosity = 640.0, 0.25, 1.5e-4, 7.3, 1e-6
    works = build(
        [100.0 + loss, 100.0],
        [{"start": 0, "end": 1, "length": length, "bore": bore, "roughness": roughness}],
    )
    drive = math.sqrt(2.0 * GRAVITY * bore * loss / length)
    velocity = -2.0 * drive * math.log10(roughness / (3.7 * bore) + 2.51 * viscosity / (drive * bore))
    assert form_opinion(works).flow[0] == pytest.approx(math.pi / 4.0 * bore**2 * velocity, rel=1e-11)


def test_laminar_flow_between_two_reservoirs_is_hagen_poiseuille(build: Build) -> None:
    works = build([12.001, 12.0], [{"start": 1, "end": 0, "length": 400, "bore": 0.02, "roughness": 1e-5}])
    exact = -(12.001 - 12.0) * math.pi * GRAVITY * 0.02**4 / (128.0 * 1e-6 * 400)
    opinion = form_opinion(works)
    assert opinion.flow[0] == pytest.approx(exact, rel=1e-12)


def test_pipes_in_series_add_their_losses(build: Build) -> None:
    sizes = [(300.0, 0.3), (200.0, 0.2), (450.0, 0.25)]
    pipes = [
        {"start": place, "end": place + 1, "length": length, "bore": bore, "factor": 0.018}
        for place, (length, bore) in enumerate(sizes)
    ]
    opinion = form_opinion(build([60.0, None, None, 40.0], pipes))
    losses = [drag(0.018, *size) for size in sizes]
    flow = math.sqrt(20.0 / sum(losses))
    np.testing.assert_allclose(opinion.flow, flow, rtol=1e-11)
    assert opinion.head[1] == pytest.approx(60.0 - losses[0] * flow**2, abs=1e-10)
    assert opinion.head[2] == pytest.approx(40.0 + losses[2] * flow**2, abs=1e-10)


def test_parallel_pipes_are_one_line_with_a_count(build: Build) -> None:
    pipe = {"start": 0, "end": 1, "length": 300, "bore": 0.2, "roughness": 1e-4, "loss_forward": 30.0}
    alone = form_opinion(build([20.0, 10.0], [pipe]))
    twice = form_opinion(build([20.0, 10.0], [pipe, pipe]))
    counted = form_opinion(build([20.0, 10.0], [{**pipe, "parallel": 2}]))
    np.testing.assert_allclose(twice.flow, alone.flow[0], rtol=1e-12)
    np.testing.assert_allclose(counted.flow, 2.0 * alone.flow[0], rtol=1e-12)


def test_two_unequal_pipes_share_a_withdrawal(build: Build) -> None:
    # Equal losses: Q₁ √r₁ = Q₂ √r₂.
    first = {"start": 0, "end": 1, "length": 500, "bore": 0.2, "factor": 0.02}
    second = {"start": 1, "end": 0, "length": 700, "bore": 0.25, "factor": 0.03}
    opinion = form_opinion(build([50.0, None], [first, second], [0.0, 0.08]))
    roots = math.sqrt(drag(0.02, 500, 0.2)), math.sqrt(drag(0.03, 700, 0.25))
    share = 0.08 * roots[1] / sum(roots)
    np.testing.assert_allclose(opinion.flow, [share, share - 0.08], rtol=1e-10)
    assert opinion.head[1] == pytest.approx(50.0 - (roots[0] * share) ** 2, abs=1e-9)


def test_a_symmetric_star(build: Build) -> None:
    # Equal pipes from one high to two equal low reservoirs: Q = 2 q, so that h(high) = 4 h(low).
    pipes = [{"start": end, "end": 3, "length": 800, "bore": 0.3, "factor": 0.02} for end in range(3)]
    opinion = form_opinion(build([50.0, 10.0, 10.0, None], pipes))
    flow = math.sqrt(32.0 / drag(0.02, 800, 0.3))
    assert opinion.head[3] == pytest.approx(18.0, abs=1e-9)
    np.testing.assert_allclose(opinion.flow, [flow, -flow / 2, -flow / 2], rtol=1e-10)


def test_a_tree_follows_from_continuity_alone(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 2, "end": 1, "factor": 0.02},
        {"start": 1, "end": 3, "factor": 0.02},
    ]
    opinion = form_opinion(build([80.0, None, None, None], pipes, [0.0, 0.01, 0.02, -0.005]))
    assert opinion.converged
    assert opinion.iterations == 0
    np.testing.assert_allclose(opinion.flow, [0.025, -0.02, -0.005], rtol=1e-14)
    unit = drag(0.02, 100, 0.3)
    first = 80.0 - unit * 0.025**2
    np.testing.assert_allclose(opinion.head[1:], [first, first - unit * 0.02**2, first + unit * 0.005**2])


@pytest.mark.parametrize("pipe", [{"factor": 0.02}, {"roughness": 1e-4}], ids=["fixed", "by Reynolds"])
def test_equal_levels_move_nothing(build: Build, pipe: dict[str, float]) -> None:
    ends = [(0, 2), (1, 2), (2, 3), (3, 2), (0, 1), (3, 0)]
    bores = [0.1, 3.0, 0.005, 2.0, 0.3, 1.0]
    pipes = [{"start": start, "end": end, "bore": bore, **pipe} for (start, end), bore in zip(ends, bores, strict=True)]
    opinion = form_opinion(build([77.7, 77.7, None, None], pipes))
    assert opinion.converged
    assert np.max(np.abs(opinion.flow)) <= 1e-12
    np.testing.assert_allclose(opinion.head, 77.7, rtol=1e-15)


def test_a_loop_with_nothing_to_carry_rests_beside_one_that_flows(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 1, "end": 2, "bore": 3.0, "factor": 0.02},
        {"start": 2, "end": 3, "bore": 2.0, "factor": 0.02},
        {"start": 3, "end": 1, "bore": 2.5, "factor": 0.02},
        {"start": 1, "end": 4, "factor": 0.02},
    ]
    opinion = form_opinion(build([90.0, None, None, None, 60.0], pipes))
    flow = math.sqrt(15.0 / drag(0.02, 100, 0.3))
    assert opinion.converged
    np.testing.assert_allclose(opinion.flow, [flow, 0, 0, 0, flow], rtol=1e-10, atol=1e-9)
    np.testing.assert_allclose(opinion.head[1:4], 75.0, atol=1e-9)


def test_shut_pipes_carry_nothing(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 0, "end": 1, "bore": 2.0, "factor": 0.02, "open": False},
        {"start": 1, "end": 2, "factor": 0.02},
    ]
    opinion = form_opinion(build([30.0, None, 20.0], pipes))
    flow = math.sqrt(5.0 / drag(0.02, 100, 0.3))
    assert opinion.flow[1] == 0.0
    np.testing.assert_allclose(opinion.flow[[0, 2]], flow, rtol=1e-10)


def test_a_junction_without_a_reservoir_has_no_answer(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 1, "end": 2, "factor": 0.02, "open": False},
        {"start": 2, "end": 3, "factor": 0.02},
    ]
    opinion = form_opinion(build([30.0, None, None, None], pipes))
    assert not opinion.converged
    assert opinion.reason == "2 junction(s) have no open path to a reservoir: nodes 2, 3"
    assert not form_opinion(build([None], [])).converged


def test_nothing_at_all_and_reservoirs_alone_are_solved(build: Build) -> None:
    assert form_opinion(build([], [])).converged
    opinion = form_opinion(build([5.0, 4.0], []))
    assert opinion.converged
    assert opinion.head.tolist() == [5.0, 4.0]


def test_a_pipe_back_to_its_own_node_rests(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 1, "end": 1, "roughness": 1e-4},
        {"start": 0, "end": 0, "factor": 0.02},
    ]
    opinion = form_opinion(build([9.0, None], pipes, [0.0, 0.03]))
    assert opinion.converged
    np.testing.assert_allclose(opinion.flow, [0.03, 0.0, 0.0], atol=1e-12)


@pytest.mark.parametrize(
    "pipe",
    [
        {"factor": 0.0},  # no resistance, no unique flow
        {"factor": 0.02, "bore": 1e-90},  # more than a float holds
        {"factor": float("nan")},
        {"law": "colebrook-white", "roughness": float("nan")},
        {"law": "haaland", "roughness": float("nan")},
    ],
    ids=str,
)
def test_what_cannot_be_computed_is_said(build: Build, pipe: dict[str, float]) -> None:
    opinion = form_opinion(build([9.0, 3.0], [{"start": 0, "end": 1, **pipe}]))
    assert not opinion.converged
    assert opinion.reason


def test_works_that_do_not_fit_together_are_refused(build: Build) -> None:
    with pytest.raises(ValueError, match="no such friction law: chezy"):
        build([9.0, 3.0], [{"start": 0, "end": 1, "law": "chezy"}])
    with pytest.raises(ValueError, match="a pipe ends at no node"):
        build([9.0, 3.0], [{"start": 0, "end": 2, "factor": 0.02}])
    with pytest.raises(ValueError, match="of another length"):
        build([9.0, 3.0], [], [1.0])


def test_an_evaluation_tells_where_an_answer_is_wrong(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 1, "factor": 0.02},
        {"start": 1, "end": 2, "factor": 0.02},
        {"start": 2, "end": 0, "factor": 0.02, "open": False},
    ]
    works = build([30.0, None, 20.0], pipes, [0.0, 0.01, 0.0])
    unit = drag(0.02, 100, 0.3)
    flow, head = np.array([0.2, 0.18, 0.0]), np.array([30.0, 26.0, 20.0])
    told = evaluate(works, flow, head)
    np.testing.assert_allclose(told.energy_error, [4.0 - unit * 0.2**2, 6.0 - unit * 0.18**2, 0.0], rtol=1e-12)
    np.testing.assert_allclose(told.imbalance, [0.0, 0.2 - 0.18 - 0.01, 0.0], atol=1e-15)
    assert told.largest_energy_error == np.max(np.abs(told.energy_error))
    assert told.largest_imbalance == pytest.approx(0.01, rel=1e-12)
    flow[2] = 1e-6
    assert evaluate(works, flow, head).largest_energy_error == math.inf
    assert math.isnan(evaluate(works, flow, np.full(3, np.nan)).energy_error[0])

"""What must hold on any network: continuity, energy, and that names and directions do not matter."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as some
from numpy.random import Generator
from numpy.typing import NDArray

from calc.second import Works, evaluate, form_opinion
from calc.second.works import LAWS

Build = Callable[..., Works]
# Levels: far apart, a millimetre apart, equal, ordinary.
RANGES = [(0.0, 500.0), (100.0, 100.001), (100.0, 100.0), (200.0, 230.0)]


ROUGH = ("colebrook-white", "swamee-jain", "haaland")


def works_on(
    nodes: int, ends: NDArray[Any], chance: Generator, levels: tuple[float, float], *, wide: bool, held: int
) -> Works:
    """Return pipes of all laws on the given ends; `wide` ones from 5 mm to 3 m and 0.1 m to 100 km."""
    count = len(ends)
    level = np.full(nodes, np.nan)
    level[chance.choice(nodes, held, replace=False)] = chance.uniform(*levels, held)
    bore = 10 ** chance.uniform(np.log10(0.005), np.log10(3.0), count)
    length = 10 ** chance.uniform(-1.0, 5.0, count)
    drawn = chance.uniform(-0.01, 0.02, nodes)
    if not wide:
        bore, length = chance.uniform(0.1, 0.6, count), chance.uniform(50.0, 500.0, count)
    law = tuple(str(name) for name in chance.choice(LAWS, count))
    named = np.array(law)
    velocity_head = 2.0 * 9.81 * (np.pi / 4.0 * bore**2) ** 2
    return Works(
        node_count=nodes,
        level=level,
        withdrawal=np.zeros(nodes) if wide else np.where(np.isnan(level), drawn, 0.0),
        start=ends[:, 0],
        end=ends[:, 1],
        open=np.ones(count, dtype=np.bool_),
        parallel=chance.integers(1, 4, count).astype(np.float64),
        length=length,
        bore=bore,
        roughness=np.where(np.isin(named, ROUGH), bore * 10 ** chance.uniform(-6.0, -1.5, count), np.nan),
        factor=np.where(named == "fixed", 0.02, np.nan),
        hazen_williams_c=np.where(named == "hazen-williams", chance.uniform(60.0, 150.0, count), np.nan),
        manning_n=np.where(named == "manning", chance.uniform(0.009, 0.02, count), np.nan),
        law=law,
        loss_forward=chance.uniform(0.0, 3.0, count) / velocity_head,
        loss_reverse=chance.uniform(0.0, 3.0, count) / velocity_head,
        gravity=9.81,
        viscosity=1e-6,
    )


def joined(nodes: int, more: int, chance: Generator) -> NDArray[Any]:
    """Return ends of pipes that join all nodes, and of some more, doubles and self-loops among them."""
    tree = [(int(chance.integers(0, node)), node) for node in range(1, nodes)]
    return np.array(tree + chance.integers(0, nodes, (more, 2)).tolist(), dtype=np.int64).reshape(-1, 2)


def random_works(seed: int) -> Works:
    chance = np.random.default_rng(seed)
    nodes = int(chance.integers(2, 60))
    ends = joined(nodes, int(chance.integers(0, 2 * nodes)), chance)
    held = int(chance.integers(1, min(nodes, 5) + 1))
    return works_on(nodes, ends, chance, RANGES[seed % 4], wide=seed % 5 != 0, held=held)


def grid_ends(side: int) -> NDArray[Any]:
    number = np.arange(side * side).reshape(side, side)
    across = np.stack([number[:, :-1].ravel(), number[:, 1:].ravel()], axis=1)
    down = np.stack([number[:-1].ravel(), number[1:].ravel()], axis=1)
    return np.concatenate([across, down])


def assert_satisfied(works: Works) -> None:
    opinion = form_opinion(works)
    assert opinion.converged, opinion.reason
    told = evaluate(works, opinion.flow, opinion.head)
    assert told.largest_imbalance <= 1e-12 * (1.0 + np.max(np.abs(opinion.flow)))
    assert told.largest_energy_error <= 1e-9
    assert np.all(opinion.head[~np.isnan(works.level)] == works.level[~np.isnan(works.level)])


def renumbered(works: Works, chance: Generator) -> tuple[Works, NDArray[Any], NDArray[Any], NDArray[Any]]:
    """Return the same works with other numbers and some pipes laid the other way, and how."""
    nodes, pipes = chance.permutation(works.node_count), chance.permutation(len(works.start))
    turned = chance.random(len(pipes)) < 0.5
    new = np.argsort(nodes)
    start, end = new[works.start[pipes]], new[works.end[pipes]]
    forward, reverse = works.loss_forward[pipes], works.loss_reverse[pipes]
    kept = {name: getattr(works, name)[pipes] for name in ("open", "parallel", "length", "bore")}
    other = dataclasses.replace(
        works,
        level=works.level[nodes],
        withdrawal=works.withdrawal[nodes],
        start=np.where(turned, end, start),
        end=np.where(turned, start, end),
        loss_forward=np.where(turned, reverse, forward),
        loss_reverse=np.where(turned, forward, reverse),
        roughness=works.roughness[pipes],
        factor=works.factor[pipes],
        hazen_williams_c=works.hazen_williams_c[pipes],
        manning_n=works.manning_n[pipes],
        law=tuple(works.law[pipe] for pipe in pipes),
        **kept,
    )
    return other, nodes, pipes, turned


@settings(max_examples=60, deadline=None, derandomize=True, database=None)
@given(seed=some.integers(0, 10**6))
def test_continuity_and_energy_hold_on_any_network(seed: int) -> None:
    assert_satisfied(random_works(seed))


@settings(max_examples=60, deadline=None, derandomize=True, database=None)
@given(seed=some.integers(0, 10**6))
def test_numbers_and_directions_do_not_matter(seed: int) -> None:
    works = random_works(seed)
    other, nodes, pipes, turned = renumbered(works, np.random.default_rng(seed + 1))
    first, second = form_opinion(works), form_opinion(other)
    flow, head = np.empty_like(first.flow), np.empty_like(first.head)
    flow[pipes] = np.where(turned, -second.flow, second.flow)
    head[nodes] = second.head
    levels = works.level[~np.isnan(works.level)]
    # A tenth of what two opinions may differ by.
    allowed = 1e-7 * np.max(np.abs(first.flow), initial=0.0) + 1e-10
    np.testing.assert_allclose(flow, first.flow, rtol=0.0, atol=allowed)
    np.testing.assert_allclose(head, first.head, rtol=0.0, atol=1e-7 * np.ptp(levels) + 1e-7)


def test_one_pipe_laid_the_other_way_flips_its_sign_alone(build: Build) -> None:
    pipes = [
        {"start": 0, "end": 2, "roughness": 1e-4, "loss_forward": 20.0, "loss_reverse": 70.0},
        {"start": 1, "end": 2, "roughness": 2e-4},
        {"start": 0, "end": 1, "factor": 0.02},
    ]
    turned = [
        {"start": 2, "end": 0, "roughness": 1e-4, "loss_forward": 70.0, "loss_reverse": 20.0},
        *pipes[1:],
    ]
    first, second = (form_opinion(build([40.0, 25.0, None], each, [0.0, 0.0, 0.1])) for each in (pipes, turned))
    assert first.flow[0] > 0.0
    np.testing.assert_allclose(second.flow, first.flow * [-1.0, 1.0, 1.0], rtol=1e-11)
    np.testing.assert_allclose(second.head, first.head, rtol=1e-13)


@pytest.mark.parametrize("wide", [False, True], ids=["ordinary", "extreme"])
def test_a_grid_of_five_thousand_pipes(wide: bool) -> None:  # noqa: FBT001
    works = works_on(51 * 51, grid_ends(51), np.random.default_rng(7), (0.0, 500.0), wide=wide, held=4)
    assert len(works.start) == 5100
    assert_satisfied(works)


@pytest.mark.parametrize("shape", ["star", "bundle", "pairs in a row"])
def test_thousands_of_pipes_side_by_side(shape: str) -> None:
    chance = np.random.default_rng(11)
    ends = {
        "star": np.stack([np.zeros(3000, dtype=np.int64), np.arange(1, 3001)], axis=1),
        "bundle": np.tile(np.array([[0, 1], [2, 1]]), (1500, 1)),
        "pairs in a row": np.repeat(np.stack([np.arange(1500), np.arange(1, 1501)], axis=1), 2, axis=0),
    }[shape]
    nodes = int(ends.max()) + 1
    works = works_on(nodes, ends, chance, (0.0, 500.0), wide=True, held=min(nodes - 1, 2900))
    if shape == "star":
        # Junction in the middle, every end a reservoir.
        works = dataclasses.replace(works, level=np.r_[np.nan, chance.uniform(0.0, 500.0, 3000)])
    assert_satisfied(works)

"""What makes the loop formulation reach its answer: short loops, shortened steps, kept digits."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
from scipy.sparse import csc_array

from calc.second import Works, form_opinion
from calc.second.content import Content, shorten
from calc.second.friction import head_loss, prepare
from calc.second.loops import branch_out, carry_withdrawals, close_loops

Build = Callable[..., Works]


def square_grid(build: Build, side: int) -> Works:
    number = np.arange(side * side).reshape(side, side)
    across = zip(number[:, :-1].ravel(), number[:, 1:].ravel(), strict=True)
    down = zip(number[:-1].ravel(), number[1:].ravel(), strict=True)
    pipes = [{"start": start, "end": end, "factor": 0.02} for start, end in [*across, *down]]
    levels = [50.0, *[None] * (side * side - 1)]
    return build(levels, pipes, [0.0, *[0.001] * (side * side - 1)])


def test_loops_are_closed_independent_and_short(build: Build) -> None:
    works = square_grid(build, 20)
    tree = branch_out(works, [0] * len(works.start))
    loops = close_loops(works, tree)
    # Euler: pipes − nodes + 1 loops; a square of a grid has four sides, so a basis of them 4 entries a loop.
    assert loops.shape == (760, 760 - 400 + 1)
    assert np.linalg.matrix_rank(loops.toarray()) == loops.shape[1]
    assert loops.nnz <= 4.5 * loops.shape[1]
    ones, pipes = np.ones(760), np.arange(760)
    incidence = csc_array((ones, (works.end, pipes)), shape=(400, 760))
    incidence = incidence - csc_array((ones, (works.start, pipes)), shape=(400, 760))
    assert abs(incidence @ loops).max() == 0.0
    arriving = incidence.toarray() @ carry_withdrawals(works, tree)
    np.testing.assert_allclose(arriving[1:], works.withdrawal[1:], rtol=0.0, atol=1e-15)


def test_a_step_far_beyond_the_least_is_shortened(build: Build) -> None:
    pipes = [{"start": 0, "end": 1, "factor": 0.02}]
    works = build([30.0, 10.0], pipes)
    content = Content(
        pipes=prepare(works),
        loops=csc_array(np.ones((1, 1))),
        carried=np.zeros(1),
        given=np.array([20.0]),
        scale=np.array([40.0]),
    )
    flow = math.sqrt(20.0 * math.pi**2 * 9.80665 * 0.3**5 / (8.0 * 0.02 * 100.0))
    # From near rest Newton asks for 1e6 times the answer; 0.3 of the first slope is what may be left.
    part = shorten(content, np.zeros(1), np.array([1e6 * flow]))
    left = 20.0 - head_loss(content.pipes, np.array([part * 1e6 * flow]))[0][0]
    assert abs(left) <= 0.3 * 20.0
    assert shorten(content, np.zeros(1), np.array([flow])) == 1.0
    # A whole step that ends short of the least is taken whole: the next one goes on.
    assert shorten(content, np.zeros(1), np.array([0.1 * flow])) == 1.0


def test_small_differences_of_high_levels_keep_their_digits(build: Build) -> None:
    high, low = 4000.300001, 4000.3
    ends, lengths = [(0, 2), (2, 1)], [0.5, 0.8]
    pipes = [
        {"start": start, "end": end, "length": length, "bore": 2.0, "factor": 0.02}
        for (start, end), length in zip(ends, lengths, strict=True)
    ]
    unit = 8.0 * 0.02 * sum(lengths) / (math.pi**2 * 9.80665 * 2.0**5)
    flow = form_opinion(build([high, low, None], pipes)).flow
    np.testing.assert_allclose(flow, math.sqrt((high - low) / unit), rtol=1e-11)

"""The laws and continuity evaluated at an answer, where solving anew would take too long."""

from __future__ import annotations

import numpy as np

from calc.second.friction import head_loss, prepare
from calc.second.works import Evaluation, Floats, Works


def evaluate(works: Works, flow: Floats, head: Floats) -> Evaluation:
    """Return how far an answer is from the laws of its pipes and from continuity.

    Parameters
    ----------
    works : Works
        The case.
    flow : ndarray, shape (m,)
        In m³/s, positive from start to end.
    head : ndarray, shape (n,)
        In m. At a reservoir its level is used instead, which is what it must hold.

    Returns
    -------
    Evaluation
        Errors in m for each pipe and in m³/s for each node.
    """
    held = ~np.isnan(works.level)
    true_head = np.where(held, works.level, head)
    loss = head_loss(prepare(works), flow)[0]
    leaking = np.where(flow == 0.0, 0.0, np.inf)
    error = np.where(works.open, true_head[works.start] - true_head[works.end] - loss, leaking)
    imbalance = -np.where(held, 0.0, works.withdrawal)
    np.add.at(imbalance, works.end, flow)
    np.subtract.at(imbalance, works.start, flow)
    imbalance[held] = 0.0
    return Evaluation(largest(error), largest(imbalance), error, imbalance)


def largest(values: Floats) -> float:
    """Return the largest magnitude, NaN if there is one, 0 of nothing."""
    return float(np.max(np.abs(values))) if len(values) else 0.0

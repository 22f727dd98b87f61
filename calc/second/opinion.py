"""One case from its arrays to an opinion: tree, loops, flows of least content, heads."""

from __future__ import annotations

import numpy as np

from calc.second.content import BEYOND, Content, minimise
from calc.second.friction import head_loss, prepare, resistance
from calc.second.loops import branch_out, carry_withdrawals, close_loops, walk_heads
from calc.second.works import Opinion, Works

METHOD = "loop flows: least content by damped Newton"


@np.errstate(all="ignore")  # what is not finite is found at the end, and told
def form_opinion(works: Works) -> Opinion:
    """Solve one case by loop flows.

    Parameters
    ----------
    works : Works
        The case.

    Returns
    -------
    Opinion
        Flows and heads that satisfy continuity and, round each independent loop, the laws to 1e-10 m or
        rounding. Not converged, with the reason, where a junction has no open path to a reservoir or the
        iteration ends elsewhere.
    """
    pipes = prepare(works)
    measure = resistance(works)
    tree = branch_out(works, np.floor(np.log10(measure)).astype(np.int64).tolist())
    alone = np.isnan(works.level)
    alone[[far for _, _, _, far in tree.order]] = False
    if np.any(alone):
        names = ", ".join(str(node) for node in np.flatnonzero(alone)[:5])
        reason = f"{np.count_nonzero(alone)} junction(s) have no open path to a reservoir: nodes {names}"
        return Opinion(
            flow=np.zeros(len(works.start)),
            head=works.level.copy(),
            converged=False,
            method=METHOD,
            iterations=0,
            reason=reason,
        )
    # Above the lowest reservoir, so that small differences of high levels keep all their digits.
    held = ~np.isnan(works.level)
    level = np.where(held, works.level - np.min(works.level, where=held, initial=np.inf), 0.0)
    content = Content(
        pipes=pipes,
        loops=close_loops(works, tree),
        carried=carry_withdrawals(works, tree),
        given=np.where(works.open, level[works.start] - level[works.end], 0.0),
        scale=np.where(works.open, np.abs(level[works.start]) + np.abs(level[works.end]), 0.0),
    )
    flow, iterations, reason = minimise(content)
    head = walk_heads(works, tree, head_loss(pipes, flow)[0])
    if not (np.all(np.isfinite(flow)) and np.all(np.isfinite(head))):
        reason = BEYOND
    return Opinion(flow=flow, head=head, converged=not reason, method=METHOD, iterations=iterations, reason=reason)

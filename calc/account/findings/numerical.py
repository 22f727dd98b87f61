"""The solution itself: how closely it was sought, whether it closes, is confirmed, and hangs on its start."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from calc.account.case import CaseAccount
from calc.account.findings.finding import Check, Remark, Solved, by_case
from calc.account.flows import CaseColumns
from calc.account.opinion import allowed_flow_difference, allowed_head_difference
from calc.components import Network
from calc.solve import Settings, solve
from calc.solve.section import settings_of

LOOSEST = 1e-6
"""Tolerance over the largest flow of a case from which it is loose."""
MOST_RESTARTED = 500
"""Pipes up to which each case is solved again from other starts; above, it would take too long."""
SMALL_SHARE = 0.01
SMALL_HEAD = 0.01
"""Share of the largest flow, and metres of head, below both of which a direction is in doubt; common practice."""


def loose_tolerance(solved: Solved) -> Iterator[Remark]:
    """Yield cases whose tolerance is loose against their flows, or whose search left no history."""
    tolerance = settings_of(solved.project).tolerance
    stated = solved.project.sections["solver"].stated.get("tolerance")
    for name, case, columns in solved.running:
        mark = stated.mark if stated else solved.project.cases[name].mark
        largest = float(np.max(np.abs(columns.flow.values), initial=0.0))
        if len(case.network.unknown) and tolerance > LOOSEST * largest > 0.0:
            text = "the tolerance is more than a millionth of the largest flow of the case. State a smaller one"
            yield Remark(f"cases.{name}", mark, text)
        if len(case.network.unknown) and not case.history:
            text = "the search has left no history, by which its answer could be retraced. Do not rely on this case"
            yield Remark(f"cases.{name}", solved.project.cases[name].mark, text)


def broken_continuity(solved: Solved) -> Iterator[Remark]:
    """Yield cases in which a junction does not balance within the tolerance."""
    tolerance = settings_of(solved.project).tolerance
    text = "flows do not balance within the tolerance at some junction. Do not rely on this case"
    for name, _, _ in solved.running:
        largest = solved.ledger.find("balance.largest_imbalance", name)
        if largest and largest[0].case == name and float(largest[0].values[0]) > tolerance:
            yield Remark(f"cases.{name}", solved.project.cases[name].mark, text)


def open_paths(solved: Solved) -> Iterator[Remark]:
    """Yield cases in which losses between reservoirs do not add up to the difference of their levels."""
    text = "the losses along some path do not add up to the difference of levels. Do not rely on this case"
    for name, case, _ in solved.running:
        rows = tuple(path.id for path in case.paths)
        error = solved.ledger.view("paths.closing_error", name, rows).values if rows else np.zeros(0)
        if np.any(np.abs(error) > _head_allowed(case)):
            yield Remark(f"cases.{name}", solved.project.cases[name].mark, text)


def unconfirmed(solved: Solved) -> Iterator[Remark]:
    """Yield cases whose solution a second formulation did not confirm."""
    for name, case in solved.cases.items():
        agreement = case.agreement
        if agreement is None:
            text = "the case has no solution, so there is none to confirm"
        elif not agreement.agrees:
            text = f"the second opinion does not confirm it: {agreement.reason}"
        elif agreement.evaluated:
            text = "the second opinion evaluated the laws at the answer and did not solve the large network again"
        else:
            continue
        yield Remark(f"cases.{name}", solved.project.cases[name].mark, text)


def restarted(solved: Solved) -> Iterator[Remark]:
    """Yield cases that come to another answer when the search begins elsewhere."""
    tolerance = settings_of(solved.project).tolerance
    text = (
        "another answer is found when the search begins at the highest or the lowest level. Do not rely on this case "
        "before it is known why"
    )
    for name, case, columns in solved.running:
        if not all(_agrees(case, columns, start, tolerance) for start in _starts(case.network)):
            yield Remark(f"cases.{name}", solved.project.cases[name].mark, text)


def _starts(network: Network) -> Iterator[dict[str, float]]:
    """Yield heads to begin from: all at the lowest level, all at the highest."""
    level = network.level[np.isfinite(network.level)]
    for head in (float(np.min(level)), float(np.max(level))):
        yield {network.nodes[int(k)]: head for k in network.unknown}


def _agrees(case: CaseAccount, columns: CaseColumns, start: dict[str, float], tolerance: float) -> bool:
    """Return whether the search from a start comes to the same heads and flows, as the second opinion must."""
    if not start:
        return True
    again = solve(case.network, replace(Settings(), method="newton", tolerance=tolerance, start=start))
    if not again.converged:
        return False
    head = np.abs(again.head - columns.head.values)
    flow = np.abs(again.flow - columns.flow.values)
    largest = float(np.max(np.abs(columns.flow.values), initial=0.0))
    allowed = float(allowed_flow_difference.body(largest_flow=largest))
    return bool(np.all(head <= _head_allowed(case)) and np.all(flow <= allowed))


def _head_allowed(case: CaseAccount) -> float:
    """Return the difference of head, m, that is allowed between two solutions of a case."""
    level = case.network.level[np.isfinite(case.network.level)]
    return float(allowed_head_difference.body(highest=np.max(level), lowest=np.min(level)))


def _too_large(solved: Solved) -> str:
    if len(solved.project.pipes) > MOST_RESTARTED:
        return "the works are large, and solving each case again would take too long"
    return "" if any(True for _ in solved.running) else "no case has a solution"


def doubtful_directions(solved: Solved) -> Iterator[Remark]:
    """Yield pipes whose direction of flow could turn within what the inputs leave open."""
    tolerance = settings_of(solved.project).tolerance
    found: dict[str, list[str]] = {}
    for name, case, columns in solved.running:
        places = np.flatnonzero(case.network.open)
        flow = np.abs(columns.flow.values[places])
        start, end = case.network.start[places], case.network.end[places]
        drop = np.abs(columns.head.values[start] - columns.head.values[end])
        allowed = np.maximum(SMALL_HEAD, _widths(solved, case.network)[start] + _widths(solved, case.network)[end])
        largest = float(np.max(flow, initial=0.0))
        doubtful = (flow > tolerance) & (flow < SMALL_SHARE * largest) & (drop < allowed)
        for k in np.flatnonzero(doubtful).tolist():
            found.setdefault(columns.running[k], []).append(name)
    text = (
        "the flow is below a hundredth of the largest and is driven by less head than the inputs leave open {cases}: "
        "its direction is not certain. Do not rest a conclusion on it, or state the levels more closely"
    )
    yield from by_case(solved, "pipes", found, text)


def _widths(solved: Solved, network: Network) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    """Return half the width of the range stated for each reservoir's level, m; 0 where none is."""
    widths = np.zeros(len(network.nodes))
    for k, name in enumerate(network.nodes):
        spread = solved.project.spreads.get(f"reservoirs.{name}.level")
        if spread is not None and "low" in spread.stated:
            widths[k] = (spread.number("high") - spread.number("low")) / 2
    return widths


CHECKS = (
    Check(
        "D43",
        "Convergence criterion or history absent",
        "a tolerance above a millionth of the largest flow of a case, and a search without a history",
        results=loose_tolerance,
    ),
    Check(
        "D44",
        "Continuity not demonstrated",
        "junctions that do not balance within the tolerance, in any case",
        results=broken_continuity,
    ),
    Check(
        "D45",
        "Energy path does not close",
        "paths between reservoirs along which the losses and the difference of levels differ by more than a millionth "
        "of the range of levels and a thousandth of a millimetre",
        results=open_paths,
    ),
    Check(
        "D46",
        "Independent solution",
        "cases that a second formulation with its own code does not confirm",
        results=unconfirmed,
        unmade=lambda _: "",
    ),
    Check(
        "D47",
        "Answer depends on the starting guess",
        "cases that come to other heads or flows when they are solved again by Newton's method from all heads at the "
        "lowest level, and from all at the highest",
        results=restarted,
        unmade=_too_large,
    ),
    Check(
        "D48",
        "Near-zero or ill-conditioned flow",
        "pipes with less than a hundredth of the largest flow that less than ten millimetres of head drives, or less "
        "than the ranges stated for the levels at their ends leave open",
        results=doubtful_directions,
    ),
)

"""The second opinion: asked in plain arrays, compared in the ledger."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from calc import second
from calc.components import Network
from calc.equation import Reference, Symbol, equation
from calc.kinds import FLOW, HEAD, Kind
from calc.ledger import Accountant, Column, Ledger, Program, Spot, View
from calc.physics import symbols as s
from calc.solve import Solution

LARGEST_RESOLVED = 5000
"""Pipes above which the laws and continuity are evaluated at the answer instead of solving again."""

CONVENTION = Reference("convention", "Agreement as this program defines it, stated in every package")


@equation(
    gives=Symbol("ΔQ_max", FLOW, "difference of flow allowed"),
    source=CONVENTION,
    valid="every case",
    largest_flow=Symbol("Q_max", FLOW, "largest flow of the case"),
)
def allowed_flow_difference(*, largest_flow: Any) -> Any:  # noqa: ANN401
    """Difference of flow allowed between the two solutions."""
    return 1e-6 * largest_flow + 1e-9 * s.CUBIC_METRE_PER_SECOND


@equation(
    gives=Symbol("ΔH_max", HEAD, "difference of head allowed"),
    source=CONVENTION,
    valid="every case",
    highest=Symbol("z_high", HEAD, "highest level"),
    lowest=Symbol("z_low", HEAD, "lowest level"),
)
def allowed_head_difference(*, highest: Any, lowest: Any) -> Any:  # noqa: ANN401
    """Difference of head allowed between the two solutions."""
    return 1e-6 * (highest - lowest) + 1e-6 * s.METRE


def _difference(kind: Kind) -> Any:  # noqa: ANN401
    @equation(
        gives=Symbol("Δ", kind, "difference between the two solutions"),
        source=CONVENTION,
        valid="every case",
        second=Symbol("x_2", kind, "as the second opinion has it"),
        first=Symbol("x_1", kind, "as this ledger has it"),
    )
    def difference(*, second: Any, first: Any) -> Any:  # noqa: ANN401
        """Difference between the second opinion and this ledger."""
        return second - first

    return difference


FLOW_DIFFERENCE = _difference(FLOW)
HEAD_DIFFERENCE = _difference(HEAD)


@dataclass(frozen=True)
class Agreement:
    """How the second opinion compares with the solution of a case.

    ``evaluated`` says that the laws were evaluated at the answer and not solved again: the differences are then
    the largest imbalance and the largest energy error found by the second code.
    """

    method: str
    agrees: bool
    evaluated: bool
    reason: str
    flow_difference: Spot | None = None
    head_difference: Spot | None = None
    flow_allowed: Spot | None = None
    head_allowed: Spot | None = None


def works_of(network: Network) -> second.Works:
    """Return a case in the form in which the second opinion takes it."""
    pipes, fittings, constants = network.pipes, network.pipes.fittings, network.pipes.constants
    count = len(pipes.rows)
    gravity = float(pipes.gravity[0])

    def summed(coefficient: Any) -> Any:  # noqa: ANN401
        area = np.pi / 4 * fittings.bore**2
        terms = fittings.count * coefficient / (2 * gravity * area**2)
        return np.bincount(fittings.pipe, terms, count) if len(fittings.rows) else np.zeros(count)

    codes = np.broadcast_to(pipes.law.codes, (count,))
    return second.Works(
        node_count=len(network.nodes),
        level=network.level,
        withdrawal=network.withdrawal,
        start=network.start,
        end=network.end,
        open=network.open,
        parallel=np.broadcast_to(pipes.parallel, (count,)),
        length=pipes.length,
        bore=pipes.bore,
        roughness=pipes.roughness,
        factor=pipes.friction_factor,
        hazen_williams_c=pipes.hazen_williams_c,
        manning_n=pipes.manning_n,
        law=tuple(pipes.law.words[int(code)] for code in codes),
        loss_forward=summed(fittings.coefficient_forward),
        loss_reverse=summed(fittings.coefficient_reverse),
        gravity=gravity,
        viscosity=float(pipes.viscosity[0]),
        laminar_below=float(pipes.laminar_below[0]),
        turbulent_above=float(pipes.turbulent_above[0]),
        hazen_williams=(
            float(constants.hazen_williams_coefficient[0]),
            float(constants.hazen_williams_flow_exponent[0]),
            float(constants.hazen_williams_bore_exponent[0]),
        ),
        manning=(float(constants.manning_coefficient[0]), float(constants.manning_bore_exponent[0])),
    )


def enter_opinion(ledger: Ledger, network: Network, solution: Solution, case: str) -> Agreement:
    """Ask for the second opinion on a solved case, and enter what it says and by how much it differs."""
    works = works_of(network)
    flow_allowed, head_allowed = _enter_allowances(ledger, network, case)
    if len(network.start) > LARGEST_RESOLVED:
        found = second.evaluate(works, solution.flow, solution.head)
        said = Program("found by evaluating the laws and continuity at the answer with separate code")
        flow = ledger.enter("second.largest_imbalance", FLOW, [""], [found.largest_imbalance], said, case=case)
        head = ledger.enter("second.largest_energy_error", HEAD, [""], [found.largest_energy_error], said, case=case)
        method = "laws and continuity evaluated at the answer"
        return _agreement(method, (flow, head, flow_allowed, head_allowed), evaluated=True)
    opinion = second.form_opinion(works)
    if not opinion.converged:
        return Agreement(opinion.method, agrees=False, evaluated=False, reason=opinion.reason)
    flow, head = _enter_differences(ledger, network, opinion, case)
    return _agreement(opinion.method, (flow, head, flow_allowed, head_allowed), evaluated=False)


def _agreement(method: str, columns: tuple[Column, Column, Column, Column], *, evaluated: bool) -> Agreement:
    spots = [Spot(column, 0) for column in columns]
    agrees = spots[0].value <= spots[2].value and spots[1].value <= spots[3].value
    reason = "" if agrees else "the differences are larger than allowed"
    return Agreement(method, agrees, evaluated, reason, *spots)


def _enter_allowances(ledger: Ledger, network: Network, case: str) -> tuple[Column, Column]:
    books = Accountant(ledger, case)
    rows = network.pipes.rows
    flow = ledger.view("pipes.flow", case, rows)
    zeros = np.zeros(len(rows), dtype=np.int64)
    words = "largest of all, without sign"
    largest = books.combine("second.largest_flow", "largest size", flow, zeros, [""], words=words)
    reservoirs = [name for name, z in zip(network.nodes, network.level, strict=True) if not np.isnan(z)]
    level = ledger.view("reservoirs.level", case, reservoirs)
    zeros = np.zeros(len(reservoirs), dtype=np.int64)
    ends = [
        View.whole(books.combine(f"second.{word}_level", operation, level, zeros, [""], words=f"{word} level"))
        for word, operation in (("highest", "largest"), ("lowest", "least"))
    ]
    flow_allowed = books.apply(
        "second.allowed_flow_difference", allowed_flow_difference, largest_flow=View.whole(largest)
    )
    head_allowed = books.apply(
        "second.allowed_head_difference", allowed_head_difference, highest=ends[0], lowest=ends[1]
    )
    return flow_allowed.sources[0], head_allowed.sources[0]


def _enter_differences(ledger: Ledger, network: Network, opinion: second.Opinion, case: str) -> tuple[Column, Column]:
    books = Accountant(ledger, case)
    said = Program(f"found by the second opinion: {opinion.method}")
    rows = network.pipes.rows
    flow = ledger.enter("pipes.second_flow", FLOW, rows, opinion.flow, said, case=case)
    difference = books.apply(
        "pipes.second_flow_difference",
        FLOW_DIFFERENCE,
        second=View.whole(flow),
        first=ledger.view("pipes.flow", case, rows),
    )
    words = "largest of all, without sign"
    largest_flow = books.combine(
        "second.largest_flow_difference",
        "largest size",
        difference,
        np.zeros(len(rows), dtype=np.int64),
        [""],
        words=words,
    )
    unknown = network.unknown
    names = [network.nodes[int(k)] for k in unknown]
    if not names:
        none = ledger.enter(
            "second.largest_head_difference", HEAD, [""], [0.0], Program("no head is unknown"), case=case
        )
        return largest_flow, none
    head = ledger.enter("junctions.second_head", HEAD, names, opinion.head[unknown], said, case=case)
    difference = books.apply(
        "junctions.second_head_difference",
        HEAD_DIFFERENCE,
        second=View.whole(head),
        first=ledger.view("junctions.head", case, names),
    )
    largest_head = books.combine(
        "second.largest_head_difference",
        "largest size",
        difference,
        np.zeros(len(names), dtype=np.int64),
        [""],
        words=words,
    )
    return largest_flow, largest_head

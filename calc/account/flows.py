"""A solution becomes columns: heads, flows, and by the same chain of laws all that lies between."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from calc.components import Network
from calc.components.pipe import EmpiricalConstants, FittingTerms, PipeResults, PipeTerms, losses, transition_limits
from calc.kinds import FLOW, HEAD
from calc.ledger import Accountant, Ledger, Solved, View
from calc.ledger.column import ABSENT
from calc.physics import energy, friction, velocity
from calc.solve import Solution

Rows = npt.NDArray[np.int64]


@dataclass(frozen=True)
class CaseColumns:
    """The columns of a solved case.

    Attributes
    ----------
    running : tuple of str
        Ids of the pipes that are open; rows of ``results``.
    head : View
        Total head at every node, in the order of the network.
    flow : View
        Flow of every pipe.
    results : PipeResults
        Rows are the open pipes.
    terms : PipeTerms
        What the chain took; rows are the open pipes.
    closing_error : View
        Of energy, rows are the open pipes.
    pressure_head, pressure : View
        At junctions with an elevation.
    """

    running: tuple[str, ...]
    head: View
    flow: View
    results: PipeResults[View]
    terms: PipeTerms[View]
    closing_error: View
    pressure_head: View
    pressure: View


def joined(first: View, second: View) -> View:
    """Return two views one after the other."""
    shift = np.where(second.which == ABSENT, ABSENT, second.which + len(first.sources))
    return View(
        first.sources + second.sources,
        np.concatenate([first.which, shift]),
        np.concatenate([first.at, second.at]),
        first.rows + second.rows,
    )


def filled(first: View, second: View) -> View:
    """Return a view whose absent rows are taken from another of the same rows."""
    absent = first.which == ABSENT
    shift = np.where(second.which == ABSENT, ABSENT, second.which + len(first.sources))
    which = np.where(absent, shift, first.which)
    return View(first.sources + second.sources, which, np.where(absent, second.at, first.at), first.rows)


def pipe_terms(ledger: Ledger, network: Network, case: str, chosen: Rows) -> PipeTerms[View]:
    """Return the inputs of the chain for some pipes as views of the ledger."""
    arrays = network.pipes
    rows = tuple(arrays.rows[int(k)] for k in chosen)

    def pipes(name: str) -> View:
        return ledger.view(f"pipes.{name}", case, rows)

    law = arrays.law.take(chosen)
    bore = pipes("bore")
    return PipeTerms(
        rows=rows,
        length=pipes("length"),
        bore=bore,
        roughness=pipes("roughness"),
        friction_factor=pipes("friction_factor"),
        hazen_williams_c=pipes("hazen_williams_c"),
        manning_n=pipes("manning_n"),
        parallel=pipes("parallel"),
        law=law,
        fittings=_fitting_terms(ledger, network, case, chosen, bore),
        viscosity=ledger.shared("fluid.viscosity", case),
        gravity=ledger.shared("site.gravity", case),
        laminar_below=ledger.shared_of("constants.laminar_below", "transition", case),
        turbulent_above=ledger.shared_of("constants.turbulent_above", "transition", case),
        constants=_constants(ledger, case),
    )


def _constants(ledger: Ledger, case: str) -> EmpiricalConstants[View]:
    """Return the constants of the empirical laws, absent where no pipe needs the law."""

    def constant(law: str, field: str) -> View:
        return ledger.shared_of(f"constants.{field}", law, case)

    return EmpiricalConstants(
        hazen_williams_coefficient=constant("hazen_williams", "coefficient"),
        hazen_williams_flow_exponent=constant("hazen_williams", "flow_exponent"),
        hazen_williams_bore_exponent=constant("hazen_williams", "bore_exponent"),
        manning_coefficient=constant("manning", "coefficient"),
        manning_bore_exponent=constant("manning", "bore_exponent"),
    )


def _fitting_terms(ledger: Ledger, network: Network, case: str, chosen: Rows, bore: View) -> FittingTerms[View]:
    every = network.pipes.fittings
    place = np.full(len(network.pipes.rows), ABSENT, dtype=np.int64)
    place[chosen] = np.arange(len(chosen))
    kept = np.flatnonzero(place[every.pipe] != ABSENT) if len(every.rows) else np.zeros(0, dtype=np.int64)
    rows = tuple(every.rows[int(k)] for k in kept)
    pipe = place[every.pipe[kept]]

    def fittings(name: str) -> View:
        return ledger.view(f"fittings.{name}", case, rows)

    forward = fittings("K")
    return FittingTerms(
        rows=rows,
        pipe=pipe,
        count=fittings("count"),
        coefficient_forward=forward,
        coefficient_reverse=filled(fittings("K_reverse"), forward),
        bore=filled(fittings("smaller_bore"), filled(fittings("bore"), bore.take(pipe, rows))),
    )


def enter_flows(ledger: Ledger, network: Network, solution: Solution, case: str) -> CaseColumns:
    """Enter the solution of a case and everything that follows from it; what is shut stands already.

    Raises
    ------
    CalcError
        If a number is not finite; a converged solution has none.
    """
    books = Accountant(ledger, case)
    head = _enter_heads(ledger, network, solution, case)
    flow = _enter_pipe_flows(ledger, network, solution, case)
    open_pipes = np.flatnonzero(network.open)
    _enter_across(books, network, head)
    terms = pipe_terms(ledger, network, case, open_pipes)
    results = losses(books, terms, transition_limits(books, terms), flow.take(open_pipes))
    closing = books.apply(
        "pipes.closing_error",
        energy.closing_error,
        head_from=head.take(network.start[open_pipes], terms.rows),
        head_to=head.take(network.end[open_pipes], terms.rows),
        head_loss=results.head_loss,
    )
    _enter_ratios(books, terms, results)
    pressures = _enter_pressures(books, network, head)
    _enter_velocity_heads(books, network, results, open_pipes, terms)
    _enter_balances(books, network, flow, closing)
    return CaseColumns(terms.rows, head, flow, results, terms, closing, *pressures)


def _enter_heads(ledger: Ledger, network: Network, solution: Solution, case: str) -> View:
    unknown = network.unknown
    reservoirs = [name for name, level in zip(network.nodes, network.level, strict=True) if not np.isnan(level)]
    level = ledger.view("reservoirs.level", case, reservoirs)
    if not len(unknown):
        return level
    origin = Solved(
        "F = 0, flow toward the junction less withdrawal",
        solution.method,
        solution.iterations,
        ("junctions.imbalance",),
    )
    rows = [network.nodes[int(k)] for k in unknown]
    column = ledger.enter("junctions.head", HEAD, rows, solution.head[unknown], origin, case=case)
    return joined(level, View.whole(column))


def _enter_pipe_flows(ledger: Ledger, network: Network, solution: Solution, case: str) -> View:
    names = network.pipes.rows
    running = np.flatnonzero(network.open)
    if len(running):
        statement = "e = H_1 - H_2 - h = 0"
        origin = Solved(statement, solution.method, solution.iterations, ("pipes.closing_error",))
        rows = [names[int(k)] for k in running]
        ledger.enter("pipes.flow", FLOW, rows, solution.flow[running], origin, case=case)
    return ledger.view("pipes.flow", case, names)


def _enter_across(books: Accountant, network: Network, head: View) -> None:
    """Enter the difference of head that shut pipes hold."""
    shut = np.flatnonzero(~network.open)
    if len(shut):
        rows = [network.pipes.rows[int(k)] for k in shut]
        books.apply(
            "pipes.head_loss",
            energy.head_across,
            head_from=head.take(network.start[shut], rows),
            head_to=head.take(network.end[shut], rows),
        )


def _enter_ratios(books: Accountant, terms: PipeTerms[View], results: PipeResults[View]) -> None:
    """Enter what a reader compares pipes by: the gradient as 1 in N, an equivalent Darcy f, the share of fittings."""
    books.apply(
        "pipes.one_in",
        friction.ONE_IN,
        reynolds=results.reynolds,
        length=terms.length,
        friction_loss=results.friction_loss,
    )
    books.apply(
        "pipes.equivalent_f",
        friction.EQUIVALENT_FACTOR,
        by=terms.law,
        reynolds=results.reynolds,
        friction_loss=results.friction_loss,
        bore=terms.bore,
        length=terms.length,
        gravity=terms.gravity,
        velocity=results.velocity,
    )
    books.apply(
        "pipes.fitting_share",
        friction.FITTING_SHARE,
        reynolds=results.reynolds,
        fitting_loss=results.fitting_loss,
        head_loss=results.head_loss,
    )


def _enter_pressures(books: Accountant, network: Network, head: View) -> tuple[View, View]:
    junctions = [network.nodes[int(k)] for k in network.unknown]
    elevation = books.ledger.view("junctions.elevation", books.case, junctions)
    stated = np.flatnonzero(elevation.which != ABSENT)
    at = elevation.take(stated)
    if not len(stated):
        return at, at
    total = head.take(network.unknown[stated])
    pressure_head = books.apply("junctions.pressure_head", energy.pressure_head, head=total, elevation=at)
    pressure = books.apply(
        "junctions.pressure",
        energy.pressure,
        density=books.ledger.shared("fluid.density", books.case),
        gravity=books.ledger.shared("site.gravity", books.case),
        pressure_head=pressure_head,
    )
    return pressure_head, pressure


def _enter_velocity_heads(
    books: Accountant, network: Network, results: PipeResults[View], open_pipes: Rows, terms: PipeTerms[View]
) -> None:
    if not len(open_pipes):
        return
    heads = books.apply("pipes.velocity_head", velocity.velocity_head, velocity=results.velocity, gravity=terms.gravity)
    ends = np.concatenate([network.start[open_pipes], network.end[open_pipes]])
    pipe = np.concatenate([np.arange(len(open_pipes))] * 2)
    place = np.full(len(network.nodes), ABSENT, dtype=np.int64)
    place[network.unknown] = np.arange(len(network.unknown))
    kept = np.flatnonzero(place[ends] != ABSENT)
    if len(kept):
        rows = [network.nodes[int(k)] for k in network.unknown]
        into = place[ends[kept]]
        met = sorted(set(into.tolist()))
        renumbered = np.searchsorted(met, into)
        books.combine(
            "junctions.velocity_head",
            "largest",
            heads.take(pipe[kept], [terms.rows[int(k)] for k in pipe[kept]]),
            renumbered,
            [rows[k] for k in met],
            words="largest velocity head among the open pipes at the node",
        )


def _enter_balances(books: Accountant, network: Network, flow: View, closing: View) -> None:
    """Enter imbalances of junctions, outflows of reservoirs, and the largest of each error."""
    ledger, case = books.ledger, books.case
    pipes = np.arange(len(network.start))
    ends = np.concatenate([network.start, network.end])
    toward = np.concatenate([-np.ones(len(pipes)), np.ones(len(pipes))])
    terms = flow.take(np.concatenate([pipes, pipes]), flow.rows + flow.rows)
    place = np.full(len(network.nodes), ABSENT, dtype=np.int64)
    unknown = network.unknown
    place[unknown] = np.arange(len(unknown))
    if len(unknown):
        rows = [network.nodes[int(k)] for k in unknown]
        withdrawal = ledger.view("junctions.withdrawal", case, rows)
        drawn = np.flatnonzero(withdrawal.which != ABSENT)
        kept = np.flatnonzero(place[ends] != ABSENT)
        imbalance = books.combine(
            "junctions.imbalance",
            "sum",
            joined(terms.take(kept), withdrawal.take(drawn)),
            np.concatenate([place[ends[kept]], drawn]),
            rows,
            words="flow toward the junction positive, less its withdrawal",
            signs=np.concatenate([toward[kept], -np.ones(len(drawn))]),
        )
        _enter_largest(books, "balance.largest_imbalance", View.whole(imbalance))
    fixed = np.flatnonzero(~np.isnan(network.level))
    place[:] = ABSENT
    place[fixed] = np.arange(len(fixed))
    kept = np.flatnonzero(place[ends] != ABSENT)
    books.combine(
        "reservoirs.outflow",
        "sum",
        terms.take(kept),
        place[ends[kept]],
        [network.nodes[int(k)] for k in fixed],
        words="flow leaving the reservoir positive",
        signs=-toward[kept],
        kind=FLOW,
    )
    if closing.sources:
        _enter_largest(books, "balance.largest_energy_error", closing)


def _enter_largest(books: Accountant, name: str, terms: View) -> None:
    into = np.zeros(len(terms.rows), dtype=np.int64)
    books.combine(name, "largest size", terms, into, [""], words="largest of all, without sign")


def restricted(view: View, rows: Sequence[str]) -> View:
    """Return the rows of a view that are among ``rows``, in their order."""
    index = {row: k for k, row in enumerate(view.rows)}
    return view.take(np.array([index[row] for row in rows], dtype=np.int64))

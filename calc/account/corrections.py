"""The table of loop correction as ledger columns: flows, losses, their rise, sums and correction, in the order made.

A correction has a number, counted through all sweeps; what it found and gave are the numbers of that trial, such as
``pipes.upper-main.flow@base#7`` and ``loops.2.correction@base#7``. Number 0 is the start. In long tables the sweeps
between the second and the last are kept by their sums.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import Any

import numpy as np

from calc.account.flows import filled, joined, pipe_terms
from calc.components import Network
from calc.components.pipe import PipeResults, PipeTerms, TransitionLimits, losses, transition_limits
from calc.kinds import FLOW, HEAD, LOSS_RATE, NUMBER
from calc.ledger import Accountant, Column, Ledger, Program, Spot, View
from calc.ledger.column import ABSENT
from calc.solve import Corrections, Loop
from calc.solve.loop_rules import QUADRATIC, loop_correction, loss_exponent, loss_rate, path_excess
from calc.solve.loops import around, brought

ALL_IN_FULL = 60
"""Corrections up to which each is entered in full."""
METHOD = "loop-correction"
ASSUMED = (
    "assumed at the start: what the pipe passes between rough heads, those of pipes whose loss is linear in flow; "
    "rounded to two figures in SI"
)
SQUARE = "the loss goes with the square of the flow: turbulent flow with Darcy f as found, Manning, fittings"
RECORDED = {
    "loss": (HEAD, "head lost round the loop in its sense, as recorded by the solver"),
    "excess": (HEAD, "head lost round the loop, of a path less the fall of level, as recorded by the solver"),
    "rate": (LOSS_RATE, "sum of n h/Q round the loop, as recorded by the solver"),
    "correction": (FLOW, "correction of the flows of the loop in its sense, as recorded by the solver"),
}


def loop_id(k: int) -> str:
    """Return the id of a loop in the ledger and on the page."""
    return str(k + 1)


def sweeps_in_full(corrections: Corrections) -> set[int]:
    """Return the sweeps entered pipe by pipe: all of a short table, else the first two and the last."""
    count = len(corrections.error)
    if len(corrections.change) <= ALL_IN_FULL:
        return set(range(1, count + 1))
    return {1, 2, count}


def enter_corrections(ledger: Ledger, network: Network, corrections: Corrections, case: str) -> None:
    """Enter the start and every correction, each by its rules on what stands before it."""
    table = _Table(ledger, network, corrections, case)
    kept = _finite(corrections)
    table.enter_recorded(kept)
    for c in range(kept):
        table.enter(c)
    table.enter_norms()


def _finite(corrections: Corrections) -> int:
    """Return how many corrections there are before numbers are no longer finite."""
    every = (corrections.loss, corrections.excess, corrections.rate, corrections.change)
    sound = np.all(np.isfinite(every), axis=0) & np.all(np.isfinite(corrections.flow), axis=1)
    return int(np.argmin(sound)) if not np.all(sound) else len(sound)


class _Table:
    """The columns under way: flows, and the corrections since, that later flows are the sum of."""

    def __init__(self, ledger: Ledger, network: Network, corrections: Corrections, case: str) -> None:
        self.ledger, self.network, self.corrections, self.case = ledger, network, corrections, case
        self.full = sweeps_in_full(corrections)
        self.flow: dict[int, Spot] = {}
        self.since: dict[int, list[tuple[Spot, int]]] = {}
        self.excess: list[Spot] = []
        self.change: list[Spot] = []
        self._enter_start()
        self.terms = [
            pipe_terms(ledger, network, case, np.array(loop.pipes, dtype=np.int64)) for loop in corrections.loops
        ]
        self.limits = self._limits()

    def _enter_start(self) -> None:
        """Enter the flows of the closing pipes as assumed, and the others that follow by continuity."""
        names, start, loops = self.network.pipes.rows, self.corrections.start, self.corrections.loops
        closing = [loop.closing for loop in loops]
        rest = [pipe for pipe in np.flatnonzero(self.network.open).tolist() if pipe not in closing]
        terms = View((), np.zeros(0, dtype=np.int64), np.zeros(0, dtype=np.int64), ())
        if closing:
            rows = [names[pipe] for pipe in closing]
            assumed = self.ledger.enter(
                "pipes.flow", FLOW, rows, start[closing], Program(ASSUMED), case=self.case, of="#0"
            )
            self.flow |= {pipe: Spot(assumed, k) for k, pipe in enumerate(closing)}
            terms = View.whole(assumed)
        junctions = [self.network.nodes[node] for node in self.network.unknown.tolist()]
        withdrawal = self.ledger.view("junctions.withdrawal", self.case, junctions)
        terms = joined(terms, withdrawal)
        found = [
            (at, row, sign)
            for row, pipe in enumerate(rest)
            for at, sign in self._brought(pipe)
            if terms.which[at] != ABSENT
        ]
        at, into, signs = (np.array(part, dtype=np.int64) for part in (zip(*found, strict=True) if found else [()] * 3))
        if rest:
            column = Accountant(self.ledger, self.case, "#0").combine(
                "pipes.flow",
                "sum",
                terms.take(at),
                into,
                [names[pipe] for pipe in rest],
                words="withdrawals beyond the pipe and the flows of the loops through it, by continuity",
                signs=signs,
                kind=FLOW,
            )
            self.flow |= {pipe: Spot(column, k) for k, pipe in enumerate(rest)}
        self.since = {pipe: [] for pipe in self.flow}

    def _brought(self, pipe: int) -> Iterator[tuple[int, int]]:
        """Yield what the start flow of a pipe is the sum of: place among closing flows, then withdrawals, and sign."""
        loops = self.corrections.loops
        closing, drawn = brought(self.network, self.corrections.trails, loops)
        table = np.concatenate([closing, drawn[self.network.unknown]])[:, pipe]
        yield from ((int(k), int(table[k])) for k in np.flatnonzero(table))

    def _limits(self) -> list[TransitionLimits[View]]:
        """Return Darcy f at the ends of the transition for the pipes of each loop, entered once with the start."""
        every = np.array(sorted({pipe for loop in self.corrections.loops for pipe in loop.pipes}), dtype=np.int64)
        if not len(every):
            return []
        books = Accountant(self.ledger, self.case, "#0")
        limits = transition_limits(books, pipe_terms(self.ledger, self.network, self.case, every))
        at = [np.searchsorted(every, np.array(loop.pipes)) for loop in self.corrections.loops]
        return [TransitionLimits(limits.laminar, limits.turbulent.take(index)) for index in at]

    def enter_recorded(self, kept: int) -> None:
        """Enter the sums of the corrections that are not entered in full."""
        said = self.corrections
        held = {"loss": said.loss, "excess": said.excess, "rate": said.rate, "correction": said.change}
        for k in range(len(said.loops)):
            at = [c for c in range(kept) if said.loop[c] == k and int(said.sweep[c]) not in self.full]
            if not at:
                continue
            rows = [str(c + 1) for c in at]
            for name, (kind, words) in RECORDED.items():
                self.ledger.enter(
                    f"loops.{name}", kind, rows, held[name][at], Program(words), case=self.case, of=loop_id(k)
                )

    def enter(self, c: int) -> None:
        """Enter one correction, and keep it for the flows that it changes."""
        k = int(self.corrections.loop[c])
        loop = self.corrections.loops[k]
        if int(self.corrections.sweep[c]) in self.full:
            excess, change = self._in_full(c, k, loop)
        else:
            excess, change = (
                Spot(*self.ledger.spot(f"loops.{loop_id(k)}.{name}@{self.case}#{c + 1}"))
                for name in ("excess", "correction")
            )
        self.excess.append(excess)
        self.change.append(change)
        for pipe, sign in zip(loop.pipes, loop.signs, strict=True):
            self.since[pipe].append((change, sign))

    def _in_full(self, c: int, k: int, loop: Loop) -> tuple[Spot, Spot]:
        books = Accountant(self.ledger, self.case, f"#{c + 1}")
        flow = self._flows(books, loop)
        results = losses(books, self.terms[k], self.limits[k], flow)
        excess = self._excess(books, k, loop, results)
        rates = self._rates(books, k, results, flow)
        if rates is None:
            said = Program("the pipes of the loop are at rest: nothing is corrected")
            change = self.ledger.enter(
                "loops.correction", FLOW, [loop_id(k)], [0.0], said, case=self.case, of=f"#{c + 1}"
            )
        else:
            view = books.apply("loops.correction", loop_correction, excess=excess, rate_sum=View.whole(rates))
            change = view.sources[0]
        return Spot(excess.sources[0], 0), Spot(change, 0)

    def _flows(self, books: Accountant, loop: Loop) -> View:
        """Enter the flows that a correction finds: those last entered, and the corrections since."""
        spots: list[Spot] = []
        into: list[int] = []
        signs: list[int] = []
        for row, pipe in enumerate(loop.pipes):
            held = [(self.flow[pipe], 1), *self.since[pipe]]
            spots += [spot for spot, _ in held]
            signs += [sign for _, sign in held]
            into += [row] * len(held)
        names = [self.network.pipes.rows[pipe] for pipe in loop.pipes]
        words = "the flow before and the corrections made since"
        place = np.array(into, dtype=np.int64)
        column = books.combine("pipes.flow", "sum", View.gathered(spots), place, names, words=words, signs=signs)
        for row, pipe in enumerate(loop.pipes):
            self.flow[pipe], self.since[pipe] = Spot(column, row), []
        return View.whole(column)

    def _excess(self, books: Accountant, k: int, loop: Loop, results: PipeResults[View]) -> View:
        loss = books.combine(
            "loops.loss" if loop.path else "loops.excess",
            "sum",
            results.head_loss,
            np.zeros(len(loop.pipes), dtype=np.int64),
            [loop_id(k)],
            words="head lost by the pipes of the loop, in its sense",
            signs=loop.signs,
        )
        if not loop.path:
            return View.whole(loss)
        higher, lower = (
            self.ledger.view("reservoirs.level", self.case, [self.network.nodes[loop.nodes[end]]]) for end in (0, -1)
        )
        return books.apply("loops.excess", path_excess, loss=View.whole(loss), higher=higher, lower=lower)

    def _rates(self, books: Accountant, k: int, results: PipeResults[View], flow: View) -> Column | None:
        """Enter n h/Q of the pipes in motion and its sum; None where all are at rest."""
        moving = np.flatnonzero(results.head_loss.values != 0)
        if not len(moving):
            return None
        lost, terms = results.head_loss.take(moving), self.terms[k]
        exponent = _exponents(books, terms, self.limits[k], results, moving)
        rate = books.apply("pipes.loss_rate", loss_rate, exponent=exponent, head_loss=lost, flow=flow.take(moving))
        into = np.zeros(len(moving), dtype=np.int64)
        return books.combine(
            "loops.rate", "sum", rate, into, [loop_id(k)], words="rise of the head lost, over the pipes in motion"
        )

    def enter_norms(self) -> None:
        """Enter the largest correction and excess of each whole sweep."""
        loops = len(self.corrections.loops)
        sweeps = len(self.change) // loops if loops else 0
        if not sweeps:
            return
        into = np.repeat(np.arange(sweeps), loops)
        rows = [str(sweep + 1) for sweep in range(sweeps)]
        books = Accountant(self.ledger, self.case, METHOD)
        for name, every in (("correction", self.change), ("excess", self.excess)):
            spots = every[: sweeps * loops]
            words = f"largest {name} of a loop in this sweep, without sign"
            books.combine(f"sweeps.largest_{name}", "largest size", View.gathered(spots), into, rows, words=words)


def _exponents(
    books: Accountant,
    terms: PipeTerms[View],
    limits: TransitionLimits[View],
    results: PipeResults[View],
    moving: np.ndarray[Any, np.dtype[np.int64]],
) -> View:
    """Enter the exponents of the pipes in motion, `QUADRATIC` where their law defines none."""
    found = loss_exponent(
        books,
        replace(terms, law=terms.law.take(moving)),
        replace(limits, turbulent=limits.turbulent.take(moving)),
        replace(
            results,
            reynolds=results.reynolds.take(moving),
            friction_loss=results.friction_loss.take(moving),
            head_loss=results.head_loss.take(moving),
        ),
    )
    square = [found.rows[int(row)] for row in np.flatnonzero(found.which == ABSENT)]
    if not square:
        return found
    values = np.full(len(square), QUADRATIC)
    column = books.ledger.enter(
        "pipes.loss_exponent", NUMBER, square, values, Program(SQUARE), case=books.case, of=books.of
    )
    return filled(found, View.assembled([column], found.rows))


def correction_rows(network: Network, corrections: Corrections) -> list[dict[str, Any]]:
    """Return the sweeps as plain data, in SI: the start, then each loop's sums and correction; null where not known."""
    names = network.pipes.rows
    table = around(corrections.loops, len(names))
    rows: list[dict[str, Any]] = [
        {"iteration": 0, "flows": {name: _number(flow) for name, flow in zip(names, corrections.start, strict=True)}}
    ]
    for sweep, error in enumerate(corrections.error, 1):
        at = np.flatnonzero(corrections.sweep == sweep)
        rows.append(
            {
                "iteration": sweep,
                "largest_correction": _number(np.max(np.abs(corrections.change[at]))),
                "largest_closing_error": _number(error),
                "loops": [
                    {
                        "loop": loop_id(k),
                        "pipes": {names[p]: int(table[k, p]) for p in corrections.loops[k].pipes},
                        "loss": _number(corrections.loss[c]),
                        "excess": _number(corrections.excess[c]),
                        "rate": _number(corrections.rate[c]),
                        "correction": _number(corrections.change[c]),
                    }
                    for c, k in zip(at.tolist(), corrections.loop[at].tolist(), strict=True)
                ],
            }
        )
    return rows


def _number(value: Any) -> float | None:  # noqa: ANN401
    return float(value) if np.isfinite(value) else None

"""Loop correction of a case: its loops, the flows assumed, the table of corrections, one worked, and the sweeps."""

from __future__ import annotations

import math
from dataclasses import replace

from calc.account import CaseAccount
from calc.account.corrections import METHOD, loop_id, sweeps_in_full
from calc.kinds import FLOW, HEAD, LOSS_RATE, Kind
from calc.ledger import Program, Spot
from calc.report import derivation, figures
from calc.report.composer import FROM, NOTHING, Sheet, cited, column, figure_column, name
from calc.report.display import FINE, FULL
from calc.report.document import (
    Figure,
    Heading,
    Letter,
    Number,
    Own,
    Paragraph,
    Parts,
    Row,
    Strong,
    TableColumn,
)
from calc.report.numbers import Format
from calc.solve import Corrections, Loop

ABREAST = 6
"""Loops whose corrections fit beside one another; of more, a sweep is told by its largest."""
LEVEL_FIGURES = 9
RISE_FIGURES = 8
FIGURES: dict[Kind, int] = {FLOW: 7, HEAD: 8}
"""Figures of the largest flow and loss of the table; the others have as many decimals, so that they can be added."""


def add_corrections(sheet: Sheet, case: CaseAccount, corrections: Corrections) -> None:
    """Add the table of loop correction, and what a checker needs to fill it again."""
    sheet.add(Heading(("Loop correction",)))
    _Page(sheet, case, corrections).add()


class _Page:
    """The table of one case under way."""

    def __init__(self, sheet: Sheet, case: CaseAccount, corrections: Corrections) -> None:
        self.sheet, self.composer, self.ledger = sheet, sheet.composer, sheet.composer.ledger
        self.case, self.corrections = case, corrections
        self.pipes, self.nodes = case.network.pipes.rows, case.network.nodes
        largest = {
            FLOW: max((abs(float(q)) for q in (*corrections.start, *corrections.change)), default=0.0),
            HEAD: max((abs(float(h)) for h in corrections.loss), default=0.0),
        }
        self.decimals = {kind: _decimals(largest[kind], count) for kind, count in FIGURES.items()}

    def add(self) -> None:
        """Add everything in order."""
        if not self.corrections.loops:
            said = "No pipe closes a loop or joins two reservoirs: the flows follow from continuity alone."
            self.sheet.add(Paragraph((said,)))
        else:
            self._loops()
        self._start()
        for sweep in self._printed():
            self._sweep(sweep)
        self._worked()
        self._sweeps()

    def _printed(self) -> list[int]:
        """Return the sweeps printed pipe by pipe."""
        count = len(self.corrections.error)
        held = {1, 2, count} & sweeps_in_full(self.corrections)
        return sorted(sweep for sweep in held if sweep <= count and self._stands(sweep))

    def _stands(self, sweep: int) -> bool:
        """Return whether the ledger holds every correction of a sweep; one of numbers without end it does not."""
        at = [c for c, one in enumerate(self.corrections.sweep.tolist()) if one == sweep]
        return all(self._found("loops.correction", loop_id(int(self.corrections.loop[c])), c + 1) for c in at)

    def _found(self, column_name: str, row: str, trial: int) -> Spot | None:
        """Return a number of a correction; a pipe at rest has no rise of its loss."""
        for one in self.ledger.find(column_name, self.case.id, f"#{trial}"):
            if row in one.index:
                return Spot(one, one.index[row])
        return None

    def _form(self, kind: Kind, sign: str = "", *, residual: bool = False) -> Format:
        """Return the format of a figure of the table, in coherent units so that formulas hold between its columns."""
        decimals = self.decimals.get(kind)
        unit = self.composer.display.coherent(kind)
        if decimals is None:
            return Format(unit, significant=RISE_FIGURES)
        return Format(unit, decimals, sign=sign, bound=10.0**-decimals if residual else None)

    def _number(self, spot: Spot, sign: str = "", *, residual: bool = False) -> Number:
        return self.composer.number(spot, self._form(spot.column.kind, sign, residual=residual))

    def _loops(self) -> None:
        columns = (
            column("loop", 12),
            column("walked", role="statement"),
            column("pipes, and how each is walked", role="statement"),
            column("closed by", 30, edge=True),
        )
        rows = []
        for k, loop in enumerate(self.corrections.loops):
            walked = tuple(part for node in loop.nodes for part in (", ", name(self.nodes[node])))[1:]
            ways = tuple(
                part
                for pipe, sign in zip(loop.pipes, loop.signs, strict=True)
                for part in (", ", name(self.pipes[pipe]), f" {_way(sign)}")
            )[1:]
            kind = "path by " if loop.path else "loop by "
            rows.append(
                self.sheet.row((Own(loop_id(k), "id"),), (kind, *walked), ways, (name(self.pipes[loop.closing]),))
            )
        self.sheet.table(f"loops-{self.case.id}", columns, rows)
        said = (
            "A forest of pipes grows from the reservoirs, pipes of least resistance first, until it holds every "
            "junction. Each open pipe left over closes one loop, by the way of least resistance through the forest and "
            "the pipes that closed loops before; a way that passes from one reservoir to another makes it a path, from "
            "the higher level to the lower. A pipe walked along is walked from its beginning to its end. In the sense "
            "of a loop, flows and losses are positive the way it is walked."
        )
        self.sheet.add(Paragraph((said,), "small"))

    def _start(self) -> None:
        """Add the flows that the corrections begin from."""
        unit = self.composer.display.coherent(FLOW)
        columns = (
            column("pipe", role="statement"),
            figure_column("flow at the start", unit, 32, edge=True),
            column("how", 40),
            FROM,
        )
        closing = {loop.closing for loop in self.corrections.loops}
        rows = []
        for pipe, named in enumerate(self.pipes):
            spot = self._found("pipes.flow", named, 0)
            if spot is None:
                continue
            how = "assumed" if pipe in closing else "by continuity"
            cells: tuple[Parts, ...] = ((name(named),), (self._number(spot),), (how,), (cited(self.ledger, [spot]),))
            rows.append(self.sheet.row(*cells, refs=[spot.id]))
        self.sheet.table(f"start-{self.case.id}", columns, rows)
        said = (
            "The flow of each closing pipe is assumed: what it passes by its own law between rough heads, those of "
            "pipes whose loss is linear in flow, rounded to two figures in SI. The other flows follow from continuity, "
            "which no correction disturbs."
        )
        self.sheet.add(Paragraph((said,), "small"))

    def _sweep(self, sweep: int) -> None:
        """Add the corrections of a sweep, pipe by pipe."""
        coherent = self.composer.display.coherent
        columns = (
            column("pipe", role="statement"),
            column("walked", 18),
            _lettered("flow ", "Q", coherent(FLOW), 28, edge=True),
            _lettered("loss ", "h", coherent(HEAD), 28),
            _lettered("exponent ", "n_h", "", 26),
            _lettered("rise ", "r_h", coherent(LOSS_RATE), 26, edge=True),
        )
        rows: list[Row] = []
        for c, (one, k) in enumerate(zip(self.corrections.sweep.tolist(), self.corrections.loop.tolist(), strict=True)):
            if one == sweep:
                rows += self._correction(c + 1, k)
        last = " (the last)" if sweep == len(self.corrections.error) else ""
        self.sheet.add(Heading(("Sweep ", Own(str(sweep), "id"), last)))
        self.sheet.table(f"sweep-{sweep}-{self.case.id}", columns, rows)

    def _correction(self, trial: int, k: int) -> list[Row]:
        """Return the rows of one correction: each pipe, the sums, and what is corrected."""
        loop, named = self.corrections.loops[k], loop_id(k)
        word = "path " if loop.path else "loop "
        rows = [self.sheet.group("Correction ", Own(str(trial), "id"), f": {word}", Own(named, "id"))]
        rows += [self._pipe(trial, self.pipes[pipe], sign) for pipe, sign in zip(loop.pipes, loop.signs, strict=True)]
        excess, rates = self._found("loops.excess", named, trial), self._found("loops.rate", named, trial)
        total = self._found("loops.loss", named, trial) if loop.path else excess
        rows.append(self._sum(total, rates))
        if loop.path and excess is not None:
            rows.append(self._fall(loop, excess))
        change = self._found("loops.correction", named, trial)
        if change is not None:
            number = self._number(change, "+", residual=True)
            said = (Strong(("Correction ", Letter("ΔQ"))),)
            cells: tuple[Parts, ...] = (said, ("",), (Strong((number,)),), ("",), ("",), ("",))
            rows.append(self.sheet.row(*cells, refs=[change.id], tone="proved"))
        return rows

    def _pipe(self, trial: int, named: str, sign: int) -> Row:
        spots = [
            self._found(f"pipes.{quantity}", named, trial)
            for quantity in ("flow", "head_loss", "loss_exponent", "loss_rate")
        ]
        held = [spot.id for spot in spots if spot is not None]
        turned = "+" if sign > 0 else "turned"
        figure: list[Parts] = [(self._number(spot, turned),) if spot else (NOTHING,) for spot in spots[:2]]
        exponent = (self.composer.number(spots[2], Format(decimals=4)),) if spots[2] else (NOTHING,)
        rate: Parts = (self._number(spots[3]),) if spots[3] else (NOTHING,)
        return self.sheet.row((name(named),), (_way(sign),), *figure, exponent, rate, refs=held)

    def _sum(self, total: Spot | None, rates: Spot | None) -> Row:
        held = [spot.id for spot in (total, rates) if spot is not None]
        lost: Parts = (self._number(total, "+", residual=True),) if total else (NOTHING,)
        rise: Parts = (self._number(rates),) if rates else (NOTHING,)
        return self.sheet.row(("Sum",), ("",), ("",), lost, ("",), rise, refs=held, tone="sum")

    def _fall(self, loop: Loop, excess: Spot) -> Row:
        """Return the row that takes the fall of level from the losses of a path."""
        unit = self.composer.display.coherent(HEAD)
        higher, lower = (
            derivation.operand(
                self.ledger.spot(f"reservoirs.{self.nodes[node]}.level@{self.case.id}"), unit, LEVEL_FIGURES
            )
            for node in (loop.nodes[0], loop.nodes[-1])
        )
        said: Parts = ("Less the fall, ", higher, " − ", lower)
        return self.sheet.row(
            said, ("",), ("",), (self._number(excess, "+", residual=True),), ("",), ("",), refs=[excess.id]
        )

    def _worked(self) -> None:
        """Add the first correction of a path and of a loop, line by line."""
        rows: list[Row] = []
        for path in (True, False):
            k = next((k for k, loop in enumerate(self.corrections.loops) if loop.path is path), None)
            if k is not None and self._found("loops.correction", loop_id(k), k + 1) is not None:
                rows += self._worked_lines(k)
        if rows:
            self.sheet.add(Heading(("Corrections worked",)))
            self.sheet.table(f"worked-correction-{self.case.id}", derivation.COLUMNS, rows)

    def _worked_lines(self, k: int) -> list[Row]:
        """Return the lines of the first correction of a loop: the rise of one loss, the sums, and the correction."""
        loop, trial = self.corrections.loops[k], k + 1
        pipe = self.pipes[loop.closing]
        of_pipe = [self._found(f"pipes.{quantity}", pipe, trial) for quantity in ("loss_exponent", "loss_rate")]
        of_loop = [
            self._found(f"loops.{quantity}", loop_id(k), trial) for quantity in ("loss", "excess", "rate", "correction")
        ]
        rows: list[Row] = []
        word = "path " if loop.path else "loop "
        for spots, said in ((of_pipe, (name(pipe), ": ")), (of_loop, (word, Own(loop_id(k), "id"), ": "))):
            for spot in spots:
                if spot is not None and not isinstance(spot.column.origin, Program):
                    rows += derivation.lines(self.sheet, spot, *said)
        return rows

    def _sweeps(self) -> None:
        """Add one row for each sweep: the correction of each loop where they are few, and the largest of all."""
        flow, head = self.composer.unit("flow"), self.composer.unit("head")
        loops = [loop_id(k) for k in range(len(self.corrections.loops))]
        shown = loops if len(loops) <= ABREAST else []
        columns: list[TableColumn] = [column("sweep", 14)]
        columns += [
            TableColumn(("loop ", Own(named, "id")), unit=flow, align="right", edge=k == 0, role="value")
            for k, named in enumerate(shown)
        ]
        columns += [
            figure_column("largest correction", flow, 28, edge=True),
            figure_column("largest excess", head, 28),
        ]
        rows = [
            self._row(int(row), shown)
            for largest in self.ledger.find("sweeps.largest_correction", self.case.id, METHOD)
            for row in largest.rows
        ]
        if not rows:
            return
        self.sheet.add(Heading(("Sweeps",)))
        self.sheet.table(f"sweeps-{self.case.id}", columns, rows)
        said = "An excess is what a correction found: head lost round the loop, of a path less the fall of level."
        self.sheet.add(Paragraph((said,), "small"))

    def _row(self, sweep: int, shown: list[str]) -> Row:
        at, case = (sweep - 1) * len(self.corrections.loops), self.case.id
        ids = [f"loops.{named}.correction@{case}#{at + k + 1}" for k, named in enumerate(shown)]
        ids.append(f"sweeps.{METHOD}.largest_correction@{case}#{sweep}")
        flow = replace(self.composer.form("flow", FULL, residual=True), decimals=None, significant=4)
        head = replace(self.composer.form("head", FINE, residual=True), decimals=None, significant=4)
        cells: list[Parts] = [(self.composer.number(one, flow),) for one in ids]
        ids.append(f"sweeps.{METHOD}.largest_excess@{case}#{sweep}")
        cells.append((self.composer.number(ids[-1], head),))
        return self.sheet.row((Own(str(sweep), "id"),), *cells, refs=ids)


def correction_figure(sheet: Sheet, case: CaseAccount, corrections: Corrections, limit_text: str) -> None:
    """Add the drawing of the largest correction and excess of each sweep."""
    composer, display = sheet.composer, sheet.composer.display
    found = [composer.ledger.find(f"sweeps.largest_{word}", case.id, METHOD) for word in ("correction", "excess")]
    if not corrections.loops or not all(found):
        return
    (change,), (excess,) = found
    limits = {test.unit: test.limit for test in reversed(case.solution.tests)}
    panels = (
        figures.Panel(
            "largest correction",
            display.unit("flow"),
            tuple(display.shown(value, "flow") for value in change.values.tolist()),
            tuple("" for _ in change.rows),
            display.shown(limits["m³/s"], "flow") if "m³/s" in limits else None,
            limit_text,
        ),
        figures.Panel(
            "largest excess",
            display.unit("head"),
            tuple(display.shown(value, "head") for value in excess.values.tolist()),
            tuple("" for _ in excess.rows),
        ),
    )
    drawing = figures.Convergence(
        f"Convergence of case {case.id}", "sweep", tuple(int(row) for row in change.rows), panels
    )
    caption: Parts = ("Largest correction and largest excess in each sweep of case ", name(case.id), ".")
    sheet.add(Figure(composer.figure_number(), caption, drawing))


def _lettered(words: str, letter: str, unit: str, width: float, *, edge: bool = False) -> TableColumn:
    """Return a column of figures, headed by words and the letter that its formulas have for it."""
    return TableColumn((words, Letter(letter)), unit=unit, align="right", width=width, edge=edge, role="value")


def _way(sign: int) -> str:
    return "along" if sign > 0 else "against"


def _decimals(largest: float, count: int) -> int:
    """Return the decimals that give the largest of some numbers so many figures."""
    if not (math.isfinite(largest) and largest > 0):
        return count
    return max(0, count - 1 - math.floor(math.log10(largest)))

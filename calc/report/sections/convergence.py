"""Convergence of a case: the full table of trials or iterations, the rules, the stopping tests, the drawings."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from calc.account import MOST_BRANCHES, CaseAccount
from calc.kinds import FLOW
from calc.ledger import Ledger, Spot
from calc.report import figures
from calc.report.composer import NOTHING, Composer, Sheet, column, figure_column, name
from calc.report.display import FINE, FULL
from calc.report.document import (
    Figure,
    Heading,
    Letter,
    Number,
    Own,
    Paragraph,
    Part,
    Parts,
    Row,
    Strong,
    TableColumn,
)
from calc.report.numbers import Format, raised
from calc.report.sections.correction import add_corrections, correction_figure
from calc.solve import Steps, Trials
from calc.solve.branch import Branches

ABREAST = 6
"""Branches whose flows fit beside the trial heads; more have tables of their own."""
MOST_HEADS = 5
SAMPLES = 121


def add_convergence(sheet: Sheet, case: CaseAccount) -> None:
    """Add the history of a case, converged or not."""
    trials, steps, corrections = case.solution.trials, case.solution.steps, case.solution.corrections
    if trials is not None:
        sheet.add(Heading(("Trials for the head at ", name(case.network.nodes[trials.junction]))))
        _trial_table(sheet, case, trials)
        _stopping(sheet, case)
        _trial_figures(sheet, case, trials)
    if steps is not None:
        sheet.add(Heading(("Iterations of Newton’s method",)))
        _step_table(sheet, case, steps)
        _stopping(sheet, case)
        _step_figure(sheet, case, steps)
    if corrections is not None:
        add_corrections(sheet, case, corrections)
        _stopping(sheet, case)
        limit = _limit_text(sheet.composer, case, Format(sheet.composer.unit("flow"), significant=1))
        correction_figure(sheet, case, corrections, limit)


def _trial_table(sheet: Sheet, case: CaseAccount, trials: Trials) -> None:
    junction = case.network.nodes[trials.junction]
    branches = [case.network.pipes.rows[k] for k in trials.branches.tolist()]
    shown = branches if len(branches) <= ABREAST else []
    flow, head = sheet.composer.unit("flow"), sheet.composer.unit("head")
    columns: list[TableColumn] = [
        column("trial", 10),
        figure_column("low end", head, 15, edge=True),
        figure_column("high end", head, 15),
        figure_column("head", head, 18, edge=True),
    ]
    for k, branch in enumerate(shown):
        columns.append(TableColumn((name(branch),), unit=flow, align="right", width=14, edge=k == 0, role="value"))
    columns += [figure_column("imbalance", flow, 20, edge=True), column("head chosen by", edge=True)]
    rows = [_trial_row(sheet, case, trials, t, junction, shown) for t in range(len(trials.head))]
    sheet.table(f"trials-{case.id}", columns, rows)
    said = "Flows are toward the junction; the imbalance is their sum less the withdrawal."
    if len(branches) > MOST_BRANCHES:
        said += " The flows of the branches are not printed, there being many."
    said += " At a low end water is to spare, at a high end it is lacking. Rules are stated under the method;"
    said += " the trials that a rule stands on are named in the order of its letters a, b, c."
    sheet.add(Paragraph((said,), "small"))
    if ABREAST < len(branches) <= MOST_BRANCHES:
        for first in range(0, len(branches), ABREAST):
            _flow_table(sheet, case, trials, branches[first : first + ABREAST])


def _flow_table(sheet: Sheet, case: CaseAccount, trials: Trials, branches: list[str]) -> None:
    """Add the flows toward the junction of some branches at every trial."""
    ledger, flow = sheet.composer.ledger, sheet.composer.unit("flow")
    columns = [column("trial", 10)]
    columns += [TableColumn((name(branch),), unit=flow, align="right", role="value") for branch in branches]
    rows = []
    for t in range(len(trials.head)):
        spots = [_trial(ledger, "pipes.flow_toward", case.id, branch, t) for branch in branches]
        cells: list[Parts] = [(sheet.composer.number(spot, sheet.composer.form("flow")),) for spot in spots]
        rows.append(sheet.row((Own(str(t + 1), "id"),), *cells, refs=[spot.id for spot in spots]))
    sheet.table(f"flows-{case.id}", columns, rows)


TRIAL = 2
"""Decimals more than in the tables, of trial heads; ends of a bracket are earlier ones, in full on their own rows."""


def _trial_row(  # noqa: PLR0917
    sheet: Sheet, case: CaseAccount, trials: Trials, t: int, junction: str, shown: list[str]
) -> Row:
    composer, ledger = sheet.composer, sheet.composer.ledger
    head = _trial(ledger, "junctions.head", case.id, junction, t)
    imbalance = _trial(ledger, "junctions.imbalance", case.id, junction, t)
    flow = composer.form("flow")
    cells: list[Parts] = [(Own(str(t + 1), "id"),)]
    for ends in (trials.low_end, trials.high_end):
        at = np.flatnonzero(trials.head[:t] == ends[t])
        spot = _trial(ledger, "junctions.head", case.id, junction, int(at[0])) if len(at) else None
        cells.append((composer.number(spot, composer.form("head")),) if spot else (NOTHING,))
    cells.append((composer.number(head, composer.form("head", TRIAL)),))
    refs = [head.id]
    for branch in shown:
        spot = _trial(ledger, "pipes.flow_toward", case.id, branch, t)
        cells.append((composer.number(spot, flow),))
        refs.append(spot.id)
    cells.append((composer.number(imbalance, Format(composer.unit("flow"), significant=6)),))
    cells.append(_chosen(sheet, case, trials, t))
    accepted = "sum" if t == trials.accepted else ""
    return sheet.row(*cells, refs=(*refs, imbalance.id), tone=accepted)


def _trial(ledger: Ledger, column_name: str, case: str, of: str, t: int) -> Spot:
    found = next(c for c in ledger.find(column_name, case, of) if c.case == case and str(t + 1) in c.index)
    return Spot(found, found.index[str(t + 1)])


def _chosen(sheet: Sheet, case: CaseAccount, trials: Trials, t: int) -> Parts:
    rule = trials.rule[t]
    accepted: Parts = ("; ", Strong(("accepted",))) if t == trials.accepted else ()
    if rule == "level":
        return ("level of ", name(case.network.nodes[int(trials.reservoir[t])]), *accepted)
    uses = ", ".join(str(use + 1) for use in trials.uses[t])
    said: Parts = (rule, *((" on ", Own(uses, "id")) if uses else ()))
    junction = case.network.nodes[trials.junction]
    steps = [c for c in sheet.composer.ledger.find("junctions.step", case.id, junction) if str(t + 1) in c.index]
    for step in steps:
        form = Format(sheet.composer.unit("head"), significant=3)
        number = sheet.composer.number(Spot(step, 0), form, with_unit=True)
        said = (*said, ", ", Letter("s"), " = ", number)
    return (*said, *accepted)


def _stopping(sheet: Sheet, case: CaseAccount) -> None:
    """State the stopping tests with what was measured."""
    composer = sheet.composer
    columns = (
        column("the search ends when", role="statement"),
        figure_column("measured", width=32, edge=True),
        figure_column("limit", width=32),
        column("", 14, role="unit"),
        column("", 18),
    )
    rows = []
    for k, test in enumerate(case.solution.tests):
        if not np.isfinite(test.value):
            continue
        spot = composer.ledger.spot(f"solver.test_{k + 1}@{case.id}")
        limit = composer.ledger.spot(f"solver.test_{k + 1}_limit@{case.id}")
        unit = {"m³/s": composer.unit("flow"), "m": composer.unit("head")}.get(test.unit, test.unit)
        form = Format(unit, significant=3)
        rows.append(
            sheet.row(
                (test.words,),
                (composer.number(spot, form),),
                (composer.number(limit, form),),
                (unit,),
                ("met",) if test.met else (Strong(("not met",), bar=True),),
                refs=(spot.id, limit.id),
            )
        )
    sheet.table("stopping", columns, rows)


def _texts(composer: Composer, spots: list[Spot | None], form: Format) -> tuple[str, ...]:
    return tuple(raised(composer.number(s, form).text) if s else "" for s in spots)


def _trial_figures(sheet: Sheet, case: CaseAccount, trials: Trials) -> None:
    composer, ledger = sheet.composer, sheet.composer.ledger
    junction = case.network.nodes[trials.junction]
    unit = composer.unit("flow")
    display = composer.display
    imbalance: list[Spot | None] = [
        _trial(ledger, "junctions.imbalance", case.id, junction, t) for t in range(len(trials.head))
    ]
    width = trials.high_end - trials.low_end
    tolerance = next((test.limit for test in case.solution.tests if test.unit == "m³/s"), None)
    limit = Format(unit, significant=1)
    panels = [
        figures.Panel(
            "imbalance",
            unit,
            tuple(display.shown(float(v), "flow") for v in trials.imbalance),
            _texts(composer, imbalance, Format(unit, significant=3)),
            None if tolerance is None else display.shown(tolerance, "flow"),
            "" if tolerance is None else _limit_text(composer, case, limit),
            signed=True,
        ),
        figures.Panel(
            "width of bracket",
            composer.unit("head"),
            tuple(None if np.isnan(w) else display.shown(float(w), "head") for w in width),
            tuple("" for _ in width),
        ),
    ]
    drawing = figures.Convergence(
        f"Convergence of case {case.id}", "trial", tuple(range(1, len(trials.head) + 1)), tuple(panels)
    )
    caption: Parts = (
        "Size of the imbalance, and width of the bracket, at each trial of case ",
        name(case.id),
        ".",
    )
    sheet.add(Figure(composer.figure_number(), caption, drawing))
    if case.solution.converged:
        sheet.add(_balance_figure(composer, case, trials))


def _limit_text(composer: Composer, case: CaseAccount, form: Format) -> str:
    tests = case.solution.tests
    k = next((k for k, test in enumerate(tests) if test.unit == "m³/s" and np.isfinite(test.value)), None)
    if k is None:
        return ""
    number = composer.number(f"solver.test_{k + 1}_limit@{case.id}", form)
    return f"{raised(number.text)} {form.unit}"


def _balance_figure(composer: Composer, case: CaseAccount, trials: Trials) -> Figure:
    network, display = case.network, composer.display
    junction = network.nodes[trials.junction]
    levels = network.level[~np.isnan(network.level)]
    accepted = float(case.solution.head[trials.junction])
    low, high = min(float(levels.min()), accepted), max(float(levels.max()), accepted)
    margin = 0.06 * max(high - low, 1.0)
    heads = np.unique(np.concatenate([np.linspace(low - margin, high + margin, SAMPLES), levels]))
    branches = Branches(network)
    ends = np.concatenate([network.start[:, None], network.end[:, None]], axis=1)
    curves = []
    for head in heads:
        at = network.level.copy()
        at[trials.junction] = head
        flow = branches.flows(at[ends[:, 0]] - at[ends[:, 1]])
        toward = np.where(network.end == trials.junction, flow, -flow)
        curves.append(np.where(network.open, toward, 0.0)[trials.branches])
    table = np.array(curves)
    sums = table.sum(axis=1) - float(network.withdrawal[trials.junction])
    held = tuple(
        figures.BalanceBranch(
            network.pipes.rows[k],
            tuple(display.shown(flow, "flow") for flow in table[:, j].tolist()),
            display.shown(float(trials.flows[trials.accepted, j]), "flow"),
        )
        for j, k in enumerate(trials.branches.tolist())
    )
    points = tuple(
        figures.Trial(
            t + 1,
            display.shown(float(trials.head[t]), "head"),
            display.shown(float(trials.imbalance[t]), "flow"),
            _known(display.shown(trials.low_end[t], "head")),
            _known(display.shown(trials.high_end[t], "head")),
        )
        for t in range(len(trials.head))
    )
    number = composer.number(f"junctions.{junction}.head@{case.id}")
    drawing = figures.Balance(
        f"Balance at {junction}, case {case.id}",
        junction,
        tuple(display.shown(head, "head") for head in heads.tolist()),
        held,
        tuple(display.shown(flow, "flow") for flow in sums.tolist()),
        points,
        display.shown(accepted, "head"),
        f"{number.text} {number.form.unit}",
        composer.unit("flow"),
        composer.unit("head"),
        composer.account.project.header.text("datum"),
    )
    caption: Parts = (
        "Flow toward ",
        name(junction),
        " in each branch against trial head, and the sum less withdrawal, case ",
        name(case.id),
        ". The trials are numbered; the diamond is the head accepted.",
    )
    return Figure(composer.figure_number(), caption, drawing)


def _known(value: float) -> float | None:
    return None if np.isnan(value) else float(value)


def _step_table(sheet: Sheet, case: CaseAccount, steps: Steps) -> None:
    composer, network = sheet.composer, case.network
    flow, head = composer.unit("flow"), composer.unit("head")
    junctions = [network.nodes[k] for k in network.unknown.tolist()]
    shown = junctions if steps.head is not None and len(junctions) <= MOST_HEADS else []
    columns: list[TableColumn] = [column("iteration", 13)]
    columns += [
        TableColumn(("head ", name(junction)), unit=head, align="right", width=19, edge=k == 0, role="value")
        for k, junction in enumerate(shown)
    ]
    columns += [
        figure_column("largest imbalance", flow, 19, edge=True),
        column("at", None if not shown else 24),
        figure_column("largest closing error", head, 19, edge=True),
        column("at", None if not shown else 24),
        figure_column("largest change", flow, 17, edge=True),
    ]
    rows = [_step_row(sheet, case, steps, k, shown) for k in range(len(steps.iteration))]
    sheet.table(f"steps-{case.id}", columns, rows)
    sheet.add(Paragraph(("Norms are the largest of all junctions and branches; the first row is the start.",), "small"))


def _step_row(sheet: Sheet, case: CaseAccount, steps: Steps, k: int, shown: list[str]) -> Row:
    composer, ledger = sheet.composer, sheet.composer.ledger
    label = str(int(steps.iteration[k]))
    refs: list[str] = []

    def found(column_name: str, of: str) -> Number | None:
        columns = [c for c in ledger.find(column_name, case.id, of) if c.case == case.id and label in c.index]
        if not columns:
            return None
        spot = Spot(columns[0], columns[0].index[label])
        refs.append(spot.id)
        if column_name == "junctions.head":
            return composer.number(spot, composer.form("head", TRIAL))
        flowing = spot.column.kind is FLOW
        fine = composer.form("flow" if flowing else "head", FULL if flowing else FINE, residual=True)
        return composer.number(spot, replace(fine, decimals=None, significant=4))

    def told(number: Number | None) -> Parts:
        return (number,) if number else (NOTHING,)

    def at(names: tuple[str, ...], index: int) -> Parts:
        held: Part = name(names[index]) if index >= 0 else NOTHING
        return (held,)

    cells: list[Parts] = [(Own(label, "id"),)]
    cells += [told(found("junctions.head", junction)) for junction in shown]
    cells += [told(found("steps.imbalance", "newton")), at(case.network.nodes, int(steps.node[k]))]
    cells += [told(found("steps.energy_error", "newton")), at(case.network.pipes.rows, int(steps.branch[k]))]
    cells.append(told(found("steps.flow_change", "newton")))
    return sheet.row(*cells, refs=refs)


def _step_figure(sheet: Sheet, case: CaseAccount, steps: Steps) -> None:
    composer = sheet.composer
    unit, display = composer.unit("flow"), composer.display
    limits = {test.unit: test.limit for test in case.solution.tests}
    panels = (
        figures.Panel(
            "largest imbalance",
            unit,
            tuple(_sized(display.shown(v, "flow")) for v in steps.imbalance),
            tuple("" for _ in steps.imbalance),
            display.shown(limits["m³/s"], "flow") if "m³/s" in limits else None,
            _limit_text(composer, case, Format(unit, significant=1)) if "m³/s" in limits else "",
        ),
        figures.Panel(
            "largest closing error",
            composer.unit("head"),
            tuple(_sized(display.shown(v, "head")) for v in steps.energy_error),
            tuple("" for _ in steps.energy_error),
        ),
    )
    drawing = figures.Convergence(
        f"Convergence of case {case.id}", "iteration", tuple(int(k) for k in steps.iteration), panels
    )
    caption: Parts = (
        "Largest imbalance and largest closing error at each iteration of case ",
        name(case.id),
        ".",
    )
    sheet.add(Figure(composer.figure_number(), caption, drawing))


def _sized(value: float) -> float | None:
    return float(abs(value)) if np.isfinite(value) else None

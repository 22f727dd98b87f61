"""Checks of a case: continuity at junctions, energy between reservoirs, the second opinion."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal

import numpy as np

from calc.account import CaseAccount, Path
from calc.kinds import FLOW
from calc.ledger import Combined, Program, Spot, View
from calc.ledger.accountant import Accountant
from calc.report.composer import Composer, Sheet, cited, column, figure_column, name
from calc.report.display import FINE, FULL
from calc.report.document import Cite, Heading, Number, Paragraph, Parts, Row, Soft, Strong, TableColumn
from calc.report.numbers import Format, read_back, written
from calc.report.selection import MOST_PIPES, shown_junctions

FROM = TableColumn(("from",), width=22, edge=True, role="from")


def add_balances(sheet: Sheet, case: CaseAccount) -> None:
    """Add the three ways in which the books of a case are closed."""
    _continuity(sheet, case)
    _energy(sheet, case)
    _opinion(sheet, case)


def _continuity(sheet: Sheet, case: CaseAccount) -> None:
    composer, ledger = sheet.composer, sheet.composer.ledger
    held = [c for c in ledger.find("junctions.imbalance", case.id) if c.case == case.id]
    if not held:
        return
    sheet.add(Heading(("Continuity at junctions",)))
    columns = (
        column("toward the junction", role="statement"),
        figure_column("in full", composer.unit("flow"), 34, edge=True),
        figure_column("as printed", composer.unit("flow"), 28),
        FROM,
    )
    rows: list[Row] = []
    imbalance = held[0]
    shown = set(shown_junctions(composer.account, case))
    for k, junction in enumerate(imbalance.rows):
        if junction not in shown:
            continue
        rows.append(sheet.group("Junction ", name(junction)))
        rows += _junction(sheet, case, Spot(imbalance, k), junction)
    sheet.table(f"continuity-{case.id}", columns, rows)
    said = "As printed: each flow rounded as in the tables, and the sum of the rounded flows."
    sheet.add(Paragraph((said,), "small"))


def _junction(sheet: Sheet, case: CaseAccount, imbalance: Spot, junction: str) -> list[Row]:
    composer = sheet.composer
    origin = imbalance.column.origin
    if not isinstance(origin, Combined):
        return []
    rows, texts, ids = [], [], []
    for k, into in enumerate(origin.into.tolist()):
        found = origin.terms.spot(k)
        if into != imbalance.row or found is None:
            continue
        spot = Spot(*found)
        sign = "turned" if origin.signs[k] < 0 else "+"
        full = composer.number(spot, composer.form("flow", FULL, sign))
        printed = composer.number(spot, composer.form("flow", sign=sign))
        rows.append(sheet.row(_said(case, spot, origin.signs[k]), (full,), (printed,), (Cite((spot.id,)),)))
        texts.append(printed.text)
        ids.append(spot.column.rows[spot.row] if not spot.column.of else spot.column.of)
    total = _printed_sum(composer, case, junction, ids, texts)
    full = composer.number(imbalance, composer.form("flow", FULL, residual=True))
    rows.append(
        sheet.row(
            (Strong(("Imbalance",)),),
            (Strong((full,)),),
            (total,),
            (cited(composer.ledger, [imbalance]),),
            refs=(imbalance.id,),
            tone="proved",
        )
    )
    return rows


def _said(case: CaseAccount, spot: Spot, sign: float) -> Parts:
    row = spot.column.rows[spot.row]
    if spot.column.group == "junctions":
        return ("withdrawal" if spot.value >= 0 else "inflow",)
    toward = sign * spot.value
    words = ", from it" if toward < 0 else ", to it" if toward > 0 else ", at rest"
    if not case.network.open[case.network.pipes.rows.index(row)]:
        words = ", shut"
    return (name(row), Soft((words,)))


def _printed_sum(composer: Composer, case: CaseAccount, junction: str, ids: list[str], texts: list[str]) -> Number:
    """Enter the rounded flows as printed, and their sum, so that the printed column adds up on paper."""
    ledger, unit = composer.ledger, composer.unit("flow")
    form = Format(unit, decimals=_decimals(texts))
    standing = [c for c in ledger.find("printed.imbalance", case.id) if c.case == case.id and junction in c.index]
    if standing:
        spot = Spot(standing[0], standing[0].index[junction])
        return Number(spot.id, form, written(spot.value, FLOW, form))
    scale = Decimal(repr(composer.display.shown(1.0, "flow")))
    values = [float(Decimal(repr(read_back(text))) / scale) for text in texts]
    said = Program("a flow toward the junction as printed, rounded")
    rows = [f"{junction}/{row}" for row in ids]
    held = ledger.enter("printed.flow_toward", FLOW, rows, values, said, case=case.id)
    total = Accountant(ledger, case.id).combine(
        "printed.imbalance",
        "sum",
        View.whole(held),
        np.zeros(len(rows), dtype=np.int64),
        [junction],
        words="sum of the flows as printed",
    )
    return Number(total.id(0), form, written(float(total.values[0]), FLOW, form))


def _decimals(texts: list[str]) -> int:
    return max((len(text.partition(".")[2]) for text in texts), default=2)


def _energy(sheet: Sheet, case: CaseAccount) -> None:
    if not case.paths:
        return
    sheet.add(Heading(("Energy between reservoirs",)))
    unit = sheet.composer.unit("head")
    columns = (
        column("along the path", role="statement"),
        figure_column("friction", unit, 26, edge=True),
        figure_column("fittings", unit, 26),
        figure_column("head", unit, 26, edge=True),
        FROM,
    )
    rows: list[Row] = []
    for path in case.paths[:MOST_PIPES]:
        rows += _path(sheet, case, path)
    sheet.table(f"energy-{case.id}", columns, rows)
    said = "Losses are reckoned in the direction of the walk; against the flow they are negative."
    sheet.add(Paragraph((said,), "small"))


ADDED = 1
"""Decimals more than in the tables, of heads and losses that are added up."""


def _node(composer: Composer, case: str, node: str) -> Spot:
    group, quantity = ("reservoirs", "level") if node in composer.account.project.reservoirs else ("junctions", "head")
    return composer.ledger.spot(f"{group}.{node}.{quantity}@{case}")


def _path(sheet: Sheet, case: CaseAccount, path: Path) -> list[Row]:
    composer, ledger = sheet.composer, sheet.composer.ledger
    rows = [sheet.group("From ", name(path.start), " to ", name(path.end))]
    start, form = _node(composer, case.id, path.start), composer.form("head", ADDED)
    rows.append(sheet.row((name(path.start),), ("",), ("",), (composer.number(start, form),), (Cite((start.id,)),)))
    for pipe, node, sign in zip(path.pipes, path.nodes[1:], path.signs, strict=True):
        losses = []
        for quantity in ("friction_loss", "fitting_loss"):
            spot = ledger.spot(f"pipes.{pipe}.{quantity}@{case.id}")
            losses.append((composer.number(spot, replace(form, sign="turned" if sign < 0 else "+")), spot.id))
        head = _node(composer, case.id, node)
        rows.append(
            sheet.row(
                (name(node), Soft((", less the loss in ", name(pipe)))),
                (losses[0][0],),
                (losses[1][0],),
                (composer.number(head, form),),
                (Cite((losses[0][1], losses[1][1], head.id)),),
            )
        )
    error = ledger.spot(f"paths.{path.id}.closing_error@{case.id}")
    rows.append(
        sheet.row(
            (Strong(("Closing error",)), ", difference of levels less all losses"),
            ("",),
            ("",),
            (Strong((composer.number(error),)),),
            (cited(ledger, [error]),),
            refs=(error.id,),
            tone="proved",
        )
    )
    return rows


def _opinion(sheet: Sheet, case: CaseAccount) -> None:
    agreement = case.agreement
    if agreement is None:
        return
    composer = sheet.composer
    sheet.add(Heading(("Second opinion, ", agreement.method)))
    if agreement.flow_difference is None or agreement.head_difference is None:
        sheet.add(Paragraph((Strong(("The second opinion does not agree: ", agreement.reason, "."), bar=True),)))
        return
    columns = (
        column("compared", role="statement"),
        figure_column("largest difference", width=34, edge=True),
        figure_column("allowed", width=26),
        column("", 12, role="unit"),
        column("", 18),
        FROM,
    )
    rows = []
    flow, head = ("largest imbalance", "largest closing error") if agreement.evaluated else ("flows", "heads")
    for words, spot, allowed in (
        (flow, agreement.flow_difference, agreement.flow_allowed),
        (head, agreement.head_difference, agreement.head_allowed),
    ):
        if allowed is None:
            continue
        within = spot.value <= allowed.value
        flowing = spot.column.kind is FLOW
        residual = composer.form("flow" if flowing else "head", FULL if flowing else FINE, residual=True)
        unit = residual.unit
        verdict: Parts = ("agrees",) if within else (Strong(("differs",), bar=True),)
        rows.append(
            sheet.row(
                (words,),
                (composer.number(spot, residual),),
                (composer.number(allowed, replace(residual, bound=None)),),
                (unit,),
                verdict,
                (cited(composer.ledger, [allowed]),),
                refs=(spot.id, allowed.id),
            )
        )
    sheet.table(f"second-{case.id}", columns, rows)
    _opinions(sheet, case)


def _opinions(sheet: Sheet, case: CaseAccount) -> None:
    composer, ledger = sheet.composer, sheet.composer.ledger
    names = case.network.pipes.rows
    if len(names) > MOST_PIPES or not [c for c in ledger.find("pipes.second_flow", case.id) if c.case == case.id]:
        return
    unit = composer.unit("flow")
    columns = (
        column("pipe", role="statement"),
        figure_column("flow in this ledger", unit, 36, edge=True),
        figure_column("second opinion", unit, 36),
        figure_column("difference", unit, 36),
    )
    rows = []
    for pipe in names:
        spots = [ledger.spot(f"pipes.{pipe}.{q}@{case.id}") for q in ("flow", "second_flow", "second_flow_difference")]
        form = composer.form("flow", FULL)
        cells: list[Parts] = [(composer.number(spot, form),) for spot in spots[:2]]
        cells.append((composer.number(spots[2], composer.form("flow", FULL, residual=True)),))
        rows.append(sheet.row((name(pipe),), *cells, refs=[spot.id for spot in spots[1:]]))
    sheet.table(f"opinions-{case.id}", columns, rows)

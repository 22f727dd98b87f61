"""Loop correction on the page: every figure of its tables repeated from the printed figures beside it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import NamedTuple

import numpy as np
import pytest
from accounts import written
from pages import Figures, figure_of, plain, section, table, tables
from works import RING, Work, given_up, work

from calc import pipeline
from calc.account import keep_account, open_books, results
from calc.report.document import Figure, Row, Table
from calc.report.figures import Convergence

RINGS = pytest.mark.parametrize("name", ["ring", "ring-us"])
PIPE, WALKED, FLOW, LOSS, EXPONENT, RISE = range(6)


class Block(NamedTuple):
    """One correction as printed: its pipes, the rows of sums, and the correction."""

    head: str
    pipes: list[Row]
    sums: list[Row]
    correction: Row


def blocks(held: Table) -> Iterator[Block]:
    head, rows = "", list[Row]()
    for row in held.rows:
        if row.tone == "group":
            head, rows = plain(row.cells[0]), []
            continue
        rows.append(row)
        if row.tone == "proved":
            pipes = [one for one in rows if plain(one.cells[WALKED])]
            yield Block(head, pipes, [one for one in rows[:-1] if one not in pipes], row)


def printed(name: str) -> Iterator[Block]:
    for held in tables(work(name).document, "sweep-"):
        yield from blocks(held)


def read(row: Row, place: int) -> Figures:
    number = figure_of(row.cells[place])
    assert number is not None
    return Figures.read(number.text)


@RINGS
def test_every_sweep_named_is_whole(name: str) -> None:
    for case in work(name).account.cases.values():
        held = case.solution.corrections
        assert held is not None
        for sweep in sorted({1, 2, case.solution.iterations}):
            found = list(blocks(table(work(name).document, f"sweep-{sweep}-{case.id}")))
            assert len(found) == len(held.loops)
            for k, block in enumerate(found):
                assert block.head.endswith(f" {k + 1}")
                assert [plain(row.cells[PIPE]) for row in block.pipes] == [
                    case.network.pipes.rows[pipe] for pipe in held.loops[k].pipes
                ]


@RINGS
def test_each_rise_is_n_h_over_q(name: str) -> None:
    repeated = 0
    for block in printed(name):
        for row in block.pipes:
            flow, loss, exponent, rise = (read(row, place) for place in (FLOW, LOSS, EXPONENT, RISE))
            by_hand = exponent.value * loss.value / flow.value
            slack = by_hand * (flow.last / abs(flow.value) + loss.last / abs(loss.value) + exponent.last) / 2
            assert abs(by_hand - rise.value) <= slack * 1.01 + rise.last, row.address
            repeated += 1
    assert repeated > 20


@RINGS
def test_sums_and_falls_add_up(name: str) -> None:
    for block in printed(name):
        total, rises = read(block.sums[0], LOSS), read(block.sums[0], RISE)
        losses = [read(row, LOSS) for row in block.pipes]
        left = sum(loss.value for loss in losses)
        room = sum(loss.last / 2 for loss in losses)
        if not total.below:
            assert abs(left - total.value) <= room + total.last, block.head
        slack = sum(read(row, RISE).last / 2 for row in block.pipes) + rises.last
        assert abs(sum(read(row, RISE).value for row in block.pipes) - rises.value) <= slack
        if block.sums[1:]:
            levels = [part for part in block.sums[1].cells[PIPE] if hasattr(part, "form")]
            higher, lower = (Figures.read(part.text).value for part in levels)
            assert higher >= lower
            excess = read(block.sums[1], LOSS)
            by_hand = total.value - (higher - lower)
            if excess.below:
                assert abs(by_hand) <= excess.value + total.last
            else:
                assert abs(by_hand - excess.value) <= 2 * excess.last, block.head
        assert (len(block.sums) > 1) == (": path " in block.head)


@RINGS
def test_each_correction_is_the_excess_over_the_sum_of_the_rises(name: str) -> None:
    repeated = 0
    for block in printed(name):
        excess, rises, change = read(block.sums[-1], LOSS), read(block.sums[0], RISE), read(block.correction, FLOW)
        if excess.below or change.below:
            continue
        by_hand = -excess.value / rises.value
        assert abs(by_hand - change.value) <= excess.last / rises.value + change.last, block.head
        repeated += 1
    assert repeated >= 6


@RINGS
def test_flows_are_those_before_and_the_corrections_since(name: str) -> None:
    for case in work(name).account.cases.values():
        begun = table(work(name).document, f"start-{case.id}").rows
        flow = {plain(row.cells[0]): read(row, 1).value for row in begun}
        last = max(read(row, 1).last for row in begun)
        steps = 0
        for sweep in (1, 2):
            for block in blocks(table(work(name).document, f"sweep-{sweep}-{case.id}")):
                change = read(block.correction, FLOW).value
                steps += 1
                for row in block.pipes:
                    sign = {"along": 1, "against": -1}[plain(row.cells[WALKED])]
                    pipe = plain(row.cells[PIPE])
                    assert abs(flow[pipe] - sign * read(row, FLOW).value) <= steps * last, row.address
                    flow[pipe] += sign * change


@RINGS
def test_a_correction_of_a_path_and_one_of_a_loop_are_worked(name: str) -> None:
    held = table(work(name).document, "worked-correction-base")
    said = [plain(row.cells[0]) for row in held.rows]
    for words in (
        "path 1: Correction of the flows",
        "loop 3: Correction of the flows",
        "path 1: Head lost along a path",
    ):
        assert any(text.startswith(words) for text in said), words


@RINGS
def test_every_sweep_has_its_row_and_the_drawing_its_points(name: str) -> None:
    account, document = work(name).account, work(name).document
    for case in account.cases.values():
        assert len(table(document, f"sweeps-{case.id}").rows) == case.solution.iterations == len(case.history) - 1
        drawn = [block.drawing for block in section(document, f"case-{case.id}").blocks if isinstance(block, Figure)]
        (curve,) = (one for one in drawn if isinstance(one, Convergence))
        assert len(curve.numbers) == case.solution.iterations


@pytest.fixture(scope="module")
def given_over(tmp_path_factory: pytest.TempPathFactory) -> Work:
    """Return the ring whose base case is given up after two sweeps."""
    return given_up(written(Path(tmp_path_factory.mktemp("ring")), RING), "base", 2)


def test_what_is_given_up_prints_its_sweeps_and_no_results(given_over: Work) -> None:
    held = section(given_over.document, "case-base")
    keys = [block.key.partition("-")[0] for block in held.blocks if isinstance(block, Table)]
    assert keys == ["loops", "start", "sweep", "sweep", "worked", "sweeps", "stopping"]
    stopping = next(block for block in held.blocks if isinstance(block, Table) and block.key == "stopping")
    assert any("not met" in plain(row.cells[-1]) for row in stopping.rows)
    assert len(table(given_over.document, "sweeps-base").rows) == 2


def test_sweeps_are_printed_as_far_as_numbers_are_finite(tmp_path: Path) -> None:
    project = pipeline.read(written(tmp_path, RING))
    ledger = open_books(project)
    solved = pipeline.solve_cases(project, ledger)
    network, found = solved["base"]
    held = found.corrections
    assert held is not None
    at = np.arange(len(held.change))
    broken = replace(
        held,
        change=np.where(at >= 4, np.nan, held.change),
        flow=np.where(at[:, None] > 4, np.nan, held.flow),
        error=np.where(np.arange(len(held.error)) >= 1, np.nan, held.error),
    )
    solved["base"] = (
        network,
        replace(found, converged=False, reason="no longer finite", corrections=broken, flow=np.full(8, np.nan)),
    )
    account = keep_account(project, ledger, solved)
    document = pipeline.document(account, "checking")
    assert len(table(document, "sweeps-base").rows) == 1
    assert len(list(blocks(table(document, "sweep-1-base")))) == len(held.loops)
    assert not list(tables(document, "sweep-2-base"))
    told = results(account)["cases"]["base"]["history"]
    assert told[1]["largest_correction"] is not None
    assert told[-1]["largest_correction"] is None

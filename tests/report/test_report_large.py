"""Works too large to print whole: the first page tells reservoirs, tables tell what governs, nothing dangles."""

from __future__ import annotations

import csv
import hashlib
import io
from pathlib import Path

import pytest
from accounts import accounted
from pages import figure_of, numbers, parts_within, plain, row_of, section, table, tables, texts_of
from works import Work, work

from calc import pipeline
from calc.account import results as pipeline_results
from calc.report.document import Cite, Formula
from calc.report.numbers import written
from calc.report.selection import MOST_PIPES

PONDS = 9


def text(rungs: int) -> str:
    """Return a ladder of junctions with a reservoir at each of its first rungs."""
    lines = ["reservoirs:"]
    lines += [f"  pond-{k}: {{level: {60 + 3 * k} m}}" for k in range(PONDS)]
    lines += ["junctions:"]
    lines += [f"  rung-{k}: {{elevation: 20 m, withdrawal: {k % 4} L/s}}" for k in range(rungs)]
    lines += ["pipes:"]
    size = "length: 240 m, bore: 250 mm, roughness: 0.2 mm"
    lines += [f"  pond-main-{k}: {{from: pond-{k}, to: rung-{k}, {size}}}" for k in range(PONDS)]
    lines += [f"  left-{k}: {{from: rung-{k}, to: rung-{k + 1}, {size}}}" for k in range(rungs - 1)]
    lines += [f"  right-{k}: {{from: rung-{k}, to: rung-{k + 2}, {size}}}" for k in range(rungs - 2)]
    lines += ["cases:"]
    lines += [f"  low-{k}: {{with: {{reservoirs.pond-{k}.level: 55 m}}}}" for k in range(5)]
    lines += ["criteria: {velocity-max: {limit: 1.9 m/s}, pressure-min: {limit: 12 m}}"]
    return "\n".join(lines)


@pytest.fixture(scope="module")
def large(tmp_path_factory: pytest.TempPathFactory) -> Work:
    folder: Path = tmp_path_factory.mktemp("large") / "ladder"
    account = accounted(folder, text(MOST_PIPES))
    return Work("large", account, pipeline.document(account, "checking"))


def test_the_first_page_tells_what_each_reservoir_gives(large: Work) -> None:
    held = table(large.document, "flows")
    said = " ".join(plain(parts) for parts in texts_of(section(large.document, "decision")))
    assert "Further cases stand in their own sections." in said
    for reservoir in large.account.project.reservoirs:
        row = row_of(held, reservoir)
        for k, case in enumerate([*large.account.cases][:4]):
            outflow = large.account.ledger.spot(f"reservoirs.{reservoir}.outflow@{case}").value
            assert plain(row.cells[1 + 2 * k]) == ("gives" if outflow > 0 else "takes" if outflow < 0 else "at rest")
            assert plain(row.cells[2 + 2 * k]) == f"{abs(outflow) * 1000:.1f}"


def test_the_pipes_that_lose_most_are_printed(large: Work) -> None:
    for case in large.account.cases.values():
        assert case.columns is not None
        losses = case.columns.results.head_loss
        order = sorted(zip(abs(losses.values), losses.rows, strict=True), reverse=True)
        printed = [plain(row.cells[0]) for row in table(large.document, f"losses-{case.id}").rows]
        assert len(printed) == MOST_PIPES
        least = order[MOST_PIPES - 1][0]
        assert {row for loss, row in order if loss > least} <= set(printed)


def test_numbers_and_citations_still_lead_somewhere(large: Work) -> None:
    ledger, document = large.account.ledger, large.document
    for number in numbers(document):
        spot = ledger.spot(number.ref)
        assert number.text == written(spot.value, spot.column.kind, number.form)
    known = {row.address for held in tables(document) for row in held.rows}
    assert set(document.addresses.values()) <= known
    for held in tables(document, "derivation-"):
        for row in held.rows:
            assert any(isinstance(part, Formula) for part in parts_within(row.cells[0])) or figure_of(row.cells[1])
            cite = next(part for part in parts_within(row.cells[3]) if isinstance(part, Cite))
            assert document.cited(cite) or not cite.refs


def test_the_governing_verdicts_are_printed(large: Work) -> None:
    for one in large.account.verdicts:
        rows = table(large.document, f"verdicts-{one.id}").rows
        margins = sorted(verdict.margin.value for verdict in one.verdicts)[: len(rows)]
        printed = [figure_of(row.cells[5]) for row in rows]
        assert [large.account.ledger.spot(number.ref).value for number in printed if number] == margins


def test_every_pipe_stands_in_a_file_that_the_page_cites_by_its_digest(large: Work) -> None:
    results = pipeline_results(large.account)
    for case in large.account.cases:
        path = f"results/{case}-pipes.csv"
        content = large.document.files[path]
        said = " ".join(plain(parts) for parts in texts_of(section(large.document, f"case-{case}")))
        assert f"All pipes stand in SI in {path} of this package, digest {hashlib.sha256(content).hexdigest()}." in said
        rows = list(csv.DictReader(io.StringIO(content.decode())))
        branches = results["cases"][case]["branches"]
        assert [row["id"] for row in rows] == list(branches)
        for row in rows:
            told = branches[row["id"]]
            assert (row["from"], row["to"], row["state"]) == (told["from"], told["to"], told["state"])
            assert float(row["flow [m³/s]"]) == told["flow"]
            assert float(row["head_loss [m]"]) == told["head_loss"]


def test_works_that_are_printed_whole_have_no_such_file() -> None:
    assert work("demo").document.files == {}

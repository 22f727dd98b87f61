"""The table that sets empirical laws beside Darcy–Weisbach."""

from __future__ import annotations

import numpy as np
import pytest
from accounts import accounted
from pages import plain, table, tables

from calc import pipeline
from calc.report.document import Document, Table

WORKS = """
site: {gravity: 9.81 m/s²}
reservoirs: {mere: {level: 80 m}, pool: {level: 62 m}, pond: {level: 62 m}}
junctions: {cross: {elevation: 20 m}}
pipes:
  main: {from: mere, to: cross, length: 1500 m, bore: 300 mm, law: hazen-williams, hazen_williams_c: 130}
  tail: {from: pool, to: cross, length: 900 m, bore: 250 mm, law: manning, manning_n: 0.012}
  side: {from: cross, to: pool, length: 900 m, bore: 250 mm, roughness: 0.1 mm}
  even: {from: pool, to: pond, length: 90 m, bore: 150 mm, law: hazen-williams, hazen_williams_c: 95}
cases:
  shut: {with: {pipes.main.open: false}}
  rough: {with: {"pipes.*.law": haaland, "pipes.*.roughness": 1 mm}}
"""


@pytest.fixture(scope="module")
def document(tmp_path_factory: pytest.TempPathFactory) -> Document:
    return pipeline.document(accounted(tmp_path_factory.mktemp("works"), WORKS), "checking")


def rows(held: Table) -> dict[str, list[str]]:
    return {plain(row.cells[0]): [plain(cell) for cell in row.cells[1:]] for row in held.rows}


def test_it_lists_the_pipes_that_follow_such_a_law(document: Document) -> None:
    told = rows(table(document, "empirical-base"))
    assert list(told) == ["main", "tail", "even"]
    assert told["main"][:2] == ["Hazen–Williams C", "130.0"]
    assert told["tail"][:2] == ["Manning n", "0.0120"]


def test_the_factor_printed_gives_the_loss_printed(document: Document) -> None:
    # h = f (L/D) V²/2g by hand; the figures printed bear about a thousandth
    for name, length, bore in (("main", 1500.0, 0.3), ("tail", 900.0, 0.25)):
        velocity, _, loss, factor = (
            float(text.replace("−", "-").replace("\u202f", "").replace("\u2009", "").replace(" ", ""))
            for text in rows(table(document, "empirical-base"))[name][2:]
        )
        again = factor * length / bore * velocity * abs(velocity) / (2 * 9.81)
        assert again == pytest.approx(loss, rel=2e-3)
        assert np.sign(velocity) == np.sign(loss)


def test_at_rest_there_is_no_such_factor(document: Document) -> None:
    assert rows(table(document, "empirical-base"))["even"][-1] == "–"


def test_shut_pipes_are_left_out_and_so_is_an_empty_table(document: Document) -> None:
    assert list(rows(table(document, "empirical-shut"))) == ["tail", "even"]
    assert [held.key for held in tables(document, "empirical-")] == ["empirical-base", "empirical-shut"]


def test_darcy_f_is_a_dash_in_the_table_of_losses(document: Document) -> None:
    told = rows(table(document, "losses-base"))
    assert {name: cells[2] == "–" for name, cells in told.items()} == {
        "main": True,
        "tail": True,
        "side": False,
        "even": True,
    }

"""Factors of friction in the table of losses: Darcy f where a law has one, that of the same loss where it has none."""

from __future__ import annotations

import numpy as np
import pytest
from accounts import accounted
from pages import plain, table

from calc import pipeline
from calc.report.document import Document, Masthead, Paragraph, Table

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


OWN, SAME = "Darcy f", "Darcy f, same loss"


def texts(document: Document) -> list[str]:
    return [plain(block.parts) for one in document.sections for block in one.blocks if isinstance(block, Paragraph)]


@pytest.fixture(scope="module")
def document(tmp_path_factory: pytest.TempPathFactory) -> Document:
    return pipeline.document(accounted(tmp_path_factory.mktemp("works"), WORKS), "checking")


def rows(held: Table) -> dict[str, dict[str, str]]:
    heads = [plain(column.head) for column in held.columns]
    return {plain(row.cells[0]): dict(zip(heads, map(plain, row.cells), strict=True)) for row in held.rows}


def read(text: str) -> float:
    return float(text.replace("−", "-").replace("\u202f", ""))


def test_the_factor_printed_gives_the_loss_printed(document: Document) -> None:
    # h = f (L/D) V²/2g by hand; the figures printed bear about a thousandth
    for name, length, bore in (("main", 1500.0, 0.3), ("tail", 900.0, 0.25)):
        told = rows(table(document, "losses-base"))[name]
        velocity, loss, factor = (read(told[head]) for head in ("velocity", "friction", SAME))
        again = factor * length / bore * velocity * abs(velocity) / (2 * 9.81)
        assert again == pytest.approx(loss, rel=2e-3)
        assert np.sign(velocity) == np.sign(loss)


def test_at_rest_and_shut_there_is_no_such_factor(document: Document) -> None:
    assert rows(table(document, "losses-base"))["even"][SAME] == "–"
    assert rows(table(document, "losses-shut"))["main"][SAME] == "–"


def test_a_law_has_one_factor_or_the_other(document: Document) -> None:
    told = rows(table(document, "losses-base"))
    assert {name: cells[OWN] == "–" for name, cells in told.items()} == dict.fromkeys(told, True) | {"side": False}
    assert {name for name, cells in told.items() if cells[SAME] != "–"} == {"main", "tail"}


def test_a_factor_that_no_law_has_is_no_column(document: Document) -> None:
    assert OWN in next(iter(rows(table(document, "losses-rough")).values()))
    assert SAME not in next(iter(rows(table(document, "losses-rough")).values()))
    said = [words for words in texts(document) if "know neither viscosity nor Darcy f" in words]
    assert len(said) == 2  # base and shut


def test_laws_are_told_in_words(document: Document) -> None:
    first = document.sections[0].blocks[0]
    assert isinstance(first, Masthead)
    assert plain(dict(first.facts)["friction law"]) == "Hazen–Williams, Haaland, Manning, Colebrook–White"
    schedule = rows(table(document, "schedule"))
    assert [cells["law"] for cells in schedule.values()] == [
        "Hazen–Williams",
        "Manning",
        "Colebrook–White",
        "Hazen–Williams",
    ]

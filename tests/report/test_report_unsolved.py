"""A case without a solution: told loudly, its history printed, no results of it; the other cases stand."""

from __future__ import annotations

import pytest
from accounts import written
from pages import numbers, plain, section, table, tables, texts_of
from works import DEMO, LOOP, Work, given_up

from calc.report.document import Figure, Paragraph, Table
from calc.report.figures import Balance

AFTER = 3


@pytest.fixture(scope="module", params=["trials", "iterations"])
def unsolved(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Work:
    if request.param == "trials":
        return given_up(DEMO, "drawdown", AFTER)
    return given_up(written(tmp_path_factory.mktemp("loop"), LOOP), "warm", AFTER)


def test_the_first_page_opens_with_it(unsolved: Work) -> None:
    page = section(unsolved.document, "decision")
    opening = next(block for block in page.blocks if isinstance(block, Paragraph))
    said = plain(opening.parts)
    assert said.startswith(f"No solution in case {unsolved.name}.")
    failing = [one for one in unsolved.account.verdicts if not one.met]
    assert all(one.criterion.title.lower() in said for one in failing)
    flows = table(unsolved.document, "flows")
    assert unsolved.name not in [plain(column.head) for column in flows.columns]


def test_its_section_says_so_and_why_and_prints_every_evaluation(unsolved: Work) -> None:
    case = unsolved.account.cases[unsolved.name]
    assert not case.solution.converged
    held = section(unsolved.document, f"case-{unsolved.name}")
    said = plain(next(block for block in held.blocks if isinstance(block, Paragraph)).parts)
    assert said.startswith("No solution: ")
    assert case.solution.reason in said
    keys = {block.key.partition("-")[0] for block in held.blocks if isinstance(block, Table)}
    history = keys & {"trials", "steps"}
    assert keys - history <= {"changes", "stopping"}
    for block in held.blocks:
        if isinstance(block, Table) and block.key == "stopping":
            assert any("not met" in plain(row.cells[-1]) for row in block.rows)
    rows = next(tables(unsolved.document, f"{history.pop()}-{unsolved.name}")).rows
    assert len(rows) == len(case.history) > 0
    assert not any("accepted" in plain(row.cells[-1]) for row in rows)
    assert not any(isinstance(block, Figure) and isinstance(block.drawing, Balance) for block in held.blocks)


def test_nothing_but_its_history_and_inputs_is_printed_of_it(unsolved: Work) -> None:
    ledger = unsolved.account.ledger
    given = {column.name for column in ledger.columns if column.case == unsolved.name and not column.of}
    for number in numbers(unsolved.document):
        spot = ledger.spot(number.ref)
        if spot.column.case == unsolved.name:
            assert spot.column.of or spot.column.name in given
            assert spot.column.quantity not in ("flow", "velocity", "head_loss", "pressure_head", "outflow")
    for held in tables(unsolved.document, "verdicts-"):
        assert unsolved.name not in [plain(row.cells[1]) for row in held.rows]


def test_the_other_cases_stand(unsolved: Work) -> None:
    for case in unsolved.account.cases.values():
        if case.id == unsolved.name:
            continue
        held = section(unsolved.document, f"case-{case.id}")
        said = " ".join(plain(parts) for parts in texts_of(held))
        assert "No solution" not in said
        assert table(unsolved.document, f"pipes-{case.id}").rows

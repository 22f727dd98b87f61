"""The verification record on the page, and an issue that it stops."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from accounts import PROJECTS, written
from pages import parts_within

from calc import pipeline
from calc.cli.command import outcome_of_call
from calc.report.document import Number, Own, Paragraph, Row, Table
from calc.verification import TITLES, in_use, run


def said(row: Row) -> str:
    """Return the text of a row, its numbers left out."""
    parts = (part for cell in row.cells for part in parts_within(cell))
    return "".join(part.text if isinstance(part, Own) else part for part in parts if isinstance(part, str | Own))


@pytest.mark.parametrize("folder", PROJECTS, ids=lambda folder: folder.name)
def test_each_case_says_why_it_was_run(folder: Path) -> None:
    account = pipeline.account(folder)
    used = in_use(account)
    document = pipeline.document(account, "checking")
    (section,) = (one for one in document.sections if one.key == "software")
    (table,) = (block for block in section.blocks if isinstance(block, Table) and block.key == "verification")
    heads = [said(row) for row in table.rows if row.tone == "group"]
    checks = run(used)
    titles = list(dict.fromkeys(check.title for check in checks))
    assert len(heads) == len(titles)
    for head, title in zip(heads, titles, strict=True):
        concerns = next(check.concerns for check in checks if check.title == title)
        assert head.startswith(title)
        assert head.endswith(f"run for {', '.join(TITLES[word] for word in concerns) or 'every issue'}")
    (why,) = (block for block in section.blocks if isinstance(block, Paragraph) and "Of the cases" in str(block.parts))
    assert all(TITLES[word] in str(why.parts) for word in used)


def test_a_value_is_printed_in_the_unit_in_which_it_was_published() -> None:
    document = pipeline.document(pipeline.account(PROJECTS[0]), "checking")
    forms = {
        part.ref: part.form.unit
        for section in document.sections
        for block in section.blocks
        if isinstance(block, Table) and block.key == "verification"
        for row in block.rows
        for cell in row.cells
        for part in parts_within(cell)
        if isinstance(part, Number)
    }
    flow, speed = "three-levels-us/pipes-highest-main-flow", "three-levels-us/pipes-highest-main-velocity"
    assert forms[f"verification.{flow}.expected"] == forms[f"verification.{flow}.difference"] == "ft³/s"
    assert forms[f"verification.{speed}.got"] == "ft/s"


def test_a_value_outside_what_is_allowed_stops_the_issue(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    text = """\
        friction: fixed
        reservoirs: {high: {level: 30 m}, low: {level: 10 m}}
        pipes: {main: {from: high, to: low, length: 900 m, bore: 300 mm, friction_factor: 0.02}}
        """
    folder = written(tmp_path / "works", text)
    first, *others = run()
    monkeypatch.setattr(pipeline, "verify", lambda _: (replace(first, got=1.01 * first.got), *others))
    outcome = outcome_of_call(["issue", str(folder)])
    assert outcome.status == 4
    assert "fails its verification" in outcome.remarks
    assert first.id in outcome.remarks
    assert not (folder / "issued").exists()
    assert outcome_of_call(["solve", str(folder)]).status == 0

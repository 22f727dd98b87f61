"""The register: what every check declares, and how findings are told together."""

from __future__ import annotations

import re
from pathlib import Path

from sound_works import PROJECT, SOUND, account_of

from calc import pipeline
from calc.account import CHECKS, TITLES, Account, Finding, gathered, input_findings


def test_every_check_says_what_it_looks_for_and_how() -> None:
    for check in CHECKS:
        assert re.fullmatch(r"D\d\d", check.id)
        assert check.inputs or check.results or check.refuses
        assert not re.search(r"\d", check.title + check.looks_for + check.refuses), "numbers on a page have a line"
        assert not check.looks_for.endswith(".")
    assert [check.id for check in CHECKS] == sorted({check.id for check in CHECKS})


def test_the_comments_that_are_looked_for() -> None:
    assert set(TITLES) == {
        *("D03", "D05", "D16", "D17", "D18", "D22", "D25", "D26", "D27", "D28", "D29", "D31", "D32", "D33", "D34"),
        *("D35", "D36", "D37", "D38", "D39", "D43", "D44", "D45", "D46", "D47", "D48"),
    }


def test_nothing_says_that_the_works_are_in_order() -> None:
    words = re.compile(r"\b(approved|safe|certified|checked)\b")
    assert not [check.id for check in CHECKS if words.search(f"{check.title} {check.looks_for} {check.refuses}")]


def test_findings_of_the_inputs_need_no_solution(tmp_path: Path) -> None:
    text = SOUND.replace("    fittings: [{kind: bend-90}]\n", "").replace("{value: 400 m, source: S1}", "400 m")
    (tmp_path / "network.yaml").write_text(text, "utf-8")
    (tmp_path / "project.yaml").write_text(PROJECT, "utf-8")
    project = pipeline.read(tmp_path)
    assert [one.id for one in input_findings(project)] == ["D03", "D35"]


def test_what_is_said_alike_is_told_together() -> None:
    east, west, other = (
        Finding("D03", "pipes.east", "network.yaml:3", "bore has no source"),
        Finding("D03", "pipes.west", "network.yaml:9", "bore has no source"),
        Finding("D03", "pipes.mid", "network.yaml:5", "length has no source"),
    )
    assert gathered((east, other, west)) == ((east, west), (other,))


def test_counts_stand_in_the_ledger(tmp_path: Path) -> None:
    account = account_of(tmp_path, SOUND.replace("{value: 400 m, source: S1}", "400 m"))
    counted = {check.id: account.ledger.spot(f"checks.{check.id}.found").value for check in CHECKS}
    assert {check for check, count in counted.items() if count} == {"D03"}
    assert account.ledger.spot("record.findings").value == 1


def test_the_demonstration_keeps_its_findings_to_what_was_planted(demonstration: Account) -> None:
    assert [(one.id, one.subject, one.text.partition(":")[0]) for one in demonstration.findings] == [
        ("D03", "pipes.sedge-link", "roughness has no source")
    ]

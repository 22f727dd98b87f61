"""Findings of small projects, each written so that one thing is amiss."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from accounts import accounted, written

from calc import pipeline
from calc.account import TITLES, Account, Finding, input_findings
from calc.account import accounting as accounting_module

SOUND = """
fluid: {temperature: {value: 12 degC, source: S1}}
reservoirs:
  mere: {level: {value: 40 m, source: S1}}
  tarn: {level: {value: 30 m, source: S1}}
pipes:
  main:
    from: mere
    to: tarn
    length: {value: 400 m, source: S1}
    bore: {value: 200 mm, source: S1}
    roughness: {value: 0.1 mm, source: S1}
    ends: {from: square, to: square}
    fittings: [{kind: bend-90}]
"""
PROJECT = """
references: {S1: {title: Survey}}
"""


def findings(folder: Path, text: str, project: str = PROJECT) -> tuple[Finding, ...]:
    return accounted(folder, text, project=project).findings


def test_a_sound_project_has_none(tmp_path: Path) -> None:
    assert findings(tmp_path, SOUND) == ()


def test_a_value_without_a_source_is_named_with_its_line(tmp_path: Path) -> None:
    found = findings(tmp_path, SOUND.replace("bore: {value: 200 mm, source: S1}", "bore: 200 mm"))
    assert found == (Finding("D03", "pipes.main", "network.yaml:11", "bore has no source"),)


def test_values_without_a_source_are_gathered_by_component(tmp_path: Path) -> None:
    text = SOUND.replace("{value: 400 m, source: S1}", "400 m").replace("{value: 0.1 mm, source: S1}", "0.1 mm")
    text = text.replace("{value: 12 degC, source: S1}", "12 degC").replace("- {kind", "- {kind")
    assert findings(tmp_path, text) == (
        Finding("D03", "pipes.main", "network.yaml:10", "length, roughness have no source"),
        Finding("D03", "fluid", "network.yaml:2", "temperature has no source"),
    )


def test_coefficients_cases_limits_and_constants_need_sources_too(tmp_path: Path) -> None:
    text = SOUND.replace("[{kind: bend-90}]", "[{K: 2.5}, {K: 1, source: S1}]") + (
        "criteria: {velocity-max: {limit: 2 m/s}}\n"
        "constants: {transition: {laminar_below: 2100}}\n"
        "cases: {low: {with: {reservoirs.mere.level: 35 m}}}\n"
    )
    said = {(one.subject, one.text) for one in findings(tmp_path, text)}
    assert said == {
        ("pipes.main", "K of fitting 1 has no source"),
        ("criteria.velocity-max", "limit has no source"),
        ("constants.transition", "laminar_below has no source"),
        ("cases.low", "values of this case have no source: reservoirs.mere.level"),
    }


def test_a_pipe_without_fittings_is_named(tmp_path: Path) -> None:
    text = SOUND.replace("    fittings: [{kind: bend-90}]\n", "")
    (found,) = findings(tmp_path, text)
    assert (found.id, found.subject, found.place) == ("D35", "pipes.main", "network.yaml:7")
    assert "no fittings are stated" in found.text


@pytest.mark.parametrize("path", ["pipes.main.fittings", '"pipes.*.fittings"'])
def test_a_reason_for_no_fittings_is_an_assumption_that_affects_them(tmp_path: Path, path: str) -> None:
    text = SOUND.replace("    fittings: [{kind: bend-90}]\n", "")
    reason = PROJECT + f"assumptions: {{A1: {{text: The main is straight, affects: [{path}]}}}}\n"
    assert findings(tmp_path, text, reason) == ()


def test_a_bare_reservoir_end_is_named(tmp_path: Path) -> None:
    (found,) = findings(tmp_path, SOUND.replace("ends: {from: square, to: square}", "ends: {from: square}"))
    assert (found.id, found.subject, found.place) == ("D36", "pipes.main", "network.yaml:7")
    assert "the end in tarn" in found.text
    assert "'ends: {to: square}'" in found.text


def test_an_end_at_a_junction_is_no_finding(tmp_path: Path) -> None:
    text = SOUND.replace("ends: {from: square, to: square}", "ends: {from: square}").replace("to: tarn", "to: cross")
    text += "  other: {from: cross, to: tarn, length: {value: 9 m, source: S1}, bore: {value: 0.2 m, source: S1},\n"
    text += "    roughness: {value: 1 mm, source: S1}, ends: {to: rounded}, fittings: [{kind: bend-45}]}\n"
    assert findings(tmp_path, text + "junctions: {cross: {}}\n") == ()


def test_a_case_without_a_solution_is_not_confirmed(tmp_path: Path) -> None:
    text = SOUND.replace("to: tarn", "to: cross").replace("ends: {from: square, to: square}", "ends: {from: square}")
    text = text.replace("  tarn: {level: {value: 30 m, source: S1}}\n", "")
    text += "junctions: {cross: {}}\ncases: {cut: {with: {pipes.main.open: false}}}\n"
    (found,) = findings(tmp_path, text)
    assert (found.id, found.subject) == ("D46", "cases.cut")
    assert found.place.startswith("network.yaml:")
    assert "no solution" in found.text


def test_a_second_opinion_that_disagrees_is_a_finding(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    original = accounting_module.enter_opinion

    def doubting(*given: Any) -> Any:  # noqa: ANN401
        return replace(original(*given), agrees=False, reason="the differences are larger than allowed")

    monkeypatch.setattr(accounting_module, "enter_opinion", doubting)
    account = accounted(tmp_path, SOUND, project=PROJECT)
    (found,) = account.findings
    assert (found.id, found.subject) == ("D46", "cases.base")
    assert found.text == "the second opinion does not confirm it: the differences are larger than allowed"
    assert not account.confirmed


def test_findings_of_the_inputs_need_no_solution(tmp_path: Path) -> None:
    text = SOUND.replace("    fittings: [{kind: bend-90}]\n", "").replace("{value: 400 m, source: S1}", "400 m")
    project = pipeline.read(written(tmp_path, text, project=PROJECT))
    assert [one.id for one in input_findings(project)] == ["D03", "D35"]
    assert set(TITLES) == {"D03", "D35", "D36", "D46"}


def test_the_demonstration_keeps_its_findings_to_what_was_planted(demonstration: Account) -> None:
    assert [(one.id, one.subject, one.text) for one in demonstration.findings] == [
        ("D03", "pipes.sedge-link", "roughness has no source")
    ]

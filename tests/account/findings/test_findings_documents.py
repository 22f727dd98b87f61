"""Sources, defaults, fittings and ends: what is left unsaid."""

from __future__ import annotations

from pathlib import Path

import pytest
from sound_works import PROJECT, SOUND, findings, spoiled

from calc.account import Finding

BEND = ("    fittings: [{kind: bend-90}]\n", "")
HAZEN_WILLIAMS = (
    "roughness: {value: 0.1 mm, source: S1}",
    "hazen_williams_c: {value: 130, source: S1}\n    law: hazen-williams",
)


def said(folder: Path, text: str, project: str = PROJECT) -> set[tuple[str, str, str]]:
    return {(one.id, one.subject, one.text.partition(":")[0]) for one in findings(folder, text, project)}


def test_a_value_without_a_source_is_named_with_its_line(tmp_path: Path) -> None:
    found = findings(tmp_path, spoiled(("{value: 400 m, source: S1}", "400 m")))
    way_out = "nobody can follow it back. Name a reference under 'source'"
    assert found == (Finding("D03", "pipes.upper", "network.yaml:19", f"length has no source: {way_out}"),)


def test_values_without_a_source_are_gathered_by_component(tmp_path: Path) -> None:
    text = spoiled(
        ("{value: 400 m, source: S1}", "400 m"),
        ("{value: 204.6 mm, source: S1}", "204.6 mm"),
        ("{value: 9.81 m/s², source: S1}", "9.81 m/s²"),
    )
    assert [(one.subject, one.place, one.text.partition(":")[0]) for one in findings(tmp_path, text)] == [
        ("pipes.upper", "network.yaml:19", "length, bore have no source"),
        ("site", "network.yaml:2", "gravity has no source"),
    ]


def test_coefficients_cases_limits_and_constants_need_sources_too(tmp_path: Path) -> None:
    text = spoiled(
        ("[{kind: bend-90}]", "[{K: 2.5}, {K: 1, source: S1}, {Kv: 900}]"),
        added="criteria: {velocity-max: {limit: 2 m/s}}\n"
        "constants: {transition: {laminar_below: 2100}}\n"
        "cases: {low: {with: {reservoirs.mere.level: 39 m}}}\n",
    )
    assert {(one.subject, one.text.partition(":")[0]) for one in findings(tmp_path, text)} == {
        ("pipes.upper", "K of fitting 1, Kv of fitting 3 have no source"),
        ("criteria.velocity-max", "limit has no source"),
        ("constants.transition", "laminar_below has no source"),
        ("cases.low", "reservoirs.mere.level has no source"),
    }


def test_defaults_that_move_the_answer_are_named(tmp_path: Path) -> None:
    text = spoiled(("site: {gravity: {value: 9.81 m/s², source: S1}}\nfriction: colebrook-white\n", ""))
    text = text.replace("ends: {from: square}", "ends: {from: {entry: 0.5, source: S1}}")
    assert said(tmp_path, text) == {
        ("D05", "site.gravity", "taken by default"),
        ("D05", "friction", "taken by default"),
        ("D05", "ends.*.exit", "taken by default"),
    }
    assert all(one.place == "network.yaml:3" for one in findings(tmp_path, text))  # nearest: the first reservoir


def test_a_default_that_an_assumption_names_is_not_silent(tmp_path: Path) -> None:
    text = spoiled(("site: {gravity: {value: 9.81 m/s², source: S1}}\n", ""))
    reason = "assumptions: {A1: {text: Standard gravity will do, affects: [site.gravity]}}\n"
    assert findings(tmp_path, text, PROJECT + reason) == ()


@pytest.mark.parametrize(
    ("subject", "names", "others"),
    [
        ("ends.*.exit", "pipes.*.ends", ["pipes.*.fittings"]),
        ("constants.hazen_williams", "constants.hazen_williams", ["constants.manning", "pipes.*"]),
    ],
)
def test_a_default_of_several_values_is_confirmed_by_one_path(
    tmp_path: Path, subject: str, names: str, others: list[str]
) -> None:
    text = spoiled(("ends: {from: square}", "ends: {from: {entry: 0.5, source: S1}}"), HAZEN_WILLIAMS)
    for number, path in enumerate((names, *others)):
        reason = f"assumptions: {{A1: {{text: As in all our mains, affects: ['{path}']}}}}\n"
        found = {one.subject for one in findings(tmp_path / str(number), text, PROJECT + reason) if one.id == "D05"}
        assert (subject not in found) == (path == names)


def test_the_way_out_of_an_exit_by_default_names_a_path_that_is_followed(tmp_path: Path) -> None:
    text = spoiled(("ends: {from: square}", "ends: {from: {entry: 0.5, source: S1}}"))
    (one,) = (one for one in findings(tmp_path, text) if one.subject == "ends.*.exit")
    assert "or name pipes.*.ends under 'affects' of an assumption" in one.text


def test_constants_of_an_empirical_law_are_named_once_where_it_is_used(tmp_path: Path) -> None:
    assert ("D05", "constants.hazen_williams", "taken by default") in said(tmp_path / "used", spoiled(HAZEN_WILLIAMS))
    assert not any(one[0] == "D05" for one in said(tmp_path / "unused", SOUND))


def test_the_transition_by_default_is_named_where_a_pipe_comes_near_it(tmp_path: Path) -> None:
    thick = (
        "{temperature: {value: 12 degC, source: S1}}",
        "{density: {value: 900 kg/m³, source: S1}, viscosity: {value: 90 mm²/s, source: S1}}",
    )
    found = said(tmp_path, spoiled(thick))
    assert ("D05", "constants.transition", "taken by default") in found
    stated = (
        "constants: {transition: {laminar_below: {value: 2000, source: S1}, "
        "turbulent_above: {value: 4000, source: S1}}}\n"
    )
    assert not any(one[0] == "D05" for one in said(tmp_path / "stated", spoiled(thick, added=stated)))


def test_a_pipe_without_fittings_is_named(tmp_path: Path) -> None:
    (found,) = findings(tmp_path, spoiled(BEND))
    assert (found.id, found.subject, found.place) == ("D35", "pipes.upper", "network.yaml:16")
    assert "no fittings are stated" in found.text


@pytest.mark.parametrize("path", ["pipes.upper.fittings", '"pipes.*.fittings"'])
def test_a_reason_for_no_fittings_is_an_assumption_that_affects_them(tmp_path: Path, path: str) -> None:
    reason = f"assumptions: {{A1: {{text: The main is straight, affects: [{path}]}}}}\n"
    assert findings(tmp_path, spoiled(BEND), PROJECT + reason) == ()


def test_a_bare_reservoir_end_is_named(tmp_path: Path) -> None:
    (found,) = findings(tmp_path, spoiled(("    ends: {to: square}\n", "")))
    assert (found.id, found.subject, found.place) == ("D36", "pipes.lower", "network.yaml:24")
    assert "at 'to', where a reservoir is" in found.text
    assert "'ends: {to: square}'" in found.text

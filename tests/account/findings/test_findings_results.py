"""Checks of the solutions: flows, heads, laws at the flow found, and the solution itself."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import fluids
import numpy as np
import pytest
from sound_works import SOUND, account_of, spoiled

from calc.account import Account, Finding
from calc.account import accounting as accounting_module
from calc.account.findings import CHECKS, Solved, laws, numerical
from calc.ledger import View
from calc.solve import Settings

ROUGHNESS = "roughness: {value: 0.1 mm, source: S1, range: [0.05 mm, 0.3 mm]}"
LOWER_ROUGHNESS = "roughness: {value: 0.1 mm, source: S1}\n    ends: {to"
OIL = ("{temperature: {value: 12 degC, source: S1}}",
       "{density: {value: 870 kg/m³, source: S1}, viscosity: {value: 90 mm²/s, source: S1}}")  # fmt: skip
CHECK = {check.id: check for check in CHECKS}


def hazen(coefficient: int) -> tuple[str, str]:
    return ROUGHNESS, f"hazen_williams_c: {{value: {coefficient}, source: S1, deviation: 5 %}}\n    law: hazen-williams"


def manning(coefficient: float) -> tuple[str, str]:
    return ROUGHNESS, f"manning_n: {{value: {coefficient}, source: S1, deviation: 5 %}}\n    law: manning"


def of(check: str, account: Account) -> list[Finding]:
    return [one for one in account.findings if one.id == check]


def remarks(check: str, folder: Path, text: str) -> list[tuple[str, str]]:
    return [(one.subject, one.text) for one in of(check, account_of(folder, text))]


def solved_of(account: Account, **other: Any) -> Solved:  # noqa: ANN401
    return replace(Solved(account.project, account.ledger, account.cases, account.verdicts), **other)


# --- laws at the flow found -------------------------------------------------------------------------------------


@pytest.mark.parametrize("reynolds", [5e3, 1e5, 3e6])
@pytest.mark.parametrize("share", [0.0, 1e-4, 0.02])
def test_the_roughness_of_a_factor_is_that_of_colebrook(reynolds: float, share: float) -> None:
    """`fluids` solves the Colebrook equation with 3.7 and 2.51; from its factor the roughness comes back."""
    factor = np.array([fluids.friction.Colebrook(reynolds, share)])
    assert laws.relative_roughness(factor, np.array([reynolds]))[0] == pytest.approx(share, abs=1e-9)


@pytest.mark.parametrize("reynolds", [4e3, 1e5, 1e7])
def test_a_smooth_pipe_is_that_of_prandtl(reynolds: float) -> None:
    expected = fluids.friction.Colebrook(reynolds, 0.0)
    assert laws.smooth_factor(np.array([reynolds]))[0] == pytest.approx(expected, rel=1e-9)


def test_a_coefficient_smoother_than_any_pipe_is_named(tmp_path: Path) -> None:
    """At Re 1e5 a smooth pipe has f 0.0180 (Moody 1944); a C of 160 in 200 mm at about 0.7 m/s has f 0.015."""
    slow = ("level: {value: 40 m", "level: {value: 31.5 m"), ("low: {value: 38 m", "low: {value: 31 m")
    found = remarks("D28", tmp_path, spoiled(hazen(160), *slow))
    assert any("less loss than a smooth pipe" in text for _, text in found)
    assert {subject for subject, _ in found} == {"pipes.upper"}


def test_a_coefficient_of_a_used_main_is_not(tmp_path: Path) -> None:
    assert remarks("D28", tmp_path, spoiled(hazen(120))) == []


def test_hazen_williams_above_three_metres_a_second(tmp_path: Path) -> None:
    found = remarks("D28", tmp_path, spoiled(hazen(130), ("{value: 400 m, source", "{value: 20 m, source")))
    assert any("faster than three metres a second" in text for _, text in found)


def test_hazen_williams_hardly_turbulent(tmp_path: Path) -> None:
    calm = ("level: {value: 40 m", "level: {value: 30.0004 m"), ("low: {value: 38 m", "low: {value: 30 m")
    still = ("{value: 5 L/s", "{value: 3 L/s")
    found = remarks("D28", tmp_path, spoiled(hazen(130), *calm, still))
    assert any("only just turbulent" in text for _, text in found)


def test_a_coefficient_rougher_than_a_twentieth_of_the_bore(tmp_path: Path) -> None:
    """n 0.029 in 200 mm: f = 8 g n² / R^(1/3) with R = 0.05 m, which is 0.18; k/D 0.05 has f 0.072 (Moody 1944)."""
    found = remarks("D28", tmp_path, spoiled(manning(0.029)))
    assert any("rougher than a twentieth" in text for _, text in found)


def test_manning_where_flow_is_not_fully_rough(tmp_path: Path) -> None:
    """n 0.010 in 200 mm: k about 0.1 mm; at 1.2 m/s u* k/ν is about 5, fully rough from 70 (Nikuradse 1933)."""
    found = remarks("D28", tmp_path / "smooth", spoiled(manning(0.010)))
    assert any("supposes fully rough flow" in text for _, text in found)
    assert remarks("D28", tmp_path / "rough", spoiled(manning(0.016), ("{value: 400 m", "{value: 60 m"))) == []


# --- flow ---------------------------------------------------------------------------------------------------------


def test_laminar_pipes_are_named_with_their_cases(tmp_path: Path) -> None:
    text = spoiled(OIL, added="cases: {low: {with: {fluid.viscosity: {value: 1.3 mm²/s, source: S1}}}}\n")
    found = of("D33", account_of(tmp_path, text))
    assert [one.subject for one in found] == ["pipes.upper", "pipes.lower"]
    assert all("in transition in case base" in one.text for one in found)


def test_cases_are_told_in_words(tmp_path: Path) -> None:
    cases = (
        "cases: {mild: {with: {fluid.viscosity: {value: 70 mm²/s, source: S1}}}, thin: {with: {fluid.viscosity: "
        "{value: 1.3 mm²/s, source: S1}}}}\n"
    )
    found = of("D33", account_of(tmp_path, spoiled(OIL, added=cases)))
    assert found
    assert all("in transition in cases base and mild:" in one.text for one in found)


def test_a_law_of_turbulent_flow_in_laminar_flow_is_told_apart(tmp_path: Path) -> None:
    found = dict(remarks("D33", tmp_path, spoiled(OIL, hazen(130))))
    assert "does not hold" in found["pipes.upper"]
    assert "does not hold" not in found["pipes.lower"]


def test_water_faster_than_in_any_main_is_a_slip(tmp_path: Path) -> None:
    short = ("{value: 400 m, source", "{value: 4 m, source"), ("{value: 650 m, source", "{value: 6 m, source")
    found = remarks("D27", tmp_path, spoiled(*short, ("level: {value: 40 m", "level: {value: 200 m")))
    assert any("faster than ten metres a second in every case" in text for _, text in found)
    assert not any("ten metres" in text for _, text in remarks("D27", tmp_path / "sound", SOUND))


def test_a_velocity_head_that_is_not_small(tmp_path: Path) -> None:
    """1.8 m/s in the upper main: V²/2g is 0.17 m, of a pressure head of some 2 m."""
    high = ("elevation: {value: 10 m", "elevation: {value: 30.5 m")
    found = remarks("D37", tmp_path / "high", spoiled(high))
    assert [subject for subject, _ in found] == ["junctions.cross"]
    assert "a twentieth of the pressure head" in found[0][1]
    assert remarks("D37", tmp_path / "low", SOUND) == []


def test_a_velocity_head_larger_than_the_margin(tmp_path: Path) -> None:
    head = account_of(tmp_path / "first", SOUND).ledger.spot("junctions.cross.pressure_head@base").value
    for k, (limit, unit) in enumerate(((head - 0.05, "m"), ((head - 0.05) * 9.81 * 0.9995, "kPa"))):
        near = f"criteria: {{pressure-min: {{limit: {{value: {limit:.6f} {unit}, source: S1}}}}}}\n"
        found = remarks("D37", tmp_path / f"near-{k}", spoiled(added=near))
        assert [subject for subject, _ in found] == ["junctions.cross"]
        assert "met by less than the velocity head" in found[0][1]
    far = "criteria: {pressure-min: {limit: {value: 15 m, source: S1}}}\n"
    assert remarks("D37", tmp_path / "far", spoiled(added=far)) == []


RING = """
fluid: {temperature: {value: 12 degC, source: S1}}
reservoirs: {mere: {level: 40 m}, tarn: {level: 30 m}}
junctions: {east: {}, west: {}}
pipes:
  east-up: {from: mere, to: east, length: 400 m, bore: 204.6 mm, roughness: 0.1 mm}
  west-up: {from: mere, to: west, length: %s, bore: 204.6 mm, roughness: 0.1 mm}
  east-down: {from: east, to: tarn, length: 400 m, bore: 204.6 mm, roughness: 0.1 mm}
  west-down: {from: west, to: tarn, length: 400 m, bore: 204.6 mm, roughness: 0.1 mm}
  bridge: {from: east, to: west, length: 900 m, bore: 152.0 mm, roughness: 0.1 mm}
"""


def test_a_bridge_between_like_branches_has_no_certain_direction(tmp_path: Path) -> None:
    found = of("D48", account_of(tmp_path / "like", RING % "400.2 m"))
    assert [one.subject for one in found] == ["pipes.bridge"]
    assert of("D48", account_of(tmp_path / "unlike", RING % "900 m")) == []


def test_levels_known_within_a_range_leave_a_direction_open(tmp_path: Path) -> None:
    close = spoiled(
        ("level: {value: 40 m, source: S1}", "level: {value: 30.04 m, source: S1%s}"),
        ("low: {value: 38 m", "low: {value: 29 m"),
        added="  beck: {from: mere, to: tarn, length: {value: 90 m, source: S1}, bore: {value: 61 mm, source: S1},\n"
        "    roughness: {value: 0.1 mm, source: S1}}\n",
    ).replace("{value: 5 L/s", "{value: 90 L/s")
    unsure = of("D48", account_of(tmp_path / "unsure", close.replace("%s", ", range: [29.9 m, 30.2 m]")))
    assert [one.subject for one in unsure] == ["pipes.beck"]
    assert of("D48", account_of(tmp_path / "sure", close.replace("%s", ""))) == []


# --- the solution itself -------------------------------------------------------------------------------------------


def test_a_loose_tolerance_is_named_where_it_stands(tmp_path: Path) -> None:
    (found,) = of("D43", account_of(tmp_path / "loose", spoiled(added="solver: {tolerance: 0.1 L/s}\n")))
    assert (found.subject, found.place) == ("cases.base", "network.yaml:32")
    assert of("D43", account_of(tmp_path / "close", spoiled(added="solver: {tolerance: 1e-5 L/s}\n"))) == []


def test_a_search_without_a_history_is_named(tmp_path: Path) -> None:
    account = account_of(tmp_path, SOUND)
    bare = {name: replace(case, history=[]) for name, case in account.cases.items()}
    (found,) = numerical.loose_tolerance(solved_of(account, cases=bare))
    assert "left no history" in found.text
    assert list(numerical.loose_tolerance(solved_of(account))) == []


def test_works_without_a_junction_have_one_answer(tmp_path: Path) -> None:
    text = SOUND.replace("to: cross", "to: tarn").replace("ends: {from: square}", "ends: {from: square, to: square}")
    text = text[: text.index("  lower:")].replace(text[text.index("junctions:") : text.index("pipes:")], "")
    assert account_of(tmp_path, text).findings == ()


def test_junctions_that_do_not_balance(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    account = account_of(tmp_path, RING % "500 m")
    monkeypatch.setattr(numerical, "settings_of", lambda _: Settings(tolerance=1e-30))
    (found,) = numerical.broken_continuity(solved_of(account))
    assert found.subject == "cases.base"
    monkeypatch.undo()
    assert list(numerical.broken_continuity(solved_of(account))) == []


def test_paths_that_do_not_close(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    account = account_of(tmp_path, SOUND)
    assert list(numerical.open_paths(solved_of(account))) == []
    wrong = View.whole(replace(account.ledger.find("paths.closing_error", "base")[0], values=np.array([2e-5])))
    monkeypatch.setattr(account.ledger, "view", lambda *_: wrong)
    (found,) = numerical.open_paths(solved_of(account))
    assert (found.subject, found.mark) == ("cases.base", account.project.cases["base"].mark)


def test_another_answer_from_another_start(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    account = account_of(tmp_path, SOUND)
    original = numerical.solve

    def elsewhere(*given: Any) -> Any:  # noqa: ANN401
        answer = original(*given)
        return replace(answer, head=answer.head + 0.01)

    monkeypatch.setattr(numerical, "solve", elsewhere)
    (found,) = numerical.restarted(solved_of(account))
    assert found.subject == "cases.base"
    monkeypatch.setattr(numerical, "solve", lambda *given: replace(original(*given), converged=False))
    assert len(list(numerical.restarted(solved_of(account)))) == 1


def test_large_works_are_not_solved_again_and_it_is_said(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(numerical, "MOST_RESTARTED", 1)
    account = account_of(tmp_path, SOUND)
    (outcome,) = [one for one in account.checks if one.check.id == "D47"]
    assert (outcome.found, outcome.unmade.partition(",")[0]) == (0, "the works are large")


def test_a_case_without_a_solution_is_not_confirmed(tmp_path: Path) -> None:
    text = SOUND.replace("  tarn:\n    level: {value: 30 m, source: S1}\n", "").replace("    ends: {to: square}\n", "")
    text = text.replace("to: tarn", "to: end").replace("  cross:\n", "  end: {}\n  cross:\n")
    account = account_of(tmp_path, text + "cases: {cut: {with: {pipes.upper.open: false}}}\n")
    (found,) = of("D46", account)
    assert found.subject == "cases.cut"
    assert found.place.startswith("network.yaml:")
    assert "no solution" in found.text


def test_checks_of_results_are_not_made_where_no_case_has_any(tmp_path: Path) -> None:
    text = SOUND.replace("  tarn:\n    level: {value: 30 m, source: S1}\n", "").replace("    ends: {to: square}\n", "")
    text = text.replace("to: tarn", "to: end").replace("  cross:\n", "  end: {}\n  cross:\n")
    account = account_of(tmp_path, text.replace("    ends: {from", "    open: false\n    ends: {from"))
    unmade = {one.check.id for one in account.checks if one.unmade == "no case has a solution"}
    assert unmade == {check.id for check in CHECKS if check.results} - {"D46"}


def test_a_second_opinion_that_disagrees_is_a_finding(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    original = accounting_module.enter_opinion

    def doubting(*given: Any) -> Any:  # noqa: ANN401
        return replace(original(*given), agrees=False, reason="the differences are larger than allowed")

    monkeypatch.setattr(accounting_module, "enter_opinion", doubting)
    account = account_of(tmp_path, SOUND)
    (found,) = account.findings
    assert (found.id, found.subject) == ("D46", "cases.base")
    assert found.text == "the second opinion does not confirm it: the differences are larger than allowed"
    assert not account.confirmed

"""Friction laws and their constants as read: what each pipe needs, what a case may change."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from project_folders import SOUND, problems_in, read

from calc.components.pipe import LAW_INPUT
from calc.project import network
from calc.project.settings import CONSTANTS

BOTH = SOUND.replace("roughness: 0.15 mm", "hazen_williams_c: 130", 1).replace("roughness: 0.15 mm", "manning_n: 0.012")
BOTH = BOTH.replace("    manning_n", "    law: manning\n    manning_n") + "friction: hazen-williams\n"
LIMITS = {"laminar_below", "turbulent_above"}


def constants(folder: Path, text: str, case: str = "base") -> list[float]:
    found = network(read(folder, text), case, 1e-6).pipes.constants
    return [float(value[0]) for value in vars(found).values()]


def test_a_pipe_needs_what_its_law_needs_and_no_roughness(tmp_path: Path) -> None:
    pipes = network(read(tmp_path, BOTH), "base", 1e-6).pipes
    assert [pipes.law.word(k) for k in (0, 1)] == ["hazen-williams", "manning"]
    assert pipes.hazen_williams_c.tolist()[:1] == [130.0]
    assert pipes.manning_n.tolist()[1:] == [0.012]
    unused = [pipes.hazen_williams_c[1], pipes.manning_n[0], *pipes.roughness, *pipes.friction_factor]
    assert np.all(np.isnan(unused))


def test_constants_stand_by_default_where_a_pipe_needs_them(tmp_path: Path) -> None:
    # 4^(10/3)/π² and 16/3
    exact = [10.67, 1.852, 4.8704, 4 ** (10 / 3) / np.pi**2, 16 / 3]
    assert constants(tmp_path / "both", BOTH) == pytest.approx(exact, rel=1e-11)
    assert np.all(np.isnan(constants(tmp_path / "none", SOUND)))


def test_limits_of_the_transition_are_no_default_where_no_law_has_one(tmp_path: Path) -> None:
    for name, text, expected in (
        ("empirical", BOTH, set()),
        ("stated", BOTH + "constants: {transition: {laminar_below: 2100}}\n", {"turbulent_above"}),
        ("case", BOTH + "cases: {rough: {with: {'pipes.*.law': haaland, 'pipes.*.roughness': 1 mm}}}\n", LIMITS),
        ("rough", SOUND, LIMITS),
    ):
        project = read(tmp_path / name, text)
        paths = [path.rpartition(".") for path, _ in project.defaults]
        assert {field for group, _, field in paths if group == "constants.transition"} == expected
        # findings judge every law by the end of the transition
        assert network(project, "base", 1e-6).pipes.turbulent_above.tolist() == [4000.0]


def test_published_sets_of_constants_may_be_stated(tmp_path: Path) -> None:
    # sets in use in the literature on looped networks, each with its own exponents
    for k, flow, bore in ((10.5088, 1.85, 4.87), (10.667, 1.852, 4.871), (10.9031, 1.85, 4.87)):
        stated = f"constants: {{hazen_williams: {{coefficient: {k}, flow_exponent: {flow}, bore_exponent: {bore}}}}}\n"
        assert constants(tmp_path, BOTH + stated)[:3] == [k, flow, bore]


def test_a_constant_not_stated_beside_others_keeps_its_default(tmp_path: Path) -> None:
    stated = "constants: {hazen_williams: {coefficient: {value: 10.7, source: S1}}}\nreferences: {S1: {title: Code}}\n"
    project = read(tmp_path, BOTH + stated)
    assert network(project, "base", 1e-6).pipes.constants.hazen_williams_coefficient.tolist() == [10.7]
    defaults = [path for path, _ in project.defaults if path.startswith("constants.hazen_williams")]
    assert defaults == ["constants.hazen_williams.flow_exponent", "constants.hazen_williams.bore_exponent"]


def test_a_case_changes_constants_and_coefficients(tmp_path: Path) -> None:
    text = BOTH + (
        "cases:\n"
        "  set: {with: {constants.hazen_williams.coefficient: 10.7, constants.manning.bore_exponent: 5.3}}\n"
        "  more: {after: set, times: {constants.hazen_williams.coefficient: 1.01, pipes.*.manning_n: 1.5}}\n"
    )
    assert constants(tmp_path, text, "set") == pytest.approx([10.7, 1.852, 4.8704, 4 ** (10 / 3) / np.pi**2, 5.3])
    assert constants(tmp_path, text, "more")[0] == pytest.approx(10.807, rel=1e-12)
    assert network(read(tmp_path, text), "more", 1e-6).pipes.manning_n[1] == pytest.approx(0.018, rel=1e-12)


def test_constants_set_by_a_case_alone_leave_the_base_at_its_defaults(tmp_path: Path) -> None:
    text = SOUND + (
        "cases: {other: {with: {friction: manning, 'pipes.*.manning_n': 0.012, constants.manning.coefficient: 10.3}}}\n"
    )
    assert constants(tmp_path, text, "other")[3] == 10.3
    assert constants(tmp_path, text)[3] == pytest.approx(10.29359, rel=1e-6)


@pytest.mark.parametrize("law", ["hazen-williams", "manning"])
def test_a_case_that_changes_the_law_asks_for_what_each_following_pipe_lacks(tmp_path: Path, law: str) -> None:
    needed = LAW_INPUT[law]
    value = {"hazen_williams_c": 120, "manning_n": 0.012}[needed]
    one = f"cases: {{odd: {{with: {{friction: {law}, pipes.upper-main.{needed}: {value}}}}}}}\n"
    (problem,) = problems_in(tmp_path, SOUND + one)
    assert problem.code == "missing-law-input"
    assert problem.found == f"the law {law} needs '{needed}', which 'sedge-link' does not state"
    every = f"cases: {{even: {{with: {{friction: {law}, 'pipes.*.{needed}': {value}}}}}}}\n"
    assert problems_in(tmp_path, SOUND + every) == ()


def test_a_factor_may_not_take_a_coefficient_out_of_its_range(tmp_path: Path) -> None:
    text = BOTH + "cases: {odd: {times: {pipes.upper-main.hazen_williams_c: 2}}}\n"
    (problem,) = problems_in(tmp_path, text)
    assert problem.code == "out-of-range"
    assert "makes 'hazen_williams_c' of 'upper-main' 260" in problem.found
    text = BOTH + "cases: {odd: {times: {constants.manning.coefficient: 2}}}\n"
    (problem,) = problems_in(tmp_path, text)
    assert problem.code == "out-of-range"


def test_a_path_to_no_constant_is_told_which_there_are(tmp_path: Path) -> None:
    text = BOTH + "cases: {odd: {with: {constants.manning.flow_exponent: 2}}}\n"
    (problem,) = problems_in(tmp_path, text)
    assert problem.code == "unknown-path"
    assert "coefficient" in problem.expected
    assert "bore_exponent" in problem.expected
    text = BOTH + "cases: {odd: {with: {constants.hazen-williams.coefficient: 10.7}}}\n"
    (problem,) = problems_in(tmp_path, text)
    assert problem.code == "unknown-path"
    assert all(name in problem.expected for name in CONSTANTS)

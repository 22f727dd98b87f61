"""Cases: chains worked by hand, patterns, and the agreement of arrays with changes told one by one."""

from __future__ import annotations

from pathlib import Path

import pytest
from project_folders import SOUND, read, with_line

from calc.project import Effective, Project, changes_in, network

CHAIN = (
    with_line("{elevation: 171.0 m}", "{elevation: 171.0 m, withdrawal: 10 L/s}")
    + """\
cases:
  third: {after: second, times: {junctions.*.withdrawal: 3}}
  first: {times: {junctions.marl-cross.withdrawal: 2}, with: {reservoirs.upper.level: 210 m}}
  second:
    after: first
    times: {junctions.marl-*.withdrawal: 0.5}
    with: {reservoirs.*.level: 205 m, reservoirs.vell.level: 180 m}
  reset: {after: third, with: {junctions.marl-cross.withdrawal: 7 L/s}}
  onward: {after: reset, times: {junctions.*.withdrawal: 2}}
"""
)


@pytest.mark.parametrize(
    ("case", "withdrawal", "upper", "vell"),
    [
        ("base", 0.010, 214.6, 183.0),
        ("first", 0.020, 210.0, 183.0),  # 10 × 2
        ("second", 0.010, 205.0, 180.0),  # × 0.5; every level 205, then vell by the later line
        ("third", 0.030, 205.0, 180.0),  # × 3
        ("reset", 0.007, 205.0, 180.0),  # set, which drops what was before
        ("onward", 0.014, 205.0, 180.0),  # 7 × 2
    ],
)
def test_a_chain_worked_by_hand(tmp_path: Path, case: str, withdrawal: float, upper: float, vell: float) -> None:
    got = network(read(tmp_path, CHAIN), case, 1e-6)
    assert got.withdrawal[2] == pytest.approx(withdrawal, rel=1e-15)
    assert got.level.tolist()[:2] == [upper, vell]


def test_changes_name_the_lines_in_force(tmp_path: Path) -> None:
    project = read(tmp_path, CHAIN)
    taken = ("junctions", "marl-cross", "withdrawal")
    third = changes_in(project, "third")[taken]
    assert [(one.case, one.how, one.stated.si) for one in third] == [
        ("first", "times", 2.0),
        ("second", "times", 0.5),
        ("third", "times", 3.0),
    ]
    onward = changes_in(project, "onward")[taken]
    assert [(one.case, one.how, one.path) for one in onward] == [
        ("reset", "with", "junctions.marl-cross.withdrawal"),
        ("onward", "times", "junctions.*.withdrawal"),
    ]
    assert str(onward[1].stated.mark) == "network.yaml:27:58"
    assert changes_in(project, "base") == {}


def told(project: Project, case: str) -> dict[tuple[str, str, str], float]:
    """Return the values changed in a case, by taking its changes one by one."""
    found = {}
    for (group, row, field), changes in changes_in(project, case).items():
        value = project.group(group)[row].number(field) if group != "friction" else float("nan")
        for change in changes:
            if isinstance(change.stated.value, str):
                break
            value = change.stated.si if change.how == "with" else value * change.stated.si
        else:
            found[group, row, field] = value
    return found


def test_arrays_agree_with_changes_taken_one_by_one(tmp_path: Path) -> None:
    text = (
        CHAIN
        + """\
  more:
    after: third
    times: {"pipes.*.roughness": 3, "pipes.*-main.length": 1.01, "site.gravity": 1.001}
    with: {pipes.upper-main.open: false, pipes.*.parallel: 2, fluid.temperature: 5 degC}
"""
    )
    project = read(tmp_path, text)
    for case in project.cases:
        now = Effective(project, case)
        for (group, row, field), value in told(project, case).items():
            assert now.number(group, row, field) == value


def test_words_and_flags_change(tmp_path: Path) -> None:
    text = (
        SOUND
        + """\
cases:
  shut: {with: {pipes.sedge-link.open: false}}
  factor: {with: {"pipes.*.law": fixed, "pipes.*.friction_factor": 0.02}}
  haaland: {with: {friction: haaland}}
  both: {after: haaland, with: {pipes.upper-main.law: swamee-jain}}
  back: {after: both, with: {friction: colebrook-white}}
"""
    )
    project = read(tmp_path, text)
    assert network(project, "shut", 1e-6).open.tolist() == [True, False]
    factor = network(project, "factor", 1e-6).pipes
    assert factor.friction_factor.tolist() == [0.02, 0.02]

    def laws(case: str) -> list[str]:
        law = network(project, case, 1e-6).pipes.law
        return [law.words[code] for code in law.codes]

    assert laws("factor") == ["fixed", "fixed"]
    assert laws("haaland") == ["haaland", "haaland"]
    assert laws("both") == ["swamee-jain", "haaland"]
    assert laws("back") == ["swamee-jain", "colebrook-white"]  # a law of its own does not follow the default
    told_laws = changes_in(project, "back")
    assert told_laws["pipes", "sedge-link", "law"][-1].stated.text == "colebrook-white"
    assert told_laws["pipes", "upper-main", "law"][-1].stated.text == "swamee-jain"


def test_a_pipe_with_a_law_of_its_own_does_not_follow_friction(tmp_path: Path) -> None:
    text = with_line("    bore: 250 mm", "    law: haaland\n    bore: 250 mm")
    project = read(tmp_path, text + "cases: {other: {with: {friction: swamee-jain}}}\n")
    law = network(project, "other", 1e-6).pipes.law
    assert [law.words[code] for code in law.codes] == ["swamee-jain", "haaland"]
    assert ("pipes", "sedge-link", "law") not in changes_in(project, "other")


def test_a_field_that_the_file_omits_may_be_set(tmp_path: Path) -> None:
    text = SOUND + "cases: {taken: {with: {junctions.marl-cross.withdrawal: 3 L/s}, times: {junctions.*.inflow: 2}}}\n"
    assert network(read(tmp_path, text), "taken", 1e-6).withdrawal[2] == 0.003


def test_a_value_set_in_a_case_may_have_a_basis(tmp_path: Path) -> None:
    text = SOUND + (
        "references: {S1: {title: Level survey}}\n"
        "cases: {low: {with: {reservoirs.upper.level: {value: 209.20 m, source: S1, grade: surveyed}}}}\n"
    )
    (change,) = changes_in(read(tmp_path, text), "low")["reservoirs", "upper", "level"]
    assert (change.stated.si, change.stated.basis.source) == (209.2, "S1")


def test_the_first_case_may_title_the_base(tmp_path: Path) -> None:
    project = read(tmp_path, SOUND + "cases: {low: {}, base: {title: Normal levels}}\n")
    assert list(project.cases) == ["base", "low"]
    assert project.cases["base"].title is not None
    assert project.cases["base"].title.text == "Normal levels"

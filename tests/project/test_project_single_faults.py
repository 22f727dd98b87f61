"""A fault in one part says nothing false of another; and of a long line only the part at fault is shown."""

from __future__ import annotations

from pathlib import Path

import pytest
from project_folders import SOUND, problems_in, with_line

from calc.problems import WIDEST, ProblemsFound, show

LOW = "cases: {low: {with: {reservoirs.upper.level: 209 m}}}\n"

CASES: list[tuple[str, str, str]] = [
    (
        "bad-id",
        with_line("  sedge-link:", "  sedge link:"),
        "13:3: pipes.sedge link: 'sedge link' is not an id",
    ),
    (
        "duplicate-key",
        with_line("  vell: {level", "  upper: {level"),
        "3:3: reservoirs: the key 'upper' stands twice",
    ),
    (
        "shared-id",
        with_line("  marl-cross: {el", "  upper: {el", 'cases: {low: {times: {"junctions.*.withdrawal": 2}}}\n'),
        "5:3: junctions.upper: 'upper' is also the id of a reservoir",
    ),
    (
        "no-file",
        with_line(
            "reservoirs:\n  upper: {level: 214.60 m}\n  vell: {level: 183.0 m}\n",
            "reservoirs: {table: levels.csv}\n",
            LOW,
        ),
        "1:21: reservoirs: there is no file 'levels.csv'",
    ),
    (
        "no-reservoirs",
        with_line("reservoirs:\n  upper: {level: 214.60 m}\n  vell: {level: 183.0 m}\n", "", LOW),
        "1:1: reservoirs: there are no reservoirs",
    ),
    (
        "wrong-shape",
        SOUND + "cases: {low: [upper], peak: {after: low}}\n",
        "19:14: cases.low: a list stands here",
    ),
    (
        "excluded-pair",
        SOUND + "fluid: {temperature: 10 degC, density: 900 kg/m³}\n",
        "19:31: fluid.density: 'temperature' and 'density' both stand here",
    ),
    (
        "out-of-range",
        SOUND + "cases: {low: {times: {pipes.upper-main.bore: 0}}}\n",
        "19:46: cases.low.times.pipes.upper-main.bore: times 0 makes 'bore' of 'upper-main' 0 m",
    ),
    (
        "out-of-range",
        with_line("length: 1850 m", "length: {value: 1850 m, range: [1860 m, 1870 m]}"),
        "10:21: pipes.upper-main.length: '1850 m' lies outside its range, 1860 m to 1870 m",
    ),
    (
        "out-of-range",
        SOUND + "criteria: {velocity-max: {limit: -2 m/s}}\n",
        "19:34: criteria.velocity-max.limit: '-2 m/s' is out of range; expected a velocity of at least 0 m/s",
    ),
    (
        "wrong-group",
        SOUND + "solver: {start: {marl-cross: 190 m, vell: 190 m}}\n",
        "19:37: solver.start.vell: 'vell' is a reservoir, whose head is its level; expected the id of a junction",
    ),
]


@pytest.mark.parametrize(("code", "text", "said"), CASES, ids=[f"{n}-{case[0]}" for n, case in enumerate(CASES)])
def test_a_fault_drags_no_others_along(tmp_path: Path, code: str, text: str, said: str) -> None:
    (found,) = problems_in(tmp_path, text)
    assert show(found, {}).startswith(f"network.yaml:{said}")
    assert found.code == code


def test_gravity_may_be_taken_as_ten(tmp_path: Path) -> None:
    # as many textbook examples do, common practice
    assert problems_in(tmp_path, SOUND + "site: {gravity: 10 m/s²}\n") == ()


def test_a_value_at_an_end_of_its_range_stands(tmp_path: Path) -> None:
    text = with_line("length: 1850 m", "length: {value: 1.85 km, range: [1850 m, 1870 m]}")
    assert problems_in(tmp_path, text) == ()


@pytest.mark.parametrize(("before", "after"), [(0, 100_000), (100_000, 0), (100_000, 100_000), (300, 90)])
def test_of_a_long_line_the_part_at_fault_is_shown(tmp_path: Path, before: int, after: int) -> None:
    fittings = "{K: 2.5}, " * before + "{K: wide}" + ", {K: 2.5}" * after
    text = with_line("    bore: 384.4 mm", f"    bore: 384.4 mm\n    fittings: [{fittings}]")
    problems = problems_in(tmp_path, text)
    said, line, carets = str(ProblemsFound(problems, {"network.yaml": text})).splitlines()
    assert said.startswith(f"network.yaml:12:{16 + 10 * before + 4}: ")
    assert len(line) <= len(" 12 | ") + WIDEST + len("……")
    assert line[carets.index("^") : carets.index("^") + carets.count("^")] == "wide"
    assert line.startswith(" 12 | …") == (before > 0)
    assert line.endswith("…") == (after > 0)

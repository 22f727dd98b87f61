"""What holds for all problems; one of each stands in ``tests/faulty``."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from project_folders import SOUND, problems_in, with_line

from calc import units
from calc.problems import WIDEST, ProblemsFound, nearest, show
from calc.project import CODES


def test_every_code_in_the_sources_is_declared() -> None:
    sources = Path(__file__).parents[2].joinpath("calc", "project").glob("*.py")
    text = "\n".join(source.read_text("utf-8") for source in sources)
    written = set(re.findall(r'\.note\(\s*[^"]*?"([a-z]+-[a-z-]+)"', text))
    written |= set(re.findall(r'(?:code=|"bad-word" if|code: str = )\s*"([a-z]+-[a-z-]+)"', text))
    assert written <= set(CODES)
    assert set(units.trouble.CODES) <= set(CODES)


def test_the_sound_folder_has_no_problem(tmp_path: Path) -> None:
    assert problems_in(tmp_path, SOUND) == ()


def test_all_problems_come_at_once_in_order(tmp_path: Path) -> None:
    text = with_line("bore: 384.4 mm", "bore: 384.4").replace("1200 m", "1200 kg").replace("{level: 214.60 m}", "{}")
    found = problems_in(tmp_path, text + "friction: moody\ncases: {low: {with: {reservoirs.uper.level: 2 m}}}\n")
    assert [(problem.mark.line, problem.code) for problem in found] == [
        (2, "missing-key"),
        (11, "bare-number"),
        (16, "wrong-dimension"),
        (19, "unknown-law"),
        (20, "unknown-path"),
    ]


def test_the_line_is_shown_with_carets_and_hint(tmp_path: Path) -> None:
    (found,) = problems_in(tmp_path, with_line("to: marl-cross", "to: marl-cros"))
    assert show(found, {"network.yaml": with_line("to: marl-cross", "to: marl-cros")}) == (
        "network.yaml:9:9: pipes.upper-main.to: there is no node 'marl-cros'; expected the id of a reservoir or "
        "junction\n"
        "  9 |     to: marl-cros\n"
        "    |         ^^^^^^^^^\n"
        "  hint: did you mean 'marl-cross'?"
    )


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


def test_of_words_equally_near_the_one_that_begins_alike_is_meant() -> None:
    assert nearest("C4O", ["C30", "C40", "C64"]) == "did you mean 'C40'?"
    assert nearest("DN40", ["DN400", "DN450", "DN600"]) == "did you mean 'DN400'?"
    assert nearest("roughnes", ["roughness", "bore"]) == "did you mean 'roughness'?"
    assert nearest("weir", ["roughness", "bore"]) == ""

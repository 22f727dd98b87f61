"""Faulty folders through ``inspect``: one problem each, at its place, in its words, with a way out."""

from __future__ import annotations

import re
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path

import pytest
from faulty_folders import SOUND_FOLDERS, FaultyFolder, faulty_folders, sound_folder

from calc import pipeline
from calc.problems import ProblemsFound
from calc.project import CODES

Inside = Callable[..., tuple[int, str, str]]

FOLDERS = faulty_folders()
SOURCES = Path(__file__).parents[2] / "calc"


@pytest.mark.parametrize("fault", FOLDERS, ids=[f"{one.theme}-{one.name}" for one in FOLDERS])
def test_a_fault_is_told_once_at_its_place_with_a_way_out(fault: FaultyFolder, tmp_path: Path, inside: Inside) -> None:
    folder = fault.write(tmp_path / "works")
    status, said, told = inside("inspect", folder)
    assert (status, said) == (2, "")
    first, *rest, count = told.splitlines()
    assert count == "1 problem", told
    place = fault.place or f"{folder}:1:1"
    assert first.startswith(f"{place}: {fault.says}"), told
    assert "; expected " in first or any(line.startswith("  hint: ") for line in rest), told
    assert [line.removeprefix("  hint: ") for line in rest if line.startswith("  hint: ")] == [fault.hint] * bool(
        fault.hint
    )
    carets = [(above, line) for above, line in pairwise(rest) if re.fullmatch(r" *\| *\^+", line)]
    assert len(carets) == bool(fault.length)
    for above, line in carets:
        assert line.count("^") == min(fault.length, len(above) - line.index("^")), told
    with pytest.raises(ProblemsFound) as found:
        pipeline.read(folder)
    assert [problem.code for problem in found.value.problems] == [fault.code]


@pytest.mark.parametrize("name", SOUND_FOLDERS)
def test_the_sound_folders_have_no_problem(name: str, tmp_path: Path, inside: Inside) -> None:
    for file, text in sound_folder(name).items():
        (tmp_path / file).write_text(text, "utf-8")
    status, said, told = inside("inspect", tmp_path)
    assert (status, told) == (0, "")
    assert said.splitlines()[-1].startswith("no problems; ")


def test_names_are_told_once() -> None:
    names = [one.name for one in FOLDERS]
    assert len(set(names)) == len(names)


def test_every_code_has_a_faulty_folder() -> None:
    """Those of `calc.project` by its list; those of `calc.yamlfile` as they stand in its sources."""
    text = "\n".join(source.read_text("utf-8") for source in (SOURCES / "yamlfile").glob("*.py"))
    written = set(re.findall(r'(?<![\w"])"([a-z]+(?:-[a-z0-9]+)+)"', text)) - NO_CODES
    assert len(written) > 25
    assert {one.code for one in FOLDERS} >= (set(CODES) | written) - SEVERAL


NO_CODES = {"utf-8", "expected-a"}
"""Texts in those sources that look like codes."""

SEVERAL = {"too-many-problems"}
"""Codes that come only in company: of a thousand problems."""

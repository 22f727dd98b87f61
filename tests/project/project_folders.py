"""Small folders for the tests of `calc.project`, and the sections that stand in for those of other layers."""

from __future__ import annotations

from pathlib import Path

from calc.components import Field, Quantity, Text, Word
from calc.kinds import ELEVATION, FLOW
from calc.problems import Problem, ProblemsFound
from calc.project import Later, Project, SectionSchema, read_project

SECTIONS = (
    SectionSchema(
        "solver",
        (
            Field("method", Word(("bracketing", "newton"))),
            Field("tolerance", Quantity(FLOW, above=0.0)),
        ),
        by_node=(Field("start", Quantity(ELEVATION)),),
        later=(Later("method", "loop-correction", "use newton"), Later("trials", "", "leave it out")),
    ),
    SectionSchema(
        "display",
        (Field("units", Word(("SI",))), Field("flow", Text()), Field("paper", Word(("A4", "Letter")))),
        later=(Later("units", "US", "use SI"),),
    ),
)

SOUND = """\
reservoirs:
  upper: {level: 214.60 m}
  vell: {level: 183.0 m}
junctions:
  marl-cross: {elevation: 171.0 m}
pipes:
  upper-main:
    from: upper
    to: marl-cross
    length: 1850 m
    bore: 384.4 mm
    roughness: 0.15 mm
  sedge-link:
    from: marl-cross
    to: vell
    length: 1200 m
    bore: 250 mm
    roughness: 0.15 mm
"""
"""18 lines; what is added begins at line 19."""


def read(folder: Path, text: str = SOUND, **others: str) -> Project:
    """Write files into a folder and read it; ``others`` are CSV tables by the stem of their name."""
    folder.mkdir(parents=True, exist_ok=True)
    (folder / "network.yaml").write_text(text, encoding="utf-8")
    for stem, content in others.items():
        (folder / f"{stem}.csv").write_text(content, encoding="utf-8")
    return read_project(folder, SECTIONS)


def problems_in(folder: Path, text: str, **others: str) -> tuple[Problem, ...]:
    """Return the problems of a folder; empty when it reads."""
    try:
        read(folder, text, **others)
    except ProblemsFound as found:
        return found.problems
    return ()


def with_line(old: str, new: str, added: str = "") -> str:
    """Return the sound folder with one text replaced where it first stands, and lines added at the end."""
    assert old in SOUND
    return SOUND.replace(old, new, 1) + added

"""Sizes, materials and flow coefficients as a project states them, in YAML and in tables."""

from __future__ import annotations

from pathlib import Path

import pytest
from project_folders import SOUND, problems_in, read, with_line

from calc.components import Basis, Record
from calc.project import Effective, network

SIZED = {
    "mapping": "    bore: {size: DN400, standard: EN 545, class: C40, source: S1, grade: drawing}",
    "fields": "    size: {value: DN400, source: S1, grade: drawing}\n    standard: EN 545\n    class: C40",
    "blanks and capitals": "    bore: {size: dn 400, standard: en545, class: c 40, source: S1, grade: drawing}",
}
REFERENCES = "references: {S1: {title: Schedule of pipes}}\n"
"""DN400 of class C40: 429 mm outside, 6.0 + 1.3 + 0.4 mm nominal wall, 5 mm of cement mortar (EN 545:2010)."""


def sized(folder: Path, lines: str, **tables: str) -> Record:
    return read(folder, REFERENCES + SOUND.replace("    bore: 384.4 mm", lines), **tables).pipes["upper-main"]


@pytest.mark.parametrize("way", SIZED)
def test_a_size_gives_dimensions_rating_and_bore(tmp_path: Path, way: str) -> None:
    pipe = sized(tmp_path, SIZED[way])
    held = {name: pipe.number(name) for name in ("outside_diameter", "wall", "lining", "pressure_rating", "bore")}
    assert held == pytest.approx(
        {"outside_diameter": 0.429, "wall": 0.0077, "lining": 0.005, "pressure_rating": 4e6, "bore": 0.4036}, rel=1e-12
    )
    wall, bore = pipe.stated["wall"], pipe.stated["bore"]
    assert (wall.shipped, wall.mark.file, wall.basis.grade) == (True, "calc/data/sizes.yaml", "drawing")
    assert wall.basis.source.startswith("S1: DN400 to EN 545, class C40, at network.yaml:12:")
    assert (bore.follows, bore.shipped) == (True, False)


def test_what_is_stated_takes_the_place_of_the_table(tmp_path: Path) -> None:
    """EN 545 has 5 mm of lining and 40 bar; the project says 9 mm, 6.7 mm of wall and 25 bar."""
    lines = f"{SIZED['fields']}\n    lining: 9 mm\n    wall: 6.7 mm\n    pressure_rating: 25 bar"
    pipe = sized(tmp_path, lines)
    assert pipe.number("bore") == pytest.approx(0.429 - 2 * (0.0067 + 0.009), rel=1e-12)
    assert pipe.number("pressure_rating") == pytest.approx(25e5)
    assert (pipe.stated["lining"].shipped, pipe.stated["pressure_rating"].shipped) == (False, False)


def test_an_outside_diameter_stands_without_a_size_and_is_not_lined(tmp_path: Path) -> None:
    project = read(tmp_path, SOUND.replace("    bore: 384.4 mm", "    outside_diameter: 16 in\n    wall: 0.375 in"))
    pipe = project.pipes["upper-main"]
    assert pipe.number("bore") == pytest.approx((16 - 0.75) * 0.0254, rel=1e-12)
    assert pipe.stated["lining"].shipped
    assert "pipes.*.lining" in dict(project.defaults)


@pytest.mark.parametrize(
    ("size", "standard", "name", "outer", "wall", "lining", "rated"),
    [
        ("DN200", "EN 545", "K9", 222, 6.3, 4, 62e5),
        ("DN110", "ISO 4427", "PE100 SDR11", 110, 10.0, 0, 16e5),
        ("DN315", "ISO 1452", "SDR26", 315, 12.1, 0, 10e5),
        ("NPS12", "ASME B36.10M", "STD", 323.8, 9.53, 0, None),
        ("DN300", "ASME B36.10M", "schedule 40", 323.8, 10.31, 0, None),
        ("12 in", "AWWA C900", "DR18", 13.20 * 25.4, 0.733 * 25.4, 0, 235 * 6894.757),
        ("12 in", "AWWA C151", "PC350", 13.20 * 25.4, 0.28 * 25.4, 25.4 / 16, 350 * 6894.757),
    ],
)
def test_one_size_of_each_standard(
    tmp_path: Path, size: str, standard: str, name: str, outer: float, wall: float, lining: float, rated: float | None
) -> None:
    """As the standards have them, from memory but for EN 545 and ISO 4427, in mm."""
    pipe = sized(tmp_path, f"    bore: {{size: {size}, standard: {standard}, class: {name}}}")
    assert pipe.number("bore") * 1000 == pytest.approx(outer - 2 * (wall + lining), rel=1e-9)
    assert pipe.number("pressure_rating") == pytest.approx(rated, rel=1e-6, nan_ok=True) if rated else True
    assert ("pressure_rating" in pipe.stated) == (rated is not None)


CASES = """\
cases:
  narrow: {times: {pipes.upper-main.bore: 0.9}}
  relaid: {after: narrow, with: {pipes.upper-main.bore: 300 mm}}
  rough: {with: {pipes.upper-main.roughness: {material: old-cast-iron}}}
"""


def test_cases_change_the_bore_of_a_size_and_take_materials(tmp_path: Path) -> None:
    project = read(tmp_path, REFERENCES + SOUND.replace("    bore: 384.4 mm", SIZED["mapping"]) + CASES)
    bores = {case: Effective(project, case).number("pipes", "upper-main", "bore") for case in project.cases}
    assert bores == pytest.approx({"base": 0.4036, "narrow": 0.9 * 0.4036, "relaid": 0.3, "rough": 0.4036})
    assert Effective(project, "rough").number("pipes", "upper-main", "roughness") == pytest.approx(0.0025)


@pytest.mark.parametrize("field", ["size", "standard", "class", "outside_diameter", "wall", "lining"])
@pytest.mark.parametrize("how", ["with", "times"])
def test_cases_do_not_change_dimensions(tmp_path: Path, field: str, how: str) -> None:
    text = REFERENCES + SOUND.replace("    bore: 384.4 mm", SIZED["mapping"])
    text += f"cases: {{other: {{{how}: {{pipes.upper-main.{field}: 2}}}}}}\n"
    (problem,) = problems_in(tmp_path, text)
    assert (problem.code, problem.hint) == ("fixed-field", "set 'bore' in the case, as a plain bore such as '384.4 mm'")
    assert problem.found == f"'{field}' is the same in every case"


def test_a_material_gives_its_typical_value(tmp_path: Path) -> None:
    text = SOUND.replace("roughness: 0.15 mm", "roughness: {material: cast-iron, source: S1, page: 4}", 1)
    stated = read(tmp_path, REFERENCES + text).pipes["upper-main"].stated["roughness"]
    assert stated.si == pytest.approx(0.00026)
    assert (stated.shipped, stated.written) == (True, "0.26 mm")
    assert stated.basis.source.startswith("S1, p. 4: cast-iron at network.yaml:13:")
    assert "range 0.25 to 0.26 mm" in stated.basis.source


def test_other_fields_take_no_material(tmp_path: Path) -> None:
    found = problems_in(tmp_path, with_line("length: 1850 m", "length: {material: cast-iron}"))
    assert {problem.code for problem in found} == {"unknown-key", "missing-key"}


def test_kv_and_cv_may_stand_bare(tmp_path: Path) -> None:
    """IEC 60534: Kv in m³/h, Cv in US gallons (231 cubic inches) a minute."""
    listing = "[{Kv: 360}, {Kv: 0.1 m³/s}, {Cv: 500}, {Cv: 500 gpm}, {Cv: 1.2e3}]"
    project = read(tmp_path, with_line("    bore: 250 mm", f"    fittings: {listing}\n    bore: 250 mm"))
    parts = project.pipes["sedge-link"].parts["fittings"]
    gallon = 231 * 0.0254**3 / 60
    assert [part.number("Kv") for part in parts[:2]] == pytest.approx([0.1, 0.1])
    assert [part.number("Cv") for part in parts[2:]] == pytest.approx([500 * gallon, 500 * gallon, 1200 * gallon])
    assert parts[0].stated["Kv"].unit == "m³/h"


@pytest.mark.parametrize("text", ["Kv: 0", "Kv: -3", "Kv: 200 kg", "Kv: .inf", "Cv: 1e400", "Cv: many", "K: 2 deg"])
def test_flow_coefficients_out_of_range(tmp_path: Path, text: str) -> None:
    (problem,) = problems_in(tmp_path, with_line("    bore: 250 mm", f"    fittings: [{{{text}}}]\n    bore: 250 mm"))
    assert problem.mark.line == SOUND.splitlines().index("    bore: 250 mm") + 1


def test_computed_fittings_follow_the_bore_of_the_case(tmp_path: Path) -> None:
    """A step from 250 to 200 mm: 0.5 (1 - 0.64) = 0.18 on 200 mm; from 160 mm: (1 - 0.64)² = 0.1296 on 160 mm."""
    listing = "[{kind: step, onward_bore: 200 mm}, {kind: bend, angle: 90 deg, radius_ratio: 1}, {K: 2, bore: 0.3 m}]"
    text = with_line("    bore: 250 mm", f"    fittings: {listing}\n    bore: 250 mm")
    project = read(tmp_path, text + "cases: {narrow: {with: {pipes.sedge-link.bore: 160 mm}}}\n")
    base, narrow = (network(project, case, 1e-6).pipes.fittings for case in ("base", "narrow"))
    assert base.coefficient_forward == pytest.approx([0.18, 0.131 + 1.847 / 2**3.5, 2.0])
    assert base.coefficient_reverse == pytest.approx([0.36**2, 0.131 + 1.847 / 2**3.5, 2.0])
    assert base.bore == pytest.approx([0.2, 0.25, 0.3])
    assert narrow.coefficient_forward == pytest.approx([0.36**2, 0.131 + 1.847 / 2**3.5, 2.0])
    assert narrow.coefficient_reverse == pytest.approx([0.18, 0.131 + 1.847 / 2**3.5, 2.0])
    assert narrow.bore == pytest.approx([0.16, 0.16, 0.3])


HEADER = "id,from,to,length [m],bore [mm],size,standard,class,roughness [mm],hazen_williams_c,law,open,parallel"
HEADER += ",pressure_rating [bar],lining [mm],source,page,grade,note"
TABLE = f"""\
{HEADER}
upper-main,upper,marl-cross,1850,,DN400,EN 545,C40,0.06,,,true,1,,9,S1,7,drawing,as laid
sedge-link,marl-cross,vell,1200,250,,,,,130,hazen-williams,,2,16,,S1,,,
"""
FROM_TABLE = REFERENCES + SOUND.partition("pipes:")[0] + "pipes: {table: pipes.csv}\n"


def test_a_table_holds_every_scalar_field(tmp_path: Path) -> None:
    pipes = read(tmp_path, FROM_TABLE, pipes=TABLE).pipes
    upper, sedge = pipes["upper-main"], pipes["sedge-link"]
    assert upper.number("bore") == pytest.approx(0.429 - 2 * (0.0077 + 0.009))
    assert (upper.number("roughness"), upper.flag("open", default=False)) == (pytest.approx(6e-5), True)
    assert (sedge.number("hazen_williams_c"), sedge.text("law"), sedge.number("parallel")) == (130, "hazen-williams", 2)
    assert sedge.number("pressure_rating") == pytest.approx(16e5)
    length = upper.stated["length"]
    column = TABLE.splitlines()[1].index("1850") + 1
    assert (length.mark.file, length.mark.line, length.mark.column) == ("pipes.csv", 2, column)
    assert length.basis == Basis("S1", "7", "drawing", "as laid")
    assert upper.stated["wall"].basis.source.startswith("S1, p. 7: DN400 to EN 545, class C40, at pipes.csv:2:")
    assert sedge.stated["bore"].basis.source == "S1"


@pytest.mark.parametrize(
    ("old", "new", "code", "column"),
    [
        ("DN400", "DN401", "unknown-size", "DN401"),
        ("EN 545", "EN 546", "unknown-size", "EN 546"),
        (",C40,", ",C45,", "unknown-size", "C45"),
        (",C40,", ",,", "missing-key", "DN400"),
        ("EN 545,C40", ",C40", "missing-key", "DN400"),
        (",250,", ",250 mm,", "not-a-number", "250 mm"),
        (",130,", ",five,", "not-a-quantity", "five"),
        (",130,", ",1300,", "out-of-range", "1300"),
        ("S1,7", "S9,7", "unknown-reference", "S9"),
        (",drawing,", ",guess,", "bad-word", "guess"),
        ("hazen-williams,", "hazen,", "unknown-law", "hazen"),
        ("true,1", "yes,1", "bad-word", "yes"),
        (",1850,,", ",1850,380,", "excluded-pair", ""),
    ],
)
def test_faults_of_a_table_stand_at_their_cells(tmp_path: Path, old: str, new: str, code: str, column: str) -> None:
    table = TABLE.replace(old, new, 1)
    found = problems_in(tmp_path, FROM_TABLE, pipes=table)
    assert {problem.code for problem in found} == {code}
    if column:
        line = next(k for k, row in enumerate(table.splitlines(), 1) if column in row.split(","))
        (problem,) = found
        assert (problem.mark.file, problem.mark.line) == ("pipes.csv", line)
        assert problem.mark.column == table.splitlines()[line - 1].index(column) + 1

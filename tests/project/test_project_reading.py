"""What a sound folder says: the sample of the format, defaults, fittings, ends, tables, units, order."""

# ruff: noqa: E501 - lines of input and of messages stand whole

from __future__ import annotations

import hashlib
import math
from pathlib import Path

import numpy as np
import pytest
from project_folders import SOUND, problems_in, read, with_line

from calc.components import Network
from calc.project import cases_of, in_order, network, stands_on_pipe, subjects_of

SAMPLE = """\
project: {number: OTM-HY-014, title: Ostrel transfer main, revision: P01, client: Ostrel Water, site: Ostrel, datum: OLD}
purpose: [Flow and direction in each main for all operating levels, Least pressure at the junction]
people: {originator: {name: A. Vell}, checker: {name: B. Marl}, approver: {name: C. Sedge}}
display: {units: SI, flow: L/s, paper: A4}
references: {S1: {title: Level survey, edition: 2, kind: survey}, S2: {title: Schedule}, S4: {title: Meter}, S5: {title: Brief}}
assumptions: {A1: {text: Old mains, state: open, basis: S2, affects: [pipes.upper-main.roughness]}}
revisions: [{revision: P01, date: 2026-11-02, change: First issue for checking}]
fluid: {kind: water, temperature: 10 degC}
site: {altitude: 210 m, gravity: 9.81 m/s²}
friction: colebrook-white
constants:
  transition: {laminar_below: 2000, turbulent_above: 4000}
reservoirs:
  upper: {level: 214.60 m, low: 209.20 m, high: 216.00 m}
  vell:  {level: 183.0 m}
junctions:  {marl-cross: {elevation: 171.0 m, withdrawal: 12 L/s}}
pipes:
  upper-main:
    from: upper
    to: marl-cross
    length: {value: 1850 m, source: S2, page: 14, grade: surveyed, note: along the pipe, range: [1840 m, 1865 m]}
    bore: 384.4 mm
    roughness: 0.15 mm
    law: colebrook-white
    ends: {from: square}
    fittings: [{kind: bend-90, count: 3}, {K: 2.5, note: meter, source: S4}, {K: 0.8, K_reverse: 1.2, at: along, bore: 300 mm}]
    parallel: 1
    open: true
    pressure_rating: 16 bar
  sedge-link: {from: marl-cross, to: vell, length: 1.2 km, bore: 250 mm, friction_factor: 0.02, law: fixed, parallel: 2,
               ends: {to: {entry: 0.45, exit: 0.95}}}
cases:
  drawdown: {title: Sources at lowest operating level, with: {reservoirs.upper.level: 209.20 m}}
  peak:     {title: Peak withdrawal, after: drawdown, times: {"junctions.*.withdrawal": 1.4}}
solver: {method: bracketing, tolerance: 1e-6 L/s, start: {marl-cross: 190 m}}
criteria:
  velocity-max: {limit: 2.5 m/s, applies_to: "pipes.upper-*", cases: [peak], source: S5, page: 3}
  pressure-min: {limit: 100 kPa}
"""


def test_the_sample_reads_whole(tmp_path: Path) -> None:
    project = read(tmp_path, SAMPLE)
    assert project.header.text("number") == "OTM-HY-014"
    assert project.missing == ()
    assert [one.text for one in project.purpose][1] == "Least pressure at the junction"
    assert list(project.people) == ["originator", "checker", "approver"]
    assert project.references["S1"].text("edition") == "2"
    assert project.assumptions["A1"].text("affects") == "pipes.upper-main.roughness"
    assert project.revisions[0].text("date") == "2026-11-02"
    assert list(project.cases) == ["base", "drawdown", "peak"]
    assert project.sections["solver"].parts["start"][0].number("value") == 190.0
    length = project.pipes["upper-main"].stated["length"]
    assert (length.si, length.written, length.unit) == (1850.0, "1850 m", "m")
    assert (length.basis.source, length.basis.page, length.basis.grade) == ("S2", "14", "surveyed")
    assert str(length.mark) == "network.yaml:21:21"
    spread = project.spreads["pipes.upper-main.length"]
    assert (spread.number("low"), spread.number("high")) == (1840.0, 1865.0)


def test_criteria_know_their_subjects_cases_and_kinds(tmp_path: Path) -> None:
    project = read(tmp_path, SAMPLE)
    velocity, pressure = project.criteria["velocity-max"], project.criteria["pressure-min"]
    assert subjects_of(project, velocity) == ("upper-main",)
    assert cases_of(project, velocity) == ("peak",)
    assert velocity.stated["limit"].basis.page == "3"
    assert subjects_of(project, pressure) == ("marl-cross",)
    assert cases_of(project, pressure) == ("base", "drawdown", "peak")
    assert (pressure.number("limit"), pressure.text("kind")) == (100_000.0, "pressure")


def test_deviations_are_shares_or_differences(tmp_path: Path) -> None:
    text = with_line("bore: 384.4 mm", "bore: {value: 384.4 mm, deviation: 0.2 mm}")
    text = text.replace("0.15 mm", "{value: 0.15 mm, deviation: 20 %}", 1)
    project = read(tmp_path, text + "fluid: {temperature: {value: 10 degC, deviation: 2 K}}\n")
    found = {path: record.number("deviation") for path, record in project.spreads.items()}
    assert found == {
        "pipes.upper-main.bore": pytest.approx(0.0002),
        "pipes.upper-main.roughness": 0.2,
        "fluid.temperature": 2.0,
    }


def test_arrays_of_the_sample(tmp_path: Path) -> None:
    """Every number worked by hand from the sample: units to SI, forward and reverse ends, inputs of each law."""
    case = network(read(tmp_path, SAMPLE), "base", 1.3e-6)
    assert case.nodes == ("upper", "vell", "marl-cross")
    assert case.level.tolist()[:2] == [214.6, 183.0]
    assert math.isnan(case.level[2])
    assert case.withdrawal.tolist() == [0.0, 0.0, 0.012]
    assert (case.start.tolist(), case.end.tolist()) == ([0, 2], [2, 1])
    pipes = case.pipes
    assert pipes.length.tolist() == [1850.0, 1200.0]
    assert pipes.bore.tolist() == [0.3844, 0.25]
    assert (pipes.roughness[0], math.isnan(pipes.roughness[1])) == (0.00015, True)
    assert (math.isnan(pipes.friction_factor[0]), pipes.friction_factor[1]) == (True, 0.02)
    assert [pipes.law.words[code] for code in pipes.law.codes] == ["colebrook-white", "fixed"]
    assert pipes.parallel.tolist() == [1.0, 2.0]
    assert (pipes.gravity.tolist(), pipes.viscosity.tolist()) == ([9.81], [1.3e-6])
    assert (pipes.laminar_below.tolist(), pipes.turbulent_above.tolist()) == ([2000.0], [4000.0])
    part = pipes.fittings
    assert part.rows == ("upper-main/from", "upper-main/1", "upper-main/2", "upper-main/3", "sedge-link/to")
    assert part.pipe.tolist() == [0, 0, 0, 0, 1]
    assert part.count.tolist() == [1.0, 3.0, 1.0, 1.0, 1.0]
    assert part.bore.tolist() == [0.3844, 0.3844, 0.3844, 0.3, 0.25]
    # square: 0.5 as water enters the pipe, 1.0 as it leaves; the other end states 0.95 forward, 0.45 in reverse
    assert part.coefficient_forward.tolist() == [0.5, 0.4, 2.5, 0.8, 0.95]
    assert part.coefficient_reverse.tolist() == [1.0, 0.4, 2.5, 1.2, 0.45]


@pytest.mark.parametrize(("shape", "entry"), [("square", 0.5), ("rounded", 0.05), ("projecting", 0.8)])
def test_shapes_of_ends_lose_at_entry_by_shape_and_all_at_exit(tmp_path: Path, shape: str, entry: float) -> None:
    """Entry coefficients are within the ranges of common tables of minor losses; exit 1 is Borda's (1766)."""
    project = read(tmp_path, with_line("    bore: 250 mm", f"    ends: {{to: {shape}}}\n    bore: 250 mm"))
    (end,) = project.pipes["sedge-link"].parts["ends"]
    assert (end.id, end.number("K"), end.number("K_reverse")) == ("sedge-link/to", 1.0, entry)
    assert end.stated["K_reverse"].shipped
    assert end.stated["K_reverse"].mark.file == "calc/data/fittings.yaml"
    assert end.text("kind") == shape


def test_an_end_of_its_own_without_exit_loses_the_velocity_head(tmp_path: Path) -> None:
    project = read(tmp_path, with_line("    bore: 250 mm", "    ends: {to: {entry: 0.3}}\n    bore: 250 mm"))
    (end,) = project.pipes["sedge-link"].parts["ends"]
    assert (end.number("K"), end.number("K_reverse")) == (1.0, 0.3)
    assert "ends.*.exit" in dict(project.defaults)


def test_fittings_come_in_the_order_of_the_water(tmp_path: Path) -> None:
    text = with_line(
        "  sedge-link:\n    from: marl-cross",
        "  sedge-link:\n    ends: {to: square, from: rounded}\n    fittings: [{K: 1}, {K: 2}]\n    from: upper",
    )
    pipe = read(tmp_path, text).pipes["sedge-link"]
    assert [part.id.partition("/")[2] for part in in_order(pipe)] == ["from", "1", "2", "to"]


def test_a_fitting_without_bore_stands_on_that_of_its_pipe(tmp_path: Path) -> None:
    text = with_line("    bore: 250 mm", "    fittings: [{K: 1}, {K: 1, bore: 250 mm}]\n    bore: 250 mm")
    project = read(tmp_path, text + "cases: {wide: {with: {pipes.sedge-link.bore: 300 mm}}}\n")
    pipe = project.pipes["sedge-link"]
    assert [stands_on_pipe(pipe, part) for part in pipe.parts["fittings"]] == [True, False]
    assert network(project, "wide", 1e-6).pipes.fittings.bore.tolist() == [0.3, 0.25]


def test_defaults_are_stated_with_their_places(tmp_path: Path) -> None:
    project = read(tmp_path)
    defaults = dict(project.defaults)
    assert set(defaults) == {
        "project.revision", "fluid.kind", "fluid.temperature", "site.altitude", "site.gravity", "friction",
        "constants.transition.laminar_below", "constants.transition.turbulent_above", "junctions.*.withdrawal",
        "pipes.*.parallel", "pipes.*.open",
    }  # fmt: skip
    assert defaults["site.gravity"].si == 9.80665  # standard gravity, 3rd CGPM 1901
    assert defaults["fluid.temperature"].si == pytest.approx(288.15, abs=1e-12)  # 15 °C
    for stated in defaults.values():
        assert stated.shipped
        assert stated.basis.source
        line = (
            Path(__file__)
            .parents[2]
            .joinpath("calc", "data", "defaults.yaml")
            .read_text("utf-8")
            .splitlines()[stated.mark.line - 1]
        )
        assert line[stated.mark.column - 1 :].startswith(stated.written)
    assert project.missing == ("project.number", "project.title", "project.revision")
    assert project.header.text("title") == tmp_path.name
    assert project.pipes["upper-main"].stated["law"] is project.friction


def test_shipped_kinds_lie_within_the_ranges_of_common_tables(tmp_path: Path) -> None:
    """Ranges: a table of minor losses that cites Streeter & Wylie 1975, Miller 1990, Rahmeyer 2002; tees, angle
    valve, strainer, ball valve, foot valve from memory of handbook ranges."""
    ranges = {
        "bend-90": (0.3, 0.6), "bend-90-long": (0.07, 0.33), "bend-45": (0.1, 0.2), "mitre-90": (1.1, 1.27),
        "mitre-60": (0.4, 0.68), "mitre-45": (0.24, 0.44), "mitre-30": (0.11, 0.19), "gate-valve-open": (0.1, 0.3),
        "butterfly-valve-open": (0.2, 0.6), "globe-valve-open": (3, 10), "non-return-valve-swing": (0.29, 2.5),
        "non-return-valve-tilting": (0.27, 2.62), "non-return-valve-double-door": (1.0, 1.8),
        "tee-through": (0.14, 0.3), "tee-branch": (0.6, 1.0), "angle-valve-open": (2, 5), "strainer": (1, 3),
        "ball-valve-open": (0.03, 0.1), "foot-valve": (0.8, 10), "bend-22": (0.07, 0.15),
    }  # fmt: skip
    listing = ", ".join(f"{{kind: {kind}}}" for kind in ranges)
    text = with_line("    bore: 250 mm", f"    fittings: [{listing}]\n    bore: 250 mm")
    for part in read(tmp_path, text).pipes["sedge-link"].parts["fittings"]:
        low, high = ranges[part.text("kind")]
        assert low <= part.number("K") <= high, part.text("kind")
        assert part.stated["K"].basis.source


def test_a_liquid_of_its_own(tmp_path: Path) -> None:
    dynamic = read(tmp_path / "a", SOUND + "fluid: {kind: brine, density: 1100 kg/m³, viscosity: 1.5 mPa·s}\n").fluid
    assert (dynamic.number("viscosity"), dynamic.text("viscosity_kind")) == (0.0015, "dynamic viscosity")
    kinematic = read(tmp_path / "b", SOUND + "fluid: {density: 998 kg/m³, viscosity: 1.13e-6 m²/s}\n").fluid
    assert (kinematic.number("viscosity"), kinematic.text("viscosity_kind")) == (
        1.13e-6,
        "kinematic viscosity",
    )
    assert "temperature" not in kinematic.stated
    assert (kinematic.text("kind"), kinematic.stated["kind"].shipped) == ("water", True)


def test_an_inflow_is_a_negative_withdrawal(tmp_path: Path) -> None:
    inflow = read(tmp_path / "a", with_line("{elevation: 171.0 m}", "{inflow: 5 L/s}"))
    negative = read(tmp_path / "b", with_line("{elevation: 171.0 m}", "{withdrawal: -5 L/s}"))
    for project in (inflow, negative):
        assert network(project, "base", 1e-6).withdrawal.tolist() == [0.0, 0.0, -0.005]


def same(one: Network, other: Network, tolerance: float = 0.0) -> None:
    """Assert that two networks hold the same numbers."""
    assert (one.nodes, one.pipes.rows) == (other.nodes, other.pipes.rows)
    for name in ("level", "withdrawal", "start", "end", "open"):
        np.testing.assert_allclose(getattr(one, name), getattr(other, name), rtol=tolerance)
    for name in ("length", "bore", "roughness", "friction_factor", "parallel", "gravity", "laminar_below"):
        np.testing.assert_allclose(getattr(one.pipes, name), getattr(other.pipes, name), rtol=tolerance)
    for name in ("count", "coefficient_forward", "coefficient_reverse", "bore", "pipe"):
        got, wanted = getattr(one.pipes.fittings, name), getattr(other.pipes.fittings, name)
        np.testing.assert_allclose(got, wanted, rtol=tolerance)
    assert one.pipes.law.codes.tolist() == other.pipes.law.codes.tolist()


def test_other_units_give_the_same_numbers(tmp_path: Path) -> None:
    """A foot is 0.3048 m, an inch 25.4 mm and a US gallon 231 in³, all exact (NIST SP 811)."""
    gpm = 231 * 0.0254**3 / 60
    metric = f"""\
reservoirs: {{upper: {{level: 213.36 m}}, vell: {{level: 182.88 m}}}}
junctions: {{marl-cross: {{elevation: 170.688 m, withdrawal: {100 * gpm!r} m³/s}}}}
pipes:
  upper-main: {{from: upper, to: marl-cross, length: 1828.8 m, bore: 381 mm, roughness: 0.1524 mm, ends: {{from: square}}}}
  sedge-link: {{from: marl-cross, to: vell, length: 1.2192 km, bore: 254 mm, roughness: 0.1524 mm,
               fittings: [{{K: 2, bore: 203.2 mm}}]}}
site: {{gravity: 9.80665 m/s²}}
"""
    customary = """\
reservoirs: {upper: {level: 700 ft}, vell: {level: 600 ft}}
junctions: {marl-cross: {elevation: 560 ft, withdrawal: 100 gpm}}
pipes:
  upper-main: {from: upper, to: marl-cross, length: 6000 ft, bore: 15 in, roughness: 0.0005 ft, ends: {from: square}}
  sedge-link: {from: marl-cross, to: vell, length: 4000 ft, bore: 10 in, roughness: 0.006 in,
               fittings: [{K: 200 %, bore: 8 in}]}
site: {gravity: 980.665 cm/s²}
"""
    one, other = read(tmp_path / "a", metric), read(tmp_path / "b", customary)
    same(network(one, "base", 1e-6), network(other, "base", 1e-6), 1e-12)


def test_rows_keep_the_order_of_the_files(tmp_path: Path) -> None:
    turned = """\
pipes:
  sedge-link: {roughness: 0.15 mm, bore: 250 mm, length: 1200 m, to: vell, from: marl-cross}
  upper-main: {roughness: 0.15 mm, bore: 384.4 mm, length: 1850 m, to: marl-cross, from: upper}
junctions: {marl-cross: {elevation: 171.0 m}}
reservoirs: {vell: {level: 183.0 m}, upper: {level: 214.60 m}}
"""
    one, other = (
        network(read(tmp_path / "a"), "base", 1e-6),
        network(read(tmp_path / "b", turned), "base", 1e-6),
    )
    assert other.nodes == ("vell", "upper", "marl-cross")
    assert other.pipes.rows == ("sedge-link", "upper-main")
    assert other.pipes.bore.tolist() == one.pipes.bore.tolist()[::-1]
    ends = {
        (row, case.nodes[start], case.nodes[end])
        for case in (one, other)
        for row, start, end in zip(case.pipes.rows, case.start, case.end, strict=True)
    }
    assert ends == {("upper-main", "upper", "marl-cross"), ("sedge-link", "marl-cross", "vell")}


TABLES = {
    "pipes": "length [m],bore [mm],id,to,from,roughness\n"
    "1850,384.4,upper-main,marl-cross,upper,0.15 mm\n1200,250,sedge-link,vell,marl-cross,0.15 mm\n",
    "nodes": "id,elevation [m]\nmarl-cross,171.0\n",
    "levels": "id,level [m]\nupper,214.60\nvell,183.0\n",
}
WITH_TABLES = "reservoirs: {table: levels.csv}\njunctions: {table: nodes.csv}\npipes: {table: pipes.csv}\n"


def test_tables_say_what_yaml_says(tmp_path: Path) -> None:
    project = read(tmp_path / "b", WITH_TABLES, **TABLES)
    same(network(read(tmp_path / "a"), "base", 1e-6), network(project, "base", 1e-6))
    bore = project.pipes["sedge-link"].stated["bore"]
    assert (bore.written, str(bore.mark)) == ("250 mm", "pipes.csv:3:6")
    assert [file.name for file in project.files] == ["levels.csv", "network.yaml", "nodes.csv", "pipes.csv"]


def test_faults_in_tables_stand_at_their_cells(tmp_path: Path) -> None:
    table = TABLES["pipes"].replace("250,sedge", "0.1,sedge").replace("from,roughness", "from,roughnes")
    found = problems_in(tmp_path, WITH_TABLES, **{**TABLES, "pipes": table})
    assert [(str(problem.mark), problem.code) for problem in found if problem.code != "missing-law-input"] == [
        ("pipes.csv:1:33", "unknown-key"),
        ("pipes.csv:3:6", "out-of-range"),
    ]


def test_nothing_stands_beside_a_table(tmp_path: Path) -> None:
    text = WITH_TABLES.replace("{table: nodes.csv}", "{table: nodes.csv, brae: {}}")
    (found,) = problems_in(tmp_path, text, **TABLES)
    assert (str(found.mark), found.code, found.path) == ("network.yaml:2:31", "excluded-pair", "junctions.brae")


@pytest.mark.parametrize(("group", "table"), [("reservoirs", "levels"), ("pipes", "pipes")])
def test_a_table_without_a_row_holds_no_components(tmp_path: Path, group: str, table: str) -> None:
    """One problem of that group, and none that it follows from: what has no row cannot be solved or remarked on."""
    header = TABLES[table].splitlines()[0] + "\n"
    found = problems_in(tmp_path / group, WITH_TABLES, **{**TABLES, table: header})
    assert [(problem.code, problem.path) for problem in found] == [(f"no-{group}", group)]
    broken = problems_in(tmp_path / "broken", WITH_TABLES, **{**TABLES, table: header.replace("id", "name")})
    assert [(problem.code, problem.path) for problem in broken] == [("no-id-column", group)]


def test_the_digest_covers_names_and_bytes_of_all_files(tmp_path: Path) -> None:
    project = read(tmp_path / "a", WITH_TABLES, **TABLES)
    total = hashlib.sha256()
    for name in ("levels.csv", "network.yaml", "nodes.csv", "pipes.csv"):
        content = (tmp_path / "a" / name).read_bytes()
        total.update(f"{len(name)}:{name}{len(content)}:".encode() + content)
    assert project.digest == f"sha256:{total.hexdigest()}"
    changed = {**TABLES, "nodes": TABLES["nodes"].replace("171.0", "171.00")}
    assert read(tmp_path / "b", WITH_TABLES, **changed).digest != project.digest

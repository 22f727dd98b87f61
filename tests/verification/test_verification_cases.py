"""The shipped cases of the verification record against where they come from."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import mpmath  # type: ignore[import-untyped]
import pytest
import yaml
from fluids.fittings import contraction_conical, diffuser_conical
from fluids.piping import nearest_pipe

from calc import verification
from calc.components import Record
from calc.project import read_project
from calc.solve.section import SOLVER
from calc.verification import Check
from calc.verification.reading import read_cases

PUBLISHED = Path(__file__).parents[1] / "published"
DATA = Path(verification.__file__).parents[1] / "data" / "verification"
PUBLISHED_CASES: dict[str, dict[str, Any]] = {
    case["id"]: case
    for name in ("branching", "fittings", "friction", "networks", "systems")
    for case in yaml.safe_load((PUBLISHED / f"{name}.yaml").read_text(encoding="utf-8"))
}


def test_the_factors_are_those_of_the_published_grid(checks: dict[str, Check]) -> None:
    rows = json.loads((PUBLISHED / "colebrook_grid.json").read_text(encoding="utf-8"))["rows"]
    digits = {(row["Re"], float(row["rel_rough"])): row["f"] for row in rows}
    for name, key in (("smooth", (4e3, 0.0)), ("middle", (1e5, 1e-3)), ("rough", (1e8, 5e-2))):
        check = checks[f"colebrook-{name}/friction_factor"]
        assert check.stated.written == digits[key]


STARS = {
    "three-levels": ("BR-02", {"1": "highest", "2": "middle", "3": "lowest"}),
    "three-levels-us": ("BR-03", {"A": "highest", "B": "middle", "C": "lowest"}),
    "five-levels": ("BR-20", {letter: letter.lower() for letter in "ABCDE"}),
    "four-levels": ("BR-18", {letter: letter.lower() for letter in "ABCD"}),
}
FRICTION = {
    "f": ("friction_factor", "f"),
    "eps": ("roughness", "eps_m"),
    "HW": ("hazen_williams_c", "C"),
    "manning": ("manning_n", "n"),
}


@pytest.mark.parametrize("folder", STARS)
def test_the_reservoirs_are_those_of_the_published_cases(folder: str, checks: dict[str, Check]) -> None:
    name, mains = STARS[folder]
    case = PUBLISHED_CASES[name]
    project = read_project(DATA / folder, ())
    assert project.site.number("gravity") == pytest.approx(case["inputs"]["g"], rel=1e-12)
    assert len(project.pipes) == len(case["inputs"]["pipes"])
    for entry, pipe in zip(case["inputs"]["pipes"], project.pipes.values(), strict=True):
        main, pond = pipe.id, pipe.text("from")
        assert mains[entry["id"]] in main
        assert pipe.number("length") == pytest.approx(entry["L_m"], rel=1e-12)
        assert pipe.number("bore") == pytest.approx(entry["D_m"], rel=1e-12)
        assert project.reservoirs[pond].number("level") == pytest.approx(entry["H_m"], rel=1e-12)
        field, key = FRICTION[entry["law"]]
        assert pipe.number(field) == pytest.approx(entry[key], rel=1e-12)
        held(checks[f"{folder}/pipes-{main}-flow"], case["expected"][f"Q_{entry['id']}"])


def held(check: Check, published: dict[str, float]) -> None:
    """Assert that a check expects what was published, and allows no more than the publication does."""
    assert check.expected * published.get("scale", 1.0) == pytest.approx(published["value"], rel=1e-9)
    within = published.get("rtol", 0.0) * abs(check.expected) + published.get("atol", 0.0)
    assert check.allowed <= within * (1 + 1e-9)


def test_the_two_loops_are_the_published_ones(checks: dict[str, Check]) -> None:
    case = PUBLISHED_CASES["NB-TL-01"]
    inputs, project = case["inputs"], read_project(DATA / "two-loops", ())
    constants = project.constants["hazen_williams"]
    names = ("coefficient", "flow_exponent", "bore_exponent")
    assert [constants.number(name) for name in names] == [inputs[name] for name in ("omega", "n", "m")]
    assert project.reservoirs["node-1"].number("level") == inputs["nodes_H_m"]["1"]
    assert len(project.junctions) == len(inputs["withdrawal_m3h"]) == 6
    for name, flow in inputs["withdrawal_m3h"].items():
        junction = project.junctions[f"node-{name}"]
        assert junction.number("withdrawal") * 3600 == pytest.approx(flow, rel=1e-12)
        assert junction.number("elevation") == inputs["elev_m"][name]
        held(checks[f"two-loops/junctions-node-{name}-pressure_head"], case["expected"][f"p_{name}"])
    for link, pipe in zip(inputs["links"], project.pipes.values(), strict=True):
        assert (pipe.text("from"), pipe.text("to")) == (f"node-{link['a']}", f"node-{link['b']}")
        assert pipe.number("length") == link["L_m"]
        assert pipe.number("bore") == pytest.approx(0.0254 * link["D_in"], rel=1e-15)
        assert pipe.number("hazen_williams_c") == inputs["C"]


def test_the_two_junctions_are_those_of_the_exact_case(checks: dict[str, Check]) -> None:
    case = PUBLISHED_CASES["BR-25"]
    project = read_project(DATA / "two-junctions", ())
    names = {"A": "pond-a", "B": "pond-b", "Cc": "pond-c", "Dd": "pond-d", "J": "junction-j", "K": "junction-k"}
    for node, stated in case["inputs"]["nodes"].items():
        group, field = ("reservoirs", "level") if "H" in stated else ("junctions", "withdrawal")
        assert project.group(group)[names[node]].number(field) == pytest.approx(*stated.values(), rel=1e-12)
    for link, pipe in zip(case["inputs"]["links"], project.pipes.values(), strict=True):
        assert pipe.id == f"main-{link['id'].lower()}"
        assert (pipe.text("from"), pipe.text("to")) == (names[link["a"]], names[link["b"]])
        stated = [pipe.number(name) for name in ("length", "bore", "hazen_williams_c")]
        assert stated == pytest.approx([link["L_m"], link["D_m"], link["C"]], rel=1e-12)
    for name in ("AJ", "JK", "KD"):
        held(checks[f"two-junctions/pipes-main-{name.lower()}-flow"], case["expected"][f"Q_{name}"])
    for name in "JK":
        held(
            checks[f"two-junctions/junctions-junction-{name.lower()}-head"],
            {**case["expected"][f"H_{name}"]},
        )


SINGLE = {
    "hazen-williams-forms": {
        "six-inch": ("HW-FORM-02", "h_velocity_form"),
        "twelve-inch": ("HW-FORM-04", "h_velocity_form"),
        "twenty-four-inch": ("HW-FORM-06", "h_velocity_form"),
        "fire-main": ("HW-FIRE-01", "h"),
    },
    "manning-capacities": {
        "twelve-inch": ("MN-CONV-01", "conveyance_cfs"),
        "eighteen-inch": ("MN-CONV-03", "conveyance_cfs"),
        "twenty-four-inch": ("MN-US-24", "Q_cfs"),
        "thirty-six-inch": ("MN-CONV-06", "conveyance_cfs"),
        "forty-eight-inch": ("MN-CONV-08", "conveyance_cfs"),
    },
}
CUBIC_FOOT = 0.3048**3


@pytest.mark.parametrize(("folder", "pipe"), [(folder, pipe) for folder, pipes in SINGLE.items() for pipe in pipes])
def test_single_pipes_are_the_published_ones(folder: str, pipe: str, checks: dict[str, Check]) -> None:
    name, key = SINGLE[folder][pipe]
    case = PUBLISHED_CASES[name]
    inputs, published = case["inputs"], dict(case["expected"][key])
    project = read_project(DATA / folder, ())
    stated = project.pipes[pipe]
    assert stated.number("bore") == pytest.approx(inputs["D_m"], rel=1e-12)
    if folder == "manning-capacities":
        assert stated.number("manning_n") == inputs["n"]
        fall = project.reservoirs["high"].number("level") - project.reservoirs["low"].number("level")
        assert fall / stated.number("length") == pytest.approx(inputs["S"], rel=1e-12)
        published["scale"] = 1 / CUBIC_FOOT
        published["value"] *= math.sqrt(inputs["S"]) if key == "conveyance_cfs" else 1.0
        (check,) = (
            one for one in checks.values() if one.id.endswith(f"/pipes-{pipe}-flow") and folder_of(one) == folder
        )
    else:
        assert stated.number("hazen_williams_c") == inputs["C"]
        assert stated.number("length") == pytest.approx(inputs["L_m"], rel=1e-12)
        withdrawal = project.junctions[stated.text("to")].number("withdrawal")
        assert withdrawal == pytest.approx(inputs["Q_m3s"], rel=1e-8)
        check = checks[f"{folder}/pipes-{pipe}-friction_loss"]
        assert check.source_class == case["expected_origin"] == "own-solution"
    held(check, published)


def folder_of(check: Check) -> str:
    (case,) = (case for case in read_cases() if case.id == check.id.partition("/")[0])
    return case.works


def test_the_ladder_by_loops_is_the_exact_one(checks: dict[str, Check]) -> None:
    case = PUBLISHED_CASES["LP-06"]
    names = dict(zip("ABCDEF", ("source", "birch", "cedar", "dale", "elder", "fern"), strict=True))
    project = read_project(DATA / "ladder-by-loops", (SOLVER,))
    assert project.sections["solver"].text("method") == "loop-correction"
    assert project.reservoirs["source"].number("level") == case["inputs"]["nodes"]["A"]["H"]
    for name, junction in project.junctions.items():
        (letter,) = (one for one, own in names.items() if own == name)
        assert junction.number("withdrawal") == pytest.approx(case["inputs"]["nodes"][letter]["q"], rel=1e-12)
    for link, pipe in zip(case["inputs"]["links"], project.pipes.values(), strict=True):
        assert (pipe.text("from"), pipe.text("to")) == (names[link["a"]], names[link["b"]])
        length, bore, c = (pipe.number(name) for name in ("length", "bore", "hazen_williams_c"))
        assert 10.67 * length / (c**1.852 * bore**4.8704) == pytest.approx(link["r"], rel=1e-12)
    for name, key in (("birch-elder", "Q_BE"), ("cedar-fern", "Q_CF")):
        held(checks[f"ladder-by-loops/pipes-{name}-flow"], case["expected"][key])
    for name, key in (("elder", "H_E"), ("fern", "H_F")):
        held(checks[f"ladder-by-loops/junctions-{name}-head"], case["expected"][key])


FITTINGS = {
    "sudden-widening/fittings-widening-to-twice": ("K-EXP-50", "K"),
    "sudden-widening/fittings-widening-by-a-third": ("K-EXP-75", "K"),
    "sudden-widening-exact/fittings-widening-to-twice": ("K-FL-03", "K"),
    "kv/fittings-valve-by-kv": ("VA-09", "value"),
    "cv/fittings-valve-by-cv": ("VA-10", "value"),
}


@pytest.mark.parametrize("name", FITTINGS)
def test_coefficients_are_the_published_ones(name: str, checks: dict[str, Check]) -> None:
    case, key = FITTINGS[name]
    held(checks[f"{name}/1-coefficient"], PUBLISHED_CASES[case]["expected"][key])
    pipe = read_project(DATA / "fittings", ()).pipes[name.partition("fittings-")[2]]
    (fitting,) = pipe.parts["fittings"]
    inputs = PUBLISHED_CASES[case]["inputs"]
    if "A1_A2" in inputs:
        ratio = fitting.number("bore") / fitting.number("onward_bore")
        assert ratio**2 == pytest.approx(inputs["A1_A2"], rel=1e-12)
    elif case == "K-FL-03":
        assert [fitting.number(n) for n in ("bore", "onward_bore")] == [inputs["kw"]["Di1"], inputs["kw"]["Di2"]]
    elif case == "VA-09":
        assert (pipe.number("bore"), fitting.stated["Kv"].written) == (0.1, "200")
    else:
        assert (pipe.number("bore"), fitting.stated["Cv"].written) == (pytest.approx(4 * 0.0254), "400")


def test_tapers_are_those_of_the_library_and_bends_those_of_the_table(checks: dict[str, Check]) -> None:
    # fluids 1.x, relations of Crane TP-410; Weisbach's table by D/2R (from memory): 0.5 gives 0.294, 1.0 gives 1.978
    expected = {
        "taper/fittings-gradual-widening": diffuser_conical(Di1=0.1, Di2=0.2, angle=30, method="Crane"),
        "taper/fittings-gradual-narrowing": contraction_conical(Di1=0.2, Di2=0.1, angle=30, method="Crane"),
        "bend/fittings-right-angle": 0.294,
        "bend/fittings-tight-bend": 1.978,
    }
    for name, value in expected.items():
        assert checks[f"{name}/1-coefficient"].expected == pytest.approx(value, rel=1e-14), name
    ratios = [pipe.parts["fittings"][0].number("radius_ratio") for pipe in bends()]
    assert [1 / (2 * ratio) for ratio in ratios] == [0.5, 1.0]


def bends() -> list[Record]:
    pipes = read_project(DATA / "fittings", ()).pipes
    return [pipes[name] for name in ("right-angle", "tight-bend")]


def test_bores_are_those_of_the_dimensions(checks: dict[str, Check]) -> None:
    # EN 545:2010 and ISO 4427-2 as on open pages, the allowance on the least wall from memory
    wall = 6.0 + 1.3 + 0.001 * 400
    assert checks["size-allowance/pipes-ductile-bore"].expected == pytest.approx((429 - 2 * (wall + 5.0)) / 1000)
    assert checks["size-published/pipes-plastic-bore"].expected == pytest.approx((315 - 2 * 28.6) / 1000)
    _, inside, _, _ = nearest_pipe(NPS=12, schedule="40")
    assert checks["size-library/pipes-steel-bore"].expected == pytest.approx(inside, rel=1e-12)


def test_the_fitted_link_is_the_closed_form(checks: dict[str, Check]) -> None:
    pipe = read_project(DATA / "fitted-link", ()).pipes["link"]
    parts = [part for group in pipe.parts.values() for part in group]
    total = sum(part.number("K") * part.number("count") for part in parts)
    assert total == pytest.approx(10.0, rel=1e-14)
    velocity = math.sqrt(2 * 9.81 * 10 / (0.02 * 100 / 0.2 + total))
    assert checks["fitted-link/pipes-link-velocity"].expected == pytest.approx(velocity, rel=1e-15)
    assert checks["fitted-link/pipes-link-fitting_loss"].expected == total * velocity**2 / (2 * 9.81)


def test_explicit_factors_are_those_of_their_equations(checks: dict[str, Check]) -> None:
    # mpmath at 40 digits: 0.25/lg²(k/3.7 + 5.74/Re^0.9), 1/(1.8 lg((k/3.7)^1.11 + 6.9/Re))², and Colebrook–White
    lg = mpmath.log10
    with mpmath.workdps(40):

        def swamee_jain(re: Any, k: Any) -> Any:  # noqa: ANN401
            return mpmath.mpf("0.25") / lg(k / mpmath.mpf("3.7") + mpmath.mpf("5.74") / re ** mpmath.mpf("0.9")) ** 2

        def haaland(re: Any, k: Any) -> Any:  # noqa: ANN401
            rough = (k / mpmath.mpf("3.7")) ** mpmath.mpf("1.11")
            return (mpmath.mpf("1.8") * lg(rough + mpmath.mpf("6.9") / re)) ** -2

        def colebrook(re: Any, k: Any) -> Any:  # noqa: ANN401
            one = lambda x: x + 2 * lg(k / mpmath.mpf("3.7") + mpmath.mpf("2.51") * x / re)  # noqa: E731
            return mpmath.findroot(one, mpmath.mpf(8)) ** -2

        middle, near = (mpmath.mpf("1e5"), mpmath.mpf("1e-3")), (mpmath.mpf("2e6"), mpmath.mpf("1e-4"))
        expected = {
            "swamee-jain-middle": swamee_jain(*middle),
            "haaland-middle": haaland(*middle),
            "swamee-jain-near-colebrook": colebrook(*near),
            "haaland-near-colebrook": colebrook(*near),
        }
        for name, value in expected.items():
            written = checks[f"{name}/friction_factor"].stated.written
            assert mpmath.almosteq(mpmath.mpf(written), value, rel_eps=mpmath.mpf("1e-24")), name


def test_the_ladder_is_exact_by_construction() -> None:
    # Heads and flows of case LP-05; each pipe loses h = 8 f L Q^2 / (g pi^2 D^5), and each junction balances.
    head = {"source": 60, "birch": 54, "cedar": 48, "dale": 52, "elder": 47, "fern": 40}
    flow = {
        "source-birch": 0.09,
        "source-dale": 0.06,
        "birch-cedar": 0.05,
        "birch-elder": 0.02,
        "dale-elder": 0.05,
        "cedar-fern": 0.02,
        "elder-fern": 0.03,
    }
    project = read_project(DATA / "ladder", ())
    assert project.pipes.keys() == flow.keys()
    left = {name: -record.number("withdrawal") for name, record in project.junctions.items()}
    for name, pipe in project.pipes.items():
        start, end = pipe.text("from"), pipe.text("to")
        number = pipe.number
        loss = 8 * number("friction_factor") * number("length") * flow[name] ** 2
        loss /= 9.81 * math.pi**2 * number("bore") ** 5
        assert loss == pytest.approx(head[start] - head[end], rel=1e-13)
        left[end] += flow[name]
        if start in left:
            left[start] -= flow[name]
    assert list(left.values()) == pytest.approx([0.0] * 5, abs=1e-15)


def test_the_grid_is_the_published_one() -> None:
    grid = json.loads((PUBLISHED / "grid_dw_6x6.json").read_text(encoding="utf-8"))
    project = read_project(DATA / "grid", ())
    assert len(project.pipes) == len(grid["links"]) == 60
    for link, pipe in zip(grid["links"], project.pipes.values(), strict=True):
        assert pipe.text("from") == f"node-{link['a'].replace('_', '-')}"
        assert pipe.text("to") == f"node-{link['b'].replace('_', '-')}"
        assert [pipe.number(name) for name in ("length", "bore", "roughness")] == [
            link[name] for name in ("L_m", "D_m", "eps_m")
        ]
    for name, node in grid["nodes"].items():
        own = f"node-{name.replace('_', '-')}"
        if "H" in node:
            assert project.reservoirs[own].number("level") == node["H"]
        else:
            assert project.junctions[own].number("withdrawal") == node["q"]


def test_laminar_flow_is_the_closed_form(checks: dict[str, Check]) -> None:
    check = checks["laminar-link/pipes-link-flow"]
    assert check.expected == pytest.approx(math.pi * 9.81 * 0.1**4 * 0.5 / (128 * 1e-4 * 100), rel=1e-15)

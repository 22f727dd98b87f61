"""A package in US units, read back from the text of its sheets: worked lines and conversions repeated from there.

The arithmetic is the tests' own, and so are the units: the foot of 0.3048 m, the US gallon of 231 cubic inches.
"""

from __future__ import annotations

import json
import math
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pypdfium2  # type: ignore[import-untyped]
import pytest
from accounts import accounted, written

from calc import pipeline
from calc.account import results
from calc.publish.columns import MEASURE, TURNED, widths
from calc.report.document import Table

pytestmark = pytest.mark.pdf

WORKS = """
friction: hazen-williams
fluid: {temperature: 50 degF}
site: {altitude: 480 ft}
reservoirs: {knoll: {level: 704.50 ft}, brink: {level: 655.20 ft}, dell: {level: 601.75 ft}}
junctions: {forks: {elevation: 540.0 ft, withdrawal: 310 gpm}}
pipes:
  knoll-main: {from: knoll, to: forks, length: 6060 ft, bore: 15.13 in, hazen_williams_c: 125}
  brink-main: {from: brink, to: forks, length: 3820 ft, bore: 10.02 in, roughness: 0.002 ft, law: colebrook-white,
               fittings: [{kind: bend-90, count: 2}], ends: {from: square}}
  dell-main: {from: forks, to: dell, length: 1.5 mi, bore: 13.12 in, roughness: 0.0005 ft, law: swamee-jain}
criteria:
  velocity-max: {limit: 6.5 ft/s}
  pressure-min: {limit: 20 psi}
  gradient-max: {limit: 12 ft/1000 ft}
"""
CASES = """
cases:
  low: {title: Low levels, with: {reservoirs.knoll.level: 690 ft, reservoirs.brink.level: 648 ft}}
  peak: {title: Peak withdrawal, times: {junctions.forks.withdrawal: 3}}
"""
DISPLAY = "display: {units: US, paper: Letter}\n"
GPM, FOOT = 60 / (231 * 0.0254**3), 0.3048
NUMBER = r"(−?\d+(?:\.\d+)?(?:×10\^−?\d+)?)"


@pytest.fixture(scope="module")
def package(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the package as the command issues it."""
    folder = written(tmp_path_factory.mktemp("us") / "forks-mains", WORKS, project=DISPLAY)
    command = [sys.executable, "-W", "error", "-m", "calc", "issue", str(folder)]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert done.returncode in (0, 1), done.stderr
    return next((folder / "issued").iterdir())


@pytest.fixture(scope="module")
def sheets(package: Path) -> list[str]:
    opened = pypdfium2.PdfDocument((package / "package.pdf").read_bytes())
    assert {tuple(map(round, page.get_size())) for page in opened} <= {(612, 792), (792, 612)}  # 8.5 by 11 inches
    texts = [re.sub(r"[^\S\n]", "", page.get_textpage().get_text_range()) for page in opened]
    opened.close()
    return texts


@pytest.mark.parametrize("paper", ["A4", "Letter"])
@pytest.mark.parametrize(("units", "beside"), [("US", "SI"), ("SI", "US")])
def test_parallel_columns_find_room(tmp_path: Path, paper: str, units: str, beside: str) -> None:
    display = f"display: {{units: {units}, beside: {beside}, paper: {paper}}}\n"
    account = accounted(tmp_path / "forks-mains", WORKS + CASES, project=display)
    document = pipeline.document(account, "checking")
    wide = 0
    for section in document.sections:
        room = MEASURE[paper] if section.key == "decision" else TURNED[paper]
        for block in section.blocks:
            if isinstance(block, Table):
                assert widths(block, document, close=section.key == "decision").total <= room, block.key
                wide += widths(block, document).turned(paper)
    assert wide  # some tables with parallel columns need a sheet turned on its side


def read(text: str) -> tuple[float, float]:
    """Return a printed number and the worth of its last figure."""
    mantissa, _, power = text.replace("−", "-").partition("×10^")
    scale = 10.0 ** int(power or 0)
    return float(mantissa) * scale, 10.0 ** -len(mantissa.partition(".")[2]) * scale


def found(sheets: list[str], pattern: str) -> Iterator[list[tuple[float, float]]]:
    """Yield the numbers of each place where the sheets print a pattern, ``#`` standing for a number."""
    for text in sheets:
        for match in re.finditer(re.escape(pattern).replace(re.escape("#"), NUMBER), text.replace("\n", "")):
            yield [read(one) for one in match.groups()]


def hold(sheets: list[str], pattern: str, result: str, law: object) -> int:
    """Check that each printed fraction gives one of the results printed on its sheet; return how many there are."""
    count = 0
    for text in sheets:
        joined = text.replace("10^\n", "10^")
        gives = [read(one) for one in re.findall(re.escape(result).replace(re.escape("#"), NUMBER), joined)]
        for operands in found([text], pattern):
            again = law(*(value for value, _ in operands))  # type: ignore[operator]
            assert any(abs(again - value) <= 1.001 * last for value, last in gives), (pattern, operands, gives)
            count += 1
    return count


def test_fractions_are_repeated_from_the_sheets(sheets: list[str]) -> None:
    velocity = "(4×#ft³/s)/(π×(#ft)^2)"
    assert hold(sheets, velocity, "V===#ft/s", lambda q, d: 4 * q / (math.pi * d**2)) >= 1
    reynolds = "(|#ft/s|×#ft)/(#ft²/s)"
    assert hold(sheets, reynolds, "Re===#", lambda v, d, nu: abs(v) * d / nu) >= 1
    head = "(#ft/s)^2/(2×#ft/s²)"
    assert hold(sheets, head, "h_v===#ft", lambda v, g: v**2 / (2 * g)) >= 1


def test_sums_and_products_are_repeated_from_the_sheets(sheets: list[str]) -> None:
    lines = {
        "h=h_f+h_m=#ft+#ft=#ft": lambda a, b: a + b,
        "h_p=H−z=#ft−#ft=#ft": lambda a, b: a - b,
        "p=ρgh_p=#slug/ft³×#ft/s²×#ft=#lbf/ft²": lambda a, b, c: a * b * c,
        "M=x−x_lim=#lbf/ft²−#lbf/ft²=#lbf/ft²": lambda a, b: a - b,
    }
    for pattern, law in lines.items():
        held = list(found(sheets, pattern))
        assert held, pattern
        for *operands, (value, last) in held:
            assert abs(law(*(one for one, _ in operands)) - value) <= 1.001 * last, pattern


def test_conversions_are_repeated_from_the_sheets(sheets: list[str]) -> None:
    for unit, result in (("ft³/s", "gpm"), ("lbf/ft²", "psi"), ("kg/m³", "slug/ft³")):
        assert hold(sheets, f"#{unit}/(#{unit})", "N_U===#", lambda amount, worth: amount / worth), unit
        assert list(found(sheets, f"N_U===#{result}")), result
    assert hold(sheets, "#ft/(3.28084ft)", "N_U===#", lambda length: length / 3.28084) >= 2
    assert hold(sheets, "#m/(0.3048m)", "N_U===#", lambda length: length / 0.3048) >= 1


def test_an_empirical_line_stands_in_si_between_its_conversions(sheets: list[str]) -> None:
    text = "".join(sheets).replace("\n", "")
    said = ["Lengthinm", "Boreinm", "Frictionloss,Hazen–Williams", "Frictionlossinft", "Darcyfthatgives"]
    places = [text.index(f"knoll-main:{word}") for word in said]
    assert places == sorted(places)
    law = "10.67×#m×#m³/s/(1m³/s)×|#m³/s/(1m³/s)|^(1.852−1)/(#^1.852×(#m/(1m))^4.8704)=#m"
    ((length, flow, again, coefficient, bore, (loss, last)),) = found(["".join(sheets)], law)
    assert flow == again
    by_hand = 10.67 * length[0] * flow[0] ** 1.852 / (coefficient[0] ** 1.852 * bore[0] ** 4.8704)
    assert abs(by_hand - loss) <= 1.001 * last


def test_results_agree_with_the_same_works_in_si(package: Path, tmp_path: Path) -> None:
    told = json.loads((package / "results.json").read_text(encoding="utf-8"))
    again = json.loads(
        json.dumps(results(accounted(tmp_path / "forks-mains", WORKS, project="display: {units: SI}\n")))
    )
    assert told["cases"] == again["cases"]
    assert told["verdicts"] == again["verdicts"]
    assert told["digest"] != again["digest"]


def test_the_first_sheet_tells_what_results_hold(package: Path, sheets: list[str]) -> None:
    told = json.loads((package / "results.json").read_text(encoding="utf-8"))["cases"]["base"]
    first = sheets[0].replace("\n", "")
    for pipe, branch in told["branches"].items():
        end = branch["to"] if branch["flow"] > 0 else branch["from"]
        assert f"{pipe}to{end}{abs(branch['flow']) * GPM:.0f}" in first
    assert f"Headatforks,ft{told['nodes']['forks']['head'] / FOOT:.2f}" in first
    assert "FLOW,GPM" in first.upper()

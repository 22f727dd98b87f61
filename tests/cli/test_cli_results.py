"""What solve and inspect print."""

from __future__ import annotations

import json
import math
import os
import pty
import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from cli_folders import EXACT, JOINED, SMALLEST

from calc import pipeline
from calc.report.document import Heading

Inside = Callable[..., tuple[int, str, str]]
Write = Callable[..., Path]

# Darcy–Weisbach with fixed f and no other loss: h = f L/D V²/2g, so V follows from h = 10 m.
EXACT_VELOCITY = math.sqrt(2 * 9.80665 * 10.0 * 0.3 / (0.02 * 1000.0))
EXACT_FLOW = EXACT_VELOCITY * math.pi / 4 * 0.3**2


def test_a_folder_with_only_a_network_solves(inside: Inside, write: Write) -> None:
    status, said, remarks = inside("solve", write(EXACT))
    assert (status, remarks) == (0, "")
    assert f"high gives {EXACT_FLOW * 1000:.2f} L/s to low" in said
    row = next(line.split() for line in said.splitlines() if line.startswith("  link "))
    assert row[:5] == ["link", "low", "high", "−10.000", f"−{EXACT_VELOCITY:.3f}"]


FOOT, GALLON = 0.3048, 231 * 0.0254**3
"""The international foot and the US gallon of 231 cubic inches, by their definitions."""


@pytest.mark.parametrize(
    ("unit", "factor", "decimals"),
    [
        ("m³/s", 1.0, 5),
        ("m3/h", 3600.0, 2),
        ("ML/d", 86.4, 3),
        ("gpm", 60 / GALLON, 1),
        ("cfs", FOOT**-3, 4),
        ("MGD", 86400 / GALLON / 1e6, 4),
    ],
)
def test_flows_are_shown_in_the_unit_asked_for(
    inside: Inside, write: Write, unit: str, factor: float, decimals: int
) -> None:
    said = inside("solve", write(EXACT + f"display: {{flow: {unit}}}\n"))[1]
    printed = {"m3/h": "m³/h", "cfs": "ft³/s"}.get(unit, unit)
    assert f"high gives {EXACT_FLOW * factor:.{decimals}f} {printed} to low" in said


def test_us_units_are_shown_where_a_project_asks_for_them(inside: Inside, write: Write) -> None:
    text = EXACT + "display: {units: US}\ncriteria: {velocity-max: {limit: 1 ft/s}, gradient-max: {limit: 15 m/km}}\n"
    status, said, _ = inside("solve", write(text))
    assert status == 1
    assert f"high gives {EXACT_FLOW * 60 / GALLON:.1f} gpm to low" in said
    row = next(line.split() for line in said.splitlines() if line.startswith("  link "))
    assert row[3:5] == [f"−{10 / FOOT:.3f}", f"−{EXACT_VELOCITY / FOOT:.3f}"]
    assert re.search(r"differences < 1 × 10\^−5 gpm and < 1 × 10\^−6 ft", said)
    flat = " ".join(said.split())
    assert f"{EXACT_VELOCITY / FOOT:.3f} ft/s at most 1.000 ft/s" in flat
    assert "10.00 ft/1000 ft (1 in 100) at most 15.00 ft/1000 ft (1 in 67)" in flat  # ten metres in a kilometre
    for unit in (" L/s", " m ", " m/s", " m/km"):
        assert unit not in flat


def test_data_is_in_si_whatever_is_shown(inside: Inside, write: Write) -> None:
    told = [
        json.loads(inside("solve", write(EXACT + f"display: {{units: {units}}}\n", units), "--json")[1])
        for units in ("SI", "US")
    ]
    assert told[0]["cases"] == told[1]["cases"]
    assert told[1]["cases"]["base"]["branches"]["link"]["head_loss"] == pytest.approx(-10.0, abs=1e-9)


def test_a_trickle_is_not_shown_as_nothing(inside: Inside, write: Write) -> None:
    # Laminar, so Hagen–Poiseuille: Q = π g h D⁴ / (128 ν L); water at 20 °C has ν = 1.0034e-6 m²/s (IAPWS tables).
    text = EXACT.replace("friction: fixed", "fluid: {temperature: 20 degC}").replace(
        "friction_factor: 0.02", "roughness: 0 mm"
    )
    text = text.replace("110.00 m", "100.001 m").replace("300 mm", "10 mm")
    flow = math.pi * 9.80665 * 0.001 * 0.010**4 / (128 * 1.0034e-6 * 1000) * 1000
    shown = re.search(r"high gives (\S+) × 10\^−(\d+) L/s to low", inside("solve", write(text))[1])
    assert shown is not None
    assert float(shown[1]) * 10 ** -int(shown[2]) == pytest.approx(flow, rel=0.02)


def test_water_at_rest_and_shut_pipes_are_told_in_words(inside: Inside, write: Write) -> None:
    still = EXACT.replace("110.00 m", "100.00 m")
    assert "at rest" in inside("solve", write(still))[1]
    shut = JOINED.replace("to: lower, ", "to: lower, open: false, ")
    said = inside("solve", write(shut, "shut"))[1]
    row = next(line for line in said.splitlines() if line.startswith("  lower-main "))
    assert row.endswith("   –   shut")
    assert "upper gives 12.00 L/s to cross" in said  # continuity: nothing else feeds the withdrawal


def test_results_as_data_hold_what_the_contract_names(headtrace: Callable[..., Any], demo: Path) -> None:
    done = headtrace("solve", demo, "--json")
    assert done.stdout.isascii()

    def refuse(word: str) -> None:
        raise AssertionError(word)

    found = json.loads(done.stdout, parse_constant=refuse)
    assert list(found)[:4] == ["format", "project", "digest", "cases"]
    assert {"verdicts", "findings", "studies"} <= set(found)
    assert found["format"] == "headtrace-results/1"
    assert found["project"]["number"] == "OTM-HY-014"
    assert re.fullmatch("sha256:[0-9a-f]{64}", found["digest"])
    assert list(found["cases"]) == ["base", "drawdown", "peak", "outage"]
    for case in found["cases"].values():
        assert set(case) >= {
            *("converged", "method", "iterations", "nodes", "branches", "balance", "second_opinion", "history")
        }
        assert set(case["balance"]) == {"largest_imbalance", "largest_energy_error"}
        assert {"method", "largest_flow_difference", "largest_head_difference", "agrees"} <= set(case["second_opinion"])
        junction, reservoir = case["nodes"]["marl-cross"], case["nodes"]["vell"]
        assert {"kind", "head", "pressure_head", "pressure", "withdrawal"} <= set(junction)
        assert {"kind", "head", "outflow"} <= set(reservoir)
        for branch in case["branches"].values():
            assert set(branch) >= {
                *("kind", "from", "to", "flow", "velocity", "head_loss", "friction_loss", "fitting_loss"),
                *("reynolds", "friction_factor", "state"),
            }
        # continuity, from the printed numbers alone
        toward = sum(
            b["flow"] * ((b["to"] == "marl-cross") - (b["from"] == "marl-cross")) for b in case["branches"].values()
        )
        assert toward == pytest.approx(junction["withdrawal"], abs=1e-9)
        assert [row["iteration"] for row in case["history"]][-1] == case["iterations"]
    for verdict in found["verdicts"]:
        assert {"criterion", "subject", "case", "value", "limit", "unit", "met"} <= set(verdict)
    for finding in found["findings"]:
        assert set(finding) == {"id", "subject", "place", "text"}


def test_one_case_alone_is_the_same_as_among_all(inside: Inside, demo: Path) -> None:
    every = json.loads(inside("solve", demo, "--json")[1])
    status, said, _ = inside("solve", demo, "--json", "--case", "peak")
    alone = json.loads(said)
    assert alone["cases"] == {"peak": every["cases"]["peak"]}
    assert alone["verdicts"] == [verdict for verdict in every["verdicts"] if verdict["case"] == "peak"]
    assert status == 0  # what is not met is the outage's
    assert inside("solve", demo, "--case", "outage")[0] == 1
    status, said, remarks = inside("solve", demo, "--case", "paek")
    assert (status, said) == (2, "")
    assert (
        "there is no case 'paek'; expected one of base, drawdown, peak, outage\n  hint: did you mean 'peak'?" in remarks
    )


def test_verdicts_say_value_limit_and_margin(inside: Inside, demo: Path) -> None:
    status, said, _ = inside("solve", demo)
    assert status == 1
    (row,) = (line for line in said.splitlines() if "NOT MET" in line)
    found = next(
        verdict for verdict in json.loads(inside("solve", demo, "--json")[1])["verdicts"] if not verdict["met"]
    )
    assert row.split()[:1] == ["pressure-min"]
    assert f"{found['value']:.3f} m" in row
    assert "at least 15.000 m" in row
    assert f"−{15 - found['value']:.3f} m" in row


def test_many_verdicts_not_met_are_counted(inside: Inside, write: Write) -> None:
    pipes = "".join(
        f"  link-{k}: {{from: upper, to: lower, length: {100 + k} m, bore: 200 mm, roughness: 0.1 mm}}\n"
        for k in range(60)
    )
    text = "reservoirs: {upper: {level: 20 m}, lower: {level: 10 m}}\npipes:\n" + pipes
    status, said, _ = inside("solve", write(text + "criteria: {velocity-max: {limit: 1 mm/s}}\n"))
    assert status == 1
    assert "0 of 60 verdicts met" in said
    assert said.count("NOT MET") == 41
    assert "and 19 more" in said


def test_inspect_lists_findings_by_place(inside: Inside, demo: Path, write: Write) -> None:
    status, said, remarks = inside("inspect", demo)
    assert (status, remarks) == (0, "")
    assert said.splitlines()[-1] == "no problems; 1 finding"
    assert said.startswith("network.yaml:45:24: D03 Inputs without a source: pipes.sedge-link: roughness has no ")
    said = inside("inspect", write(SMALLEST))[1]
    heads = [line for line in said.splitlines()[:-1] if not re.match(r" +\d* \| ", line)]
    assert heads
    assert all(re.match(r"network\.yaml:\d+:\d+: D\d\d ", line) for line in heads)
    assert re.fullmatch(r"no problems; \d+ findings", said.splitlines()[-1])


@pytest.mark.parametrize(
    "environment",
    [
        {"PYTHONIOENCODING": "ascii"},
        {"LC_ALL": "C", "PYTHONCOERCECLOCALE": "0", "PYTHONUTF8": "0"},
        {"LC_ALL": "tr_TR.UTF-8"},
    ],
    ids=str,
)
def test_any_locale_will_do(demo: Path, environment: dict[str, str]) -> None:
    said = []
    for words in (["solve", demo], ["solve", demo, "--json"], ["tables", "fittings"]):
        done = subprocess.run(
            [sys.executable, "-m", "calc", *map(str, words)],
            env={**os.environ, **environment},
            check=False,
            capture_output=True,
        )
        assert done.returncode in (0, 1)
        assert done.stderr == b""
        said.append(done.stdout.decode(environment.get("PYTHONIOENCODING", "utf-8")))
    assert "upper-ostrel gives " in said[0]
    assert "cases" in json.loads(said[1])
    assert "bend-90" in said[2]


def test_progress_shows_on_a_terminal_alone(demo: Path) -> None:
    leader, follower = pty.openpty()
    with os.fdopen(follower, "wb") as terminal:
        subprocess.run(
            [sys.executable, "-m", "calc", "solve", demo], check=False, stdout=subprocess.PIPE, stderr=terminal
        )
    shown = os.read(leader, 100_000).decode()
    os.close(leader)
    assert "solving peak" in shown
    assert shown.endswith("\r\x1b[K")  # and leaves nothing behind


UNJUDGED = (
    SMALLEST.replace("pipes:", "junctions: {}\npipes:")
    + "criteria:\n  velocity-max: {limit: 99 m/s}\n  pressure-min: {limit: 10 m}\n"
)


def test_a_criterion_without_a_subject_is_told_everywhere(inside: Inside, write: Callable[[str], Path]) -> None:
    """There is no junction whose pressure could be judged: neither met nor not met, and no failure."""
    folder = write(UNJUDGED)
    status, said, remarks = inside("solve", folder)
    assert (status, remarks) == (0, "")
    assert re.search(r"pressure-min +not judged +no subject with a solution\n", said)
    assert "1 of 1 verdicts met" in said
    found = json.loads(inside("solve", folder, "--json")[1])
    assert found["not_judged"] == ["pressure-min"]
    assert {verdict["criterion"] for verdict in found["verdicts"]} == {"velocity-max"}
    document = pipeline.document(pipeline.account(folder), "checking")
    headings = [
        "".join(map(str, block.parts))
        for section in document.sections
        for block in section.blocks
        if isinstance(block, Heading)
    ]
    assert "Least pressure: not judged" in headings


@pytest.mark.pdf
def test_an_issue_tells_what_was_not_judged(inside: Inside, write: Callable[[str], Path]) -> None:
    status, said, _ = inside("issue", write(UNJUDGED))
    assert status == 0
    assert "  not judged, for want of a subject: pressure-min\n" in said
    assert "not met" not in said

"""Tracing: every number of the ledger, whole columns, and ids that do not exist."""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest
from cli_folders import JOINED

from calc import pipeline
from calc.account import open_books
from calc.cli.derivation import room_for
from calc.ledger import Program, Solved, trace

Inside = Callable[..., tuple[int, str, str]]


def test_every_number_traces_to_what_it_rests_on(demo: Path) -> None:
    account = pipeline.account(demo)
    seen = set()
    for column in account.ledger.columns:
        for row in range(len(column.rows)):
            wanted = column.id(row)
            assert wanted not in seen
            seen.add(wanted)
            lines = list(trace(account.ledger, account.ledger.spot(wanted)))
            assert lines[0].startswith(f"{wanted} = ")
            # what the program found or counted itself rests on no input line; a trial's flow was solved for
            own = isinstance(column.origin, Program) or (isinstance(column.origin, Solved) and column.of)
            assert own or any(re.search(r"\.yaml:\d+:\d+", line) for line in lines), wanted
    assert len(seen) > 500


def test_a_flow_traces_to_file_line_and_column(inside: Inside, demo: Path) -> None:
    status, said, remarks = inside("trace", demo, "pipes.sedge-link.flow@drawdown")
    assert (status, remarks) == (0, "")
    lines = (demo / "network.yaml").read_text(encoding="utf-8").splitlines()
    found = re.search(r"pipes\.sedge-link\.length@base = (\S+) m   given as '(.+)' at network\.yaml:(\d+):(\d+)", said)
    assert found is not None
    assert lines[int(found[3]) - 1][int(found[4]) - 1 :].startswith(found[2])
    assert found[2] == "1163.8 m"
    assert "cases.yaml:7:" in said  # the level that this case changes


def test_without_a_case_the_base_is_meant(inside: Inside, demo: Path) -> None:
    assert inside("trace", demo, "pipes.vell-main.flow") == inside("trace", demo, "pipes.vell-main.flow@base")


def test_a_column_lists_its_rows(inside: Inside, demo: Path) -> None:
    status, said, _ = inside("trace", demo, "pipes.flow@peak")
    assert status == 0
    ids = [line.partition(" = ")[0] for line in said.splitlines()]
    assert ids == ["pipes.upper-main.flow@peak", "pipes.sedge-link.flow@peak", "pipes.vell-main.flow@peak"]
    assert inside("trace", demo, "pipes.flow") == inside("trace", demo, "pipes.flow@base")
    # what a case does not state is the base's; what it states is its own
    levels = inside("trace", demo, "reservoirs.level@drawdown")[1]
    assert "reservoirs.upper-ostrel.level@drawdown = 209.2 m\n" in levels
    assert "reservoirs.vell.level@base = 183.05 m\n" in levels
    assert "reservoirs.upper-ostrel.level@base" not in levels


@pytest.mark.parametrize(
    ("wanted", "hint"),
    [
        ("pipes.uper-main.flow@peak", "pipes.upper-main.flow@peak"),
        ("pipes.upper-main.flw", "pipes.upper-main.flow@base"),
        ("pipes.upper-main.velocty@paek", "pipes.upper-main.velocity@peak"),
        ("pipe.flow@base", "pipes.flow@base"),
    ],
)
def test_an_unknown_id_gets_the_nearest(inside: Inside, demo: Path, wanted: str, hint: str) -> None:
    status, said, remarks = inside("trace", demo, wanted)
    assert (status, said) == (2, "")
    assert f"no number has the id '{wanted}'" in remarks
    assert f"did you mean '{hint}'?" in remarks


@pytest.mark.parametrize(
    "wanted", ["", ".", "@", "#", "a.b.c@d#e", "pipes..flow", "x" * 10_000, "*", "pipes.*.flow", "\x1b[2J", "é.é"]
)
def test_any_text_may_be_asked_for(inside: Inside, demo: Path, wanted: str) -> None:
    status, said, remarks = inside("trace", demo, wanted)
    assert (status, said) == (2, "")
    assert "Traceback" not in remarks
    assert "\x1b" not in remarks
    assert len(remarks) < 1000


def test_a_long_chain_of_cases_traces(write: Callable[[str], Path]) -> None:
    count = 400  # each step is three calls deep, and Python's own limit is 1000
    chained = ["  c0: {times: {junctions.cross.withdrawal: 1.001}}\n"]
    chained += [f"  c{k}: {{after: c{k - 1}, times: {{junctions.cross.withdrawal: 1.001}}}}\n" for k in range(1, count)]
    ledger = open_books(pipeline.read(write(JOINED + "cases:\n" + "".join(chained))))
    wanted = f"junctions.cross.withdrawal@c{count - 1}"
    with room_for(ledger):
        first, *_, last = trace(ledger, ledger.spot(wanted))
    assert last.lstrip().startswith(
        "junctions.cross.withdrawal@base = 0.012 m³/s   given as '12 L/s' at network.yaml:5:"
    )
    assert float(first.split()[2]) == pytest.approx(0.012 * 1.001**count, rel=1e-8)


def leaves(number: dict[str, Any]) -> Iterator[dict[str, Any]]:
    if number.get("seen") or not number["inputs"]:
        yield number
    for one in number.get("inputs", ()):
        yield from leaves(one)


def test_a_derivation_as_data_is_the_one_in_words(inside: Inside, demo: Path) -> None:
    wanted = "pipes.sedge-link.head_loss@peak"
    status, said, remarks = inside("trace", demo, wanted, "--json")
    assert (status, remarks) == (0, "")
    told = json.loads(said)
    assert (told["format"], told["id"]) == ("headtrace-trace/1", wanted)
    words = inside("trace", demo, wanted)[1].splitlines()
    numbers = [told["number"], *(one for proof in told["proofs"] for one in proof["numbers"])]
    assert len([line for line in words if " = " in line]) == sum(1 for one in numbers for _ in every(one))
    ends = [one for one in leaves(told["number"]) if not one.get("seen")]
    files = {one["origin"]["file"] for one in ends if "file" in one["origin"]}
    assert files == {"network.yaml", "calc/data/defaults.yaml", "calc/data/fittings.yaml"}
    bore = next(one for one in every(told["number"]) if one["id"] == "pipes.sedge-link.bore@base")
    # the line and column of the text, counted in the file
    text = (demo / "network.yaml").read_text("utf-8").splitlines()
    origin = bore["origin"]
    assert text[origin["line"] - 1][origin["column"] - 1 :].startswith("254.6 mm")
    assert (origin["kind"], origin["written"], origin["number"], origin["factor"]) == (
        "converted",
        "254.6 mm",
        254.6,
        0.001,
    )
    assert bore["value"] == pytest.approx(0.2546, rel=1e-15)
    assert told["proofs"][0]["of"] == "pipes.sedge-link.flow@peak"


def every(number: dict[str, Any]) -> Iterator[dict[str, Any]]:
    yield number
    for one in number.get("inputs", ()):
        yield from every(one)


def test_a_column_as_data(inside: Inside, demo: Path) -> None:
    told = json.loads(inside("trace", demo, "pipes.flow@peak", "--json")[1])
    assert told["format"] == "headtrace-trace/1"
    assert [one["id"] for one in told["numbers"]] == [
        f"pipes.{name}.flow@peak" for name in ("upper-main", "sedge-link", "vell-main")
    ]
    assert {one["unit"] for one in told["numbers"]} == {"m³/s"}

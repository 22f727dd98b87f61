"""What ``inspect`` says: the line with its place underlined, colour on a terminal alone, and the same as data."""

from __future__ import annotations

import json
import os
import pty
import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from cli_folders import SMALLEST
from faulty_folders import FaultyFolder, faulty_folders

from calc.cli import colour

Inside = Callable[..., tuple[int, str, str]]
WRONG = SMALLEST.replace("384.4 mm", "200 kg")
ESCAPE = re.compile(r"\x1b\[([0-9;]*)m")


def on_a_terminal(folder: Path, *, stderr: bool, **environment: str) -> str:
    """Return what `inspect` writes to a terminal of its own."""
    ours, theirs = pty.openpty()
    held = {name: value for name, value in os.environ.items() if name not in {"NO_COLOR", "FORCE_COLOR", "TERM"}}
    streams: dict[str, Any] = {"stdout": subprocess.DEVNULL, "stderr": subprocess.DEVNULL}
    streams["stderr" if stderr else "stdout"] = theirs
    process = subprocess.Popen(
        [sys.executable, "-m", "calc", "inspect", folder],
        env={**held, "TERM": "xterm", **environment},
        stdin=subprocess.DEVNULL,
        **streams,
    )
    os.close(theirs)
    said = b""
    while True:
        try:
            part = os.read(ours, 65536)
        except OSError:  # the other end is closed
            break
        if not part:
            break
        said += part
    process.wait()
    os.close(ours)
    return said.decode().replace("\r\n", "\n")


def test_a_problem_on_a_terminal_is_red_and_underlined(write: Callable[[str], Path]) -> None:
    said = on_a_terminal(write(WRONG), stderr=True)
    assert "\x1b[1;31mnetwork.yaml:5:56\x1b[0m: pipes.main.bore" in said
    assert "\x1b[4;31m200 kg\x1b[0m" in said
    plain = ESCAPE.sub("", said).splitlines()
    assert plain[1].index("200 kg") == plain[2].index("^^^^^^")
    assert plain[-1] == "1 problem"


def test_a_finding_on_a_terminal_has_another_colour(write: Callable[[str], Path]) -> None:
    said = on_a_terminal(write(SMALLEST), stderr=False)
    assert "\x1b[1;33mnetwork.yaml:5:3\x1b[0m: D" in said
    assert "\x1b[4;33mmain\x1b[0m: {from: upper" in said
    assert "31m" not in said
    assert re.fullmatch(r"no problems; [0-9]+ findings", ESCAPE.sub("", said).splitlines()[-1])


@pytest.mark.parametrize("environment", [{"NO_COLOR": "1"}, {"TERM": "dumb"}, {"NO_COLOR": "1", "FORCE_COLOR": "1"}])
def test_colour_can_be_forbidden(write: Callable[[str], Path], environment: dict[str, str]) -> None:
    assert "\x1b" not in on_a_terminal(write(WRONG), stderr=True, **environment)


def test_colour_can_be_asked_for_on_a_pipe(
    inside: Inside, write: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.delenv("FORCE_COLOR", raising=False)
    folder = write(WRONG)
    plain = inside("inspect", folder)
    assert "\x1b" not in plain[2]
    monkeypatch.setenv("FORCE_COLOR", "1")
    coloured = inside("inspect", folder)
    assert coloured[0] == plain[0] == 2
    assert coloured[2] != plain[2] == ESCAPE.sub("", coloured[2])
    assert "\x1b" not in inside("inspect", folder, "--json")[1]
    monkeypatch.setenv("NO_COLOR", "")  # set, and yet empty: no-color.org counts it as not set
    assert inside("inspect", folder) == coloured


def test_an_input_brings_no_colour_of_its_own(
    inside: Inside, write: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("FORCE_COLOR", "1")
    monkeypatch.delenv("NO_COLOR", raising=False)
    said = inside("inspect", write(SMALLEST.replace("upper:", '"\\e[31mupper":')))[2]
    assert set(ESCAPE.findall(said)) <= {"0", "1", "2", "1;31", "4;31"}
    said = inside("inspect", write("\x1b[35mreservoirs: {}\n", "raw"))[2]
    assert "\\x1b[35m" in ESCAPE.sub("", said)
    assert "35" not in ESCAPE.findall(said)


def test_carets_stand_where_there_is_no_colour_too() -> None:
    text = "a.yaml:1:4: x: wrong\n  1 | ab cd\n    |    ^^\n  hint: mend it\n1 problem"
    assert ESCAPE.sub("", colour.painted(text)) == text
    assert "ab \x1b[4;31mcd\x1b[0m" in colour.painted(text)


FOLDERS = [one for one in faulty_folders() if one.theme in {"works", "quantities", "tables", "text", "files"}]


@pytest.mark.parametrize("fault", FOLDERS, ids=[f"{one.theme}-{one.name}" for one in FOLDERS])
def test_problems_as_data(fault: FaultyFolder, tmp_path: Path, inside: Inside) -> None:
    folder = fault.write(tmp_path / "works")
    status, said, remarks = inside("inspect", folder, "--json")
    assert (status, remarks) == (2, "")
    told = json.loads(said)
    assert told["format"] == "headtrace-inspection/1"
    assert told["counts"] == {"problems": 1, "findings": 0}
    (problem,) = told["problems"]
    assert set(problem) == {"code", "file", "line", "column", "length", "path", "found", "expected", "hint"}
    assert problem["code"] == fault.code
    assert f"{problem['file']}:{problem['line']}:{problem['column']}" == (fault.place or f"{folder}:1:1")
    assert problem["hint"] == fault.hint
    path = f"{problem['path']}: " if problem["path"] else ""
    expected = f"; expected {problem['expected']}" if problem["expected"] else ""
    assert f"{path}{problem['found']}{expected}".startswith(fault.says)


def test_findings_as_data(inside: Inside, write: Callable[[str], Path]) -> None:
    folder = write(SMALLEST)
    status, said, remarks = inside("inspect", folder, "--json")
    assert (status, remarks) == (0, "")
    told = json.loads(said)
    assert told["problems"] == []
    assert told["counts"] == {"problems": 0, "findings": len(told["findings"])}
    ends = next(one for one in told["findings"] if one["id"] == "D36")
    assert (ends["file"], ends["line"], ends["column"], ends["subject"]) == ("network.yaml", 5, 3, "pipes.main")
    words = inside("inspect", folder)[1]
    for finding in told["findings"]:
        head = f"{finding['id']} {finding['title']}: {finding['subject']}: {finding['text']}"
        assert head in words
    lines = SMALLEST.splitlines()
    assert f"  5 | {lines[4]}\n    |   {'^' * len('main')}\n" in words

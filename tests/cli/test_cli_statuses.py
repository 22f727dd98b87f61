"""Every exit status, and what goes to which stream."""

from __future__ import annotations

import dataclasses
import json
import os
import subprocess
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from cli_folders import JOINED, SMALLEST, UNFED

from calc import pipeline, second
from calc.problems import IntegrityError, StorageError, Unresolved

Inside = Callable[..., tuple[int, str, str]]
Write = Callable[..., Path]


def test_0_done(headtrace: Callable[..., Any], write: Write) -> None:
    done = headtrace("solve", write(SMALLEST))
    assert (done.returncode, done.stderr) == (0, "")
    assert "upper gives " in done.stdout


def test_1_a_criterion_is_not_met(headtrace: Callable[..., Any], write: Write) -> None:
    # Between levels 31.6 m apart water cannot be faster than sqrt(2 g 31.6 m) = 24.9 m/s nor stand still.
    text = JOINED + "criteria:\n  velocity-max: {limit: 0.001 m/s}\n  velocity-min: {limit: 0.001 m/s}\n"
    done = headtrace("solve", write(text))
    assert (done.returncode, done.stderr) == (1, "")
    assert done.stdout.count("NOT MET") == 2  # both pipes
    assert "velocity-min   met" in done.stdout
    assert "2 of 4 verdicts met" in done.stdout
    assert headtrace("solve", write(text, "again"), "--json").returncode == 1


def test_2_the_inputs_are_wrong(headtrace: Callable[..., Any], write: Write) -> None:
    text = SMALLEST.replace("384.4 mm", "200 kg").replace("1850 m", "1850")
    folder = write(text)
    before = text.splitlines()[4].index("200 kg")
    for command in (["solve"], ["inspect"], ["issue"], ["solve", "--json"]):
        done = headtrace(command[0], folder, *command[1:])
        assert (done.returncode, done.stdout) == (2, "")
        place = f"network.yaml:5:{before + 1}"
        assert f"{place}: pipes.main.bore: '200 kg' is a mass; expected a bore, such as '200 mm'" in done.stderr
        assert "  5 |   main: {from: upper," in done.stderr
        assert f"\n    | {' ' * before}^^^^^^\n" in done.stderr
        assert done.stderr.endswith("2 problems\n")
    assert headtrace("trace", folder, "pipes.main.flow").returncode == 2


def test_2_no_such_folder(headtrace: Callable[..., Any], tmp_path: Path) -> None:
    done = headtrace("solve", tmp_path / "nowhere")
    assert (done.returncode, done.stdout) == (2, "")
    assert "there is no such folder" in done.stderr


def test_3_a_case_has_no_solution(headtrace: Callable[..., Any], write: Write) -> None:
    folder = write(UNFED)
    done = headtrace("solve", folder)
    assert done.returncode == 3
    assert "cases.closed: no solution: no open path joins junction cross" in done.stderr
    assert "upper gives " in done.stdout  # the other case stands
    found = json.loads(headtrace("solve", folder, "--json").stdout)["cases"]
    assert found["base"]["converged"] is True
    assert found["closed"]["converged"] is False
    assert found["closed"]["reason"]
    assert "history" in found["closed"]
    assert {"nodes", "branches"} & set(found["closed"]) == set()
    assert headtrace("solve", folder, "--case", "base").returncode == 0
    assert headtrace("solve", folder, "--case", "closed").returncode == 3
    assert headtrace("trace", folder, "junctions.cross.head@closed").returncode == 3


def test_4_the_second_opinion_disagrees(inside: Inside, write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    honest = second.form_opinion

    def planted(works: second.Works) -> second.Opinion:
        opinion = honest(works)
        return dataclasses.replace(opinion, flow=opinion.flow * 1.01)

    monkeypatch.setattr(second, "form_opinion", planted)
    folder = write(UNFED)
    status, said, remarks = inside("solve", folder)
    assert status == 4  # above 3, which applies too
    assert "DISAGREES" in said
    assert "cases.base: the second opinion does not confirm the solution" in remarks
    assert json.loads(inside("solve", folder, "--json")[1])["cases"]["base"]["second_opinion"]["agrees"] is False


@pytest.mark.parametrize(
    ("error", "status"),
    [
        (IntegrityError("the number does not prove"), 4),
        (StorageError("the disk is full"), 5),
        (OSError(28, "No space left on device", "somewhere"), 5),
        (OSError("cannot load library 'libpango-1.0-0'"), 5),
        (ModuleNotFoundError("No module named 'weasyprint'", name="weasyprint"), 5),
        (ModuleNotFoundError("No module named 'calc.nowhere'", name="calc.nowhere"), 70),
        (Unresolved("no line"), 70),
        (KeyError("planted"), 70),
        (RecursionError("too deep"), 70),
        (KeyboardInterrupt(), 130),
    ],
    ids=lambda value: type(value).__name__ if isinstance(value, BaseException) else str(value),
)
def test_what_goes_wrong_within_is_told_in_few_lines(
    inside: Inside, write: Write, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, error: BaseException, status: int
) -> None:
    def fail(*_: object, **__: object) -> None:
        raise error

    monkeypatch.setattr(pipeline, "account", fail)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path))
    found, said, remarks = inside("solve", write(SMALLEST))
    assert (found, said) == (status, "")
    assert "Traceback" not in remarks
    assert 1 <= len(remarks.splitlines()) <= 2
    reports = list(tmp_path.glob("headtrace-defect-*.txt"))
    assert len(reports) == (1 if status == 70 else 0)


def test_70_a_defect_leaves_a_report_and_nothing_else(
    inside: Inside, write: Write, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(*_: object, **__: object) -> None:
        raise ZeroDivisionError("planted fault")

    room = tmp_path / "room"
    room.mkdir()
    monkeypatch.setattr(tempfile, "tempdir", str(room))
    monkeypatch.setattr(pipeline, "document", fail)
    folder = write(SMALLEST)
    status, said, remarks = inside("issue", folder)
    assert (status, said) == (70, "")
    (report,) = room.iterdir()
    assert remarks == f"headtrace issue: this is a defect of ours (ZeroDivisionError); the report is {report}\n"
    assert "ZeroDivisionError: planted fault" in report.read_text(encoding="utf-8")
    assert report.stat().st_mode & 0o077 == 0
    assert [path.name for path in folder.iterdir()] == ["network.yaml"]
    assert inside("issue", folder)[2] == remarks  # the same content has the same name
    assert len(list(room.iterdir())) == 1
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    assert inside("issue", folder)[2].endswith("no report could be written\n")


def test_5_the_results_cannot_be_written(write: Write) -> None:
    if not Path("/dev/full").exists():
        pytest.fail("this system has no /dev/full to write to")
    with Path("/dev/full").open("w", encoding="utf-8") as full:
        done = subprocess.run(
            [sys.executable, "-m", "calc", "solve", write(SMALLEST), "--json"],
            check=False,
            stdout=full,
            stderr=subprocess.PIPE,
            text=True,
        )
    assert done.returncode == 5
    assert done.stderr == "headtrace: the results cannot be written: No space left on device\n"


def test_5_a_folder_that_cannot_be_made(headtrace: Callable[..., Any], tmp_path: Path) -> None:
    (tmp_path / "file").write_text("", encoding="utf-8")
    done = headtrace("new", tmp_path / "file" / "works")
    assert (done.returncode, done.stdout) == (5, "")
    assert len(done.stderr.splitlines()) == 1


@pytest.mark.parametrize("command", ["solve", "inspect"])
def test_a_reader_that_goes_away_is_no_fault(command: str, demo: Path) -> None:
    reading, writing = os.pipe()
    os.close(reading)
    with os.fdopen(writing, "w") as pipe:
        done = subprocess.run(
            [sys.executable, "-m", "calc", command, demo], check=False, stdout=pipe, stderr=subprocess.PIPE, text=True
        )
    assert done.stderr == ""
    assert done.returncode == {"solve": 1, "inspect": 0}[command]


def test_closed_streams_are_no_fault(write: Write) -> None:
    told = f"exec {sys.executable} -m calc solve {write(SMALLEST)} >&- 2>&-"
    assert subprocess.run(["sh", "-c", told], check=False).returncode == 0

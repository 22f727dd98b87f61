"""Issuing: what is written where, for which purpose, and that nothing is ever half there."""

from __future__ import annotations

import dataclasses
import json
import os
import shutil
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from cli_folders import JOINED, SMALLEST, UNFED

from calc import pipeline, publish, second
from calc.cli import crew, making
from calc.cli.release import package_name
from calc.components import Record, Stated
from calc.ledger import Ledger
from calc.marks import Mark
from calc.report.document import Document

Inside = Callable[..., tuple[int, str, str]]
Write = Callable[..., Path]
FILES = {"package.pdf", "package.html", "results.json", "ledger.json", "inputs", "manifest.json"}
OPEN = "assumptions: {A1: {text: The pipe is new}, A2: {text: It is straight, state: verified}}\n"


@pytest.fixture
def quick(monkeypatch: pytest.MonkeyPatch) -> None:
    """Leave out layout, which takes seconds, where only what surrounds it is looked at."""

    def published(
        document: Document, ledger: Ledger, inputs: dict[str, bytes], results: dict[str, object]
    ) -> dict[str, bytes]:
        assert document.title
        assert ledger.columns
        files = {f"inputs/{name}": content for name, content in inputs.items()}
        return {**files, "results.json": json.dumps(results).encode()}

    monkeypatch.setattr(making, "publish", published)


@pytest.mark.slow
@pytest.mark.pdf
def test_the_demo_is_issued_whole(headtrace: Callable[..., Any], demo: Path) -> None:
    done = headtrace("issue", demo)
    assert (done.returncode, done.stderr) == (1, "")  # a criterion is not met, by design of the demo
    package = demo / "issued" / "OTM-HY-014_P01_checking"
    assert {path.name for path in package.iterdir()} == FILES
    assert str(package / "package.pdf") in done.stdout
    assert str(package / "package.html") in done.stdout
    assert "not met: pressure-min" in done.stdout
    assert (package / "package.pdf").read_bytes().startswith(b"%PDF-")
    assert json.loads((package / "results.json").read_text(encoding="utf-8")) == json.loads(
        headtrace("solve", demo, "--json").stdout
    )
    for file in demo.glob("*.yaml"):
        assert (package / "inputs" / file.name).read_bytes() == file.read_bytes()
    assert list((demo / "issued").iterdir()) == [package]


@pytest.mark.slow
@pytest.mark.pdf
def test_a_new_folder_and_one_without_a_solution_issue_side_by_side(
    headtrace: Callable[..., Any], write: Write, tmp_path: Path
) -> None:
    unfed = write(UNFED, "unfed")
    wrong = write(SMALLEST.replace("1850 m", "1850 kg"), "wrong")
    assert headtrace("new", tmp_path / "begun").returncode == 0
    done = headtrace("issue", unfed, wrong, tmp_path / "begun", "--out", tmp_path / "out")
    assert done.returncode == 3
    assert {path.name for path in (tmp_path / "out").iterdir()} == {
        "unfed_P01_checking",
        "QTM-HY-001_P01_checking",
    }
    assert all({path.name for path in package.iterdir()} == FILES for package in (tmp_path / "out").iterdir())
    assert "cases.closed: no solution: " in done.stderr
    assert f"{wrong}:\nnetwork.yaml:5:42: pipes.main.length: '1850 kg' is a mass" in done.stderr
    assert done.stdout.index("unfed_P01") < done.stdout.index("QTM-HY-001")  # in the order of the call
    assert not (wrong / "issued").exists()
    found = json.loads((tmp_path / "out" / "unfed_P01_checking" / "results.json").read_text(encoding="utf-8"))
    assert found["cases"]["closed"]["converged"] is False


@pytest.mark.slow
@pytest.mark.parametrize("delay", [1.0, 2.5])
def test_ctrl_c_ends_all_in_one_line_and_leaves_nothing(write: Write, tmp_path: Path, delay: float) -> None:
    folders = [write(JOINED, name) for name in ("one", "two", "three")]
    running = subprocess.Popen(
        [sys.executable, "-m", "calc", "issue", *folders, "--out", tmp_path / "out"],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        start_new_session=True,
        # a run started in the background ignores the signal, and would hand that down
        preexec_fn=lambda: signal.signal(signal.SIGINT, signal.SIG_DFL),  # noqa: PLW1509 - no threads here
    )
    time.sleep(delay)
    os.killpg(running.pid, signal.SIGINT)
    said, remarks = running.communicate(timeout=60)
    assert (said, remarks) == ("", "headtrace issue: stopped\n")
    # Python itself ends by the signal, which a shell tells as 130, where it was caught within exec of a text
    assert running.returncode in (130, -signal.SIGINT)
    assert not (tmp_path / "out").exists() or list((tmp_path / "out").iterdir()) == []


@pytest.mark.usefixtures("quick")
def test_the_purpose_is_in_the_name(inside: Inside, write: Write, tmp_path: Path) -> None:
    folder = write(SMALLEST)
    for purpose in ("approval", "record"):
        status, said, remarks = inside("issue", folder, "--for", purpose)
        assert (status, remarks) == (0, "")
        assert f"for {purpose}" in said
        assert (folder / "issued" / f"works_P01_{purpose}" / "results.json").is_file()
    assert inside("issue", folder, "--out", tmp_path / "a" / "b")[0] == 0
    assert (tmp_path / "a" / "b" / "works_P01_checking").is_dir()


@pytest.mark.usefixtures("quick")
def test_without_a_solution_for_checking_only(inside: Inside, write: Write) -> None:
    folder = write(UNFED + OPEN)
    for purpose in ("approval", "record"):
        status, said, remarks = inside("issue", folder, "--for", purpose)
        assert (status, said) == (3, "")
        assert f"cases.closed: no solution, so no issue for {purpose}: no open path" in remarks
        assert remarks.endswith("headtrace issue: nothing was written; it can be issued for checking\n")
        assert ("assumptions.A1.state" in remarks) == (purpose == "record")
        assert not (folder / "issued").exists()
    assert inside("issue", folder)[0] == 3
    assert (folder / "issued" / "works_P01_checking").is_dir()


@pytest.mark.usefixtures("quick")
def test_an_open_assumption_is_no_record(inside: Inside, write: Write) -> None:
    folder = write(SMALLEST + OPEN)
    status, said, remarks = inside("issue", folder, "--for", "record")
    assert (status, said) == (2, "")
    assert "network.yaml:6:15: assumptions.A1.state: the assumption is open; expected 'verified' before" in remarks
    assert "A2" not in remarks.replace("A2: {text", "")
    assert not (folder / "issued").exists()
    assert inside("issue", folder, "--for", "approval")[0] == 0


@pytest.mark.usefixtures("quick")
def test_what_is_not_confirmed_is_no_record(inside: Inside, write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    honest = second.form_opinion

    def silent(works: second.Works) -> second.Opinion:
        return dataclasses.replace(honest(works), converged=False, reason="it gave up")

    monkeypatch.setattr(second, "form_opinion", silent)
    folder = write(SMALLEST)
    status, said, remarks = inside("issue", folder, "--for", "record")
    assert (status, said) == (4, "")
    assert "cases.base: the second opinion disagrees, so no issue for record: it gave up" in remarks
    assert not (folder / "issued").exists()
    assert inside("issue", folder)[0] == 4
    assert (folder / "issued" / "works_P01_checking").is_dir()


@pytest.mark.usefixtures("quick")
def test_an_issue_is_never_overwritten(inside: Inside, write: Write) -> None:
    folder = write(SMALLEST)
    first = inside("issue", folder)
    assert inside("issue", folder) == first  # the same again changes nothing
    kept = (folder / "issued" / "works_P01_checking" / "results.json").read_bytes()
    (folder / "network.yaml").write_text(SMALLEST.replace("1850 m", "1860 m"), encoding="utf-8")
    status, said, remarks = inside("issue", folder)
    assert (status, said) == (2, "")
    assert "issued already with other content" in remarks
    assert (folder / "issued" / "works_P01_checking" / "results.json").read_bytes() == kept


@pytest.mark.usefixtures("quick")
def test_two_folders_of_one_name_are_refused_in_one_place(inside: Inside, write: Write, tmp_path: Path) -> None:
    same = "project: {number: N-1, title: A main, revision: P01}\n"
    one, two = write(SMALLEST + same, "one"), write(JOINED + same, "two")
    status, said, remarks = inside("issue", one, two, "--out", tmp_path / "out")
    assert (status, said) == (2, "")
    assert f"'{one}' and '{two}' would both be issued as N-1_P01_checking" in remarks
    assert not (tmp_path / "out").exists()
    assert inside("issue", one, one, f"{one}/.", "--out", tmp_path / "out")[0] == 0  # one folder, said thrice


@pytest.mark.usefixtures("quick")
@pytest.mark.parametrize("place", ["file", "file/below"])
def test_a_place_that_cannot_be_written_is_5(inside: Inside, write: Write, tmp_path: Path, place: str) -> None:
    folder = write(SMALLEST)
    (tmp_path / "file").write_text("", encoding="utf-8")
    status, said, remarks = inside("issue", folder, "--out", tmp_path / place)
    assert (status, said) == (5, "")
    assert len(remarks.splitlines()) == 1
    assert (tmp_path / "file").read_text(encoding="utf-8") == ""


@pytest.mark.usefixtures("quick")
def test_a_disk_that_fills_up_leaves_nothing(inside: Inside, write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(_: int) -> None:
        raise OSError(28, "No space left on device")

    folder = write(SMALLEST)
    monkeypatch.setattr(os, "fsync", full)
    status, said, remarks = inside("issue", folder)
    assert (status, said) == (5, "")
    assert "No space left on device" in remarks
    assert not list((folder / "issued").iterdir())


def test_a_lost_process_is_told(inside: Inside, write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(crew, "_work", _die)
    one, two = write(SMALLEST, "one"), write(JOINED, "two")
    status, said, remarks = inside("issue", one, two)
    assert (status, said) == (70, "")
    assert f"{one}: its process ended without a word" in remarks
    assert f"{two}: its process ended without a word" in remarks


def _die(*_: object) -> None:
    os._exit(9)


@pytest.mark.parametrize(
    ("number", "revision", "name"),
    [
        ("OTM-HY-014", "P01", "OTM-HY-014_P01_checking"),
        ("A/B\\C:D*E?F", "1.2", "A-B-C-D-E-F_1.2_checking"),
        ("../../etc", "..", "etc_unnamed_checking"),
        (".hidden", "", "hidden_unnamed_checking"),
        ("Øst 7 \n\t\x00", "\u202e", "Øst-7_unnamed_checking"),
        ("n" * 500, "ü" * 500, f"{'n' * 60}_{'ü' * 30}_checking"),
        ("e\u0301tage", "\ud800", "étage_unnamed_checking"),
    ],
)
def test_names_are_safe_for_folders(number: str, revision: str, name: str) -> None:
    mark = Mark("project.yaml", 1, 1)
    stated = {key: Stated(text, text, mark) for key, text in (("number", number), ("revision", revision))}
    assert package_name(Record("", mark, stated), "checking") == name


def test_every_name_is_found_where_the_command_looks() -> None:
    assert making.publish.__module__ == "calc.publish.package"
    assert publish.__doc__
    assert pipeline.document.__doc__
    assert shutil.which("headtrace", path=str(Path(sys.executable).parent))

"""Hostile inputs and calls: a few lines, a status of the contract, never a traceback or a moved terminal."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path

import pytest
from cli_folders import JOINED, SMALLEST

Inside = Callable[..., tuple[int, str, str]]
Write = Callable[..., Path]

HUGE = "9" * 400
TEXTS: dict[str, str] = {
    "nothing": "",
    "a word": "network",
    "a list": "- a\n- b\n",
    "not YAML": "pipes: {a: [}",
    "a tab": "pipes:\n\ta: b\n",
    "an anchor": "a: &x {}\nb: *x\n",
    "laughter": "a: &a [x,x]\nb: &b [*a,*a]\nc: [*b,*b]\n",
    "a tag": "pipes: !!python/object/apply:os.system ['true']\n",
    "a merge": "pipes: {<<: {a: 1}}\n",
    "deep nesting": "[" * 20_000,
    "deep mappings": "".join(f"{' ' * k}a:\n" for k in range(500)),
    "two documents": SMALLEST + "---\n" + SMALLEST,
    "a null byte": SMALLEST.replace("upper:", "up\0per:"),
    "an escape": SMALLEST.replace("upper:", "'\\x1b[2J':"),
    "turned text": SMALLEST.replace("upper:", "upp\u202eer:"),
    "a lone key": "pipes:\n",
    "numbers for groups": "pipes: 3\nreservoirs: 4\njunctions: x\n",
    "lists for groups": "pipes: []\nreservoirs: []\n",
    "not a number": SMALLEST.replace("1850 m", ".nan m"),
    "infinite": SMALLEST.replace("1850 m", "inf m"),
    "too large to be a float": SMALLEST.replace("1850 m", f"{HUGE} m"),
    "a vast exponent": SMALLEST.replace("1850 m", "1e999999999 m"),
    "tiny": SMALLEST.replace("1850 m", "1e-300 m"),
    "enormous": SMALLEST.replace("1850 m", "1e300 m"),
    "a level beyond the sky": SMALLEST.replace("214.60 m", "1e300 m"),
    "a hair": SMALLEST.replace("384.4 mm", "1e-150 m").replace("0.15 mm", "0 mm"),
    "a cavern": SMALLEST.replace("384.4 mm", "1e150 m"),
    "rough": SMALLEST.replace("0.15 mm", "380 mm"),
    "a flood": JOINED.replace("12 L/s", "1e12 L/s"),
    "a drop": JOINED.replace("12 L/s", "1e-300 L/s"),
    "no withdrawal": JOINED.replace("12 L/s", "0 L/s"),
    "a loop of one": SMALLEST.replace("to: lower", "to: upper"),
    "an id of a thousand": SMALLEST.replace("upper", "u" * 1000),
    "an id that is a path": SMALLEST.replace("main:", "../../main:"),
    "Python": SMALLEST.replace("1850 m", "__import__('os').getpid() m"),
    "a power tower": SMALLEST.replace("1850 m", "9**9**9**9 m"),
    "a unit tower": SMALLEST.replace("1850 m", "1 m" + "^9" * 500),
    "a table elsewhere": "pipes: {table: /etc/passwd}\n" + SMALLEST.partition("pipes:")[0],
    "a table above": "pipes: {table: ../../x.csv}\n" + SMALLEST.partition("pipes:")[0],
    "a tolerance too fine": JOINED + "solver: {tolerance: 1e-300 L/s}\n",
    "a tolerance too coarse": JOINED + "solver: {tolerance: 1e9 m³/s}\n",
    "a start elsewhere": JOINED + "solver: {start: {cross: -1e9 m}}\n",
    "braces": SMALLEST + "project: {title: '{{ 7 * 7 }}{% for x in y %}', number: '${HOME}', revision: '`id`'}\n",
    "a number that is a path": SMALLEST + "project: {title: x, number: ../../../tmp/x, revision: ''}\n",
    "circular cases": SMALLEST + "cases: {a: {after: b}, b: {after: a}}\n",
    "wild paths": SMALLEST + "cases: {a: {times: {'" + "*" * 100 + "': 2, 'pipes.*.*': 3, '...': 4}}}\n",
    "a factor of nothing": JOINED + "cases: {a: {times: {'pipes.*.length': 0}}, b: {times: {'pipes.*.bore': -1}}}\n",
    "a limit of nothing": JOINED + "criteria: {velocity-max: {limit: 0 m/s}, gradient-max: {limit: 0}}\n",
}


def told(status: int, said: str, remarks: str) -> None:
    assert status in (0, 1, 2, 3, 4, 5), remarks
    assert "Traceback" not in said + remarks
    assert "\x1b" not in said + remarks
    assert "\u202e" not in said + remarks
    assert "nan" not in said.lower().split()
    assert len(remarks) < 200_000
    assert said or remarks


@pytest.mark.parametrize("command", ["inspect", "solve"])
@pytest.mark.parametrize("text", TEXTS.values(), ids=TEXTS)
def test_hostile_inputs(inside: Inside, write: Write, command: str, text: str) -> None:
    told(*inside(command, write(text)))


def test_there_are_enough() -> None:
    assert len(TEXTS) >= 30
    assert len(set(TEXTS.values())) == len(TEXTS)


def test_hostile_files(inside: Inside, tmp_path: Path) -> None:
    for name, content in (("bytes", bytes(range(256))), ("wide", SMALLEST.encode("utf-16")), ("marks", b"\xff\xfe")):
        folder = tmp_path / name
        folder.mkdir()
        (folder / "network.yaml").write_bytes(content)
        status, said, remarks = inside("solve", folder)
        told(status, said, remarks)
        assert status == 2


def test_hostile_folders(inside: Inside, tmp_path: Path) -> None:
    pipe = tmp_path / "waiting"
    pipe.mkdir()
    os.mkfifo(pipe / "network.yaml")
    circle = tmp_path / "circle"
    circle.symlink_to(circle)
    holding = tmp_path / "holding"
    (holding / "network.yaml").mkdir(parents=True)
    leading = tmp_path / "leading"
    leading.mkdir()
    (leading / "network.yaml").symlink_to("/etc/passwd")
    for folder in (
        pipe,
        circle,
        holding,
        leading,
        tmp_path / "x\0y",
        tmp_path / ("n" * 5000),
        tmp_path / "a\x1b[2Jb",
        "/dev/null",
    ):
        for command in ("inspect", "solve", "issue"):
            status, said, remarks = inside(command, folder)
            told(status, said, remarks)
            assert status == 2
            assert "root:" not in remarks


def test_names_from_outside_do_not_move_a_terminal(inside: Inside, tmp_path: Path) -> None:
    folder = tmp_path / "\x1b]0;title\x07"
    folder.mkdir()
    (folder / "network.yaml").write_text(SMALLEST, encoding="utf-8")
    status, said, _ = inside("solve", folder)
    assert status == 0
    assert "\x1b" not in said
    assert "\\x1b]0;title\\x07" in said


@pytest.mark.parametrize(
    "words",
    [
        ["solve", "--"], ["--", "solve"], ["solve", "a", "--case", ""], ["solve", ""], ["trace", "", ""],
        ["issue", "a", "--for", ""], ["issue", "a", "--out"], ["tables", ""], ["tables", "../../etc/passwd"],
        ["new", "a", "--like", "../../../etc"], ["new", "a", "--like", ""], ["\x1b[2J"], ["s" * 100_000],
        ["solve", "a", *["--case=x"] * 1000], ["-" * 1000], ["solve", "-", "-"], ["é" * 50],
    ],
    ids=lambda words: ascii(" ".join(words))[:30],
)  # fmt: skip
def test_hostile_calls(inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, words: list[str]) -> None:
    monkeypatch.chdir(tmp_path)
    status, said, remarks = inside(*words)
    told(status, said, remarks)
    assert (status, said) == (2, "")
    assert list(tmp_path.iterdir()) == []

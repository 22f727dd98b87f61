"""How the words of a call are read, and what help loads."""

from __future__ import annotations

import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from cli_folders import SMALLEST

from calc import __version__
from calc.cli.call import COMMANDS
from calc.cli.outcome import STATUSES

Inside = Callable[..., tuple[int, str, str]]
HEAVY = {"numpy", "scipy", "pint", "yaml", "jinja2", "weasyprint", "matplotlib", "multiprocessing", "calc.pipeline"}


@pytest.mark.parametrize("words", [["--help"], ["--version"], ["solve", "--help"], ["sovle"], []])
def test_help_loads_nothing_heavy(words: list[str]) -> None:
    told = f"import sys; from calc.cli import main; main({words!r}); print(*sys.modules, file=sys.stderr)"
    done = subprocess.run([sys.executable, "-c", told], check=True, capture_output=True, text=True)
    assert set(done.stderr.split()) & HEAVY == set()
    assert "calc.cli.call" in done.stderr


def test_the_installed_command_answers() -> None:
    command = Path(sys.executable).with_name("headtrace")
    done = subprocess.run([command, "--version"], check=True, capture_output=True, text=True)
    assert done.stdout == f"headtrace {__version__}\n"
    assert done.stderr == ""


def test_help_names_every_command_and_status(inside: Inside) -> None:
    status, said, remarks = inside("--help")
    assert (status, remarks) == (0, "")
    assert [c.name for c in COMMANDS] == re.findall(r"^  ([a-z]+) ", said, re.MULTILINE)
    assert [str(s.value) for s, _ in STATUSES] == re.findall(r"^  (\d+) ", said, re.MULTILINE)
    assert [s.value for s, _ in STATUSES] == [0, 1, 2, 3, 4, 5, 70]  # the contract
    for absent in ("compare", "desk", "sign", "archive", "verify"):
        assert absent not in said


@pytest.mark.parametrize("command", COMMANDS, ids=lambda c: c.name)
def test_each_command_tells_all_that_it_takes(inside: Inside, command: object) -> None:
    status, said, remarks = inside(command.name, "--help")  # type: ignore[attr-defined]
    assert (status, remarks) == (0, "")
    for part in (*command.places, *command.options):  # type: ignore[attr-defined]
        assert f"\n  {part.name}" in said


@pytest.mark.parametrize(
    ("words", "shown"),
    [
        (
            [],
            "headtrace: no command is given; expected one of new, inspect, solve, issue, trace, tables, schema, ",
        ),
        (["slove"], "headtrace: there is no command 'slove'; expected one of new, "),
        (["slove"], "\n  hint: did you mean 'solve'?\n"),
        (["--verbose"], "headtrace: there is no option '--verbose'"),
        (["solve"], "headtrace solve: DIR is missing; expected 'headtrace solve DIR [--case ID] [--json]'\n"),
        (["solve", "a", "b"], "headtrace solve: 'b' is one word too many"),
        (
            ["solve", "a", "--jsn"],
            "there is no option '--jsn'; expected --case or --json\n  hint: did you mean '--json'?",
        ),
        (["solve", "a", "--js"], "there is no option '--js'"),
        (["solve", "a", "--case"], "headtrace solve: '--case' has no value; expected '--case ID'\n"),
        (["solve", "a", "--json=3"], "headtrace solve: '--json' takes no value; expected '--json' alone\n"),
        (["issue"], "headtrace issue: DIR is missing"),
        (
            ["issue", "a", "--for", "fun"],
            "'fun' cannot stand behind '--for'; expected one of checking, approval, record",
        ),
        (["trace", "a"], "headtrace trace: ID is missing; expected 'headtrace trace DIR ID [--json]'\n"),
        (["ready", "-x"], "headtrace ready: there is no option '-x'; expected no option\n"),
        (
            ["tables", "ftings"],
            "there is no table 'ftings'; expected one of fittings, ends, defaults, ",
        ),
        (
            ["new", "a", "--like", "two"],
            "there is no sample 'two'; expected one of three-reservoirs, two-reservoirs, ostrel-transfer-main",
        ),
    ],
)
def test_a_wrong_call_says_what_was_expected(inside: Inside, words: list[str], shown: str) -> None:
    status, said, remarks = inside(*words)
    assert (status, said) == (2, "")
    assert shown in remarks
    assert "usage" not in remarks


def test_words_may_stand_in_any_order(inside: Inside, write: Callable[[str], Path]) -> None:
    folder = write(SMALLEST)
    one = inside("solve", folder, "--case", "base", "--json")
    assert one == inside("solve", "--json", "--case=base", folder)
    assert one == inside("solve", "--case", "base", "--json", "--", folder)
    assert one[0] == 0


def test_a_folder_may_begin_with_a_hyphen(headtrace: Callable[..., object], tmp_path: Path) -> None:
    (tmp_path / "-works").mkdir()
    (tmp_path / "-works" / "network.yaml").write_text(SMALLEST, encoding="utf-8")
    assert headtrace("inspect", "--", "-works", cwd=tmp_path).returncode == 0  # type: ignore[attr-defined]

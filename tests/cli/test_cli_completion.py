"""Completion: what each shell offers where, asked of the shells themselves."""

from __future__ import annotations

import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from calc.cli.call import COMMANDS, SHELLS
from calc.cli.samples import samples
from calc.cli.tables import TABLES

Inside = Callable[..., tuple[int, str, str]]
NAMES = [command.name for command in COMMANDS]
PRESENT = [shell for shell in SHELLS if shutil.which(shell)]
"""bash is on every machine that runs these tests; the others are asked where they are."""

ASK_BASH = """
source "$1"; shift
COMP_WORDS=("$@"); COMP_CWORD=$(($# - 1))
"$(complete -p headtrace | sed 's/.*-F \\([^ ]*\\).*/\\1/')"
printf '%s\\n' "${COMPREPLY[@]}"
"""
ASK_FISH = "source $argv[1]; complete -C (string join ' ' -- $argv[2..])"


def offered(shell: str, script: Path, words: list[str], folder: Path) -> set[str]:
    if shell == "bash":
        command = ["bash", "--norc", "-c", ASK_BASH, "ask", script, *words]
    else:
        command = ["fish", "--no-config", "-c", ASK_FISH, script, *words]
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=True, timeout=60)
    assert done.stderr == ""
    return {line.partition("\t")[0].rstrip("/") for line in done.stdout.splitlines() if line}


@pytest.fixture
def scripts(inside: Inside, tmp_path: Path) -> dict[str, Path]:
    made = {}
    for shell in SHELLS:
        status, said, remarks = inside("completion", shell)
        assert (status, remarks) == (0, "")
        made[shell] = tmp_path / f"completion.{shell}"
        made[shell].write_text(said, encoding="utf-8")
    return made


def test_bash_is_here() -> None:
    assert "bash" in PRESENT


@pytest.mark.parametrize("shell", [shell for shell in PRESENT if shell != "zsh"])
def test_a_shell_offers_what_may_stand(shell: str, scripts: dict[str, Path], tmp_path: Path) -> None:
    place = tmp_path / "place"
    for name in ("works", "with blank"):
        (place / name).mkdir(parents=True)
    (place / "file.yaml").touch()

    def ask(*words: str) -> set[str]:
        return offered(shell, scripts[shell], ["headtrace", *words], place)

    assert set(NAMES) <= ask("")
    assert ask("i") == {"inspect", "issue"}
    assert ask("tables", "") == set(TABLES)
    assert ask("new", "--like", "") == set(samples())
    assert ask("new", "place", "--like", "two") == {"two-reservoirs"}
    assert ask("issue", "works", "--for", "a") == {"approval"}
    assert ask("completion", "") == set(SHELLS)
    assert {"--case", "--json", "--help"} <= ask("solve", "works", "--")
    for words in (["inspect"], ["issue", "works"], ["issue", "--for", "record"], ["issue", "--out"], ["new"]):
        assert "works" in ask(*words, "w"), words
        assert "file.yaml" not in ask(*words, "")
    assert ask("solve", "works", "--case", "") == set()
    assert ask("schema", "") <= {"--help"}


def test_bash_offers_a_folder_with_a_blank_as_one(scripts: dict[str, Path], tmp_path: Path) -> None:
    (tmp_path / "with blank").mkdir()
    assert offered("bash", scripts["bash"], ["headtrace", "inspect", "with"], tmp_path) == {"with blank"}


def test_every_option_of_every_command_is_in_every_script(scripts: dict[str, Path]) -> None:
    for shell, script in scripts.items():
        text = script.read_text(encoding="utf-8")
        for command in COMMANDS:
            assert command.name in text
            for option in command.options:
                assert (f"-l {option.field}" if shell == "fish" else option.name) in text


@pytest.mark.parametrize("shell", PRESENT)
def test_a_shell_can_read_its_script(shell: str, scripts: dict[str, Path]) -> None:
    done = subprocess.run([shell, "-n", scripts[shell]], capture_output=True, text=True, check=False, timeout=60)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.parametrize("shell", [shell for shell in PRESENT if shell == "zsh"])
def test_zsh_takes_the_script_as_a_completion(shell: str, scripts: dict[str, Path], tmp_path: Path) -> None:
    load = 'autoload -Uz compinit; compinit -u -D; source "$1"; print -r -- $_comps[headtrace]'
    done = subprocess.run(
        [shell, "-f", "-c", load, "ask", scripts[shell]],
        env={"HOME": str(tmp_path), "PATH": "/usr/bin:/bin"},
        capture_output=True,
        text=True,
        check=True,
        timeout=60,
    )
    assert (done.stdout.strip(), done.stderr) == ("_headtrace", "")


def test_an_unknown_shell_is_refused(inside: Inside) -> None:
    status, said, remarks = inside("completion", "bas")
    assert (status, said) == (2, "")
    assert remarks == (
        "headtrace completion: 'bas' cannot stand for SHELL; expected one of bash, zsh, fish\n"
        "  hint: did you mean 'bash'?\n"
    )

"""Project folders and ways to call the command."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable, Mapping
from pathlib import Path

import pytest

from calc.cli import main

REPOSITORY = Path(__file__).resolve().parents[2]
DEMO = REPOSITORY / "projects" / "ostrel-transfer-main"

Called = subprocess.CompletedProcess[str]
Caller = Callable[..., Called]


def call(*words: object, environment: Mapping[str, str] | None = None, cwd: Path | None = None) -> Called:
    """Call the command in a process of its own, with nothing on stdin and pipes on the rest."""
    return subprocess.run(
        [sys.executable, "-m", "calc", *map(str, words)],
        cwd=cwd,
        env={**os.environ, **(environment or {})},
        check=False,
        capture_output=True,
        encoding="utf-8",
        stdin=subprocess.DEVNULL,
    )


@pytest.fixture(scope="session")
def headtrace() -> Caller:
    return call


@pytest.fixture
def inside(capsys: pytest.CaptureFixture[str]) -> Callable[..., tuple[int, str, str]]:
    """Call the command in this process: status, stdout, stderr."""

    def run(*words: object) -> tuple[int, str, str]:
        status = main([str(word) for word in words])
        said = capsys.readouterr()
        return status, said.out, said.err

    return run


@pytest.fixture
def write(tmp_path: Path) -> Callable[[str], Path]:
    """Make a project folder of one network.yaml."""

    def made(text: str, name: str = "works") -> Path:
        folder = tmp_path / name
        folder.mkdir()
        (folder / "network.yaml").write_text(text, encoding="utf-8")
        return folder

    return made


@pytest.fixture
def demo(tmp_path: Path) -> Path:
    folder = tmp_path / "demo"
    shutil.copytree(DEMO, folder, ignore=shutil.ignore_patterns("issued"))
    return folder

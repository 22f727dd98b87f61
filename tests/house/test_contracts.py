"""The picture of layers, as a test; and the scripts at least parse."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest


def lint(repository: Path, tree: Path, monkeypatch: pytest.MonkeyPatch) -> subprocess.CompletedProcess[str]:
    monkeypatch.setenv("PYTHONPATH", str(tree))
    monkeypatch.setenv("PYTHONSAFEPATH", "1")
    linter = Path(sys.executable).with_name("lint-imports")
    command = [linter, "--no-cache", "--config", repository / "pyproject.toml"]
    return subprocess.run(command, cwd=tree, capture_output=True, text=True, check=False, timeout=120)


def test_imports_point_down_the_picture(repository: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    done = lint(repository, repository, monkeypatch)
    assert done.returncode == 0, done.stdout + done.stderr
    assert re.search(r"Contracts: \d+ kept, 0 broken", done.stdout)


@pytest.mark.parametrize("path", [".ci/run", ".ci/setup.sh", "tests/run.sh", "projects/demo.sh"])
def test_a_script_parses(repository: Path, path: str) -> None:
    done = subprocess.run(["bash", "-n", repository / path], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (0, "")


def test_scripts_know_no_path_of_this_machine(repository: Path) -> None:
    for path in (".ci/run", ".ci/setup.sh", "tests/run.sh", "projects/demo.sh", "pyproject.toml"):
        text = (repository / path).read_text(encoding="utf-8")
        assert not re.search(r"(?<![\w$.}])/(home|root|work|opt|Users)\b", text), path

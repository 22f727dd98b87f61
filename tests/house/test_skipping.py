"""A test that looks at a real page or PDF may not be passed over in silence."""

from __future__ import annotations

import subprocess
import sys
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from pathlib import Path

MARKED = """
import pytest

@pytest.mark.{mark}
def test_looks():
    {body}
"""


def run(repository: Path, folder: Path, text: str) -> subprocess.CompletedProcess[str]:
    conftest = (repository / "tests" / "conftest.py").read_text(encoding="utf-8")
    (folder / "conftest.py").write_text(conftest, encoding="utf-8")
    (folder / "test_it.py").write_text(text, encoding="utf-8")
    command = [
        sys.executable,
        "-m",
        "pytest",
        "-c",
        repository / "pyproject.toml",
        "--rootdir",
        folder,
        folder,
    ]
    command += ["-p", "no:cacheprovider"]
    return subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False, timeout=60)


@pytest.mark.parametrize("mark", ["browser", "pdf"])
def test_a_skipped_test_with_the_mark_fails(repository: Path, tmp_path: Path, mark: str) -> None:
    done = run(repository, tmp_path, MARKED.format(mark=mark, body='pytest.skip("nothing to look with")'))
    assert done.returncode == 1, done.stdout
    assert "may not be skipped" in done.stdout
    assert "nothing to look with" in done.stdout


def test_a_module_skipped_whole_is_an_error(repository: Path, tmp_path: Path) -> None:
    done = run(repository, tmp_path, 'import pytest\npytest.importorskip("no_such_module_at_all")\n')
    assert done.returncode == 2, done.stdout
    assert "may not be skipped whole" in done.stdout


def test_other_tests_may_skip_and_these_may_pass(repository: Path, tmp_path: Path) -> None:
    done = run(repository, tmp_path, MARKED.format(mark="slow", body='pytest.skip("not today")'))
    assert "1 skipped" in done.stdout
    assert done.returncode == 0, done.stdout
    done = run(repository, tmp_path, MARKED.format(mark="pdf", body="pass"))
    assert "1 passed" in done.stdout

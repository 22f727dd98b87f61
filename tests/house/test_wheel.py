"""The wheel carries all that issuing needs, and a new environment can issue with it."""

from __future__ import annotations

import subprocess
import sys
import sysconfig
import zipfile
from pathlib import Path

import pytest

pytestmark = pytest.mark.slow

SMALLEST = """\
reservoirs:
  upper: {level: 214.60 m}
  lower: {level: 183.00 m}
pipes:
  main: {from: upper, to: lower, length: 1850 m, bore: 384.4 mm, roughness: 0.15 mm}
"""


@pytest.fixture(scope="module")
def wheel(repository: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Build with the tools that are here: the same hook, the same pins, no network."""
    folder = tmp_path_factory.mktemp("wheel")
    subprocess.run(
        [sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", folder],
        cwd=repository,
        check=True,
        capture_output=True,
    )
    (built,) = folder.glob("headtrace-*.whl")
    return built


def test_the_wheel_carries_templates_fonts_and_tables(repository: Path, wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as archive:
        inside = {name: archive.read(name) for name in archive.namelist()}
    wanted = {
        f"calc/publish/templates/{path.relative_to(repository / 'templates').as_posix()}": path
        for path in (repository / "templates").rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }
    assert wanted
    wanted |= {
        f"calc/data/{path.relative_to(repository).as_posix()}": path
        for path in (repository / "projects").glob("*/*")
        if path.suffix in {".yaml", ".csv"}
    }
    assert "calc/data/projects/ostrel-transfer-main/network.yaml" in wanted
    wanted |= {
        path.relative_to(repository).as_posix(): path
        for path in (repository / "calc").rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }
    assert any(name.startswith("calc/data/") for name in wanted)
    assert "calc/publish/fonts/LedgerText-Regular.ttf" in wanted
    assert {name for name, path in wanted.items() if inside.get(name) != path.read_bytes()} == set()
    assert {name for name in inside if not name.startswith("headtrace-")} == wanted.keys()


@pytest.mark.pdf
def test_a_new_environment_issues_from_an_empty_folder(
    wheel: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    # The wheel is installed alone; this environment lends what it depends on, so that no network is needed.
    place = tmp_path / "environment"
    subprocess.run([sys.executable, "-m", "venv", "--without-pip", place], check=True)
    python = place / "bin" / "python"
    subprocess.run(
        [
            sys.executable,
            "-m",
            "pip",
            "--python",
            python,
            "install",
            "--quiet",
            "--no-deps",
            "--no-index",
            wheel,
        ],
        check=True,
    )
    (site,) = place.glob("lib/python*/site-packages")
    (site / "lent.pth").write_text(sysconfig.get_path("purelib") + "\n", encoding="utf-8")
    for name in ("PYTHONPATH", "PYTHONHOME", "VIRTUAL_ENV"):
        monkeypatch.delenv(name, raising=False)
    folder = tmp_path / "smallest"
    folder.mkdir()
    (folder / "network.yaml").write_text(SMALLEST, encoding="utf-8")
    empty = tmp_path / "empty"
    empty.mkdir()

    asked = subprocess.run(
        [python, "-c", "import calc; print(calc.__file__)"],
        cwd=empty,
        check=True,
        capture_output=True,
        text=True,
    )
    assert asked.stdout.startswith(str(site))
    done = subprocess.run(
        [place / "bin" / "headtrace", "issue", folder],
        cwd=empty,
        check=False,
        capture_output=True,
        text=True,
        stdin=subprocess.DEVNULL,
    )
    assert done.returncode == 0, done.stdout + done.stderr
    (pdf,) = (folder / "issued").glob("*/package.pdf")
    assert pdf.read_bytes().startswith(b"%PDF-")
    assert list(empty.iterdir()) == []

    # every sample and demonstration project travels
    begun = tmp_path / "begun"
    for words in (["new", begun, "--like", "ostrel-transfer-main"], ["inspect", begun]):
        done = subprocess.run(
            [place / "bin" / "headtrace", *words], cwd=empty, check=False, capture_output=True, text=True
        )
        assert done.returncode == 0, done.stdout + done.stderr
    assert {path.name for path in begun.iterdir()} >= {"network.yaml", "project.yaml", "inputs.schema.json"}

"""The picture of layers, as a test; and the scripts at least parse."""

from __future__ import annotations

import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest


def lint(repository: Path, tree: Path, monkeypatch: pytest.MonkeyPatch) -> subprocess.CompletedProcess[str]:
    monkeypatch.setenv("PYTHONPATH", str(tree))
    linter = Path(sys.executable).with_name("lint-imports")
    if tree != repository:
        shutil.copy(repository / "pyproject.toml", tree)
    command = [linter, "--no-cache"]
    return subprocess.run(command, cwd=tree, capture_output=True, text=True, check=False, timeout=120)


def test_imports_point_down_the_picture(repository: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    done = lint(repository, repository, monkeypatch)
    assert done.returncode == 0, done.stdout + done.stderr
    assert re.search(r"Contracts: \d+ kept, 0 broken", done.stdout)


PACKAGES = (
    *("cli", "pipeline", "publish", "report", "verification", "account", "solve", "second", "project"),
    *(
        "criteria",
        "components",
        "yamlfile",
        "physics",
        "ledger",
        "equation",
        "units",
        "problems",
        "kinds",
        "marks",
    ),
)


@pytest.fixture
def stubs(tmp_path: Path) -> Path:
    for package in PACKAGES:
        (tmp_path / "calc" / package).mkdir(parents=True)
        (tmp_path / "calc" / package / "__init__.py").touch()
    for module in ("__init__", "criteria/criterion", "criteria/velocity", "criteria/pressure"):
        (tmp_path / "calc" / f"{module}.py").touch()
    (tmp_path / "calc/criteria/velocity.py").write_text("import calc.criteria.criterion\n", encoding="utf-8")
    (tmp_path / "calc/units/__init__.py").write_text("import pint\n", encoding="utf-8")
    (tmp_path / "calc/publish/page.py").write_text("import jinja2, weasyprint\n", encoding="utf-8")
    (tmp_path / "calc/cli/__init__.py").write_text("import calc.publish.page, calc.units\n", encoding="utf-8")
    return tmp_path


def test_a_tree_in_order_keeps_every_contract(stubs: Path, repository: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    done = lint(repository, stubs, monkeypatch)
    assert done.returncode == 0, done.stdout + done.stderr


@pytest.mark.parametrize(
    ("module", "line", "contract"),
    [
        ("solve/__init__", "import calc.report", "Imports point down the page"),
        ("physics/__init__", "import calc.ledger", "Imports point down the page"),
        ("novelty", "", "Imports point down the page"),
        ("project/__init__", "import pint", "Only calc.units knows pint"),
        ("report/__init__", "import jinja2", "Only calc.publish knows what renders"),
        ("cli/__init__", "def main():\n    import pikepdf", "Only calc.publish knows what renders"),
        ("solve/__init__", "import calc.units", "The solver knows neither"),
        ("second/__init__", "import calc.physics", "The second opinion shares no code"),
        ("criteria/velocity", "import calc.criteria.pressure", "A criterion never imports another"),
        ("kinds/a", "import calc.kinds.b", "No cycles"),
    ],
)
def test_a_planted_import_breaks_its_contract(
    stubs: Path, repository: Path, monkeypatch: pytest.MonkeyPatch, module: str, line: str, contract: str
) -> None:
    (stubs / "calc/kinds/b.py").write_text("import calc.kinds.a\n", encoding="utf-8")
    path = stubs / "calc" / f"{module}.py"
    path.write_text(line + "\n", encoding="utf-8")
    if module != "kinds/a":
        (stubs / "calc/kinds/a.py").touch()
    done = lint(repository, stubs, monkeypatch)
    assert done.returncode == 1, done.stdout + done.stderr
    assert re.search(rf"{contract}.* BROKEN", done.stdout), done.stdout


@pytest.mark.parametrize("path", [".ci/run", ".ci/setup.sh", "tests/run.sh", "projects/demo.sh"])
def test_a_script_parses(repository: Path, path: str) -> None:
    done = subprocess.run(["bash", "-n", repository / path], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (0, "")


def test_scripts_know_no_path_of_this_machine(repository: Path) -> None:
    for path in (".ci/run", ".ci/setup.sh", "tests/run.sh", "projects/demo.sh", "pyproject.toml"):
        text = (repository / path).read_text(encoding="utf-8")
        assert not re.search(r"(?<![\w$.}])/(home|root|work|opt|Users)\b", text), path

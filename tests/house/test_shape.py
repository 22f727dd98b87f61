"""The shape of the code: short modules, short functions, plain names, a design note in each package."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

REPOSITORY = Path(__file__).resolve().parents[2]
CODE = [*sorted((REPOSITORY / "calc").rglob("*.py")), *sorted((REPOSITORY / ".build").glob("*.py"))]
PACKAGES = sorted(path for path in CODE if path.name == "__init__.py")
# The command and publishing import late, to start fast; everything else says at its top what it knows.
EARLY = [path for path in CODE if path.relative_to(REPOSITORY).parts[:2] not in {("calc", "cli"), ("calc", "publish")}]
EARLY = [path for path in EARLY if path.name != "cli.py"]
VAGUE = {"utils", "util", "helpers", "helper", "manager", "base", "data", "info", "process", "handle", "misc"}
VISIBLE = {
    *("README.md", "DEVELOPERS.md", "LICENSE", "pyproject.toml"),
    *("calc", "templates", "tests", "projects"),
}


def local(path: Path) -> str:
    return path.relative_to(REPOSITORY).as_posix()


def definitions(tree: ast.Module) -> Iterator[ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef]:
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef):
            yield node


def test_there_is_code() -> None:
    assert len(CODE) > 10
    assert len(PACKAGES) > 2


@pytest.mark.parametrize("path", CODE, ids=local)
def test_a_module_has_at_most_400_lines(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400


@pytest.mark.parametrize("path", CODE, ids=local)
def test_a_function_has_at_most_60_lines(path: Path) -> None:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    lengths = {
        node.name: (node.end_lineno or node.lineno) - node.lineno + 1
        for node in definitions(tree)
        if not isinstance(node, ast.ClassDef)
    }
    assert {name: lines for name, lines in lengths.items() if lines > 60} == {}


@pytest.mark.parametrize("path", CODE, ids=local)
def test_names_say_what_is_meant(path: Path) -> None:
    names = {node.name.strip("_").lower() for node in definitions(ast.parse(path.read_text(encoding="utf-8")))}
    assert VAGUE.isdisjoint(names)
    assert path.stem not in VAGUE


@pytest.mark.parametrize("path", PACKAGES, ids=local)
def test_a_package_opens_with_its_design_note(path: Path) -> None:
    note = ast.get_docstring(ast.parse(path.read_text(encoding="utf-8")))
    assert note
    assert len(note.split()) >= 10


@pytest.mark.parametrize("path", EARLY, ids=local)
def test_only_command_and_publishing_import_inside_functions(path: Path) -> None:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    late = [
        node.lineno
        for function in definitions(tree)
        for node in ast.walk(function)
        if isinstance(node, ast.Import | ast.ImportFrom)
    ]
    assert late == []


def test_the_top_level_is_what_the_readme_says() -> None:
    visible = {path.name for path in REPOSITORY.iterdir() if not path.name.startswith(".")}
    assert visible <= VISIBLE
    assert {"pyproject.toml", "calc", "templates", "tests", "projects"} <= visible

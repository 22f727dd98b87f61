"""What the house rules are read from."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

REPOSITORY = Path(__file__).resolve().parents[2]
PASSED_OVER = {"__pycache__", "issued", "fonts"}


@pytest.fixture(scope="session")
def repository() -> Path:
    """Return the repository's root."""
    return REPOSITORY


@pytest.fixture(scope="session")
def texts() -> dict[str, str]:
    """Return every text of the repository by its path, generated ones left out."""
    found = {}
    roots = [REPOSITORY / name for name in ("calc", "templates", "tests", "projects", ".ci", ".build")]
    tops = [path for path in REPOSITORY.iterdir() if path.is_file()]
    for path in sorted([*tops, *(path for root in roots for path in root.rglob("*") if path.is_file())]):
        local = path.relative_to(REPOSITORY)
        if PASSED_OVER.isdisjoint(local.parts):
            try:
                found[local.as_posix()] = path.read_text(encoding="utf-8")
            except UnicodeDecodeError:
                continue  # a picture, or a file that is wrong on purpose
    return found


@pytest.fixture(scope="session")
def cutting() -> ModuleType:
    """Return the build's font cutting."""
    spec = importlib.util.spec_from_file_location("cutting", REPOSITORY / ".build" / "cutting.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules["cutting"] = module
    spec.loader.exec_module(module)
    return module

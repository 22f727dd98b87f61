"""The projects to begin from: small commented samples, and the demonstration projects."""

from __future__ import annotations

from pathlib import Path

_HERE = Path(__file__).resolve().parents[1]
SHELVES = (_HERE / "data" / "samples", _HERE / "data" / "projects", _HERE.parent / "projects")
"""Samples; the demonstration projects in a wheel; the same in the repository, where an installation is editable."""

INPUTS = (".yaml", ".csv")
"""Endings of the files that are copied; what a project has issued is not."""


def samples() -> dict[str, Path]:
    """Return the folders to begin from, by name."""
    found: dict[str, Path] = {}
    for shelf in SHELVES:
        folders = sorted(shelf.iterdir()) if shelf.is_dir() else []
        found |= {folder.name: folder for folder in folders if folder.is_dir() and inputs(folder)}
    return found


def inputs(folder: Path) -> list[Path]:
    """Return the input files of a folder, by name."""
    return sorted(file for file in folder.iterdir() if file.suffix in INPUTS and file.is_file())

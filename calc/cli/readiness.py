"""``headtrace ready``: what this machine has of all that issuing needs, and what it lacks."""

from __future__ import annotations

import argparse
import ctypes
import platform
import re
import sys
import tempfile
from collections.abc import Iterator
from importlib import metadata
from pathlib import Path

from calc import __version__
from calc.cli.call import NAME
from calc.cli.layout import columns
from calc.cli.outcome import Outcome, Status
from calc.problems import StorageError
from calc.publish import places

LEAST_PYTHON = (3, 11)
LIBRARIES: dict[str, tuple[str, ...]] = {
    "Pango": ("libpango-1.0.so.0", "libpango-1.0.dylib"),
    "Pango for fonts": ("libpangoft2-1.0.so.0", "libpangoft2-1.0.dylib"),
    "GObject": ("libgobject-2.0.so.0", "libgobject-2.0.dylib"),
    "HarfBuzz": ("libharfbuzz.so.0", "libharfbuzz.dylib"),
    "HarfBuzz for subsets": ("libharfbuzz-subset.so.0", "libharfbuzz-subset.dylib"),
    "Fontconfig": ("libfontconfig.so.1", "libfontconfig.dylib"),
}
"""System libraries that lay out a page, by the names under which systems know them."""
_REQUIREMENT = re.compile(r"(?P<name>[A-Za-z0-9._-]+)\s*(?P<how>==|>=)?\s*(?P<version>[0-9.]+)?")

Check = tuple[str, str, bool]
"""What was looked at, what was found, and whether it will do."""


def run(asked: argparse.Namespace) -> Outcome:
    """Say what this machine has and what it lacks."""
    del asked
    checks = [_python(), *_packages(), *_libraries(), _fonts(), _templates(), *_writable()]
    lines = columns([["yes" if good else "NO", what, found] for what, found, good in checks], "<<<", 0)
    lacking = [what for what, _, good in checks if not good]
    if lacking:
        remark = f"{NAME} ready: this machine is not ready; it lacks: {', '.join(lacking)}"
        return Outcome(Status.STORAGE, "\n".join(lines), remark)
    return Outcome(said="\n".join([*lines, "", f"{NAME} {__version__}: this machine is ready"]))


def _python() -> Check:
    wanted = ".".join(map(str, LEAST_PYTHON))
    return f"Python {wanted} or later", platform.python_version(), sys.version_info >= LEAST_PYTHON


def _packages() -> Iterator[Check]:
    for requirement in metadata.requires(NAME) or ():
        wanted, _, marker = requirement.partition(";")
        match = _REQUIREMENT.match(wanted)
        if match is None or "extra" in marker:
            continue
        try:
            found = metadata.version(match["name"])
        except metadata.PackageNotFoundError:
            yield wanted.strip(), "not installed", False
            continue
        least = match["version"] or "0"
        good = found == least if match["how"] == "==" else _parts(found) >= _parts(least)
        yield wanted.strip(), found, good


def _parts(version: str) -> list[int]:
    return [int(part) for part in re.findall(r"[0-9]+", version.partition("+")[0])]


def _libraries() -> Iterator[Check]:
    for what, names in LIBRARIES.items():
        found = next(filter(_loads, names), "")
        yield what, found or "not found", bool(found)


def _loads(name: str) -> bool:
    try:
        ctypes.CDLL(name)
    except OSError:
        return False
    return True


def _fonts() -> Check:
    return _place("typefaces", places.fonts)


def _templates() -> Check:
    return _place("templates", places.templates)


def _place(what: str, find: object) -> Check:
    try:
        return what, str(find()), True  # type: ignore[operator]
    except StorageError as error:
        return what, str(error), False


def _writable() -> Iterator[Check]:
    for what, folder in (("room for temporary files", Path(tempfile.gettempdir())), ("this folder", Path.cwd())):
        try:
            with tempfile.TemporaryFile(dir=folder) as file:
                file.write(b"ready")
        except OSError as error:
            yield f"{what} can be written", f"{folder}: {error.strerror or error}", False
        else:
            yield f"{what} can be written", str(folder), True

"""``headtrace ready``: what this machine has of all that issuing needs, what it lacks, and how to mend that."""

from __future__ import annotations

import argparse
import ctypes
import hashlib
import platform
import re
import shlex
import sys
import tempfile
from collections.abc import Callable, Iterator
from importlib import import_module, metadata
from pathlib import Path
from typing import NamedTuple

from calc import __version__
from calc.cli import mending
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
VERSION_OF = {"Pango": "pango_version_string", "HarfBuzz": "hb_version_string"}
"""The function of a library that tells its version."""
_REQUIREMENT = re.compile(r"(?P<name>[A-Za-z0-9._-]+)\s*(?P<how>==|>=)?\s*(?P<version>[0-9.]+)?")

SYSTEM, PACKAGE, AGAIN = "system", "package", "again"
"""Ways to mend: by the system's package manager, by pip, by installing this program again."""


class Check(NamedTuple):
    """What was looked at, what was found, whether it will do, and the way to mend it, or the line itself."""

    what: str
    found: str
    good: bool
    mend: str = ""


def run(asked: argparse.Namespace) -> Outcome:
    """Say what this machine has and what it lacks."""
    del asked
    checks = [_python(), *_packages(), *_libraries(), _fonts(), _templates(), *_writable()]
    proof = _verification()
    rows = [["yes" if check.good else "NO", check.what, check.found] for check in (*checks, proof)]
    lines = columns(rows, "<<<", 0)
    lacking = [check for check in (*checks, proof) if not check.good]
    if not lacking:
        return Outcome(said="\n".join([*lines, "", f"{NAME} {__version__}: this machine is ready"]))
    lines += ["", "To mend it:", *(f"  {line}" for line in _mends(lacking))]
    remark = f"{NAME} ready: this machine is not ready; it lacks: {', '.join(check.what for check in lacking)}"
    status = Status.STORAGE if any(not check.good for check in checks) else Status.NOT_PROVED
    return Outcome(status, "\n".join(lines), remark)


def _mends(lacking: list[Check]) -> Iterator[str]:
    """Yield the lines to type, each thing that is lacking in one of them."""
    system = [check.what.partition(" 3.")[0] for check in lacking if check.mend == SYSTEM]
    if system:
        yield mending.system_line(system)
    packages = [check.what for check in lacking if check.mend == PACKAGE]
    if packages:
        yield mending.packages_line(packages)
    if any(check.mend == AGAIN for check in lacking):
        yield mending.again_line()
    yield from (check.mend for check in lacking if check.mend not in (SYSTEM, PACKAGE, AGAIN, ""))


def _python() -> Check:
    wanted = ".".join(map(str, LEAST_PYTHON))
    good = sys.version_info >= LEAST_PYTHON
    return Check(f"Python {wanted} or later", platform.python_version(), good, SYSTEM)


def _packages() -> Iterator[Check]:
    try:
        requirements = metadata.requires(NAME) or ()
    except metadata.PackageNotFoundError:
        yield Check(NAME, "not installed", good=False, mend=AGAIN)
        return
    for requirement in requirements:
        wanted, _, marker = requirement.partition(";")
        match = _REQUIREMENT.match(wanted)
        if match is None or "extra" in marker:
            continue
        try:
            found = metadata.version(match["name"])
        except metadata.PackageNotFoundError:
            yield Check(wanted.strip(), "not installed", good=False, mend=PACKAGE)
            continue
        least = match["version"] or "0"
        good = found == least if match["how"] == "==" else _parts(found) >= _parts(least)
        yield Check(wanted.strip(), found, good, PACKAGE)


def _parts(version: str) -> list[int]:
    return [int(part) for part in re.findall(r"[0-9]+", version.partition("+")[0])]


def _libraries() -> Iterator[Check]:
    for what, names in LIBRARIES.items():
        found = next(filter(None, (_loaded(name, VERSION_OF.get(what, "")) for name in names)), "")
        yield Check(what, found or "not found", bool(found), SYSTEM)


def _loaded(name: str, version_of: str) -> str:
    """Return a library's name with its version where it tells one; nothing where it cannot be loaded."""
    try:
        library = ctypes.CDLL(name)
        if not version_of:
            return name
        tell = getattr(library, version_of)
    except (OSError, AttributeError):
        return ""
    tell.restype = ctypes.c_char_p
    return f"{name}, {tell().decode('ascii', 'replace')}"


def _fonts() -> Check:
    return _place("typefaces", _sound_fonts)


def _sound_fonts() -> Path:
    """Return the folder of typefaces, each of which is as it was cut.

    Raises
    ------
    StorageError
        If one is missing or altered.
    """
    folder = places.fonts()
    for line in (folder / "cut.sha256").read_text(encoding="utf-8").splitlines()[1:]:
        digest, _, name = line.partition("  ")
        file = folder / name
        if not file.is_file() or hashlib.sha256(file.read_bytes()).hexdigest() != digest:
            raise StorageError(f"{file} is missing or altered")
    return folder


def _templates() -> Check:
    return _place("templates", places.templates)


def _place(what: str, find: Callable[[], Path]) -> Check:
    try:
        return Check(what, str(find()), good=True)
    except StorageError as error:
        return Check(what, str(error), good=False, mend=AGAIN)


def _writable() -> Iterator[Check]:
    temporary = Path(tempfile.gettempdir())
    home = shlex.quote(str(Path.home()))
    for what, folder, mend in (
        ("room for temporary files", temporary, f"export TMPDIR={home}"),
        ("this folder", Path.cwd(), f"cd {home}"),
    ):
        try:
            with tempfile.TemporaryFile(dir=folder) as file:
                file.write(b"ready")
        except OSError as error:
            yield Check(f"{what} can be written", f"{folder}: {error.strerror or error}", good=False, mend=mend)
        else:
            yield Check(f"{what} can be written", str(folder), good=True)


def _verification() -> Check:
    """Run the published and exact cases that this installation is verified by."""
    what = "verification cases are computed right"
    try:
        checks = import_module("calc.verification").run()
    except ImportError as error:
        return Check(what, f"they cannot run without {error.name}", good=False)
    failing = [check.id for check in checks if not check.passed]
    if failing:
        return Check(what, f"{len(failing)} of {len(checks)} are not: {', '.join(failing)}", good=False, mend=AGAIN)
    return Check(what, f"all {len(checks)}", good=True)

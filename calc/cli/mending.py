"""How to mend what a machine lacks: the line to type, for its package manager and its user's rights."""

from __future__ import annotations

import os
import shlex
import shutil
import sys
from collections.abc import Iterable, Sequence
from pathlib import Path

MANAGERS: dict[str, tuple[tuple[str, ...], bool]] = {
    "apt-get": (("apt-get", "install", "-y"), True),
    "dnf": (("dnf", "install", "-y"), True),
    "apk": (("apk", "add"), True),
    "pacman": (("pacman", "-S", "--noconfirm"), True),
    "brew": (("brew", "install"), False),
}
"""By command, in the order in which they are looked for: how it installs, and whether that needs root's rights."""

PACKAGES: dict[str, dict[str, str]] = {
    "Pango": {
        "apt-get": "libpango-1.0-0", "dnf": "pango", "apk": "pango", "pacman": "pango", "brew": "pango"
    },
    "Pango for fonts": {
        "apt-get": "libpangoft2-1.0-0", "dnf": "pango", "apk": "pango", "pacman": "pango", "brew": "pango"
    },
    "GObject": {"apt-get": "libglib2.0-0", "dnf": "glib2", "apk": "glib", "pacman": "glib2", "brew": "glib"},
    "HarfBuzz": {
        "apt-get": "libharfbuzz0b", "dnf": "harfbuzz", "apk": "harfbuzz", "pacman": "harfbuzz", "brew": "harfbuzz"
    },
    "HarfBuzz for subsets": {
        "apt-get": "libharfbuzz-subset0",
        "dnf": "harfbuzz",
        "apk": "harfbuzz-subset",
        "pacman": "harfbuzz",
        "brew": "harfbuzz",
    },
    "Fontconfig": {
        "apt-get": "libfontconfig1",
        "dnf": "fontconfig",
        "apk": "fontconfig",
        "pacman": "fontconfig",
        "brew": "fontconfig",
    },
    "Python": {
        "apt-get": "python3 python3-venv", "dnf": "python3", "apk": "python3", "pacman": "python", "brew": "python"
    },
}  # fmt: skip
"""The package that brings each, by package manager. Those of apt-get are tried; the others are from memory."""


def system_line(wanted: Iterable[str]) -> str:
    """Return the line that installs what the system lacks, by names of `PACKAGES`."""
    manager = next((name for name in MANAGERS if shutil.which(name)), "")
    things = list(wanted)
    if not manager:
        return f"install {', '.join(things)} by the means of this system"
    command, rooted = MANAGERS[manager]
    packages = dict.fromkeys(package for thing in things for package in PACKAGES[thing][manager].split())
    lines = [shlex.join([*command, *packages])]
    if manager == "apt-get":
        lines.insert(0, "apt-get update")  # a new machine has no lists of packages
    if not rooted or _is_root():
        return " && ".join(lines)
    if shutil.which("sudo"):
        return " && ".join(f"sudo {line}" for line in lines)
    return f"su -c {shlex.quote(' && '.join(lines))}"


def _is_root() -> bool:
    return hasattr(os, "geteuid") and os.geteuid() == 0


def packages_line(requirements: Sequence[str]) -> str:
    """Return the line that installs packages of Python into this environment."""
    return shlex.join([sys.executable, "-m", "pip", "install", *requirements])


def again_line() -> str:
    """Return the line that installs this program again, as it was installed."""
    repository = Path(__file__).resolve().parents[2]
    if (repository / "pyproject.toml").is_file():
        return packages_line(["--editable", str(repository)])
    return packages_line(["--force-reinstall", "--no-deps", "headtrace"])

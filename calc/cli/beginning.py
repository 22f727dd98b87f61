"""``headtrace new``: a folder with a sample's inputs, written whole or not at all."""

from __future__ import annotations

import argparse
import contextlib
import os
import shutil
import tempfile
from collections.abc import Generator
from pathlib import Path

from calc.cli.call import NAME, WrongCall
from calc.cli.outcome import Outcome
from calc.cli.samples import inputs, samples
from calc.cli.schema import written
from calc.problems import nearest

USUAL = "two-reservoirs"
"""The sample that is copied when none is named."""


SCHEMA = "inputs.schema.json"
"""The schema for editors, beside the inputs and none of them."""
EDITORS = f"# yaml-language-server: $schema={SCHEMA}\n"
"""First line of each YAML file, by which editors find the schema."""


def run(asked: argparse.Namespace) -> Outcome:
    """Copy a sample into a new folder, or into an empty one."""
    sample = _sample(USUAL if asked.like is None else asked.like)
    folder = Path(asked.folder)
    _refuse_what_is_held(folder)
    contents = {file.name: _content(file) for file in inputs(sample)}
    names = ", ".join(sorted(contents))
    contents[SCHEMA] = written().encode()
    if folder.is_dir():
        _fill(folder, contents)
    else:
        _make(folder, contents)
    lines = [
        f"{folder}: begun from {sample.name} ({names})",
        "Its places and figures are invented: put yours in their stead, the works in network.yaml first. An editor",
        f"that reads YAML schemas completes, explains and checks what you type, by {SCHEMA}. Then:",
        f"  {NAME} inspect {folder}",
        f"  {NAME} issue {folder}",
    ]
    return Outcome(said="\n".join(lines))


def _content(file: Path) -> bytes:
    """Return what is written of an input file: its bytes, with the line for editors before them."""
    head = EDITORS.encode() if file.suffix == ".yaml" else b""
    return head + file.read_bytes()


def _sample(name: str) -> Path:
    known = samples()
    if name not in known:
        listed = ", ".join(known)
        begun = [one for one in known if name and one.startswith(name)]
        hint = f"did you mean '{begun[0]}'?" if len(begun) == 1 else nearest(name[:100], list(known))
        raise WrongCall(f"there is no sample '{name}'", f"one of {listed}", hint)
    return known[name]


def _refuse_what_is_held(folder: Path) -> None:
    if folder.is_dir():
        if any(folder.iterdir()):
            raise WrongCall(f"'{folder}' holds something already", "a folder that is new or empty")
    elif os.path.lexists(folder):
        raise WrongCall(f"'{folder}' is a file", "a folder that is new or empty")


def _make(folder: Path, contents: dict[str, bytes]) -> None:
    """Write aside, then rename; what was made on the way is taken away again when that fails."""
    made = [parent for parent in folder.absolute().parents if not parent.exists()]
    try:
        folder.absolute().parent.mkdir(parents=True, exist_ok=True)
        with _aside(folder.absolute().parent, contents) as aside:
            aside.chmod(0o777 & ~_mask())
            aside.rename(folder)
    except BaseException:
        for parent in made:
            with contextlib.suppress(OSError):
                parent.rmdir()
        raise


def _fill(folder: Path, contents: dict[str, bytes]) -> None:
    """Write into a folder of its own within, then move each file up; on a failure the folder is empty again."""
    moved: list[Path] = []
    try:
        with _aside(folder, contents) as aside:
            for name in contents:
                (aside / name).rename(folder / name)
                moved.append(folder / name)
    except BaseException:
        for file in moved:
            with contextlib.suppress(OSError):
                file.unlink()
        raise


@contextlib.contextmanager
def _aside(parent: Path, contents: dict[str, bytes]) -> Generator[Path, None, None]:
    """Give a hidden folder that holds the files, safe on the disk; it is gone afterwards, unless renamed."""
    aside = Path(tempfile.mkdtemp(prefix=".headtrace-", dir=parent))
    try:
        for name, content in contents.items():
            with (aside / name).open("xb") as file:
                file.write(content)
                file.flush()
                os.fsync(file.fileno())
        yield aside
    finally:
        shutil.rmtree(aside, ignore_errors=True)


def _mask() -> int:
    """Return the mask for new files of this process."""
    mask = os.umask(0o022)
    os.umask(mask)
    return mask

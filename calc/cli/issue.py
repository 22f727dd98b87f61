"""``headtrace issue``: the calculation packages of one folder, or of many side by side."""

from __future__ import annotations

import argparse
import os
from collections.abc import Sequence
from pathlib import Path

from calc import pipeline
from calc.cli.call import WrongCall
from calc.cli.crew import side_by_side
from calc.cli.making import issue_one
from calc.cli.outcome import Outcome, together
from calc.cli.progress import Progress
from calc.cli.release import package_name
from calc.problems import ProblemsFound


def run(asked: argparse.Namespace) -> Outcome:
    """Issue every folder of a call; one that cannot be issued keeps no other from it."""
    purpose = getattr(asked, "for") or "checking"
    out = None if asked.out is None else Path(asked.out)
    folders = list({os.path.abspath(name): Path(name) for name in asked.folders}.values())  # noqa: PTH100 - never looks
    progress = Progress()
    try:
        if len(folders) == 1:
            return issue_one(folders[0], purpose, out, progress.say)
        if out is not None:
            _refuse_one_place(folders, purpose)
        return together(side_by_side(folders, purpose, out, progress.say))
    finally:
        progress.wipe()


def _refuse_one_place(folders: Sequence[Path], purpose: str) -> None:
    """Refuse folders whose packages would have the same name in the one folder written into."""
    owners: dict[str, Path] = {}
    for folder in folders:
        try:
            name = package_name(pipeline.read(folder).header, purpose)
        except ProblemsFound:
            continue  # told when its own turn comes
        if name in owners:
            found = f"'{owners[name]}' and '{folder}' would both be issued as {name}"
            raise WrongCall(found, "numbers or revisions that differ")
        owners[name] = folder

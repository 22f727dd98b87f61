"""``headtrace inspect``: every problem in the inputs, or every finding."""

from __future__ import annotations

import argparse
from pathlib import Path

from calc import pipeline
from calc.account import TITLES, input_findings
from calc.cli.outcome import Outcome


def run(asked: argparse.Namespace) -> Outcome:
    """Read a folder and say what a reviewer would remark on; problems are raised."""
    project = pipeline.read(Path(asked.folder))
    findings = input_findings(project)
    lines = [
        f"{finding.place or finding.subject}: {finding.id} {TITLES[finding.id]}: {finding.subject}: {finding.text}"
        for finding in findings
    ]
    count = len(findings)
    return Outcome(said="\n".join([*lines, f"no problems; {count} finding{'s' * (count != 1)}"]))

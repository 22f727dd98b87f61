"""``headtrace inspect``: every problem in the inputs, or every finding; in words or as data."""

from __future__ import annotations

import argparse
import json
from collections.abc import Iterable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

from calc import pipeline
from calc.account import TITLES, Finding, input_findings
from calc.cli.outcome import Outcome, Status
from calc.marks import Mark
from calc.problems import Problem, ProblemsFound, underlined

FORMAT = "headtrace-inspection/1"


def run(asked: argparse.Namespace) -> Outcome:
    """Read a folder and say what is wrong in it, or what a reviewer would remark on."""
    folder = Path(asked.folder)
    try:
        project = pipeline.read(folder)
    except ProblemsFound as found:
        if not asked.json:
            raise
        return Outcome(Status.WRONG_CALL, as_data(found.problems, ()))
    findings = input_findings(project)
    if asked.json:
        return Outcome(said=as_data((), findings))
    count = len(findings)
    written = {name: text.splitlines() for name, text in project.texts.items()}
    lines = [line for finding in findings for line in _lines(finding, written)]
    return Outcome(said="\n".join([*lines, f"no problems; {count} finding{'s' * (count != 1)}"]))


def _lines(finding: Finding, written: Mapping[str, Sequence[str]]) -> Iterator[str]:
    mark = finding.mark
    yield f"{mark or finding.place}: {finding.id} {TITLES[finding.id]}: {finding.subject}: {finding.text}"
    if mark is not None:
        yield from underlined(mark, written.get(mark.file, ()))


def as_data(problems: Iterable[Problem], findings: Iterable[Finding]) -> str:
    """Return an inspection as JSON.

    ``{"format": "headtrace-inspection/1", "problems": […], "findings": […], "counts": {"problems": n, …}}``.
    Findings are looked for only where there is no problem. Each is at ``file``, ``line``, ``column`` (from 1) and
    ``length``; a finding of no file has null there, and a problem of the folder itself has its path as ``file``. A
    problem has ``code``, ``path``, ``found``, ``expected`` and ``hint``, the last two perhaps empty; a finding has
    ``id``, ``title``, ``subject`` and ``text``.
    """
    wrong = [
        {
            "code": problem.code,
            **_place(problem.mark),
            "path": problem.path,
            "found": problem.found,
            "expected": problem.expected,
            "hint": problem.hint,
        }
        for problem in problems
    ]
    doubtful = [
        {
            "id": finding.id,
            "title": TITLES[finding.id],
            **_place(finding.mark),
            "subject": finding.subject,
            "text": finding.text,
        }
        for finding in findings
    ]
    counts = {"problems": len(wrong), "findings": len(doubtful)}
    return json.dumps({"format": FORMAT, "problems": wrong, "findings": doubtful, "counts": counts}, indent=1)


def _place(mark: Mark | None) -> dict[str, Any]:
    return dict.fromkeys(Mark._fields) if mark is None else mark._asdict()

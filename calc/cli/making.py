"""One package made: from a folder to files, or to what stands against it."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

from calc import pipeline
from calc.account import Account, results
from calc.cli.call import NAME
from calc.cli.faults import outcome_of
from calc.cli.outcome import Outcome, Status
from calc.cli.release import hindrances, package_name
from calc.cli.solution import doubts, status_of
from calc.publish.package import publish, write_package

COMMAND = f"{NAME} issue"
Say = Callable[[str], None]


def issue_one(folder: Path, purpose: str, out: Path | None, say: Say) -> Outcome:
    """Issue one folder.

    Parameters
    ----------
    folder : Path
        The project.
    purpose : str
        checking, approval or record.
    out : Path or None
        The folder to write into; ``issued`` in the project's own if None.
    say : callable
        Takes the stages.
    """
    account = pipeline.account(folder, say)
    stopped = hindrances(account, purpose)
    if stopped.status:
        return stopped
    say("composing")
    document = pipeline.document(account, purpose)
    say("laying out pages")
    project = account.project
    inputs = {file.name: file.content for file in project.files}
    files = publish(document, account.ledger, inputs, results(account))
    say("writing")
    name = package_name(project.header, purpose)
    mark = project.header.stated["revision"].mark
    written = write_package((folder / "issued" if out is None else out) / name, files, mark)
    return Outcome(status_of(account), "\n".join(_lines(account, purpose, written)), "\n".join(doubts(account)))


def _lines(account: Account, purpose: str, written: Path) -> Iterator[str]:
    header = account.project.header
    yield f"{header.text('title')} ({header.text('number')}, revision {header.text('revision')}), for {purpose}"
    yield f"  to print and file   {written / 'package.pdf'}"
    yield f"  to walk through     {written / 'package.html'}"
    unmet = [judged.id for judged in account.verdicts if not judged.met]
    if unmet:
        yield f"  not met: {', '.join(unmet)}"
    unjudged = [judged.id for judged in account.verdicts if judged.governing is None]
    if unjudged:
        yield f"  not judged, for want of a subject: {', '.join(unjudged)}"
    if account.findings:
        yield f"  findings: {len(account.findings)}"


def of_one(folder: Path, purpose: str, out: Path | None) -> Outcome:
    """Issue one of many folders, in a process of its own: whatever goes wrong is told under its name."""
    try:
        return issue_one(folder, purpose, out, _quietly)
    except (Exception, KeyboardInterrupt) as error:  # noqa: BLE001 - nothing may pass for a package
        told = outcome_of(error, COMMAND, ["issue", str(folder), "--for", purpose])
        return told._replace(remarks=f"{folder}:\n{told.remarks}")


def _quietly(stage: str) -> None:
    """Say nothing of a stage: many folders share one terminal."""


def lost(folder: Path) -> Outcome:
    """Return what is said of a folder whose process died."""
    remark = f"{COMMAND}: {folder}: its process ended without a word, perhaps for lack of memory; nothing was written"
    return Outcome(Status.DEFECT, remarks=remark)

"""What goes wrong becomes an outcome: a status, and a few lines without a traceback."""

from __future__ import annotations

import contextlib
import hashlib
import os
import platform
import tempfile
import traceback
from collections.abc import Sequence
from pathlib import Path

from calc import __version__
from calc.cli.call import NAME, WrongCall
from calc.cli.outcome import Outcome, Status
from calc.problems import IntegrityError, NotConverged, ProblemsFound, StorageError

STATUS_OF: tuple[tuple[type[BaseException], Status], ...] = (
    (WrongCall, Status.WRONG_CALL),
    (ProblemsFound, Status.WRONG_CALL),
    (NotConverged, Status.NO_SOLUTION),
    (IntegrityError, Status.NOT_PROVED),
    (StorageError, Status.STORAGE),
    (OSError, Status.STORAGE),
)
"""Errors that are no defect of ours, and what each comes to."""
READY = f"\n  hint: '{NAME} ready' tells what this machine lacks"


def outcome_of(error: BaseException, command: str, words: Sequence[str]) -> Outcome:
    """Return what an error comes to.

    Parameters
    ----------
    error : BaseException
        As raised by a command.
    command : str
        Heads the remark, such as ``headtrace solve``.
    words : sequence of str
        The call, for the report of a defect.
    """
    if _interrupted(error):
        return Outcome(Status.STOPPED, remarks=f"{command}: stopped")
    for sort, status in STATUS_OF:
        if isinstance(error, sort):
            return Outcome(status, remarks=_words(error, command))
    if isinstance(error, ImportError) and not (error.name or "calc").startswith("calc"):
        return Outcome(Status.STORAGE, remarks=f"{command}: '{error.name}' cannot be loaded{READY}")
    return _defect(error, command, words)


def _words(error: BaseException, command: str) -> str:
    match error:
        case WrongCall():
            return error.shown(command)
        case ProblemsFound():
            count = len(error.problems)
            return f"{error}\n{count} problem{'s' * (count != 1)}"
        case OSError():
            return f"{command}: {_storage_words(error)}"
        case _:
            return f"{command}: {error}"


def _interrupted(error: BaseException | None) -> bool:
    """Return whether Ctrl-C is behind an error; a library may turn it into one of its own while it is loaded."""
    while error is not None and not isinstance(error, KeyboardInterrupt):
        error = error.__cause__ or error.__context__ if isinstance(error, ImportError) else error.__cause__
    return error is not None


def _storage_words(error: OSError) -> str:
    if error.filename is None:
        return f"{str(error).strip().splitlines()[0] if str(error).strip() else 'the disk failed'}{READY}"
    name = os.fsdecode(error.filename) if isinstance(error.filename, str | bytes) else str(error.filename)
    return f"{name}: {error.strerror or error}"


def _defect(error: BaseException, command: str, words: Sequence[str]) -> Outcome:
    report = "".join(
        [
            f"{NAME} {__version__}, Python {platform.python_version()}, {platform.platform()}\n",
            f"call: {NAME} {' '.join(words)}\n\n",
            *traceback.format_exception(error),
        ]
    )
    kind = type(error).__name__
    place = _filed(report)
    where = f"the report is {place}" if place else "no report could be written"
    return Outcome(Status.DEFECT, remarks=f"{command}: this is a defect of ours ({kind}); {where}")


def _filed(report: str) -> Path | None:
    """Write a report under a name from its content's digest, once, readable by its owner alone."""
    content = report.encode("utf-8", "backslashreplace")
    name = f"{NAME}-defect-{hashlib.sha256(content).hexdigest()[:16]}.txt"
    try:
        place = Path(tempfile.gettempdir()) / name
        with contextlib.suppress(FileExistsError):  # the same defect, met before
            number = os.open(place, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
            with os.fdopen(number, "wb") as file:
                file.write(content)
    except OSError:
        return None
    return place

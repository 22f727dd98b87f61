"""The two streams: text that prints under any locale, and never moves a terminal by itself."""

from __future__ import annotations

import io
import os
import re
import sys
from typing import TextIO

from calc.cli import colour
from calc.cli.outcome import Outcome, Status

_CONTROL = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]")


def prepare() -> None:
    """Let both streams take every character.

    A pipe or file gets UTF-8 whatever the locale, so that the same call gives the same bytes; a terminal keeps its
    encoding, and an encoding asked for by PYTHONIOENCODING stands. What that cannot write appears as its code.
    """
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            asked = os.environ.get("PYTHONIOENCODING") or stream.isatty()
            stream.reconfigure(encoding=None if asked else "utf-8", errors="backslashreplace")


def printable(text: str) -> str:
    """Return text in which control characters stand as their codes: names and inputs are not ours."""
    return _CONTROL.sub(lambda found: ascii(found[0])[1:-1], text)


def deliver(outcome: Outcome) -> int:
    """Write results to stdout and remarks to stderr, and return the exit status.

    A reader that has gone away changes nothing; a disk that is full does.
    """
    status = outcome.status
    try:
        _write(sys.stdout, outcome.said)
    except BrokenPipeError:
        _abandon(sys.stdout)
    except OSError as error:
        _abandon(sys.stdout)
        remark = f"headtrace: the results cannot be written: {error.strerror or error}"
        outcome = outcome._replace(remarks=f"{outcome.remarks}\n{remark}".lstrip("\n"))
        status = max(status, Status.STORAGE)
    try:
        _write(sys.stderr, outcome.remarks)
    except OSError:
        _abandon(sys.stderr)
    return int(status)


def _write(stream: TextIO | None, text: str) -> None:
    if stream is not None and text:
        shown = printable(text)
        stream.write((colour.painted(shown) if colour.wanted(stream) else shown) + "\n")
        stream.flush()


def _abandon(stream: TextIO) -> None:
    """Lead what is still in the stream's buffer into nothing, so that the interpreter can end in peace."""
    try:
        nothing = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nothing, stream.fileno())
        os.close(nothing)
    except (OSError, ValueError):
        return

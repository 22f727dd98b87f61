"""What a command comes to, and the exit statuses."""

from __future__ import annotations

from collections.abc import Iterable
from enum import IntEnum
from typing import NamedTuple


class Status(IntEnum):
    """Exit statuses; the highest that applies is returned."""

    DONE = 0
    NOT_MET = 1
    WRONG_CALL = 2
    NO_SOLUTION = 3
    NOT_PROVED = 4
    STORAGE = 5
    DEFECT = 70
    STOPPED = 130


STATUSES: tuple[tuple[Status, str], ...] = (
    (Status.DONE, "done; findings alone are no failure"),
    (Status.NOT_MET, "a criterion is not met"),
    (Status.WRONG_CALL, "the inputs or the call are wrong"),
    (Status.NO_SOLUTION, "a case has no solution"),
    (Status.NOT_PROVED, "an integrity check failed: the second opinion disagrees, or a number does not prove"),
    (Status.STORAGE, "disk, permission, or something that this machine lacks"),
    (Status.DEFECT, "a defect of ours; nothing is written but a report"),
)
"""What each status says, as ``--help`` prints it."""


class Outcome(NamedTuple):
    """What a command came to.

    Attributes
    ----------
    status : int
        Exit status.
    said : str
        Results, for stdout.
    remarks : str
        Problems and errors, for stderr.
    """

    status: int = Status.DONE
    said: str = ""
    remarks: str = ""


def together(outcomes: Iterable[Outcome]) -> Outcome:
    """Return several outcomes as one: the highest status, texts in their order."""
    held = list(outcomes)
    return Outcome(
        max((one.status for one in held), default=Status.DONE),
        "\n".join(one.said for one in held if one.said),
        "\n".join(one.remarks for one in held if one.remarks),
    )

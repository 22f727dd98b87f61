"""From the words of a call to an exit status."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from importlib import import_module

from calc.cli import call
from calc.cli.outcome import Outcome
from calc.cli.streams import deliver, prepare


def main(words: Sequence[str] | None = None) -> int:
    """Run one call and return its exit status.

    Parameters
    ----------
    words : sequence of str, optional
        The words behind ``headtrace``; those of this program's own call if not given.
    """
    prepare()
    said = sys.argv[1:] if words is None else list(words)
    try:
        return deliver(outcome_of_call(said))
    except KeyboardInterrupt as error:  # while writing
        from calc.cli.faults import outcome_of  # noqa: PLC0415 - help and version never need it

        return deliver(outcome_of(error, call.NAME, said))


def outcome_of_call(words: Sequence[str]) -> Outcome:
    """Return what a call comes to, whatever goes wrong in it."""
    name = call.NAME
    try:
        command = call.find_command(words)
        if isinstance(command, str):
            return Outcome(said=command)
        name = f"{call.NAME} {command.name}"
        asked = call.read_call(command, words[1:])
        if isinstance(asked, str):
            return Outcome(said=asked)
        done: Outcome = import_module(f"calc.cli.{command.module}").run(asked)
    except (Exception, KeyboardInterrupt) as error:  # noqa: BLE001 - a traceback is for the report, not the screen
        from calc.cli.faults import outcome_of  # noqa: PLC0415 - help and version never need it

        return outcome_of(error, name, words)
    return done

"""The command ``headtrace``: a call becomes text on a screen, files, and an exit status.

For
    engineers at a terminal, and scripts that read what it prints.
Takes
    the words of a call.
Gives
    results on stdout, problems and errors on stderr in one form, and the highest exit status that applies.
Must not know
    how anything is computed: each command asks the pipeline, and says what came back.
Why this way
    `call` declares every command and is all that ``--help`` loads; a command's module is imported when it is
    called. A command returns an `Outcome` (status, text, remarks) and prints nothing itself, so the status
    stands before a pipe can break. Whatever goes wrong is turned into an outcome at one place, `faults`: nobody
    sees a traceback. Colour is added by `colour` as a text is delivered, after control characters have been taken
    out of it, so that no input can bring any. A new command is one line in `call.COMMANDS` and one module with ``run``.
"""

from calc.cli.command import main

__all__ = ["main"]

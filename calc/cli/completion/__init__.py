"""``headtrace completion``: a script by which a shell completes commands, options and their words.

For
    people at bash, zsh or fish, who load it once in their shell's start-up file.
Takes
    `calc.cli.call.COMMANDS`, the names of samples and of shipped tables.
Gives
    a script that runs nothing of this program while someone types.
Must not know
    projects: ids and cases are not completed, for that would read a folder at every key.
Why this way
    The scripts are generated from the declarations that read a call, so a new command or option is completed
    without further work. Libraries that do the same start from an argparse parser, which our commands have not,
    and none of them writes for fish.
"""

from calc.cli.completion.script import run

__all__ = ["run"]

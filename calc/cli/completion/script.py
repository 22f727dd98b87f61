"""The script for each shell."""

from __future__ import annotations

import argparse
from collections.abc import Callable

from calc.cli.completion import bash, fish, zsh
from calc.cli.outcome import Outcome

SCRIPTS: dict[str, Callable[[], str]] = {"bash": bash.script, "zsh": zsh.script, "fish": fish.script}


def run(asked: argparse.Namespace) -> Outcome:
    """Print the script of a shell."""
    return Outcome(said=SCRIPTS[asked.shell]().rstrip("\n"))

"""The script for fish."""

from __future__ import annotations

from collections.abc import Iterator

from calc.cli.call import COMMANDS, NAME, Command, Option, Place
from calc.cli.completion.choices import HELP, is_folder, words_for

_FIRST = "__fish_use_subcommand"


def script() -> str:
    """Return the script."""
    head = [
        f"# Completion of {NAME} for fish:  {NAME} completion fish > ~/.config/fish/completions/{NAME}.fish",
        f"complete -c {NAME} -f",
        f"complete -c {NAME} -n {_FIRST} -l version -d {_quoted('tells the version')}",
        f"complete -c {NAME} -l help -s h -d {_quoted(HELP)}",
    ]
    return "\n".join([*head, *(line for command in COMMANDS for line in _command(command))]) + "\n"


def _command(command: Command) -> Iterator[str]:
    yield f"complete -c {NAME} -n {_FIRST} -a {command.name} -d {_quoted(command.does)}"
    when = f"complete -c {NAME} -n '__fish_seen_subcommand_from {command.name}'"
    for option in command.options:
        value = f" -x{_choice(option)}" if option.value else ""
        yield f"{when} -l {option.field}{value} -d {_quoted(option.words)}"
    for place in command.places:
        if choice := _choice(place):
            yield f"{when}{choice}"


def _choice(one: Place | Option) -> str:
    if is_folder(one):
        return " -a '(__fish_complete_directories)'"
    words = words_for(one)
    return f" -a {_quoted(' '.join(words))}" if words else ""


def _quoted(text: str) -> str:
    return "'" + text.replace("\\", "\\\\").replace("'", "\\'") + "'"

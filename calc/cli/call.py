"""The call: every command with its words, and how the words of a call are read. Loads nothing heavy."""

from __future__ import annotations

import argparse
import textwrap
from collections.abc import Sequence
from typing import NamedTuple

from calc import __version__
from calc.cli.outcome import STATUSES
from calc.problems import CalcError, nearest

NAME = "headtrace"
WIDTH = 100
PURPOSES = ("checking", "approval", "record")
"""What a package may be issued for."""


SHELLS = ("bash", "zsh", "fish")
"""Shells for which there is a completion."""


class WrongCall(CalcError):
    """The call is wrong: what was found, what was expected, and perhaps a way out."""

    def __init__(self, found: str, expected: str = "", hint: str = "") -> None:
        self.found, self.expected, self.hint = found, expected, hint
        super().__init__(found)

    def shown(self, command: str) -> str:
        """Return the problem in the form of every other, headed by the command."""
        tail = f"; expected {self.expected}" if self.expected else ""
        hint = f"\n  hint: {self.hint}" if self.hint else ""
        return f"{command}: {self.found}{tail}{hint}"


class Place(NamedTuple):
    """A word that stands by its place; ``many`` takes all that follow.

    ``holds`` says what belongs there, for completion: a folder, a sample, a table.
    """

    name: str
    field: str
    words: str
    many: bool = False
    needed: bool = True
    among: tuple[str, ...] = ()
    holds: str = ""


class Option(NamedTuple):
    """An option; without ``value`` it is a switch. ``holds`` as of a `Place`."""

    name: str
    words: str
    value: str = ""
    among: tuple[str, ...] = ()
    holds: str = ""

    @property
    def field(self) -> str:
        """The name under which a command finds it."""
        return self.name.lstrip("-")


class Command(NamedTuple):
    """A command: its name, the module of `calc.cli` that runs it, what it does, what it takes."""

    name: str
    module: str
    does: str
    places: tuple[Place, ...] = ()
    options: tuple[Option, ...] = ()

    @property
    def usage(self) -> str:
        """The words of a call, such as ``trace DIR ID``."""
        words = [self.name]
        for place in self.places:
            word = f"{place.name}…" if place.many else place.name
            words.append(word if place.needed else f"[{word}]")
        for option in self.options:
            value = "|".join(option.among) or option.value
            words.append(f"[{f'{option.name} {value}'.strip()}]")
        return " ".join(words)


FOLDER = Place("DIR", "folder", "the project folder", holds="folder")

COMMANDS: tuple[Command, ...] = (
    Command(
        "new",
        "beginning",
        "starts a project folder that issues at once",
        (Place("DIR", "folder", "the folder to make; it must not hold anything yet", holds="folder"),),
        (Option("--like", "the sample or project to begin from, two-reservoirs if not said", "NAME", holds="sample"),),
    ),
    Command(
        "inspect",
        "inspection",
        "lists every problem and finding in the inputs",
        (FOLDER,),
        (Option("--json", "print problems and findings as data"),),
    ),
    Command(
        "solve",
        "solution",
        "solves every case; prints directions, flows, heads and verdicts",
        (FOLDER,),
        (
            Option("--case", "this case alone", "ID"),
            Option("--json", "print the results as data, in SI"),
        ),
    ),
    Command(
        "issue",
        "issue",
        "writes the calculation package",
        (Place("DIR", "folders", "project folders, issued side by side", many=True, holds="folder"),),
        (
            Option("--for", "the purpose of issue, checking if not said", "PURPOSE", PURPOSES),
            Option("--out", "the folder to write into, DIR/issued if not said", "DIR", holds="folder"),
        ),
    ),
    Command(
        "trace",
        "derivation",
        "prints one number's whole derivation, down to file, line and column",
        (FOLDER, Place("ID", "id", "group.row.quantity@case, or group.quantity@case for a whole column")),
        (Option("--json", "print the derivation as data, in SI"),),
    ),
    Command(
        "tables",
        "tables",
        "prints the shipped tables with their sources",
        (Place("NAME", "name", "the table; without it, their names", needed=False, holds="table"),),
    ),
    Command("schema", "schema", "prints a JSON Schema of the input files, for editors"),
    Command("ready", "readiness", "tells whether this machine is ready, and what mends it"),
    Command(
        "completion",
        "completion",
        "prints a script by which a shell completes what you type",
        (Place("SHELL", "shell", "the shell", among=SHELLS),),
    ),
)
"""Every command, in the order of ``--help``."""


def find_command(words: Sequence[str]) -> Command | str:
    """Return the command of a call, or the text that it asks for.

    Raises
    ------
    WrongCall
        If the first word is neither.
    """
    names = [command.name for command in COMMANDS]
    if not words:
        raise WrongCall("no command is given", f"one of {', '.join(names)}", f"'{NAME} --help' tells what each does")
    first = words[0]
    if first in ("--help", "-h", "help"):
        return help_of_all()
    if first == "--version":
        return f"{NAME} {__version__}"
    for command in COMMANDS:
        if command.name == first:
            return command
    hint = nearest(first[:WIDTH], names) or f"'{NAME} --help' tells what there is"
    kind = "option" if first.startswith("-") else "command"
    raise WrongCall(f"there is no {kind} '{first}'", f"one of {', '.join(names)}", hint)


def read_call(command: Command, words: Sequence[str]) -> argparse.Namespace | str:
    """Return what a call asks of its command, or the help that it asks for.

    Raises
    ------
    WrongCall
        If a word is missing, unknown or one too many.
    """
    parser = argparse.ArgumentParser(prog=NAME, add_help=False, allow_abbrev=False, exit_on_error=False)
    for option in command.options:
        if option.value:
            parser.add_argument(option.name)
        else:
            parser.add_argument(option.name, action="store_true")
    parser.add_argument("--help", "-h", action="store_true")
    cut = words.index("--") if "--" in words else len(words)
    try:
        asked, rest = parser.parse_known_args(list(words[:cut]))
    except argparse.ArgumentError as error:
        raise _option_misused(command, error) from None
    if asked.help:
        return help_of(command)
    known = [option.name for option in command.options]
    for word in rest:
        if word.startswith("-") and word != "-":
            name = word.partition("=")[0]
            expected = f"{' or '.join(known)}" if known else "no option"
            raise WrongCall(f"there is no option '{name}'", expected, nearest(name[:WIDTH], known))
    _take_places(command, asked, [*rest, *words[cut + 1 :]])
    _check_options(command, asked)
    return asked


def _option_misused(command: Command, error: argparse.ArgumentError) -> WrongCall:
    name = (error.argument_name or "").partition("/")[0]
    value = next((option.value for option in command.options if option.name == name), "")
    if value:
        return WrongCall(f"'{name}' has no value", f"'{name} {value}'")
    return WrongCall(f"'{name}' takes no value", f"'{name}' alone")


def _take_places(command: Command, asked: argparse.Namespace, words: Sequence[str]) -> None:
    left = list(words)
    for place in command.places:
        if not left and place.needed:
            raise WrongCall(f"{place.name} is missing", f"'{NAME} {command.usage}'")
        if place.many:
            setattr(asked, place.field, left)
            left = []
        else:
            word = left.pop(0) if left else None
            if word is not None and place.among and word not in place.among:
                found = f"'{word}' cannot stand for {place.name}"
                raise WrongCall(found, f"one of {', '.join(place.among)}", nearest(word[:WIDTH], place.among))
            setattr(asked, place.field, word)
    if left:
        raise WrongCall(f"'{left[0]}' is one word too many", f"'{NAME} {command.usage}'")


def _check_options(command: Command, asked: argparse.Namespace) -> None:
    for option in command.options:
        given = getattr(asked, option.field)
        if option.among and given is not None and given not in option.among:
            found = f"'{given}' cannot stand behind '{option.name}'"
            raise WrongCall(found, f"one of {', '.join(option.among)}", nearest(given[:WIDTH], option.among))


def help_of_all() -> str:
    """Return the help of the command as a whole."""
    column = max(len(command.name) for command in COMMANDS) + 4
    lines = [
        "Headtrace turns a folder of inputs into a hydraulic calculation that a checker can retrace by hand.",
        "",
        f"{NAME} COMMAND …",
        "",
        *(f"  {command.name:<{column}}{command.does}" for command in COMMANDS),
        "",
        f"'{NAME} COMMAND --help' tells what a command takes; '{NAME} --version' tells which version this is.",
        "",
        "Exit status, the highest that applies:",
        *(f"  {status.value:<{column}}{words}" for status, words in STATUSES),
    ]
    return "\n".join(lines)


def help_of(command: Command) -> str:
    """Return the help of one command."""
    rows = [(place.name, _option_words(place)) for place in command.places]
    rows += [(f"{option.name} {option.value}".strip(), _option_words(option)) for option in command.options]
    column = max((len(name) for name, _ in rows), default=0) + 4
    lines = [f"{NAME} {command.usage}", "", f"{command.does[0].upper()}{command.does[1:]}."]
    for name, words in rows:
        wrapped = textwrap.wrap(words, WIDTH - column - 2)
        lines += ["", f"  {name:<{column}}{wrapped[0]}", *(f"{'':<{column + 2}}{more}" for more in wrapped[1:])]
    return "\n".join(lines)


def _option_words(option: Option | Place) -> str:
    return f"{option.words} ({', '.join(option.among)})" if option.among else option.words

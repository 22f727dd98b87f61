"""The script for zsh."""

from __future__ import annotations

import re
from collections.abc import Iterator

from calc.cli.call import COMMANDS, NAME, Command, Option, Place
from calc.cli.completion.choices import HELP, is_folder, words_for

_SCRIPT = """\
#compdef {name}
# Completion of {name} for zsh. In ~/.zshrc, behind compinit:  source <({name} completion zsh)
_{name}() {{
  local line state
  local -a commands
  commands=(
{commands}
  )
  _arguments -C '--help[{help}]' '--version[tells the version]' '1:command:->command' '*::word:->words'
  case $state in
    command) _describe command commands ;;
    words)
      case $line[1] in
{words}
      esac
      ;;
  esac
}}
if [[ $funcstack[1] == _{name} ]]; then
  _{name} "$@"
else
  compdef _{name} {name}
fi
"""


def script() -> str:
    """Return the script."""
    return _SCRIPT.format(
        name=NAME,
        help=HELP,
        commands="\n".join(f"    {_quoted(f'{command.name}:{_plain(command.does)}')}" for command in COMMANDS),
        words="\n".join(_command(command) for command in COMMANDS),
    )


def _command(command: Command) -> str:
    parts = [_quoted(part) for part in (*_options(command), *_places(command), f"--help[{HELP}]")]
    return f"        {command.name}) _arguments {' '.join(parts)} ;;"


def _options(command: Command) -> Iterator[str]:
    for option in command.options:
        value = f":{_plain(option.value)}:{_choice(option)}" if option.value else ""
        yield f"{option.name}[{_plain(option.words)}]{value}"


def _places(command: Command) -> Iterator[str]:
    for number, place in enumerate(command.places, 1):
        yield f"{'*' if place.many else number}:{_plain(place.name)}:{_choice(place)}"


def _choice(one: Place | Option) -> str:
    if is_folder(one):
        return "_directories"
    words = words_for(one)
    return f"({' '.join(words)})" if words else " "


def _plain(text: str) -> str:
    """Return text in which nothing divides a specification."""
    return re.sub(r"([\[\]:\\])", r"\\\1", text)


def _quoted(text: str) -> str:
    return "'" + text.replace("'", "'\\''") + "'"

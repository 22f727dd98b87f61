"""The script for bash, which runs in version 3.2 and later."""

from __future__ import annotations

from collections.abc import Iterator

from calc.cli.call import COMMANDS, NAME, Command, Option, Place
from calc.cli.completion.choices import is_folder, words_for

_SCRIPT = """\
# Completion of {name} for bash. In ~/.bashrc:  eval "$({name} completion bash)"
_{name}() {{
  local current=${{COMP_WORDS[COMP_CWORD]}} previous=${{COMP_WORDS[COMP_CWORD - 1]}} command=${{COMP_WORDS[1]}}
  local words='' folders='' place=0 at
  COMPREPLY=()
  if ((COMP_CWORD == 1)); then
    words='{commands} --help --version'
  else
    for ((at = 2; at < COMP_CWORD; at++)); do
      case $command:${{COMP_WORDS[at]}} in
        {valued}) ((at++)) ;;
        *:-*) ;;
        *) ((place++)) ;;
      esac
    done
    case $command:$previous in
{behind}
      *)
        case $command:$current in
{options}
          *)
            case $command:$place in
{places}
            esac
            ;;
        esac
        ;;
    esac
  fi
  if [[ -n $folders ]]; then
    compopt -o filenames 2>/dev/null
    while IFS= read -r at; do COMPREPLY+=("$at"); done < <(compgen -d -- "$current")
  elif [[ -n $words ]]; then
    while IFS= read -r at; do COMPREPLY+=("$at"); done < <(compgen -W "$words" -- "$current")
  fi
}}
complete -F _{name} {name}
"""


def script() -> str:
    """Return the script."""
    valued = [f"{command.name}:{option.name}" for command in COMMANDS for option in command.options if option.value]
    return _SCRIPT.format(
        name=NAME,
        commands=" ".join(command.name for command in COMMANDS),
        valued=" | ".join(valued),
        behind="\n".join(_behind()),
        options="\n".join(_options(command) for command in COMMANDS),
        places="\n".join(line for command in COMMANDS for line in _places(command)),
    )


def _behind() -> Iterator[str]:
    for command in COMMANDS:
        for option in command.options:
            if option.value:
                yield f"      {command.name}:{option.name}) {_choice(option)} ;;"


def _options(command: Command) -> str:
    names = " ".join([*(option.name for option in command.options), "--help"])
    return f"          {command.name}:-*) words='{names}' ;;"


def _places(command: Command) -> Iterator[str]:
    for number, place in enumerate(command.places):
        yield f"              {command.name}:{'*' if place.many else number}) {_choice(place)} ;;"


def _choice(one: Place | Option) -> str:
    return "folders=yes" if is_folder(one) else f"words='{' '.join(words_for(one))}'"

"""Colour on a terminal: added to finished text at the last moment, so that no input can bring any.

Colour repeats what the words and carets say; nothing is told by colour alone.
"""

from __future__ import annotations

import os
import re
from typing import TextIO

PROBLEM, FINDING, QUIET, BOLD = "31", "33", "2", "1"
"""Red for what is wrong, yellow for what is doubtful, faint for numbers of lines; as terminals number them."""
UNDERLINED = "4"
_HEAD = re.compile(r"(?P<place>[^\s:][^:]*(?::[0-9]+){1,2})(?:: )(?P<id>[A-Z][0-9]{2} )?")
_SOURCE = re.compile(r"(?P<gutter> *[0-9]+ \| )(?P<text>.*)")
_CARETS = re.compile(r"(?P<gutter> +\| )(?P<blanks> *)(?P<carets>\^+)")
_HINT = re.compile(r"  hint: ")


def wanted(stream: TextIO | None) -> bool:
    """Return whether a stream is to have colours.

    ``NO_COLOR`` forbids them, ``FORCE_COLOR`` asks for them, each when it is set and not empty; else a terminal has
    them unless ``TERM`` is ``dumb``.
    """
    if stream is None or os.environ.get("NO_COLOR"):
        return False
    if os.environ.get("FORCE_COLOR"):
        return True
    return os.environ.get("TERM") != "dumb" and stream.isatty()


def painted(text: str) -> str:
    """Return text with its problems and findings in colour: place, line at fault, what is underlined."""
    role = PROBLEM
    lines = text.split("\n")
    done: list[str] = []
    for at, line in enumerate(lines):
        below = _CARETS.fullmatch(lines[at + 1]) if at + 1 < len(lines) else None
        source = _SOURCE.fullmatch(line) if below else None
        if source and below:
            done.append(_source(source, below, role))
        elif carets := _CARETS.fullmatch(line):
            done.append(f"{_in(carets['gutter'], QUIET)}{carets['blanks']}{_in(carets['carets'], BOLD, role)}")
        elif _HINT.match(line):
            done.append(f"  {_in('hint:', BOLD)}{line[7:]}")
        elif head := _HEAD.match(line):
            role = FINDING if head["id"] else PROBLEM
            done.append(f"{_in(head['place'], BOLD, role)}{line[head.end('place') :]}")
        else:
            done.append(line)
    return "\n".join(done)


def _source(source: re.Match[str], below: re.Match[str], role: str) -> str:
    text = source["text"]
    begin = len(below["blanks"])
    end = begin + len(below["carets"])
    place = _in(text[begin:end], UNDERLINED, role) if text[begin:end] else ""
    return f"{_in(source['gutter'], QUIET)}{text[:begin]}{place}{text[end:]}"


def _in(text: str, *codes: str) -> str:
    return f"\x1b[{';'.join(codes)}m{text}\x1b[0m"

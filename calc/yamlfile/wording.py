"""Plain words for what a YAML parser reports."""

from __future__ import annotations

from typing import TYPE_CHECKING

from calc.marks import Mark
from calc.problems import Problem

if TYPE_CHECKING:
    import yaml

_WORDS: tuple[tuple[tuple[str, ...], str, str], ...] = (
    (
        ("found unexpected end of stream", "unexpected document separator", "unexpected document indicator"),
        "a quoted text begins here and does not end",
        "add the closing quote",
    ),
    (("unknown escape", "escape sequence"), "an unknown '\\' escape", "use single quotes, or write '\\\\'"),
    (
        ("mapping values are not allowed", "mapping keys are not allowed", "unexpected ':'"),
        "a ':' stands where no key can be",
        "put a text that holds ': ' in quotes, or mend the indentation",
    ),
    (
        ("could not find expected ':'",),
        "this line, or the one before it, is no 'key: value'",
        "write a ':' and a space behind the key",
    ),
    (("expected ',' or ']'",), "a list in brackets begins here and does not end", "add the closing ']'"),
    (("expected ',' or '}'",), "a mapping in braces begins here and does not end", "add the closing '}'"),
    (("node content",), "a text cannot begin with this character", "put the text in quotes"),
    (("incompatible YAML",), "the file asks for another YAML than 1.1 or 1.2", "remove the line '%YAML'"),
    (
        ("expected key", "expected <block end>", "expected '-'", "sequence entries", "block collection"),
        "this does not continue the lines above",
        "begin the lines of one block in one column, and put a text that holds quotes wholly in quotes",
    ),
    (
        (
            "alphabetic or numeric",
            "cannot start any token",
            "undefined tag",
            "scanning a tag",
            "parsing a tag",
        ),
        "a text cannot begin with this character",
        "put the text in quotes",
    ),
    (
        ("comment or line break", "comment or a line break", "indentation indicator"),
        "more stands here than the beginning of a block",
        "put the text in quotes",
    ),
    (("document start", "directive"), "something stands outside the document", "keep to 'key: value' lines"),
)


_LONGEST_SHOWN = 60


def shown(text: str) -> str:
    """Return text from a file for a message: printable, on one line and of bearable length."""
    short = text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 1] + "…"
    return "".join(letter if letter.isprintable() else "?" for letter in short)


def syntax_problem(name: str, text: str, error: yaml.YAMLError) -> Problem:
    """Return the problem of a file that does not parse.

    Parameters
    ----------
    name, text : str
        The file.
    error : yaml.YAMLError
        As raised by either parser of the YAML library.

    Returns
    -------
    Problem
        With code ``yaml-syntax`` at the place of the error, or ``too-deep``.
    """
    reported = str(getattr(error, "problem", None) or error)
    context = str(getattr(error, "context", None) or "")
    found, hint = f"YAML cannot read this ({reported})", ""
    for signs, words, way_out in _WORDS:
        if any(sign in reported or sign in context for sign in signs):
            found, hint = words, way_out
            break
    place = getattr(error, "problem_mark", None)
    code = "yaml-syntax"
    if "nesting" in reported:
        code, found, hint = "too-deep", "nested too deep to read", "write a flatter file"
    if "begins here" in found:
        place = getattr(error, "context_mark", None) or place
    if "node content" in reported and place and place.index >= len(text.rstrip()):
        found, hint = "the file ends before a bracket or brace is closed", "add the closing ']' or '}'"
    lines = text.splitlines() or [""]
    line, column = (place.line, place.column) if place else (0, 0)
    if line >= len(lines):
        line, column = len(lines) - 1, len(lines[-1])
    return Problem(Mark(name, line + 1, column + 1), code, "", found, "", hint)

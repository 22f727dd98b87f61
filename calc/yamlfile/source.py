"""Bytes from a folder, and text from bytes; both refuse with a problem, never with an exception."""

from __future__ import annotations

import errno
import re
import stat
from pathlib import PurePosixPath
from typing import TYPE_CHECKING, NamedTuple

from calc.marks import Mark
from calc.problems import Problem

if TYPE_CHECKING:
    from pathlib import Path

LARGEST_FILE = 20_000_000
_BREAK = re.compile("\r\n|[\n\r\x85\u2028\u2029]")
MOST_PROBLEMS = 1000
"""A file with more is given up; the first are enough to begin with."""

FORBIDDEN = re.compile(
    "[^\t\n\r -~\x85\xa0-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]|[\ufeff\u202a-\u202e\u2066-\u2069]"
)
_MARKS_OF_OTHER_ENCODINGS = (b"\xff\xfe", b"\xfe\xff")


class SourceFile(NamedTuple):
    """A file as read: its name relative to the folder, and its bytes."""

    name: str
    content: bytes


def fetch(folder: Path, name: str, mark: Mark, path: str = "") -> SourceFile | Problem:
    """Return the bytes of a file that lies in a folder.

    Parameters
    ----------
    folder : Path
        The only place read from, whatever ``name`` or a symbolic link says.
    name : str
        Path relative to the folder; not trusted.
    mark, path : Mark, str
        Where the name stands, for the problem.

    Returns
    -------
    SourceFile or Problem
        Problems: ``outside-folder``, ``no-file``, ``unreadable``, ``too-large``.
    """
    refused = _refuse_name(name)
    if refused is None:
        try:
            content = _bytes_within(folder, name)
        except _OutsideError:
            refused = _OUTSIDE
        except FileNotFoundError:
            refused = ("no-file", "there is no file {}", "a file in the project folder", "")
        except (OSError, RuntimeError) as error:
            reason = getattr(error, "strerror", None) or "it is a symbolic link to itself"
            refused = ("unreadable", f"{{}} cannot be read: {reason}", "a readable file", "")
        else:
            if len(content) <= LARGEST_FILE:
                return SourceFile(name, content)
            most = f"{{}} is larger than {LARGEST_FILE // 1_000_000} MB"
            refused = ("too-large", most, "a smaller file", "divide it into several files")
    code, found, expected, hint = refused
    return Problem(mark, code, path, found.format(_shown(name)), expected, hint)


_OUTSIDE = (
    "outside-folder",
    "the file {} lies outside the project folder",
    "a file in the folder, named relative to it",
    "copy the file into the folder",
)


class _OutsideError(Exception):
    """A name leads out of the folder."""


def _shown(name: str) -> str:
    """Return a file name in quotes, printable whatever it holds."""
    return f"'{name}'" if name.isprintable() else ascii(name)


def _refuse_name(name: str) -> tuple[str, str, str, str] | None:
    """Return code and words for a name that is not even looked for."""
    if not name:
        return "unreadable", "no file is named here", "the name of a file in the folder: pipes.csv", ""
    if not name.isprintable():
        return "unreadable", "the file name {} cannot be printed", "a plain name", "rename the file"
    place = PurePosixPath(name)
    if place.is_absolute() or ".." in place.parts or set(name) & set("\\:"):
        return _OUTSIDE
    return None


def _bytes_within(folder: Path, name: str) -> bytes:
    """Return the bytes of a file, one more than the limit at most; raise when it leads out of the folder."""
    place = (folder / name).resolve(strict=True)
    if not place.is_relative_to(folder.resolve(strict=True)):
        raise _OutsideError
    # Looked at before it is opened: opening a named pipe would wait for ever.
    if not stat.S_ISREG(place.stat().st_mode):
        raise OSError(errno.EINVAL, "it is not a file")
    with place.open("rb") as stream:
        return stream.read(LARGEST_FILE + 1)


def too_many(mark: Mark) -> Problem:
    """Return the problem that ends a file with too many of them."""
    found = f"this file has {MOST_PROBLEMS} problems up to here; what follows is not read"
    return Problem(mark, "too-many-problems", "", found, "", "mend these first")


def place_of(name: str, text: str, index: int, length: int = 1) -> Mark:
    """Return the mark of a character by its index in a text."""
    line, start = 1, 0
    for found in _BREAK.finditer(text, 0, index):
        line, start = line + 1, found.end()
    return Mark(name, line, index - start + 1, length)


def decode(name: str, content: bytes | str) -> tuple[str, list[Problem]]:
    """Return the text of a file; a problem here means that the text is for showing only.

    Parameters
    ----------
    name : str
        File name for marks.
    content : bytes or str
        UTF-8, with or without a byte order mark.

    Returns
    -------
    str
        Without the byte order mark; bytes that are not UTF-8 are replaced.
    list of Problem
        ``not-utf-8``, ``control-character`` (at most one each).
    """
    if isinstance(content, str):
        text = content.removeprefix("\ufeff")
    else:
        try:
            text = content.decode("utf-8").removeprefix("\ufeff")
        except UnicodeDecodeError as error:
            return _not_utf8(name, content, error.start)
    found = FORBIDDEN.search(text)
    if found is None:
        return text, []
    problem = Problem(
        place_of(name, text, found.start()),
        "control-character",
        "",
        f"the invisible character U+{ord(found[0]):04X} stands here",
        "text that shows on paper",
        "delete the character, or type the line anew",
    )
    return text.encode("utf-8", "replace").decode("utf-8"), [problem]


def _not_utf8(name: str, content: bytes, start: int) -> tuple[str, list[Problem]]:
    """Return a text to show and the problem of its first bad byte."""
    before = content[:start].decode("utf-8").removeprefix("\ufeff")
    found = f"the byte 0x{content[start]:02X} is not UTF-8"
    if content.startswith(_MARKS_OF_OTHER_ENCODINGS):
        found = "the file is saved as UTF-16"
    problem = Problem(
        place_of(name, before, len(before)), "not-utf-8", "", found, "text in UTF-8", "save the file as UTF-8"
    )
    return content.decode("utf-8", "replace").removeprefix("\ufeff"), [problem]

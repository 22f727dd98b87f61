"""Reading a YAML file, and all YAML files of a folder."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calc.marks import Mark
from calc.problems import Problem
from calc.yamlfile.composer import LOADER, compose
from calc.yamlfile.node import Entry, Mapping, Scalar
from calc.yamlfile.source import SourceFile, decode, fetch
from calc.yamlfile.wording import shown

if TYPE_CHECKING:
    from pathlib import Path

_MOST_TABS = 20


@dataclass(frozen=True, slots=True)
class Sources:
    """The files of a folder.

    Attributes
    ----------
    files : tuple of SourceFile
        Every file read, by name.
    top : dict of str to Entry
        The top-level keys of all files together.
    problems : list of Problem
        Sorted by place.
    texts : dict of str to str
        The text of each file, so that a line at fault can be shown.
    """

    files: tuple[SourceFile, ...]
    top: dict[str, Entry]
    problems: list[Problem]
    texts: dict[str, str]


def read_text(name: str, content: bytes | str, loader: type[Any] = LOADER) -> tuple[Mapping | None, list[Problem]]:
    """Read one YAML file.

    Parameters
    ----------
    name : str
        File name for marks.
    content : bytes or str
        UTF-8; not trusted.
    loader : type
        A loader class of the YAML library, whose parser is used.

    Returns
    -------
    Mapping or None
        An empty mapping for a file without content; None when the file was given up.
    list of Problem
        Sorted by place; never an exception.
    """
    text, problems = decode(name, content)
    if problems:
        return None, problems
    tabs, hopeless = _tabs(name, text)
    if hopeless:
        return None, tabs
    # The two parsers place an empty value differently where the last line is not ended.
    node, problems = compose(name, text.replace("\t", " ") + "\n" * (text[-1:] not in "\r\n"), loader)
    problems = sorted(tabs + problems)
    if isinstance(node, Mapping):
        return node, problems
    if node is None or (isinstance(node, Scalar) and node.text == "" and not node.quoted):
        return (None if problems else Mapping((), Mark(name, 1, 1))), problems
    held = "a text" if isinstance(node, Scalar) else "a list"
    found = f"the file holds {held}"
    hint = "write a ':' and a space behind each key"
    return None, sorted([*problems, Problem(node.mark, "not-a-mapping", "", found, "'key: value' lines", hint)])


def _tabs(name: str, text: str) -> tuple[list[Problem], bool]:
    """Return the problems of tabs, and whether one stands in an indentation, where it hides the structure."""
    problems: list[Problem] = []
    hopeless = False
    if "\t" not in text:
        return problems, hopeless
    for number, line in enumerate(text.splitlines(), 1):
        before, tab, _ = line.partition("\t")
        indenting = bool(tab) and not before.strip()
        hopeless = hopeless or indenting
        if tab and len(problems) < _MOST_TABS:
            mark = Mark(name, number, len(before) + 1)
            what = "a tab stands in the indentation" if indenting else "a tab stands here"
            problems.append(Problem(mark, "tab", "", what, "spaces", "replace each tab by spaces"))
    return problems, hopeless


def read_folder(folder: Path) -> Sources:
    """Read every ``*.yaml`` file that lies directly in a folder.

    Parameters
    ----------
    folder : Path
        The project folder. Hidden files are left alone.

    Returns
    -------
    Sources
        Files, top-level keys, problems and texts. Problems of the folder itself (``no-folder``,
        ``not-a-folder``, ``unreadable``, ``nothing-to-read``) carry the folder's path as their file.
    """
    sources = Sources((), {}, [], {})
    at = Mark(str(folder), 1, 1)
    names = _names(folder)
    if isinstance(names, Problem):
        sources.problems.append(names)
        return sources
    files = []
    for name in names:
        file = fetch(folder, name, Mark(ascii(name)[1:-1], 1, 1))
        if isinstance(file, Problem):
            sources.problems.append(file)
            continue
        files.append(file)
        sources.texts[name] = decode(name, file.content)[0]
        mapping, problems = read_text(name, file.content)
        sources.problems.extend(problems)
        for entry in mapping.entries if mapping else ():
            _add(sources, entry)
    if not sources.top and not sources.problems:
        sources.problems.append(
            Problem(at, "nothing-to-read", "", "no *.yaml file here holds anything", "a file network.yaml")
        )
    return Sources(tuple(files), sources.top, sorted(sources.problems), sources.texts)


def _names(folder: Path) -> list[str] | Problem:
    """Return the names of the YAML files in a folder, sorted, or why there are none."""
    at = Mark(str(folder), 1, 1)
    try:
        present = sorted(place.name for place in folder.iterdir())
    except FileNotFoundError:
        return Problem(at, "no-folder", "", "there is no such folder", "a project folder")
    except NotADirectoryError:
        hint = "name the folder in which the file lies"
        return Problem(at, "not-a-folder", "", "this is a file", "a project folder", hint)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        return Problem(at, "unreadable", "", f"the folder cannot be read: {reason}", "a readable folder")
    names = [name for name in present if name.endswith(".yaml") and not name.startswith(".")]
    if names:
        return names
    misnamed = [name for name in present if name.lower().endswith((".yml", ".yaml")) and name.isprintable()]
    hint = f"rename '{misnamed[0]}' so that it ends in '.yaml'" if misnamed else ""
    return Problem(at, "nothing-to-read", "", "no *.yaml file lies in this folder", "a file network.yaml", hint)


def _add(sources: Sources, entry: Entry) -> None:
    """Add a top-level key, or the problem that it stands in two files."""
    first = sources.top.setdefault(entry.key.text, entry)
    if first is not entry:
        found = f"the key '{shown(entry.key.text)}' stands twice, first at {first.key.mark}"
        hint = "move both into one file, under one key"
        sources.problems.append(
            Problem(entry.key.mark, "duplicate-key", shown(entry.key.text), found, "each top-level key once", hint)
        )

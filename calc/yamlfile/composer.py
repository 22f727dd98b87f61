"""Events of a YAML parser become nodes, in one pass and without recursion."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import yaml

from calc.marks import Mark
from calc.problems import Problem
from calc.yamlfile.collector import without_collector
from calc.yamlfile.node import Entry, Mapping, Node, Scalar, Sequence
from calc.yamlfile.source import FORBIDDEN, MOST_PROBLEMS, too_many
from calc.yamlfile.wording import shown, syntax_problem

if TYPE_CHECKING:
    from collections.abc import Callable

DEEPEST = 30
MOST_NODES = 3_000_000
LOADER: type[Any] = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
"""Only its parser is used: nothing is ever constructed. Both parsers give the same nodes."""


class _Open:
    """A mapping or sequence whose end is not yet read."""

    __slots__ = ("dropped", "entries", "items", "key", "mark")

    def __init__(self, mark: Mark, *, is_mapping: bool) -> None:
        self.mark = mark
        self.entries: dict[str, Entry] | None = {} if is_mapping else None
        self.items: list[Node] = []
        self.key: Scalar | None = None
        self.dropped = False  # the next value belongs to a key that was refused


class _Composer:
    """Takes events one by one; see `compose`."""

    def __init__(self, name: str, text: str) -> None:
        self.name = name
        self.text = text
        self.lines: list[str] = []
        self.problems: list[Problem] = []
        self.root: Node | None = None
        self.finished = False
        self.stack: list[_Open] = []
        self.nodes = 0
        self.documents = 0
        self.actions: dict[type, Callable[[Any], None]] = {
            yaml.ScalarEvent: self.take_scalar,
            yaml.MappingStartEvent: self.open,
            yaml.SequenceStartEvent: self.open,
            yaml.MappingEndEvent: self.close,
            yaml.SequenceEndEvent: self.close,
            yaml.AliasEvent: self.take_alias,
            yaml.DocumentStartEvent: self.begin_document,
            yaml.DocumentEndEvent: lambda _: None,
            yaml.StreamStartEvent: lambda _: None,
            yaml.StreamEndEvent: self.finish,
        }

    def path(self) -> str:
        """Return the place in the file's own terms, such as ``pipes.upper-main.fittings[2]``."""
        written = ""
        for level in self.stack:
            if level.entries is None:
                written += f"[{len(level.items) + 1}]"
            elif level.key is not None:
                written += f".{shown(level.key.text)}"
        return written.removeprefix(".")

    def report(self, mark: Mark, code: str, found: str, expected: str, hint: str = "") -> None:
        """Add a problem at the present place; give up the file after too many."""
        self.problems.append(Problem(mark, code, self.path(), found, expected, hint))
        if len(self.problems) >= MOST_PROBLEMS:
            self.problems.append(too_many(mark))
            raise _AbandonedError

    def mark(self, event: Any) -> Mark:  # noqa: ANN401 - the two parsers share no class of events
        """Return the mark of an event, as long as its first line."""
        start, end = event.start_mark, event.end_mark
        line, column = start.line, start.column
        if end.line == line:
            return Mark(self.name, line + 1, column + 1, end.column - column or 1)
        self.lines = self.lines or self.text.splitlines()
        return Mark(self.name, line + 1, column + 1, max(1, len(self.lines[line].rstrip()) - column))

    def take_scalar(self, event: yaml.ScalarEvent) -> None:
        """Place a text."""
        mark = self.mark(event)
        if event.anchor is not None or event.tag is not None:
            self.refuse_properties(event, mark)
        self.count(mark)
        if event.style == '"' and (forbidden := FORBIDDEN.search(event.value)):
            found = f"an escape stands for the invisible character U+{ord(forbidden[0]):04X}"
            self.report(mark, "control-character", found, "text that shows on paper")
        self.place(Scalar(event.value, mark, bool(event.style)))

    def take_alias(self, event: Any) -> None:  # noqa: ANN401 - as above
        """Report an alias and place the text it is written as."""
        mark = self.mark(event)
        self.report(
            mark,
            "yaml-alias",
            f"the alias '*{shown(event.anchor)}' stands for a value written elsewhere",
            "the value itself",
            "write the value here; a text that begins with '*' stands in quotes",
        )
        self.place(Scalar(f"*{event.anchor}", mark))

    def refuse_properties(self, event: Any, mark: Mark) -> None:  # noqa: ANN401 - as above
        """Report an anchor or a tag."""
        if event.anchor is not None:
            found = f"the anchor '&{shown(event.anchor)}' marks a value for use elsewhere"
            self.report(mark, "yaml-anchor", found, "the value alone", "remove the anchor")
        if event.tag is not None:
            self.report(mark, "yaml-tag", f"the tag '{shown(event.tag)}'", "the value alone", "remove the tag")

    def count(self, mark: Mark) -> None:
        """Count a node; end the file at the limit."""
        self.nodes += 1
        if self.nodes > MOST_NODES:
            found = f"the file holds more than {MOST_NODES} values"
            self.report(mark, "too-large", found, "a smaller file", "divide it into several files")
            raise _AbandonedError

    def open(self, event: Any) -> None:  # noqa: ANN401 - as above
        """Begin a mapping or a sequence."""
        start = event.start_mark
        mark = Mark(self.name, start.line + 1, start.column + 1)
        if event.anchor is not None or event.tag is not None:
            self.refuse_properties(event, mark)
        self.count(mark)
        if len(self.stack) >= DEEPEST:
            self.report(mark, "too-deep", f"nested more than {DEEPEST} deep", "a flatter file")
            raise _AbandonedError
        self.stack.append(_Open(mark, is_mapping=isinstance(event, yaml.MappingStartEvent)))

    def close(self, _event: object) -> None:
        """End a mapping or a sequence and place it."""
        ended = self.stack.pop()
        if ended.entries is None:
            self.place(Sequence(tuple(ended.items), ended.mark))
        else:
            self.place(Mapping(tuple(ended.entries.values()), ended.mark))

    def place(self, node: Node) -> None:
        """Put a finished node where it belongs: in a list, as a key, or as a value."""
        if not self.stack:
            self.root = node
            return
        top = self.stack[-1]
        if top.entries is None:
            top.items.append(node)
        elif top.dropped:
            top.dropped, top.key = False, None
        elif top.key is None:
            self.take_key(top, node)
        else:
            top.entries[top.key.text] = Entry(top.key, node)
            top.key = None

    def take_key(self, top: _Open, node: Node) -> None:
        """Make a node the key of the next value; a key that is refused drops its value."""
        entries = top.entries or {}
        if isinstance(node, Scalar) and node.text not in entries and (node.quoted or node.text not in {"", "<<"}):
            top.key = node
            return
        top.dropped = True
        if not isinstance(node, Scalar):
            self.report(node.mark, "complex-key", "a list or mapping stands as a key", "a text as key")
        elif node.text in entries:
            first = entries[node.text].key.mark
            found = f"the key '{shown(node.text)}' stands twice, first at {first}"
            self.report(node.mark, "duplicate-key", found, "each key once", "remove or rename one of the two")
        elif node.text:
            found = "a merge key '<<' takes values from elsewhere"
            self.report(node.mark, "merge-key", found, "the values themselves", "write the values here")
        else:
            self.report(node.mark, "empty-key", "nothing stands before the ':'", "a key")

    def begin_document(self, event: Any) -> None:  # noqa: ANN401 - as above
        """Report a second document and end the file there."""
        self.documents += 1
        if self.documents > 1:
            mark = Mark(self.name, event.start_mark.line + 1, event.start_mark.column + 1, 3)
            found = "a second document begins here"
            self.report(mark, "several-documents", found, "one document a file", "remove the line '---'")
            self.finished = True

    def finish(self, _event: object) -> None:
        """End the file."""
        self.finished = True


class _AbandonedError(Exception):
    """The rest of a file is not worth reading; the reason is among the problems."""


def compose(name: str, text: str, loader: type[Any] = LOADER) -> tuple[Node | None, list[Problem]]:
    """Return the node that a YAML text holds.

    Parameters
    ----------
    name : str
        File name for marks.
    text : str
        Decoded and without control characters.
    loader : type
        A loader class of the YAML library; its parser is used.

    Returns
    -------
    Node or None
        None for an empty text, and for one that was given up.
    list of Problem
        In the order found.
    """
    composer = _Composer(name, text)
    parser = loader(text)
    actions = composer.actions
    try:
        with without_collector():
            while not composer.finished:
                event = parser.get_event()
                actions[type(event)](event)
    except yaml.YAMLError as error:
        return None, [*composer.problems, syntax_problem(name, text, error)]
    except _AbandonedError:
        return None, composer.problems
    finally:
        parser.dispose()
    return composer.root, composer.problems

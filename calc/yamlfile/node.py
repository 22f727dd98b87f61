"""Nodes: what a file holds, each part with its mark. All are immutable."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple, TypeAlias, Union

if TYPE_CHECKING:
    from calc.marks import Mark


class Scalar(NamedTuple):
    """A text.

    Attributes
    ----------
    text : str
        As written; quotes and escapes of a quoted text are resolved. An empty place is ``""``.
    mark : Mark
        Where it stands.
    quoted : bool
        Whether it was written in quotes or as a block; ``"null"`` in quotes is a text like any other.
    """

    text: str
    mark: Mark
    quoted: bool = False


class Entry(NamedTuple):
    """A key of a mapping with its value."""

    key: Scalar
    value: Node


@dataclass(frozen=True, slots=True)
class Sequence:
    """A list of nodes in the order written."""

    items: tuple[Node, ...]
    mark: Mark


@dataclass(frozen=True, slots=True)
class Mapping:
    """Keys with values in the order written; no key stands twice."""

    entries: tuple[Entry, ...]
    mark: Mark
    _found: dict[str, Node] = field(default_factory=dict, init=False, repr=False, compare=False)

    def get(self, name: str) -> Node | None:
        """Return the value of a key, or None when the key is not there."""
        if not self._found:
            self._found.update({entry.key.text: entry.value for entry in self.entries})
        return self._found.get(name)

    def keys(self) -> tuple[str, ...]:
        """Return the texts of the keys in the order written."""
        return tuple(entry.key.text for entry in self.entries)


Node: TypeAlias = Union[Scalar, Sequence, Mapping]  # noqa: UP007 - named before use in annotations only
"""Anything a file can hold."""

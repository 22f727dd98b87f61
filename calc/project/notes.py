"""Noting problems, and telling shapes and quantities apart: what all reading rests on."""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence
from dataclasses import dataclass, field
from functools import lru_cache

from calc import units
from calc.components import NO_BASIS, Basis, Quantity, Stated
from calc.kinds import KINDS, Kind
from calc.marks import Mark
from calc.problems import Problem, nearest
from calc.project.bounds import outside
from calc.project.wording import LONGEST_SHOWN, listed, quoted
from calc.yamlfile import Mapping, Node, Scalar
from calc.yamlfile import Sequence as ListNode

_LONGEST_PATH = 160
_MOST_HINTS = 100
MOST_TO_COMPARE = 2000
"""Above so many words, none is sought that comes near."""

_BARE = re.compile(r"[-+0-9.eE ]{1,60}", re.ASCII)
"""What may be a number without a unit."""

_KINDS = {kind.name: kind for kind in KINDS}


def _quantity(text: str, kind: Kind) -> units.Quantity | units.UnitTrouble:
    try:
        return units.read(text, kind)
    except units.UnitTrouble as trouble:
        return trouble


@lru_cache(maxsize=1 << 16)
def _kept(text: str, kind: str) -> units.Quantity | units.UnitTrouble:
    """Return a quantity read before; by the name of its kind, which hashes faster."""
    return _quantity(text, _KINDS[kind])


@dataclass
class Notes:
    """The problems found so far, and the words in which they are told.

    Attributes
    ----------
    problems : list of Problem
        In the order found.
    told : set of Mark
        Places in tables of which enough is told.
    """

    problems: list[Problem] = field(default_factory=list)
    told: set[Mark] = field(default_factory=set)
    _keys_noted: set[Mark] = field(default_factory=set)
    _hints: int = 0

    def note(  # noqa: PLR0917 - in the order of a Problem
        self, mark: Mark, code: str, path: str, found: str, expected: str = "", hint: str = ""
    ) -> None:
        """Note a problem; of a key that heads a column it is noted once, not for every row."""
        if mark in self.told:
            return
        if code in ("unknown-key", "not-yet"):
            if mark in self._keys_noted:
                return
            self._keys_noted.add(mark)
        if len(path) > _LONGEST_PATH or not path.isprintable():
            path = quoted(path)[1:-1]
        self.problems.append(Problem(mark, code, path, found, expected, hint))

    def near(self, word: str, known: Collection[str]) -> str:
        """Return "did you mean 'x'?", or nothing: not among very many words, nor after very many hints."""
        if len(known) > MOST_TO_COMPARE or self._hints >= _MOST_HINTS:
            return ""
        self._hints += 1
        return nearest(word[:LONGEST_SHOWN], sorted(known))

    def not_yet(self, mark: Mark, path: str, word: str, hint: str) -> None:
        """Note a word that is for later."""
        self.note(mark, "not-yet", path, f"{quoted(word)} is not part of this version yet", "", hint)

    def mapping(self, node: Node, path: str, expected: str) -> Mapping | None:
        """Return the node if it is a mapping; nothing at all stands for an empty one."""
        if isinstance(node, Mapping):
            return node
        if not empty(node):
            self.wrong_shape(node, path, expected)
        return None

    def items(self, node: Node, path: str, expected: str) -> tuple[Node, ...]:
        """Return the items of a list."""
        if isinstance(node, ListNode):
            return tuple(node.items)
        if not empty(node):
            self.wrong_shape(node, path, expected)
        return ()

    def wrong_shape(self, node: Node, path: str, expected: str) -> None:
        """Note that a list, mapping or text is not what should stand here."""
        found = {Mapping: "a mapping stands here", ListNode: "a list stands here"}.get(type(node))
        if found is None:
            found = f"{quoted(node.text)} stands here" if isinstance(node, Scalar) else "something else"
        self.note(node.mark, "wrong-shape", path, found, expected)

    def unknown(self, key: Scalar, path: str, known: Sequence[str]) -> None:
        """Note a key that does not exist."""
        self.note(
            key.mark, "unknown-key", path, f"unknown key {quoted(key.text)}",
            f"one of {listed(known)}", self.near(key.text, known),
        )  # fmt: skip

    def scalar(self, node: Node, path: str, expected: str) -> Scalar | None:
        """Return the node if it is a scalar."""
        if isinstance(node, Scalar):
            return node
        self.wrong_shape(node, path, expected)
        return None

    def quantity(
        self, scalar: Scalar, path: str, forms: Sequence[Quantity], basis: Basis = NO_BASIS
    ) -> tuple[Stated, Quantity] | None:
        """Return a quantity and the first form that it fits."""
        first: units.UnitTrouble | None = None
        expected = []
        for form in forms:
            name = form.kind.name
            text = f"{scalar.text} {form.bare}" if form.bare and _BARE.fullmatch(scalar.text) else scalar.text
            got = _kept(text, name) if name in _KINDS else _quantity(text, form.kind)
            if not isinstance(got, units.UnitTrouble):
                if wanted := outside(form, got.value):
                    found = f"{quoted(scalar.text)} is out of range"
                    self.note(scalar.mark, "out-of-range", path, found, wanted)
                    return None
                return Stated(
                    got.value, scalar.text, scalar.mark, got.number, got.unit, got.factor, got.offset, basis
                ), form
            first = first or got
            expected.append(got.expected)
            if got.code not in ("wrong-dimension", "bare-number"):
                break
        if first is not None:
            self.note(scalar.mark, first.code, path, first.found, " or ".join(dict.fromkeys(expected)), first.hint)
        return None


def empty(node: Node) -> bool:
    """Return whether nothing is written: ``junctions:`` and no more."""
    return isinstance(node, Scalar) and not node.quoted and node.text in ("", "~", "null")

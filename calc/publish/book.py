"""The ledger as the screen's page carries it: columns as arrays, every text once, numbers known by their position.

::

    texts   every text, once                     forms  ways of writing, as `Format.spec`
    cases   [id, the case that it builds upon]   files  names of the input files
    laws    [name, title, source, range, [[input, letter, words]], letter of the result, the unknown of an implicit law,
             1 if it is worked in SI alone]
    coherent  by SI unit, the unit in which other laws are worked, and the factor to it
    columns [name, words, case, of, unit, rows, values, lines, origin]

``name``, ``words``, ``of``, ``unit`` and ``rows`` stand as positions in ``texts``; rows that follow one another by
number (trials) and lists with one value throughout are written short. A number is known by its position in all rows
of all columns, in base 36: so anchors name it. An input of an origin is ``s`` (its row r is number s + r), ``[s]``
(number s for every row) or a number for each row, -1 where there is none.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

import numpy as np
from markupsafe import Markup

from calc.equation import Implicit, Leaf
from calc.equation.law import takes
from calc.ledger import Column, Combined, Converted, Derived, Given, Judged, Ledger, Library, Program, Solved
from calc.ledger.column import ABSENT, View
from calc.problems import CalcError
from calc.publish.markup import raised
from calc.publish.precision import carried_figures, operand_figures, rounded
from calc.publish.seal import printed
from calc.report.conversion import empirical
from calc.report.document import Document, Number

DIGITS = "0123456789abcdefghijklmnopqrstuvwxyz"
Told = Any  # plain data: numbers, texts and lists of them


@dataclass
class Book:
    """The ledger of one document as its page carries it.

    Attributes
    ----------
    document : Document
    ledger : Ledger
    """

    document: Document
    ledger: Ledger
    _texts: dict[str, int] = field(default_factory=dict)
    _laws: dict[str, int] = field(default_factory=dict)
    _marked: dict[str, int] = field(default_factory=dict)

    @cached_property
    def starts(self) -> dict[int, int]:
        """Position of the first row of each column, by the column's own identity."""
        lengths = [len(column.rows) for column in self.ledger.columns]
        ends = np.cumsum([0, *lengths]).tolist()
        return {id(column): start for column, start in zip(self.ledger.columns, ends, strict=False)}

    @cached_property
    def forms(self) -> dict[str, int]:
        """Position of each way of writing; the commonest come first."""
        counted = Counter(number.form.spec for number in printed(self.document))
        return {spec: k for k, (spec, _) in enumerate(counted.most_common())}

    @cached_property
    def laws(self) -> dict[str, Leaf]:
        """The laws that ran, by the names of their equations."""
        found: dict[str, Leaf] = {}
        for column in self.ledger.columns:
            if isinstance(column.origin, Derived):
                found.setdefault(_equation(column.origin.leaf), column.origin.leaf)
        return found

    def anchored(self, ref: str, number: Number) -> Markup:
        """Return a number as the anchor of its position, and of the way in which it is written."""
        spot = self.ledger.spot(ref)
        key = f"{short(self.starts[id(spot.column)] + spot.row)}.{short(self.forms[number.form.spec])}"
        return Markup("<data value={}>{}</data>").format(key, raised(number.text))

    @cached_property
    def told(self) -> dict[str, Told]:
        """The ledger as plain data."""
        words = self._words()
        needed = {k: operand_figures(column, self.document.coherent) for k, column in enumerate(self.ledger.columns)}
        figures = carried_figures(self.ledger, needed)
        at = {self.ledger.spot(ref).id: address for ref, address in self.document.addresses.items()}
        laws = [self._law(leaf) for leaf in self.laws.values()]
        cases = dict.fromkeys(column.case for column in self.ledger.columns if column.case)
        columns = []
        for k, column in enumerate(self.ledger.columns):
            numbers = zip(column.values.tolist(), figures[k].tolist(), strict=True)
            columns.append([
                self._text(column.name),
                self._text(words.get(column.name, "")),
                self._text(column.case),
                self._text(column.of),
                self._text(column.kind.unit),
                self._rows(column.rows),
                [_plain(rounded(value, count)) for value, count in numbers],
                _lines([at.get(column.id(row), "") for row in range(len(column.rows))]),
                self._origin(column, needed[k].tolist()),
            ])  # fmt: skip
        return {
            "cases": [[case, self.ledger.parents.get(case, "")] for case in cases],
            "coherent": {unit: list(told) for unit, told in self.document.coherent.items()},
            "forms": list(self.forms),
            "laws": laws,
            "columns": columns,
            "files": list(self._marked),
            "texts": list(self._texts),
        }

    def _words(self) -> dict[str, str]:
        """Return what columns are called, by name: as the law that gives them says, or one that takes them."""
        words: dict[str, str] = {}
        for column in self.ledger.columns:
            if isinstance(column.origin, Derived):
                leaf = column.origin.leaf
                words.setdefault(column.name, leaf.gives.words)
                for name, symbol in takes(leaf).items():
                    for source in column.origin.inputs[name].sources:
                        words.setdefault(source.name, symbol.words)
        return words

    def _text(self, text: str) -> int:
        return self._texts.setdefault(text, len(self._texts))

    def _rows(self, rows: Sequence[str]) -> Told:
        """Return rows as positions of their texts; trials counted up are their first alone, as a text."""
        if rows and all(row.isdecimal() for row in rows):
            first = int(rows[0])
            if list(rows) == [str(first + k) for k in range(len(rows))]:
                return str(first)
        return [self._text(row) for row in rows]

    def _law(self, leaf: Leaf) -> Told:
        equation = leaf.residual if isinstance(leaf, Implicit) else leaf
        self._laws[equation.name] = len(self._laws)
        inputs = [[name, symbol.text, symbol.words] for name, symbol in takes(leaf).items()]
        unknown = leaf.unknown if isinstance(leaf, Implicit) else ""
        about = [equation.name, equation.title, equation.source.text, equation.valid]
        return [*about, inputs, leaf.gives.text, unknown, int(empirical(leaf))]

    def _origin(self, column: Column, needed: list[int]) -> Told:  # noqa: PLR0911 - one for each origin
        origin = column.origin
        match origin:
            case Converted():
                turned = (origin.numbers, origin.units, origin.factors, origin.offsets)
                return ["c", *self._stated(origin), *(_one([self._said(x) for x in one]) for one in turned)]
            case Given() | Library():
                return ["g" if isinstance(origin, Given) else "l", *self._stated(origin)]
            case Derived():
                inputs = [self._view(origin.inputs[name]) for name in takes(origin.leaf)]
                law, label = self._laws[_equation(origin.leaf)], self._text(origin.remark)
                chosen = _one([self._text(choice) for choice in origin.choices])
                return ["d", law, label, inputs, _one(needed), chosen]
            case Combined():
                into = origin.into.tolist()
                signs = "".join("-" if sign < 0 else "+" for sign in origin.signs.tolist())
                words = (self._text(origin.operation), self._text(origin.words))
                return ["t", *words, len(into), self._view(origin.terms), _one(into), signs if "-" in signs else ""]
            case Solved():
                about = (self._text(origin.statement), self._text(origin.method), origin.iterations)
                proof = [self._text(name) for name in origin.proof]
                return ["s", *about, proof, [self._view(view) for view in origin.inputs.values()]]
            case Judged():
                return ["j", self._view(origin.margin)]
            case Program():
                return ["p", self._text(origin.statement)]
            case _:
                raise CalcError(f"{column.name}: no form for the origin {type(origin).__name__}")

    def _stated(self, origin: Given | Converted | Library) -> list[Told]:
        files = [self._marked.setdefault(mark.file, len(self._marked)) for mark in origin.marks]
        places = [f"{file}:{mark.line}:{mark.column}" for file, mark in zip(files, origin.marks, strict=True)]
        bases = [self._text(basis) for basis in origin.bases]
        return [_one(places), _one(list(origin.written)), _one(bases)]

    def _said(self, value: float | str) -> Told:
        return self._text(value) if isinstance(value, str) else _plain(value)

    def _view(self, view: View) -> Told:
        if view.shared:
            if view.which[0] == ABSENT:
                return [-1]
            return [self.starts[id(view.sources[view.which[0]])] + int(view.at[0])]
        starts = np.array([self.starts[id(source)] for source in view.sources] or [0])
        spots = np.where(view.which == ABSENT, -1, starts[view.which] + view.at).tolist()
        if len(spots) > 1 and spots[0] >= 0 and spots == list(range(spots[0], spots[0] + len(spots))):
            return spots[0]
        return spots


def short(number: int) -> str:
    """Return a whole number in base 36."""
    said = ""
    while True:
        number, digit = divmod(number, len(DIGITS))
        said = DIGITS[digit] + said
        if not number:
            return said


def _equation(leaf: Leaf) -> str:
    return leaf.residual.name if isinstance(leaf, Implicit) else leaf.name


def _plain(value: float) -> float | int:
    """Return a number without a fraction as a whole one, which is written shorter."""
    return int(value) if value.is_integer() and abs(value) < 2**53 else value


def _one(values: list[Told]) -> Told:
    """Return a list of the one value that stands throughout, or the list."""
    return values[:1] if values and all(value == values[0] for value in values) else values


def _lines(addresses: Iterable[str]) -> Told:
    """Return addresses as their sections and lines; a section that goes on is not said again."""
    said, last = [], ""
    for address in addresses:
        section, _, line = address.partition(".")
        said.append(line if section == last else address)
        last = section if address else ""
    return "" if not any(said) else " ".join(word or "-" for word in said)

"""Replay: every derived number computed again, alone, from what it cites."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from calc.equation import Expression, Implicit, Literal, Operation, Term
from calc.equation.evaluation import evaluate_leaf
from calc.equation.law import takes
from calc.equation.reading import OPERATIONS
from calc.ledger.accountant import combined
from calc.ledger.column import Array, Column
from calc.ledger.ledger import Ledger
from calc.ledger.origin import Combined, Converted, Derived, Judged
from calc.problems import CalcError

TOLERANCE = 1e-12
"""Relative to the value, or to what was added up for it: archives cross machines, so bits may differ."""


@dataclass(frozen=True, slots=True)
class Disagreement:
    """A number that did not come out again."""

    id: str
    stands: float
    replayed: float


def replay(ledger: Ledger, *, columns: list[Column] | None = None) -> tuple[int, list[Disagreement]]:
    """Recompute each number that has a rule, from its inputs alone.

    Returns
    -------
    count : int
        Numbers replayed.
    disagreements : list of Disagreement
        Those that differ by more than the tolerance; empty when all is well.
    """
    count, wrong = 0, []
    for column in ledger.columns if columns is None else columns:
        for row, (again, size) in enumerate(_again(column)):
            count += 1
            stands = float(column.values[row])
            if not abs(again - stands) <= TOLERANCE * max(abs(stands), size):
                wrong.append(Disagreement(column.id(row), stands, again))
    return count, wrong


def _again(column: Column) -> Iterator[tuple[float, float]]:
    origin = column.origin
    match origin:
        case Derived():
            yield from _derived(origin, len(column.rows))
        case Combined():
            terms = origin.signs * origin.terms.values
            sizes = combined("sum", np.abs(terms), origin.into, len(column.rows))
            values = combined(origin.operation, terms, origin.into, len(column.rows))
            yield from zip(values.tolist(), sizes.tolist(), strict=True)
        case Converted():
            parts = zip(origin.numbers, origin.factors, origin.offsets, strict=True)
            for number, factor, offset in parts:
                yield number * factor + offset, 0.0
        case Judged():
            for margin in origin.margin.values.tolist():
                yield float(margin >= 0), 0.0
        case _:
            return


def _derived(origin: Derived, count: int) -> Iterator[tuple[float, float]]:
    arrays = {name: view.values for name, view in origin.inputs.items()}
    leaf = origin.leaf
    for row in range(count):
        one = {}
        for name in takes(leaf):
            array = arrays[name]
            one[name] = array if origin.inputs[name].shared else array[row : row + 1]
        size = 0.0 if isinstance(leaf, Implicit) else _size(leaf.expression, one)[1]
        yield float(np.asarray(evaluate_leaf(leaf, one)).reshape(-1)[0]), size


def _size(node: Expression, inputs: Mapping[str, Array]) -> tuple[Any, float]:
    """Return a value with the size of what was added up for it, whose last digit it cannot better."""
    if isinstance(node, Term):
        return inputs[node.name], abs(float(inputs[node.name][0]))
    if isinstance(node, Literal):
        number = math.pi if node.text == "π" else float(node.text)
        return number, abs(number)
    if not isinstance(node, Operation):
        raise CalcError(f"{type(node).__name__} has no size")
    parts = [_size(part, inputs) for part in node.args]
    value = UFUNCS[node.operation](*(part for part, _ in parts))
    match node.operation:
        case "add" | "subtract":
            size = parts[0][1] + parts[1][1]
        case "multiply":
            size = parts[0][1] * parts[1][1]
        case "divide":
            size = parts[0][1] / abs(float(np.ravel(parts[1][0])[0]))
        case "negative" | "abs":
            size = parts[0][1]
        case _:
            size = abs(float(np.ravel(value)[0]))
    return value, size


UFUNCS = {name: ufunc for ufunc, name in OPERATIONS.items()}

"""Trace: one number's whole derivation, down to file, line and column; as text or as data."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from calc.equation import Implicit, linear
from calc.equation.law import takes
from calc.ledger.column import Column, Origin
from calc.ledger.ledger import Ledger, Spot
from calc.ledger.origin import Combined, Converted, Derived, Given, Judged, Library, Program, Solved
from calc.problems import CalcError

FORMAT = "headtrace-trace/1"
MANY = 12
"""Terms of a sum shown one by one; beyond, the rest is counted."""


@dataclass(frozen=True, slots=True)
class Step:
    """A line of a derivation.

    Attributes
    ----------
    depth : int
        How many numbers it enters into, one through the other.
    spot : Spot or None
        The number; None for what merely counts numbers left out.
    words : str
        Where it comes from, in words.
    origin : dict
        The same as data; empty where the number was met before.
    """

    depth: int
    spot: Spot | None
    words: str
    origin: dict[str, Any]


def trace(ledger: Ledger, spot: Spot) -> Iterator[str]:
    """Yield the derivation of a number, outermost first, inputs indented beneath what they enter.

    A number met again is not repeated: its line says "shown above". Numbers that were solved for are proved
    after the tree in which they were met, each under its own line.
    """
    tracer = _Tracer(ledger)
    yield from map(_line, tracer.steps(spot, 0))
    while tracer.waiting:
        proved = tracer.waiting.pop(0)
        yield ""
        yield f"proof of {proved.id}:"
        for proof in proofs(ledger, *proved):
            yield from map(_line, tracer.steps(proof, 1))


def traced(ledger: Ledger, spot: Spot) -> dict[str, Any]:
    """Return the derivation of a number as data, in SI.

    ``{"format": "headtrace-trace/1", "id": …, "number": N, "proofs": [{"of": id, "numbers": [N, …]}, …]}``, where
    N is ``{"id": …, "value": …, "unit": …, "origin": {…}, "inputs": [N, …]}``. A number met again is
    ``{"id": …, "value": …, "unit": …, "seen": true}``; of a long sum, ``"more"`` counts the terms left out. By its
    ``kind`` an origin has: given, library: ``written``, ``file``, ``line``, ``column``, ``basis``; converted: the
    same and ``number``, ``unit``, ``factor``, ``offset``; derived: ``formula``, ``title``, ``label``, ``source``, and
    ``law`` where one was chosen; combined: ``operation``, ``terms``, ``signed``, ``words``; solved: ``statement``,
    ``method``, ``iterations``; judged: ``met``; program: ``statement``.
    """
    tracer = _Tracer(ledger)
    (root,) = _nested(tracer.steps(spot, 0))
    proved: list[dict[str, Any]] = []
    while tracer.waiting:
        of = tracer.waiting.pop(0)
        numbers = [one for proof in proofs(ledger, *of) for one in _nested(tracer.steps(proof, 0))]
        proved.append({"of": of.id, "numbers": numbers})
    return {"format": FORMAT, "id": spot.id, "number": root, "proofs": proved}


def _line(step: Step) -> str:
    pad = "  " * step.depth
    return f"{pad}{step.words}" if step.spot is None else f"{pad}{stated_as(step.spot)}   {step.words}"


def stated_as(spot: Spot) -> str:
    """Return ``id = value unit``."""
    return f"{spot.id} = {spot.value:.9g} {spot.column.kind.unit}".rstrip()


def number_of(spot: Spot) -> dict[str, Any]:
    """Return a number as data: its id, its value in SI, null where it is none, and its unit."""
    value = float(spot.value)
    return {"id": spot.id, "value": value if math.isfinite(value) else None, "unit": spot.column.kind.unit}


def _nested(steps: Iterator[Step]) -> list[dict[str, Any]]:
    """Return steps as numbers, each with its inputs."""
    roots: list[dict[str, Any]] = []
    way: list[dict[str, Any]] = []
    for step in steps:
        del way[step.depth :]
        if step.spot is None:
            way[-1] |= step.origin
            continue
        seen = not step.origin
        told = {**number_of(step.spot), **({"seen": True} if seen else {"origin": step.origin, "inputs": []})}
        (way[-1]["inputs"] if way else roots).append(told)
        way.append(told)
    return roots


class _Tracer:
    """Walks a derivation; keeps what was met, and what is to be proved."""

    def __init__(self, ledger: Ledger) -> None:
        self.ledger = ledger
        self.shown: set[str] = set()
        self.waiting: list[Spot] = []

    def steps(self, spot: Spot, depth: int) -> Iterator[Step]:
        """Yield a number and all that it rests on."""
        column, row = spot
        if spot.id in self.shown:
            yield Step(depth, spot, "(shown above)", {})
            return
        self.shown.add(spot.id)
        words, told = _said(spot)
        yield Step(depth, spot, words, told)
        if isinstance(column.origin, Solved) and column.origin.proof:
            self.waiting.append(spot)
        inputs, more = _inputs(column.origin, row)
        for one in inputs:
            if one is not None:
                yield from self.steps(Spot(*one), depth + 1)
        if more:
            yield Step(depth + 1, None, f"and {more} more", {"more": more})


Said = tuple[str, dict[str, Any]]
"""An origin in words, and the same as data."""


def _inputs(origin: Origin, row: int) -> tuple[list[tuple[Column, int] | None], int]:
    """Return the numbers that one rests on, and how many more there are."""
    match origin:
        case Derived():
            return [origin.inputs[name].spot(row) for name in takes(origin.leaf)], 0
        case Combined():
            terms = [k for k, into in enumerate(origin.into.tolist()) if into == row]
            return [origin.terms.spot(k) for k in terms[:MANY]], max(0, len(terms) - MANY)
        case Solved():
            return [view.spot(row) for view in origin.inputs.values()], 0
        case Judged():
            return [origin.margin.spot(row)], 0
        case _:
            return [], 0


def _said(spot: Spot) -> Said:
    column, row = spot
    origin = column.origin
    match origin:
        case Given() | Converted() | Library():
            return _stated(origin, row)
        case Derived():
            return _derived(origin, row)
        case Combined():
            return _combined(origin, row)
        case Solved():
            return _solved(origin)
        case Judged():
            words = "met: the margin is not negative" if spot.value else "not met: the margin is negative"
            return words, {"kind": "judged", "met": bool(spot.value)}
        case Program(statement=statement):
            return statement, {"kind": "program", "statement": statement}
        case _:
            raise CalcError(f"{column.name}: no words for the origin {type(origin).__name__}")


def _derived(origin: Derived, row: int) -> Said:
    leaf = origin.leaf
    equation = leaf.residual if isinstance(leaf, Implicit) else leaf
    root = f"root {leaf.gives.text} of 0 = " if isinstance(leaf, Implicit) else ""
    formula = equation.formula() if not root else linear(equation.expression, lambda n: equation.takes[n].text)
    said = f", {origin.remark}" if origin.remark else ""
    chosen = f"; law {origin.choices[row]}" if origin.choices else ""
    told = {
        "kind": "derived",
        "formula": f"{root}{formula}",
        "title": equation.title,
        "label": origin.label,
        "source": equation.source.key,
        **({"law": origin.choices[row]} if origin.choices else {}),
    }
    return f"{root}{formula}   [{equation.title}{said}; {equation.source.key}{chosen}]", told


def _combined(origin: Combined, row: int) -> Said:
    terms = [k for k, into in enumerate(origin.into.tolist()) if into == row]
    signed = any(origin.signs[k] < 0 for k in terms)
    told = {
        "kind": "combined",
        "operation": origin.operation,
        "terms": len(terms),
        "signed": signed,
        "words": origin.words,
    }
    return f"{origin.operation} of {len(terms)}{', signed' * signed}: {origin.words}", told


def _solved(origin: Solved) -> Said:
    below = "; proof below" if origin.proof else ""
    how = f"{origin.method}, {origin.iterations} iterations"
    told = {
        "kind": "solved",
        "statement": origin.statement,
        "method": origin.method,
        "iterations": origin.iterations,
    }
    return f"solved: {origin.statement} ({how}){below}", told


def proofs(ledger: Ledger, column: Column, row: int) -> list[Spot]:
    """Return the numbers in which the condition of a solved number is evaluated."""
    origin = column.origin
    names = origin.proof if isinstance(origin, Solved) and not column.of else ()
    columns = [c for name in names for c in ledger.find(name, column.case) if c.case == column.case]
    return [Spot(c, c.index[column.rows[row]]) for c in columns if column.rows[row] in c.index]


def _stated(origin: Given | Converted | Library, row: int) -> Said:
    library = isinstance(origin, Library)
    mark, basis = origin.marks[row], origin.bases[row]
    told: dict[str, Any] = {
        "kind": "library" if library else "given",
        "written": origin.written[row],
        "file": mark.file,
        "line": mark.line,
        "column": mark.column,
        "basis": basis,
    }
    turned = ""
    if isinstance(origin, Converted):
        turned = f", {origin.numbers[row]:.12g} × {origin.factors[row]:.12g}"
        if origin.offsets[row]:
            turned += f" + {origin.offsets[row]:.12g}"
        told |= {"kind": "converted", "number": origin.numbers[row], "unit": origin.units[row]}
        told |= {"factor": origin.factors[row], "offset": origin.offsets[row]}
    said = "shipped" if library else "given"
    words = f"{said} as '{origin.written[row]}' at {mark}{turned}{f' [{basis}]' * bool(basis)}"
    return words, told

"""Trace: one number's whole derivation as text, down to file, line and column."""

from __future__ import annotations

from collections.abc import Iterator

from calc.equation import Implicit, linear
from calc.equation.law import takes
from calc.ledger.column import Column
from calc.ledger.ledger import Ledger, Spot
from calc.ledger.origin import Combined, Converted, Derived, Given, Judged, Library, Program, Solved
from calc.problems import CalcError

MANY = 12
"""Terms of a sum shown one by one; beyond, the rest is counted."""


def trace(ledger: Ledger, spot: Spot) -> Iterator[str]:
    """Yield the derivation of a number, outermost first, inputs indented beneath what they enter.

    A number met again is not repeated: its line says "shown above". Numbers that were solved for are proved
    after the tree in which they were met, each under its own line.
    """
    tracer = _Tracer(ledger)
    yield from tracer.lines(spot, 0)
    while tracer.waiting:
        yield ""
        yield from tracer.proof(tracer.waiting.pop(0))


class _Tracer:
    def __init__(self, ledger: Ledger) -> None:
        self.ledger = ledger
        self.shown: set[str] = set()
        self.waiting: list[Spot] = []

    def lines(self, spot: Spot, depth: int) -> Iterator[str]:
        pad = "  " * depth
        column, row = spot
        unit = f" {column.kind.unit}" if column.kind.unit else ""
        head = f"{pad}{spot.id} = {spot.value:.9g}{unit}"
        if spot.id in self.shown:
            yield f"{head}   (shown above)"
            return
        self.shown.add(spot.id)
        origin = column.origin
        match origin:
            case Given() | Converted() | Library():
                yield f"{head}   {_stated(origin, row)}"
            case Derived():
                yield from self._derived(head, origin, row, depth)
            case Combined():
                yield from self._combined(head, origin, row, depth)
            case Solved():
                below = "; proof below" if origin.proof else ""
                how = f"{origin.method}, {origin.iterations} iterations"
                yield f"{head}   solved: {origin.statement} ({how}){below}"
                if origin.proof:
                    self.waiting.append(spot)
                yield from self._inputs([view.spot(row) for view in origin.inputs.values()], depth)
            case Judged():
                said = "met: the margin is not negative" if spot.value else "not met: the margin is negative"
                yield f"{head}   {said}"
                yield from self._inputs([origin.margin.spot(row)], depth)
            case Program(statement=statement):
                yield f"{head}   {statement}"
            case _:
                raise CalcError(f"{column.name}: no words for the origin {type(origin).__name__}")

    def _derived(self, head: str, origin: Derived, row: int, depth: int) -> Iterator[str]:
        leaf = origin.leaf
        equation = leaf.residual if isinstance(leaf, Implicit) else leaf
        root = f"root {leaf.gives.text} of 0 = " if isinstance(leaf, Implicit) else ""
        formula = equation.formula() if not root else linear(equation.expression, lambda n: equation.takes[n].text)
        said = f", {origin.remark}" if origin.remark else ""
        chosen = f"; law {origin.choices[row]}" if origin.choices else ""
        yield f"{head}   {root}{formula}   [{equation.title}{said}; {equation.source.key}{chosen}]"
        yield from self._inputs([origin.inputs[name].spot(row) for name in takes(leaf)], depth)

    def _combined(self, head: str, origin: Combined, row: int, depth: int) -> Iterator[str]:
        terms = [k for k, into in enumerate(origin.into.tolist()) if into == row]
        signs = "" if all(origin.signs[k] > 0 for k in terms) else ", signed"
        yield f"{head}   {origin.operation} of {len(terms)}{signs}: {origin.words}"
        yield from self._inputs([origin.terms.spot(k) for k in terms[:MANY]], depth)
        if len(terms) > MANY:
            yield f"{'  ' * (depth + 1)}and {len(terms) - MANY} more"

    def proof(self, spot: Spot) -> Iterator[str]:
        """Yield what proves a number that was solved for."""
        column, row = spot
        yield f"proof of {spot.id}:"
        for proof in proofs(self.ledger, column, row):
            yield from self.lines(proof, 1)

    def _inputs(self, spots: list[tuple[Column, int] | None], depth: int) -> Iterator[str]:
        for spot in spots:
            if spot is not None:
                yield from self.lines(Spot(*spot), depth + 1)


def proofs(ledger: Ledger, column: Column, row: int) -> list[Spot]:
    """Return the numbers in which the condition of a solved number is evaluated."""
    origin = column.origin
    names = origin.proof if isinstance(origin, Solved) and not column.of else ()
    columns = [c for name in names for c in ledger.find(name, column.case) if c.case == column.case]
    return [Spot(c, c.index[column.rows[row]]) for c in columns if column.rows[row] in c.index]


def _stated(origin: Given | Converted | Library, row: int) -> str:
    said = "shipped" if isinstance(origin, Library) else "given"
    basis = f" [{origin.bases[row]}]" if origin.bases[row] else ""
    turned = ""
    if isinstance(origin, Converted):
        turned = f", {origin.numbers[row]:.12g} × {origin.factors[row]:.12g}"
        if origin.offsets[row]:
            turned += f" + {origin.offsets[row]:.12g}"
    return f"{said} as '{origin.written[row]}' at {origin.marks[row]}{turned}{basis}"

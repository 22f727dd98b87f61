"""The ledger as data: complete enough that a reader without this program can replay each derived value."""

from __future__ import annotations

from typing import Any

import numpy as np

from calc.equation import Equation, Implicit, Leaf, linear
from calc.ledger.column import Column, View
from calc.ledger.ledger import Ledger
from calc.ledger.origin import Combined, Converted, Derived, Given, Judged, Library, Program, Solved
from calc.problems import CalcError

FORMAT = "headtrace-ledger/1"


def exported(ledger: Ledger) -> dict[str, Any]:
    """Return the ledger as plain data, in SI.

    Every input of a derived value is ``{"column": k}`` (row for row), ``{"column": k, "row": r}`` (one number
    for all rows), ``{"column": k, "rows": [...]}`` (a row of one column for each), or ``{"columns": [...],
    "rows": [...]}`` (a pair for each row, null where not taken). Formulas name inputs as the ``inputs`` do,
    with ``+ - * / ^``, ``pi`` and the functions abs, sqrt, ln, log10, exp, sin.
    """
    number = {id(column): k for k, column in enumerate(ledger.columns)}
    return {
        "format": FORMAT,
        "columns": [_column(column, number) for column in ledger.columns],
    }


def _column(column: Column, number: dict[int, int]) -> dict[str, Any]:
    told: dict[str, Any] = {"name": column.name, "case": column.case}
    if column.of:
        told["of"] = column.of
    return {
        **told,
        "kind": column.kind.name,
        "unit": column.kind.unit,
        "rows": list(column.rows),
        "values": column.values.tolist(),
        "origin": _origin(column, number),
    }


def _origin(column: Column, number: dict[int, int]) -> dict[str, Any]:
    origin = column.origin
    told: dict[str, Any]
    match origin:
        case Given() | Library():
            told = {"kind": "given" if isinstance(origin, Given) else "library", **_stated(origin)}
        case Converted():
            told = {"kind": "converted", **_stated(origin)}
            told |= {"numbers": list(origin.numbers), "units": list(origin.units)}
            told |= {"factors": list(origin.factors), "offsets": list(origin.offsets)}
        case Derived():
            told = _derived(origin, number)
        case Combined():
            told = {
                "kind": "total",
                "operation": origin.operation,
                "meaning": origin.words,
                "terms": _view(origin.terms, number),
                "into": origin.into.tolist(),
                "signs": origin.signs.tolist(),
            }
        case Solved():
            told = {"kind": "solved", "statement": origin.statement, "method": origin.method}
            told |= {"iterations": origin.iterations, "proof": list(origin.proof)}
            told["inputs"] = {name: _view(view, number) for name, view in origin.inputs.items()}
        case Judged():
            rule = "1 if margin >= 0 else 0"
            told = {"kind": "judged", "rule": rule, "margin": _view(origin.margin, number)}
        case Program():
            told = {"kind": "program", "statement": origin.statement}
        case _:
            raise CalcError(f"{column.name}: no form for the origin {type(origin).__name__}")
    return told


def _stated(origin: Given | Converted | Library) -> dict[str, Any]:
    return {
        "marks": [str(mark) for mark in origin.marks],
        "written": list(origin.written),
        "bases": list(origin.bases),
    }


def _derived(origin: Derived, number: dict[int, int]) -> dict[str, Any]:
    told: dict[str, Any] = {"kind": "derived", "law": origin.law.name, **_leaf(origin.leaf)}
    if origin.label:
        told["regime"] = origin.label
    told["inputs"] = {name: _view(view, number) for name, view in origin.inputs.items()}
    if origin.choices:
        told["choices"] = list(origin.choices)
    return told


def _leaf(leaf: Leaf) -> dict[str, Any]:
    equation: Equation = leaf.residual if isinstance(leaf, Implicit) else leaf
    told = {
        "equation": equation.name,
        "title": equation.title,
        "formula": linear(equation.expression, lambda name: name),
        "printed": equation.formula(),
        "source": equation.source.text,
        "range": equation.valid,
    }
    if isinstance(leaf, Implicit):
        told |= {"root_of": leaf.unknown, "printed": f"0 = {equation.formula().partition(' = ')[2]}"}
    return told


def _view(view: View, number: dict[int, int]) -> dict[str, Any]:
    if view.shared:
        return {"column": number[id(view.sources[view.which[0]])], "row": int(view.at[0])}
    columns = [number[id(column)] for column in view.sources]
    if len(columns) == 1 and np.array_equal(view.at, np.arange(len(view.sources[0].rows))) and not view.which.any():
        return {"column": columns[0]}
    if len(columns) == 1 and not view.which.any():
        return {"column": columns[0], "rows": view.at.tolist()}
    return {
        "columns": [None if w < 0 else columns[w] for w in view.which.tolist()],
        "rows": [None if w < 0 else a for w, a in zip(view.which.tolist(), view.at.tolist(), strict=True)],
    }

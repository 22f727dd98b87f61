"""A reader of ``ledger.json`` that knows nothing of the program: it computes each number again from its inputs."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from arithmetic import compute
from scipy.optimize import brentq


@dataclass(frozen=True)
class Again:
    """A number as it stands and as it came out; ``size`` is that of the largest operand of its own unit."""

    name: str
    row: str
    stands: float
    computed: float
    size: float

    @property
    def apart(self) -> float:
        """The difference as a share of the largest operand."""
        return abs(self.computed - self.stands) / max(self.size, abs(self.stands), 1e-300)


class Reader:
    """The columns of a file."""

    def __init__(self, told: dict[str, Any]) -> None:
        assert told["format"] == "headtrace-ledger/1"
        self.columns: list[dict[str, Any]] = told["columns"]

    def every(self) -> Iterator[Again]:
        for column in self.columns:
            rule = {
                "derived": self.derived,
                "converted": self.converted,
                "total": self.total,
                "judged": self.judged,
            }.get(column["origin"]["kind"])
            for k, (computed, size) in enumerate(rule(column) if rule else ()):
                yield Again(column["name"], column["rows"][k], column["values"][k], computed, size)

    def look(self, view: dict[str, Any], row: int) -> tuple[float, str]:
        """Return the number that stands behind one row of an input, and its unit or else its kind."""
        if "columns" in view:
            column, at = self.columns[view["columns"][row]], view["rows"][row]
        else:
            column = self.columns[view["column"]]
            at = view["rows"][row] if "rows" in view else view.get("row", row)
        return column["values"][at], column["unit"] or column["kind"]

    def derived(self, column: dict[str, Any]) -> Iterator[tuple[float, float]]:
        origin = column["origin"]
        for row in range(len(column["rows"])):
            found = {}
            for name, view in origin["inputs"].items():
                if "columns" not in view or view["columns"][row] is not None:
                    found[name] = self.look(view, row)
            values = {name: value for name, (value, _) in found.items()}
            adds = " + " in origin["formula"] or " - " in origin["formula"]
            own = column["unit"] or column["kind"]
            alike = [abs(value) for value, unit in found.values() if adds and unit == own != "pure number"]
            size = max(alike, default=0.0)
            yield solve(origin, values), size

    def converted(self, column: dict[str, Any]) -> Iterator[tuple[float, float]]:
        origin = column["origin"]
        parts = zip(origin["numbers"], origin["factors"], origin["offsets"], strict=True)
        yield from ((number * factor + offset, 0.0) for number, factor, offset in parts)

    def total(self, column: dict[str, Any]) -> Iterator[tuple[float, float]]:
        origin = column["origin"]
        for row in range(len(column["rows"])):
            terms = [
                origin["signs"][k] * self.look(origin["terms"], k)[0]
                for k, into in enumerate(origin["into"])
                if into == row
            ]
            sizes = [abs(term) for term in terms]
            if origin["operation"] == "largest size":
                yield max(sizes), max(sizes)
            else:
                yield {"sum": math.fsum, "largest": max, "least": min}[origin["operation"]](terms), math.fsum(sizes)

    def judged(self, column: dict[str, Any]) -> Iterator[tuple[float, float]]:
        origin = column["origin"]
        assert origin["rule"] == "1 if margin >= 0 else 0"
        for row in range(len(column["rows"])):
            yield float(self.look(origin["margin"], row)[0] >= 0), 0.0


def solve(law: dict[str, Any], values: dict[str, float]) -> float:
    """Return what a law gives: its formula, or the root of it."""
    if "root_of" not in law:
        return compute(law["formula"], values)
    return float(brentq(lambda x: compute(law["formula"], {**values, law["root_of"]: x}), 1e-4, 10.0, xtol=1e-17))

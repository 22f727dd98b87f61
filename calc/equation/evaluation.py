"""Running laws on arrays: the value reading, alone or with slopes."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any, Protocol, TypeVar

import numpy as np
import numpy.typing as npt

from calc.equation.declaration import Equation
from calc.equation.law import Choice, Implicit, Labels, Law, Leaf, Regimes, takes
from calc.equation.slope import Slope, value_of
from calc.kinds import Kind
from calc.problems import EquationError

Array = npt.NDArray[np.float64]
Rows = npt.NDArray[np.int64]
Value = Array | Slope
T = TypeVar("T")

STEPS = 60
"""Newton steps allowed inside an implicit law; from its start four are usual."""


class Evaluator(Protocol[T]):
    """What a component's chain of laws is written against: arrays in the solver, columns in the ledger."""

    def apply(self, name: str, law: Law, /, *, by: Labels | None = None, **inputs: T) -> T:
        """Apply a law; ``name`` is that of the result, ``by`` the labels that a Choice reads."""
        ...

    def gather(self, value: T, at: Rows, rows: tuple[str, ...], /) -> T:
        """Return one value for each of ``rows``: the one that stands at ``at``."""
        ...

    def total(self, name: str, kind: Kind, value: T, into: Rows, rows: tuple[str, ...], /) -> T:
        """Return for each of ``rows`` the sum, of a kind, of the values whose ``into`` points there."""
        ...


def select(law: Law | None, inputs: Mapping[str, Any], count: int) -> Iterator[tuple[Rows, Leaf | None, str]]:
    """Yield the rows that each leaf of a law governs, with the label of the regime or choice.

    Parameters
    ----------
    law : Law or None
        Nested as it may be.
    inputs : mapping
        Arrays, slopes or labels of ``count`` rows or of one.
    count : int
        Rows of the result.
    """
    yield from _select(law, inputs, np.arange(count), "")


def _select(
    law: Law | None, inputs: Mapping[str, Any], rows: Rows, label: str
) -> Iterator[tuple[Rows, Leaf | None, str]]:
    if not len(rows):
        return
    if isinstance(law, Regimes):
        regime = np.zeros(len(rows), dtype=np.int64)
        x = _of(inputs[law.by], rows)
        for bound in law.bounds:
            at = _of(inputs[bound.at], rows) if isinstance(bound.at, str) else bound.at
            regime += (x > at) if bound.strict else (x >= at)
        for k, part in enumerate(law.laws):
            if len(at_k := rows[regime == k]):
                yield from _select(part, inputs, at_k, law.labels[k])
    elif isinstance(law, Choice):
        labels: Labels = inputs[law.by]
        codes = labels.codes[rows] if len(labels.codes) > 1 else np.full(len(rows), labels.codes[0])
        for code in np.unique(codes):
            word = labels.words[code]
            if word not in law.laws:
                raise EquationError(f"{law.name}: no law for '{word}'")
            yield from _select(law.laws[word], inputs, rows[codes == code], word)
    else:
        yield rows, law, label


def _of(value: Any, rows: Rows) -> Array:  # noqa: ANN401
    array = value_of(value)
    return array[rows] if array.size > 1 else np.broadcast_to(array.reshape(-1), rows.shape)


def part(value: Any, rows: Rows) -> Any:  # noqa: ANN401
    """Return some rows of a value; a value of one row serves every row as it is."""
    if isinstance(value, Slope):
        return Slope(part(value.value, rows), part(value.slope, rows))
    array = np.asarray(value, dtype=np.float64)
    return array[rows] if array.size > 1 else array.reshape(-1)


def evaluate(law: Law, inputs: Mapping[str, Any]) -> Value:
    """Evaluate a law on arrays.

    Parameters
    ----------
    law : Law
        The law.
    inputs : mapping
        By name: arrays of shape (n,) or (1,), in SI; `Slope` where a derivative is wanted; `Labels` for a
        Choice. Names that the law does not take are ignored.

    Returns
    -------
    ndarray or Slope
        Shape (n,); NaN where the law defines no value. A Slope if an input that mattered was one.
    """
    if isinstance(law, Equation | Implicit):
        return evaluate_leaf(law, inputs)
    count = max(len(v.codes) if isinstance(v, Labels) else value_of(v).size for v in inputs.values())
    value, slope = np.full(count, np.nan), np.zeros(count)
    sloped = False
    for rows, leaf, _ in select(law, inputs, count):
        if leaf is None:
            continue
        every = len(rows) == count
        got = evaluate_leaf(leaf, inputs if every else {n: part(inputs[n], rows) for n in takes(leaf)})
        if isinstance(got, Slope):
            sloped = True
            slope[rows] = got.slope
        value[rows] = value_of(got)
    return Slope(value, slope) if sloped else value


def evaluate_leaf(leaf: Leaf, inputs: Mapping[str, Any]) -> Value:
    """Evaluate an equation or an implicit law on arrays or slopes."""
    wanted = {name: inputs[name] for name in takes(leaf)}
    if isinstance(leaf, Equation):
        return leaf.body(**wanted)  # type: ignore[no-any-return]
    return _root(leaf, wanted)


def _root(law: Implicit, inputs: Mapping[str, Any]) -> Value:
    plain = {name: value_of(value) for name, value in inputs.items()}
    x = np.atleast_1d(np.asarray(evaluate_leaf(law.start, plain), dtype=np.float64))
    step = np.full_like(x, np.inf)
    for _ in range(STEPS):
        read = law.residual.body(**{law.unknown: Slope(x, np.ones_like(x))}, **plain)
        step = read.value / read.slope
        x = x - step
        if not np.any(np.abs(step) > 2 * np.finfo(float).eps * np.abs(x)):
            break
    else:
        if np.any(np.abs(step) > 1e-13 * np.abs(x)):
            raise EquationError(f"{law.name}: no root found in {STEPS} steps")
    if not any(isinstance(value, Slope) for value in inputs.values()):
        return x
    slope = law.residual.body(**{law.unknown: Slope(x, np.ones_like(x))}, **plain).slope
    read = law.residual.body(**{law.unknown: x}, **inputs)
    return Slope(x, -read.slope / slope)


class Arrays:
    """The evaluator that records nothing: laws on float64 arrays, or on slopes."""

    def apply(self, name: str, law: Law, /, *, by: Labels | None = None, **inputs: Value) -> Value:  # noqa: ARG002
        """Evaluate the law; the name serves only those who keep records."""
        return evaluate(law, inputs if by is None else {**inputs, "by": by})

    def gather(self, value: Value, at: Rows, rows: tuple[str, ...], /) -> Value:  # noqa: ARG002
        """Return ``value[at]``."""
        if isinstance(value, Slope):
            return Slope(value.value[at], value.slope[at])
        return value[at]

    def total(self, name: str, kind: Kind, value: Value, into: Rows, rows: tuple[str, ...], /) -> Value:  # noqa: ARG002
        """Sum by destination."""
        if isinstance(value, Slope):
            return Slope(_sums(value.value, into, len(rows)), _sums(value.slope, into, len(rows)))
        return _sums(value, into, len(rows))


def _sums(terms: Array, into: Rows, count: int) -> Array:
    return np.bincount(into, terms, count).astype(np.float64)


ARRAYS = Arrays()
"""The one instance needed."""

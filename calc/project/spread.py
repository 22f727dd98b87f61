"""Uncertain inputs: the range or the standard deviation that stands beside a value."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping

from calc.components import Quantity, Record, Stated
from calc.kinds import NUMBER, Kind
from calc.project.notes import Notes
from calc.project.wording import quoted
from calc.yamlfile import Node, Scalar

TWO = "two values: [low, high]"
KEYS = ("range", "deviation")


def read_spread(
    notes: Notes,
    at: Mapping[str, Node],
    path: str,
    stated: Stated,
    *,
    kind: Kind | None,
    read: Callable[[Scalar, str], Stated | None],
) -> Record | None:
    """Return ``low`` and ``high``, or ``deviation``, of a value that is said to be uncertain.

    Parameters
    ----------
    notes : Notes
        Takes the problems.
    at : mapping of str to Node
        What stands beside the value.
    path : str
        Of the value.
    stated : Stated
        The value.
    kind : Kind or None
        What it measures; None where a deviation can only be a share of it.
    read : callable
        Reads another value of its form.
    """
    given = [name for name in KEYS if name in at]
    if not given:
        return None
    node, where = at[given[-1]], f"{path}.{given[-1]}"
    if len(given) == len(KEYS):
        notes.note(node.mark, "excluded-pair", where, "'range' and 'deviation' both stand here", "one of the two")
    elif math.isnan(stated.number):
        found = f"{quoted(stated.written)} is no quantity that could vary"
        notes.note(node.mark, "not-a-quantity", where, found, "a quantity")
    elif given == ["range"]:
        return _range(notes, node, stated, path, read)
    else:
        return _deviation(notes, node, where, path, kind)
    return None


def _range(
    notes: Notes, node: Node, stated: Stated, path: str, read: Callable[[Scalar, str], Stated | None]
) -> Record | None:
    where = f"{path}.range"
    items = notes.items(node, where, TWO)
    scalars = [item for item in items if isinstance(item, Scalar)]
    if len(scalars) != len(("low", "high")) or len(items) != len(scalars):
        if items or not isinstance(node, Scalar):
            notes.wrong_shape(node, where, TWO)
        return None
    low, high = (read(scalar, where) for scalar in scalars)
    if low is None or high is None:
        return None
    if low.si >= high.si:
        found = f"{quoted(low.written)} is not below {quoted(high.written)}"
        notes.note(low.mark, "wrong-order", where, found, TWO)
    elif not low.si <= stated.si <= high.si:
        found = f"{quoted(stated.written)} lies outside its range, {low.written} to {high.written}"
        notes.note(stated.mark, "out-of-range", path, found, "a value within its range")
    return Record(path, low.mark, {"low": low, "high": high})


def _deviation(notes: Notes, node: Node, where: str, path: str, kind: Kind | None) -> Record | None:
    """Return a standard deviation: a share such as ``5 %``, or a difference in the unit of the value."""
    scalar = notes.scalar(node, where, "a deviation, such as '5 %'")
    if scalar is None:
        return None
    share = "%" in scalar.text or kind is None
    # A difference is of the dimension of its kind, without the bounds of a value.
    free = NUMBER if share or kind is None else Kind("deviation", kind.unit, kind.dimension, kind.example)
    got = notes.quantity(scalar, where, (Quantity(free, above=0.0),))
    if got is None:
        return None
    if got[0].offset:
        found = f"{quoted(scalar.text)} is a point on a scale"
        notes.note(scalar.mark, "wrong-dimension", where, found, "a difference, such as '2 K'")
        return None
    return Record(path, scalar.mark, {"deviation": got[0]})

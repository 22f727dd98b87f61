"""Tables of large works as files: every pipe and junction of a case in SI, cited on the page by their digests."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping

from calc.account import CaseAccount
from calc.ledger import Ledger

PIPES = (
    "flow",
    "velocity",
    "reynolds",
    "darcy_f",
    "friction_loss",
    "fitting_loss",
    "head_loss",
    "closing_error",
    "one_in",
    "equivalent_f",
    "fitting_share",
)
JUNCTIONS = ("head", "elevation", "pressure_head", "pressure", "velocity_head", "withdrawal", "imbalance")


def pipes_file(ledger: Ledger, case: CaseAccount) -> bytes:
    """Return every pipe of a case: ends, state, and its quantities in SI, empty where none is defined."""
    network = case.network
    nodes = network.nodes
    ends = [(nodes[a], nodes[b]) for a, b in zip(network.start.tolist(), network.end.tolist(), strict=True)]
    states = ["open" if running else "shut" for running in network.open.tolist()]
    fixed = {name: (*end, state) for name, end, state in zip(network.pipes.rows, ends, states, strict=True)}
    return _file(ledger, case.id, "pipes", PIPES, ("from", "to", "state"), fixed)


def junctions_file(ledger: Ledger, case: CaseAccount) -> bytes:
    """Return every junction of a case with its quantities in SI, empty where none is defined."""
    names = [case.network.nodes[k] for k in case.network.unknown.tolist()]
    return _file(ledger, case.id, "junctions", JUNCTIONS, (), dict.fromkeys(names, ()))


def _file(  # noqa: PLR0917 - the parts of one table
    ledger: Ledger,
    case: str,
    group: str,
    quantities: tuple[str, ...],
    heads: tuple[str, ...],
    fixed: Mapping[str, tuple[str, ...]],
) -> bytes:
    columns = {quantity: ledger.find(f"{group}.{quantity}", case) for quantity in quantities}
    held = {quantity: found for quantity, found in columns.items() if found}
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    units = [f"{q} [{found[0].kind.unit or '-'}]" for q, found in held.items()]
    writer.writerow(("id", *heads, *units))
    values: dict[str, dict[str, float]] = {quantity: {} for quantity in held}
    for quantity, found in held.items():
        for column in reversed(found):  # the nearest case stands last and is kept
            values[quantity] |= dict(zip(column.rows, column.values.tolist(), strict=True))
    for name, said in fixed.items():
        numbers = [values[quantity].get(name) for quantity in held]
        writer.writerow((name, *said, *("" if number is None else repr(number) for number in numbers)))
    return text.getvalue().encode()

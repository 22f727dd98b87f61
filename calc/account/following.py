"""What follows from the inputs of components before anything is solved, by laws that the pages work line by line."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import numpy as np

from calc.account.flows import filled
from calc.components import Record
from calc.components.fitting import ON_ANY_BORE, FormTerms, coefficients, computed_kind
from calc.equation import Reference, Symbol, equation
from calc.kinds import FLOW
from calc.ledger import Accountant, Column, Derived, Ledger
from calc.physics import dimensions
from calc.physics import symbols as s
from calc.project import BASE, Project, form_labels, in_order, stands_on_pipe

PROJECT = Reference("project input", "Project input")


@equation(
    gives=s.WITHDRAWAL,
    source=PROJECT,
    valid="an inflow is a negative withdrawal",
    inflow=Symbol("I", FLOW, "inflow"),
)
def withdrawal_of_inflow(*, inflow: Any) -> Any:  # noqa: ANN401
    """Withdrawal that stands for an inflow."""
    return -inflow


def enter_withdrawals(ledger: Ledger, project: Project, case: str) -> None:
    """Enter the withdrawals of junctions whose inflow this case states."""
    stated = [column for column in ledger.find("junctions.inflow", case) if column.case == case]
    rows = [row for row in project.junctions if any(row in column.index for column in stated)] if stated else []
    if rows:
        view = ledger.view("junctions.inflow", case, rows)
        Accountant(ledger, case).apply("junctions.withdrawal", withdrawal_of_inflow, inflow=view)


def enter_bores(ledger: Ledger, project: Project) -> None:
    """Enter the bores that follow from outside diameter, wall and lining."""
    rows = [name for name, pipe in project.pipes.items() if "outside_diameter" in pipe.stated]
    if rows:
        Accountant(ledger, BASE).apply(
            "pipes.bore",
            dimensions.bore_within,
            outside_diameter=ledger.view("pipes.outside_diameter", BASE, rows),
            wall=ledger.view("pipes.wall", BASE, rows),
            lining=ledger.view("pipes.lining", BASE, rows),
        )


def enter_coefficients(ledger: Ledger, project: Project, case: str) -> None:
    """Enter the coefficients of fittings of computed kinds: all of them, or in a case those that a new bore changes."""
    bores = [column for column in ledger.find("pipes.bore", case) if column.case == case]
    changed = {row for column in bores for row in column.rows}
    chosen = [
        (pipe.id, part)
        for pipe in (project.pipes[name] for name in project.pipes if name in changed)
        for part in in_order(pipe)
        if (kind := computed_kind(part.stated))
        if case == BASE or (stands_on_pipe(pipe, part) and kind not in ON_ANY_BORE)
    ]
    if chosen:
        _apply(Accountant(ledger, case), [pipe for pipe, _ in chosen], [part for _, part in chosen])


def _apply(books: Accountant, pipes: list[str], parts: list[Record]) -> None:
    rows = [part.id for part in parts]
    own = {field: books.ledger.view(f"fittings.{field}", books.case, rows) for field in FORM}
    of_pipe = books.ledger.view("pipes.bore", books.case, pipes).take(np.arange(len(rows)), rows)
    bore = filled(books.ledger.view("fittings.bore", books.case, rows), of_pipe)
    coefficients(books, FormTerms(form_labels(parts), bore, **own))


FORM = ("onward_bore", "angle", "radius_ratio", "Kv", "Cv")

FOLLOWING = ("junctions.withdrawal", "pipes.bore", "fittings.smaller_bore", "fittings.bore_ratio", "fittings.K")
"""What may follow from the inputs of components, in the order in which it is worked."""


def following(columns: Iterable[Column], case: str) -> list[Column]:
    """Return the columns of a case that follow from the inputs of components alone, factors of the case among them."""
    return [
        column
        for column in columns
        if column.case == case and not column.of and isinstance(column.origin, Derived)
        if column.origin.leaf.name == "scaled_value" or column.name.removesuffix("_reverse") in FOLLOWING
    ]

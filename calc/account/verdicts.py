"""Criteria judged on ledger columns: value, limit, margin and verdict of each subject in each case."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calc.account.books import enter_stated
from calc.account.flows import CaseColumns, restricted
from calc.criteria import ALL, Criterion, Outcome
from calc.equation import Labels, Law
from calc.kinds import NUMBER
from calc.ledger import Accountant, Judged, Ledger, Spot, View
from calc.ledger.column import ABSENT
from calc.problems import Unresolved
from calc.project import BASE, Project, cases_of, subjects_of


@dataclass(frozen=True)
class Verdict:
    """A criterion held against one subject in one case; the four numbers are spots in the ledger."""

    criterion: Criterion
    subject: str
    case: str
    value: Spot
    limit: Spot
    margin: Spot
    met: bool

    @property
    def path(self) -> str:
        """The subject as a path, such as ``pipes.upper-main``."""
        return f"{self.criterion.group}.{self.subject}"


@dataclass(frozen=True)
class CriterionVerdict:
    """What is said of a criterion as a whole: the verdict with the least margin governs."""

    id: str
    criterion: Criterion
    verdicts: tuple[Verdict, ...]
    governing: Verdict | None
    least_margin: Spot | None

    @property
    def met(self) -> bool:
        """Whether every verdict is met."""
        return all(verdict.met for verdict in self.verdicts)


def enter_verdicts(ledger: Ledger, project: Project, cases: Mapping[str, CaseColumns]) -> tuple[CriterionVerdict, ...]:
    """Judge every criterion of a project in the cases that have a solution, and enter what was found."""
    judged = []
    for criterion in ALL:
        record = project.criteria.get(criterion.id)
        if record is None:
            continue
        kind = next(kind for kind in criterion.kinds if kind.name == record.text("kind"))
        enter_stated(ledger, "criteria.limit", kind, [criterion.id], [record.stated["limit"]], case=BASE)
        subjects = subjects_of(project, record)
        verdicts = [
            verdict
            for case in cases_of(project, record)
            if case in cases
            for verdict in _judge(ledger, criterion, subjects, cases[case], case)
        ]
        judged.append(_governed(ledger, criterion, verdicts))
    return tuple(judged)


def _judge(
    ledger: Ledger, criterion: Criterion, subjects: Sequence[str], columns: CaseColumns, case: str
) -> list[Verdict]:
    """Judge the subjects that have a value in a case: a shut pipe has none, nor a node without elevation."""
    books = _Once(ledger, case)
    results = columns.results
    outcome = Outcome(
        results.velocity, results.friction_loss, columns.terms.length, columns.pressure_head, columns.pressure
    )
    limit = _limit(criterion, ledger, case)
    kind = limit.sources[0].kind
    every: View = criterion.values[kind](books, outcome)
    valued = {row for row, which in zip(every.rows, every.which.tolist(), strict=True) if which != ABSENT}
    rows = [row for row in subjects if row in valued]
    if not rows:
        return []
    value = restricted(every, rows)
    name = f"{criterion.group}.{criterion.id}-margin"
    margin = books.apply(name, criterion.margin(kind), value=value, limit=limit)
    origin = Judged(margin)
    met = ledger.enter(f"{criterion.group}.{criterion.id}-met", NUMBER, rows, margin.values >= 0, origin, case=case)
    return [
        Verdict(criterion, row, case, *_spots((value, limit, margin), k), bool(met.values[k]))
        for k, row in enumerate(rows)
    ]


def _spots(views: tuple[View, View, View], row: int) -> tuple[Spot, Spot, Spot]:
    value, limit, margin = (view.spot(row) for view in views)
    if value is None or limit is None or margin is None:
        raise Unresolved(f"row {views[0].rows[row]} was judged without a value, a limit or a margin")
    return Spot(*value), Spot(*limit), Spot(*margin)


class _Once(Accountant):
    """An accountant that finds a result standing instead of entering it again.

    Two criteria may judge one quantity, which is entered once.
    """

    def apply(self, name: str, law: Law, /, *, by: Labels | None = None, **inputs: View) -> View:
        standing = [column for column in self.ledger.find(name, self.case) if column.case == self.case]
        owner = next(view for view in inputs.values() if not view.shared)
        return View.assembled(standing, owner.rows) if standing else super().apply(name, law, by=by, **inputs)


def _limit(criterion: Criterion, ledger: Ledger, case: str) -> View:
    """Return the limit to judge by, one for all rows."""
    column = next(column for column in ledger.find("criteria.limit", case) if criterion.id in column.index)
    return ledger.serving(column, column.index[criterion.id])


def _governed(ledger: Ledger, criterion: Criterion, verdicts: list[Verdict]) -> CriterionVerdict:
    if not verdicts:
        return CriterionVerdict(criterion.id, criterion, (), None, None)
    columns = list({id(v.margin.column): v.margin.column for v in verdicts}.values())
    number = {id(column): k for k, column in enumerate(columns)}
    terms = View(
        tuple(columns),
        np.array([number[id(v.margin.column)] for v in verdicts]),
        np.array([v.margin.row for v in verdicts]),
        tuple(f"{v.subject}@{v.case}" for v in verdicts),
    )
    least = Accountant(ledger, "").combine(
        "criteria.least_margin",
        "least",
        terms,
        np.zeros(len(verdicts), dtype=np.int64),
        [criterion.id],
        words="least margin of all subjects and cases: it governs",
        kind=columns[0].kind,
    )
    governing = min(verdicts, key=lambda v: v.margin.value)
    return CriterionVerdict(criterion.id, criterion, tuple(verdicts), governing, Spot(least, 0))

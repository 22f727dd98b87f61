"""Criteria judged on ledger columns: value, limit, margin and verdict of each subject in each case."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fnmatch import fnmatchcase

import numpy as np

from calc.account.books import enter_stated
from calc.account.flows import CaseColumns, restricted
from calc.criteria import ALL, Criterion, Outcome
from calc.kinds import NUMBER, PRESSURE
from calc.ledger import Accountant, Judged, Ledger, Spot, View
from calc.ledger.column import ABSENT
from calc.physics import energy
from calc.project import BASE, Project


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


def enter_verdicts(
    ledger: Ledger, project: Project, cases: Mapping[str, CaseColumns]
) -> tuple[CriterionVerdict, ...]:
    """Judge every criterion of a project in the cases that have a solution, and enter what was found."""
    judged = []
    for criterion in ALL:
        record = project.criteria.get(criterion.id)
        if record is None:
            continue
        stated = record.stated["limit"]
        by_pressure = record.text("kind") == PRESSURE.name
        name = "criteria.limit_pressure" if by_pressure else "criteria.limit"
        kind = PRESSURE if by_pressure else criterion.kind
        enter_stated(ledger, name, kind, [criterion.id], [stated], BASE)
        verdicts: list[Verdict] = []
        for case, columns in cases.items():
            if _listed(case, record.text("cases", "all")):
                verdicts += _judge(
                    ledger, criterion, columns, case, record.text("applies_to", "*"), by_pressure
                )
        judged.append(_governed(ledger, criterion, verdicts))
    return tuple(judged)


def _listed(case: str, cases: str) -> bool:
    return cases == "all" or case in [name.strip() for name in cases.split(",")]


def _judge(  # noqa: PLR0917 - the parts of one judgement
    ledger: Ledger,
    criterion: Criterion,
    columns: CaseColumns,
    case: str,
    pattern: str,
    by_pressure: bool,  # noqa: FBT001
) -> list[Verdict]:
    books = Accountant(ledger, case)
    outcome = Outcome(
        columns.results.velocity, columns.results.friction_loss, columns.terms.length, columns.pressure_head
    )
    every = _value(ledger, criterion, outcome, books)
    patterns = [p.strip() for p in pattern.split(",")]
    rows = [
        row
        for row, which in zip(every.rows, every.which.tolist(), strict=True)
        if which != ABSENT and any(fnmatchcase(f"{criterion.group}.{row}", p) or p == "*" for p in patterns)
    ]
    if not rows:
        return []
    value = restricted(every, rows)
    limit = _limit(ledger, criterion, books, by_pressure=by_pressure)
    name = f"{criterion.group}.{criterion.id}-margin"
    margin = books.apply(name, criterion.margin, value=value, limit=limit)
    origin = Judged(margin)
    met = ledger.enter(
        f"{criterion.group}.{criterion.id}-met", NUMBER, rows, margin.values >= 0, origin, case=case
    )
    verdicts = []
    for k, row in enumerate(rows):
        spots = [view.spot(k) for view in (value, limit, margin)]
        found = [Spot(*spot) for spot in spots if spot is not None]
        verdicts.append(Verdict(criterion, row, case, *found, met=bool(met.values[k])))
    return verdicts


def _value(ledger: Ledger, criterion: Criterion, outcome: Outcome[View], books: Accountant) -> View:
    """Return the value judged; two criteria may judge one quantity, which is entered once."""
    return criterion.value(_Once(ledger, books), outcome)  # type: ignore[no-any-return]


class _Once(Accountant):
    """An accountant that finds a result standing instead of entering it again."""

    def __init__(self, ledger: Ledger, books: Accountant) -> None:
        super().__init__(ledger, books.case)

    def apply(self, name, law, /, *, by=None, **inputs):  # type: ignore[no-untyped-def]  # noqa: ANN001, ANN003, ANN202
        standing = [column for column in self.ledger.find(name, self.case) if column.case == self.case]
        if standing:
            return View.whole(standing[0])
        return super().apply(name, law, by=by, **inputs)


def _limit(ledger: Ledger, criterion: Criterion, books: Accountant, *, by_pressure: bool) -> View:
    if not by_pressure:
        columns = [c for c in ledger.find("criteria.limit", books.case) if criterion.id in c.index]
        zero = np.zeros(1, dtype=np.int64)
        return View((columns[0],), zero, zero, (criterion.id,), shared=True)
    stated = [c for c in ledger.find("criteria.limit_pressure", books.case) if criterion.id in c.index]
    view = View.assembled(stated, [criterion.id])
    head = _Once(ledger, books).apply(
        "criteria.limit-" + criterion.id,
        energy.head_of_pressure,
        pressure=view,
        density=ledger.shared("fluid.density", books.case),
        gravity=ledger.shared("site.gravity", books.case),
    )
    return View(head.sources, head.which, head.at, head.rows, shared=True)


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
        kind=criterion.kind,
    )
    governing = min(verdicts, key=lambda v: v.margin.value)
    return CriterionVerdict(criterion.id, criterion, tuple(verdicts), governing, Spot(least, 0))

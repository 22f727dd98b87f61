"""What a finding is, what a check is, and what checks are given to look at."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import NamedTuple

from calc.account.case import CaseAccount
from calc.account.flows import CaseColumns
from calc.account.verdicts import CriterionVerdict
from calc.components import Record
from calc.ledger import Ledger
from calc.marks import Mark
from calc.project import Project


@dataclass(frozen=True, slots=True, order=True)
class Finding:
    """One remark: the comment's id, the subject as a path, ``file:line``, and the text.

    ``mark`` is its place to the letter, where the program has found it.
    """

    id: str
    subject: str
    place: str
    text: str
    mark: Mark | None = field(default=None, compare=False)


class Remark(NamedTuple):
    """What a check yields: a finding without its id.

    The text is the same for every subject of which the same is to be said, so that these can be told together.
    It holds no number that was computed: such a number stands in the ledger, and the page shows it from there.
    """

    subject: str
    mark: Mark
    text: str


@dataclass(frozen=True)
class Solved:
    """A project with its solutions: what the checks of results are given."""

    project: Project
    ledger: Ledger
    cases: Mapping[str, CaseAccount]
    verdicts: tuple[CriterionVerdict, ...]

    @property
    def running(self) -> Iterator[tuple[str, CaseAccount, CaseColumns]]:
        """The cases that have a solution, with their columns."""
        for name, case in self.cases.items():
            if case.columns is not None:
                yield name, case, case.columns

    def mark(self, path: str) -> Mark:
        """Return where the component of a path such as ``pipes.upper-main`` is stated."""
        group, _, row = path.partition(".")
        return self.project.group(group)[row].mark


def _unsolved(solved: Solved) -> str:
    return "" if any(True for _ in solved.running) else "no case has a solution"


@dataclass(frozen=True)
class Check:
    """A comment that reviewers make, as a check.

    Attributes
    ----------
    id, title : str
        Its number and name.
    looks_for : str
        What is looked for, with its limits in words, as printed.
    inputs : callable or None
        What it finds in the inputs alone.
    results : callable or None
        What it finds in the solutions.
    refuses : str
        What of it is a problem, so that inputs which have it are not read; as printed.
    unmade : callable
        Why its search in the results was not made, empty when it was.
    """

    id: str
    title: str
    looks_for: str
    inputs: Callable[[Project], Iterator[Remark]] | None = None
    results: Callable[[Solved], Iterator[Remark]] | None = None
    refuses: str = ""
    unmade: Callable[[Solved], str] = _unsolved


@dataclass(frozen=True)
class CheckOutcome:
    """What came of a check: how many remarks, or why it was not made."""

    check: Check
    found: int
    unmade: str


def assumed(project: Project) -> list[str]:
    """Return the paths that assumptions affect, ``*`` standing for any part."""
    return [path for one in project.assumptions.values() for path in one.text("affects").split(", ")]


def parts_of(record: Record) -> tuple[Record, ...]:
    """Return the ends and fittings of a pipe; none of anything else."""
    return (*record.parts.get("ends", ()), *record.parts.get("fittings", ()))


def named(part: Record) -> str:
    """Return a fitting or an end in words: "fitting 2", "the end at 'from'"."""
    place = part.id.rpartition("/")[2]
    return f"fitting {place}" if place.isdigit() else f"the end at '{place}'"


def mark_in_folder(project: Project, path: str) -> Mark:
    """Return where in the project's own files a value by default would stand: its group, or the first reservoir."""
    group, _, rest = path.partition(".")
    home = {"site": project.site, "fluid": project.fluid, "constants": project.constants.get(rest.partition(".")[0])}
    record = home.get(group)
    if record is None or record.mark.file not in project.texts:
        record = next(iter(project.reservoirs.values()))
    return record.mark


def among(cases: list[str], every: int) -> str:
    """Return cases in words: "in every case", or "in case low", "in cases low and peak"."""
    if len(cases) == every:
        return "in every case"
    if len(cases) == 1:
        return f"in case {cases[0]}"
    return f"in cases {', '.join(cases[:-1])} and {cases[-1]}"


def by_case(solved: Solved, group: str, found: Mapping[str, list[str]], text: str) -> Iterator[Remark]:
    """Yield a remark for each row with the cases in which it holds, put into the text for ``{cases}``."""
    every = sum(1 for _ in solved.running)
    for row, cases in found.items():
        path = f"{group}.{row}"
        yield Remark(path, solved.mark(path), text.format(cases=among(cases, every)))

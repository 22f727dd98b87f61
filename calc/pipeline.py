"""The stages, in order.

::

    text → nodes with marks → immutable project (SI) → cases → solutions with history
         → ledger with verdicts → document → files

Each stage takes what the one before gave, and gives something complete.
"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from calc.account import Account, keep_account, liquid_terms, open_books
from calc.components import Network
from calc.components.liquid import LiquidTerms, liquid
from calc.equation import ARRAYS, Value, value_of
from calc.ledger import Ledger
from calc.problems import IntegrityError, Problem, ProblemsFound
from calc.project import Project, network, read_project
from calc.report.composition import compose
from calc.report.document import Document
from calc.report.section import DISPLAY
from calc.solve import MOST_LOOPS, MOST_PIPES, Solution, solve
from calc.solve.section import SOLVER, settings_of
from calc.verification import enter_checks, in_use
from calc.verification import run as verify

SECTIONS = (SOLVER, DISPLAY)
"""Sections of a project that are declared above the reader and passed down to it."""

Progress = Callable[[str], None]


def _quietly(stage: str) -> None:
    """Say nothing of a stage."""


def read(folder: Path) -> Project:
    """Return the project of a folder.

    Raises
    ------
    ProblemsFound
        With every problem in the inputs.
    """
    project = read_project(folder, SECTIONS)
    _check_method(project)
    return project


def _check_method(project: Project) -> None:
    """Refuse a method that cannot serve this project, at the place where it is asked for."""
    method = project.sections["solver"].stated.get("method")
    unknown, pipes = len(project.junctions), len(project.pipes)
    found = ""
    if method is None:
        return
    if method.text == "bracketing" and unknown != 1:
        found = f"'bracketing' seeks the head of one junction, and this project has {unknown}"
    elif method.text == "loop-correction" and (pipes > MOST_PIPES or pipes - unknown > MOST_LOOPS):
        found = (
            f"'loop-correction' is for works of at most {MOST_PIPES} pipes and {MOST_LOOPS} loops, and this project "
            f"has {pipes} and {pipes - unknown}"
        )
    if found:
        problem = Problem(method.mark, "unsuited-method", "solver.method", found, "'newton'", "")
        raise ProblemsFound([problem], project.texts)


def solve_cases(project: Project, ledger: Ledger, say: Progress = _quietly) -> dict[str, tuple[Network, Solution]]:
    """Solve every case of a project; a case without a solution says so and keeps its history."""
    settings = settings_of(project)
    solved = {}
    for case in project.cases:
        say(f"solving {case}")
        held = network(project, case, _viscosity(ledger, case))
        solved[case] = (held, solve(held, settings))
    return solved


def _viscosity(ledger: Ledger, case: str) -> float:
    """Return the viscosity of a case by the same chain that the ledger keeps."""
    stated: LiquidTerms[Value] = liquid_terms(ledger, case).each(lambda view: view.values)
    return float(value_of(liquid(ARRAYS, stated).viscosity)[0])


def account(folder: Path, say: Progress = _quietly) -> Account:
    """Return the account of a project folder: read, solved, entered, judged."""
    say("reading")
    project = read(folder)
    ledger = open_books(project)
    solved = solve_cases(project, ledger, say)
    say("entering the ledger")
    return keep_account(project, ledger, solved)


def document(held: Account, purpose: str) -> Document:
    """Return what the package of an account says, for a purpose of issue.

    Raises
    ------
    IntegrityError
        If this installation does not compute what is known to be right; then nothing may be issued.
    """
    checks = verify(in_use(held))
    if failing := [check.id for check in checks if not check.passed]:
        raise IntegrityError(f"this installation fails its verification: {', '.join(failing)}")
    if not held.ledger.find("verification.expected"):  # an account may be composed for several purposes
        enter_checks(held.ledger, checks)
    return compose(held, purpose, checks)

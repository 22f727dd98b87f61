"""Project: a folder of inputs becomes one immutable object, or a list of problems.

For
    everything that comes after: whoever holds a `Project` holds sound inputs and asks no more.
Takes
    a folder, and the schemas of the sections that layers above declare (`SectionSchema`).
Gives
    a `Project`: every value in SI with its text, mark and basis, defaults filled in from shipped files, cases
    with their lines; `changes_in`, the changes in force in a case; `Effective` and `network`, a case
    as arrays.
Must not know
    solving, ledgers, reports; the laws of water, for which the viscosity of a case is passed in.
Why this way
    A `Reader` walks the nodes against declared schemas and notes problems instead of raising, so that all are
    shown at once; a value that could not be read is absent, and checks that need it stay silent. Cases are
    kept as written, as lines with the rows they reach: arrays take them a line at a time, the ledger
    takes them a value at a time, and neither repeats the inputs for each case.
"""

from __future__ import annotations

from calc.project.arrays import Effective, form_labels, in_order, network, stands_on_pipe
from calc.project.cases import chain, changes_in, follows_friction
from calc.project.codes import CODES
from calc.project.folder import digest, read_project
from calc.project.judging import cases_of, subjects_of
from calc.project.model import BASE, Case, Change, Line, Project
from calc.project.section import Later, SectionSchema

__all__ = [
    "BASE",
    "CODES",
    "Case",
    "Change",
    "Effective",
    "Later",
    "Line",
    "Project",
    "SectionSchema",
    "cases_of",
    "chain",
    "changes_in",
    "digest",
    "follows_friction",
    "form_labels",
    "in_order",
    "network",
    "read_project",
    "stands_on_pipe",
    "subjects_of",
]

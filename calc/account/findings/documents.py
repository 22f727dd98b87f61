"""Sources and defaults: what the values rest on."""

from __future__ import annotations

from collections.abc import Iterator
from fnmatch import fnmatchcase

import numpy as np

from calc.account.findings.finding import Check, Remark, Solved, assumed, mark_in_folder, named, parts_of
from calc.components import Record
from calc.components.fitting import FORM_FIELDS
from calc.components.pipe import LAW_INPUT
from calc.marks import Mark
from calc.project import Project

WITHOUT_SOURCE = {
    "from",
    "to",
    "law",
    "open",
    "parallel",
    "count",
    "applies_to",
    "cases",
    "kind",
    "viscosity_kind",
    "title",
    "standard",
    "class",
}
"""Fields that describe the arrangement and need no source of their own."""


def unsourced(project: Project) -> Iterator[Remark]:
    """Yield every component with values of the user's that name no source."""
    groups = {
        "reservoirs": project.reservoirs,
        "junctions": project.junctions,
        "pipes": project.pipes,
        "criteria": project.criteria,
        "fluid": {"": project.fluid},
        "site": {"": project.site},
        "constants": project.constants,
    }
    for group, records in groups.items():
        for record in records.values():
            bare = sorted(_unsourced(record), key=lambda pair: pair[1])
            if bare:
                names = ", ".join(name for name, _ in bare)
                subject = f"{group}.{record.id}" if record.id and group not in ("fluid", "site") else group
                verb = "has" if len(bare) == 1 else "have"
                yield Remark(subject, bare[0][1], f"{names} {verb} no source: {_WAY_OUT}")
    for case in project.cases.values():
        bare_lines = [line for line in case.lines if not line.stated.basis.source and line.field not in WITHOUT_SOURCE]
        if bare_lines:
            names = ", ".join(dict.fromkeys(line.path for line in bare_lines))
            mark = bare_lines[0].mark
            verb = "has" if "," not in names else "have"
            yield Remark(f"cases.{case.id}", mark, f"{names} {verb} no source: {_WAY_OUT}")


_WAY_OUT = "nobody can follow it back. Name a reference under 'source'"
_COEFFICIENTS = ("K", "K_reverse", "Kv", "Cv", *FORM_FIELDS)


def _unsourced(record: Record) -> Iterator[tuple[str, Mark]]:
    for name, stated in record.stated.items():
        if stated.shipped or stated.follows or name in WITHOUT_SOURCE:
            continue
        if not stated.basis.source:
            yield name, stated.mark
    for part in parts_of(record):
        for name, stated in part.stated.items():
            if name == "K_reverse" and stated is part.stated.get("K"):
                continue  # stated once, it holds both ways
            if name in _COEFFICIENTS and not stated.shipped and not stated.basis.source:
                yield f"{name} of {named(part)}", stated.mark


BY_DEFAULT = (
    "taken by default: the inputs neither state nor confirm it. State it with its source, or name it under 'affects' "
    "of an assumption"
)
_WEIGHTY = (
    "friction",
    "site.gravity",
    "constants.hazen_williams.*",
    "constants.manning.*",
    "ends.*.exit",
    "pipes.*.lining",
)
"""Defaults that move the answer. The temperature is another check's; the rest say how an input file is read."""
_NAMED_AS = {"ends.*.exit": "pipes.*.ends"}
"""The path by which an assumption names a default that has no path of its own among the inputs."""


def silent_defaults(project: Project) -> Iterator[Remark]:
    """Yield the defaults in use that move the answer and that no assumption confirms."""
    for subject, mark in _defaults(project, _WEIGHTY).items():
        text = BY_DEFAULT.replace("name it", f"name {_NAMED_AS[subject]}") if subject in _NAMED_AS else BY_DEFAULT
        yield Remark(subject, mark, text)


def silent_transition(solved: Solved) -> Iterator[Remark]:
    """Yield the limits of the transition by default, where some pipe's law has one and runs below its end."""
    marks = _defaults(solved.project, ("constants.transition.*",))
    if marks and any(_in_transition(solved)):
        for subject, mark in marks.items():
            yield Remark(subject, mark, BY_DEFAULT)


def _in_transition(solved: Solved) -> Iterator[bool]:
    for _, case, columns in solved.running:
        pipes, law = case.network.pipes, columns.terms.law
        rough = np.array([LAW_INPUT[word] == "roughness" for word in law.words])
        low = columns.results.reynolds.values < pipes.turbulent_above[0]
        yield bool(np.any(low & (columns.results.flow_each.values != 0.0) & rough[law.codes]))


def _defaults(project: Project, wanted: tuple[str, ...]) -> dict[str, Mark]:
    """Return the marks of unconfirmed defaults by subject; the constants of one law are one subject."""
    confirmed = assumed(project)
    found: dict[str, Mark] = {}
    for path, _ in project.defaults:
        if not any(fnmatchcase(path, pattern) for pattern in wanted):
            continue
        subject = path.rpartition(".")[0] if path.startswith("constants.") else path
        names = (path, subject, _NAMED_AS.get(path, path))
        if not any(fnmatchcase(name, one) for name in names for one in confirmed):
            found.setdefault(subject, mark_in_folder(project, path))
    return found


CHECKS = (
    Check("D03", "Inputs without a source", "values of the project that name no reference", inputs=unsourced),
    Check(
        "D05",
        "Defaults used silently",
        "defaults that move the answer (gravity, friction law, constants of an empirical law, exit loss, a lining, and "
        "the limits of the transition where a pipe comes near them) and that no assumption names",
        inputs=silent_defaults,
        results=silent_transition,
    ),
)

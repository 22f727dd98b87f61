"""Findings: doubtful or missing things that a reviewer would remark on, found from the data.

Each has the number of the comment it answers to; the program may say that no defect was found by a check,
never that a calculation is checked, approved or safe.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from fnmatch import fnmatchcase

from calc.account.opinion import Agreement
from calc.components import Record
from calc.project import Project


@dataclass(frozen=True, slots=True, order=True)
class Finding:
    """One remark: the comment's id and title, the subject as a path, ``file:line``, and the text."""

    id: str
    subject: str
    place: str
    text: str


TITLES = {
    "D03": "Inputs without a source",
    "D35": "Fitting losses omitted",
    "D36": "Entrance and exit losses",
    "D46": "Independent solution",
}
"""The comments that are looked for, in the order in which packages list them."""


def unsourced(project: Project) -> Iterator[Finding]:
    """D03: every value of the user's that names no source, gathered by component."""
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
                yield Finding("D03", subject, bare[0][1], f"{names} {verb} no source")
    for case in project.cases.values():
        bare_lines = [line for line in case.lines if not line.stated.basis.source and line.field not in WITHOUT_SOURCE]
        if bare_lines:
            names = ", ".join(dict.fromkeys(line.path for line in bare_lines))
            place = bare_lines[0].mark.place
            yield Finding("D03", f"cases.{case.id}", place, f"values of this case have no source: {names}")


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
}
"""Fields that describe the arrangement and need no source of their own."""


def _unsourced(record: Record) -> Iterator[tuple[str, str]]:
    for name, stated in record.stated.items():
        if not stated.shipped and name not in WITHOUT_SOURCE and not stated.basis.source:
            yield name, stated.mark.place
    for part in (*record.parts.get("ends", ()), *record.parts.get("fittings", ())):
        for name, stated in part.stated.items():
            if name == "K_reverse" and stated is part.stated.get("K"):
                continue  # stated once, it holds both ways
            if name in ("K", "K_reverse") and not stated.shipped and not stated.basis.source:
                place = part.id.rpartition("/")[2]
                where = f"of fitting {place}" if place.isdigit() else f"at '{place}'"
                yield f"{name} {where}", stated.mark.place


def without_fittings(project: Project) -> Iterator[Finding]:
    """D35: pipes for which neither a fitting nor an assumption about fittings is stated."""
    reasoned = [path for one in project.assumptions.values() for path in one.text("affects").split(", ")]
    for pipe in project.pipes.values():
        if not pipe.parts.get("fittings") and not any(
            fnmatchcase(f"pipes.{pipe.id}.fittings", path) for path in reasoned
        ):
            yield Finding(
                "D35",
                f"pipes.{pipe.id}",
                pipe.mark.place,
                "no fittings are stated: bends, valves and meters lose nothing here. State them, or say in an "
                f"assumption that affects pipes.{pipe.id}.fittings why they may be left out",
            )


def bare_ends(project: Project) -> Iterator[Finding]:
    """D36: reservoir ends of pipes at which nothing is lost, on entering or leaving."""
    for pipe in project.pipes.values():
        covered = {part.id.rpartition("/")[2] for part in pipe.parts.get("ends", ())}
        for end in ("from", "to"):
            if pipe.text(end) in project.reservoirs and end not in covered:
                yield Finding(
                    "D36",
                    f"pipes.{pipe.id}",
                    pipe.mark.place,
                    f"no entrance or exit loss at the end in {pipe.text(end)}: water enters and leaves there "
                    f"without loss. State 'ends: {{{end}: square}}' or its coefficients",
                )


def unconfirmed(project: Project, agreements: Mapping[str, Agreement | None]) -> Iterator[Finding]:
    """D46: cases whose solution a second formulation did not confirm."""
    for case, agreement in agreements.items():
        if agreement is None:
            text = "the case has no solution, so there is none to confirm"
        elif not agreement.agrees:
            text = f"the second opinion does not confirm it: {agreement.reason}"
        elif agreement.evaluated:
            text = "the second opinion evaluated the laws at the answer and did not solve the large network again"
        else:
            continue
        yield Finding("D46", f"cases.{case}", project.cases[case].mark.place, text)


INPUT_CHECKS: tuple[Callable[[Project], Iterator[Finding]], ...] = (unsourced, without_fittings, bare_ends)
"""Checks that need the inputs alone; `inspect` runs these."""


def input_findings(project: Project) -> tuple[Finding, ...]:
    """Return what the inputs alone give rise to, in the order of the comments."""
    return tuple(sorted((f for check in INPUT_CHECKS for f in check(project)), key=lambda f: f.id))


def all_findings(project: Project, agreements: Mapping[str, Agreement | None]) -> tuple[Finding, ...]:
    """Return every finding of a project and its solutions, in the order of the comments."""
    return (*input_findings(project), *unconfirmed(project, agreements))

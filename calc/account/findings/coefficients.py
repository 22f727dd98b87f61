"""Roughness, friction factors and viscosity: of the right kind, of the right size, and tried at other values."""

from __future__ import annotations

from collections.abc import Iterator
from fnmatch import fnmatchcase

import numpy as np

from calc.account.findings.finding import Check, Remark, Solved, assumed, by_case, mark_in_folder
from calc.components.pipe import LAW_INPUT
from calc.project import Effective, Project

RANGES = {"hazen_williams_c": (60.0, 160.0), "manning_n": (0.008, 0.03)}
"""Outside of these a coefficient is of the wrong kind or size; common practice for pipes."""
ROUGHEST = 5e-3
"""Roughness, m, above which it is no longer that of a pipe's wall; common practice."""
FANNING = (0.002, 0.0075)
"""Where a Fanning factor lies in turbulent flow; the Darcy factor is four times as large. Common practice."""
_NAMES = {"hazen_williams_c": "Hazen–Williams C", "manning_n": "Manning n", "friction_factor": "Darcy f"}


def odd_coefficients(project: Project) -> Iterator[Remark]:
    """Yield coefficients outside their usual size, and those that no law of the pipe uses in any case."""
    used = _laws_used(project)
    for k, pipe in enumerate(project.pipes.values()):
        path = f"pipes.{pipe.id}"
        for field, (low, high) in RANGES.items():
            stated = pipe.stated.get(field)
            if stated is not None and not low <= stated.si <= high:
                text = f"{_NAMES[field]} is outside the usual range of pipes: see that it is no other coefficient"
                yield Remark(path, stated.mark, text)
        roughness = pipe.stated.get("roughness")
        if roughness is not None and roughness.si > ROUGHEST:
            text = (
                "the roughness is larger than five millimetres: it is the height of the wall's grain, neither a "
                "coefficient nor a loss of bore. Check its unit and its source"
            )
            yield Remark(path, roughness.mark, text)
        for field in dict.fromkeys(LAW_INPUT.values()):
            stated = pipe.stated.get(field)
            if stated is not None and not used[field][k]:
                text = f"{_NAMES.get(field, field)} is stated, and the pipe's friction law uses it in no case"
                yield Remark(path, stated.mark, f"{text}. Leave it out, or mend the law")


def _laws_used(project: Project) -> dict[str, list[bool]]:
    """Return for each field of a law which pipes use it in some case."""
    used = {field: np.zeros(len(project.pipes), dtype=bool) for field in LAW_INPUT.values()}
    for case in project.cases:
        law = Effective(project, case).law()
        for field in used:
            words = [code for code, word in enumerate(law.words) if LAW_INPUT[word] == field]
            used[field] |= np.isin(law.codes, words)
    return {field: held.tolist() for field, held in used.items()}


def no_sensitivity(project: Project) -> Iterator[Remark]:
    """Yield that nothing is said of how the answer moves with the roughness."""
    fields = set(LAW_INPUT.values())
    if any(path.rpartition(".")[2] in fields for path in project.spreads):
        return
    if any(line.field in {*fields, "law"} for case in project.cases.values() for line in case.lines):
        return
    first = next(iter(project.pipes.values()))
    stated = next((first.stated[field] for field in LAW_INPUT.values() if field in first.stated), None)
    text = (
        "no case changes a roughness or coefficient, and none has a range or a deviation: nothing shows how far the "
        "answer rests on it. State a low and a high value, as cases or as a range"
    )
    yield Remark("pipes", stated.mark if stated else first.mark, text)


def fanning_factors(project: Project) -> Iterator[Remark]:
    """Yield fixed friction factors of the size of a Fanning factor."""
    text = (
        "the fixed friction factor is of the size of a Fanning factor, and is taken as the Darcy factor, which is four "
        "times as large. See which of the two the source gives"
    )
    low, high = FANNING
    for pipe in project.pipes.values():
        stated = pipe.stated.get("friction_factor")
        if stated is not None and low <= stated.si <= high:
            yield Remark(f"pipes.{pipe.id}", stated.mark, text)


def not_turbulent(solved: Solved) -> Iterator[Remark]:
    """Yield pipes in which the flow is laminar or in transition."""
    own: dict[str, list[str]] = {}
    other: dict[str, list[str]] = {}
    for name, case, columns in solved.running:
        pipes, law = case.network.pipes, columns.terms.law
        low = columns.results.reynolds.values < pipes.turbulent_above[0]
        moving = np.abs(columns.results.flow_each.values) > 0.0
        for k in np.flatnonzero(low & moving).tolist():
            follows = LAW_INPUT[law.words[int(law.codes[k])]] == "roughness"
            (own if follows else other).setdefault(columns.running[k], []).append(name)
    text = (
        "the flow is laminar or in transition {cases}: its friction is uncertain there, and small. See that no "
        "conclusion rests on it"
    )
    yield from by_case(solved, "pipes", own, text)
    text = (
        "the flow is laminar or in transition {cases}, where the pipe's friction law does not hold: it is made for "
        "turbulent flow. Use a law with roughness for it"
    )
    yield from by_case(solved, "pipes", other, text)


def groundless_viscosity(project: Project) -> Iterator[Remark]:
    """Yield the temperature or viscosity of the liquid when nothing is said of where it comes from."""
    for field in ("temperature", "viscosity"):
        stated = project.fluid.stated.get(field)
        if stated is None:
            continue
        path = f"fluid.{field}"
        if any(fnmatchcase(path, one) for one in assumed(project)):
            continue
        if stated.shipped:
            text = "the temperature is taken by default, and the viscosity follows from it. State that of the liquid"
            yield Remark(path, mark_in_folder(project, path), text)
        elif not stated.basis.source and not stated.basis.grade:
            text = f"the {field} has neither source nor grade, and friction rests on it. Say where it comes from"
            yield Remark(path, stated.mark, text)


CHECKS = (
    Check(
        "D29",
        "Roughness of the wrong kind or size",
        "Hazen–Williams C or Manning n outside the usual range of pipes, a roughness above five millimetres, and a "
        "coefficient that the pipe's law does not use",
        inputs=odd_coefficients,
        refuses="a coefficient with the unit of another, and a roughness as wide as the bore",
    ),
    Check(
        "D31",
        "No sensitivity to roughness",
        "works in which no case, range or deviation moves a roughness or coefficient",
        inputs=no_sensitivity,
    ),
    Check(
        "D32",
        "Darcy and Fanning factors confused",
        "a fixed friction factor of the size of a Fanning factor; every factor here is the Darcy factor",
        inputs=fanning_factors,
    ),
    Check(
        "D33",
        "Laminar or transitional pipes",
        "pipes in motion whose Reynolds number is below the end of the transition",
        results=not_turbulent,
    ),
    Check(
        "D34",
        "Viscosity and temperature without basis",
        "a temperature by default, and a temperature or viscosity with neither source nor grade",
        inputs=groundless_viscosity,
    ),
)

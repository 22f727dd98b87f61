"""Running the shipped cases through the same laws, reader and solvers as any project."""

from __future__ import annotations

import math
from collections.abc import Mapping
from importlib import resources
from pathlib import Path

import numpy as np

from calc import units
from calc.account import liquid_terms, open_books
from calc.components.liquid import LiquidTerms, liquid
from calc.components.pipe import losses, transition_limits
from calc.equation import ARRAYS, Value, evaluate, value_of
from calc.kinds import NUMBER, TEMPERATURE
from calc.physics.friction import ROUGH_PIPE_LAWS
from calc.project import BASE, network, read_project
from calc.solve import solve
from calc.verification.check import Check
from calc.verification.reading import Case, read_cases


def run() -> tuple[Check, ...]:
    """Return a check for each value of each shipped case, computed now.

    Returns
    -------
    tuple of Check
        In the order of ``calc/data/verification.yaml``; one whose case has no solution did not pass.
    """
    return tuple(check for case in read_cases() for check in _checks(case))


def _checks(case: Case) -> list[Check]:
    got = _works(case.works) if case.works else _laws(case.given)
    return [
        Check(
            f"{case.id}/{expected.quantity.replace('.', '-')}",
            case.title,
            case.source,
            case.source_class,
            expected.quantity,
            expected.kind,
            expected.stated,
            expected.limit,
            expected.relative,
            got.get(expected.quantity, math.nan),
        )
        for expected in case.expected
    ]


def _laws(given: Mapping[str, str]) -> dict[str, float]:
    """Return what single laws give: a friction factor, or the properties of water."""
    if "temperature" in given:
        return _water(units.read(given["temperature"], TEMPERATURE).value)
    inputs = {
        "reynolds": np.array([units.read(given["reynolds"], NUMBER).value]),
        "roughness": np.array([units.read(given["relative_roughness"], NUMBER).value]),
        "bore": np.ones(1),
    }
    factor = evaluate(ROUGH_PIPE_LAWS[given["law"]], inputs)
    return {"friction_factor": float(value_of(factor)[0])}


def _water(temperature: float) -> dict[str, float]:
    stated: LiquidTerms[Value] = LiquidTerms(altitude=np.zeros(1), temperature=np.array([temperature]))
    water = liquid(ARRAYS, stated)
    got = {"density": water.density, "viscosity": water.viscosity, "vapour_pressure": water.vapour_pressure}
    return {name: float(value_of(value)[0]) for name, value in got.items()}


def _works(name: str) -> dict[str, float]:
    """Return heads, flows and velocities of a shipped project folder; nothing when it has no solution."""
    with resources.as_file(resources.files("calc").joinpath("data", "verification", name)) as folder:
        return solve_folder(folder)


def solve_folder(folder: Path) -> dict[str, float]:
    """Return heads, flows and velocities of a project folder in its base case, by path; in SI.

    Raises
    ------
    ProblemsFound
        If the inputs are wrong.
    """
    project = read_project(folder, ())
    stated: LiquidTerms[Value] = liquid_terms(open_books(project), BASE).each(lambda view: view.values)
    works = network(project, BASE, float(value_of(liquid(ARRAYS, stated).viscosity)[0]))
    solution = solve(works)
    if not solution.converged:
        return {}
    with np.errstate(all="ignore"):
        results = losses(ARRAYS, works.pipes, transition_limits(ARRAYS, works.pipes), solution.flow)
    found = {f"junctions.{works.nodes[int(k)]}.head": float(solution.head[k]) for k in works.unknown}
    for k, pipe in enumerate(works.pipes.rows):
        found[f"pipes.{pipe}.flow"] = float(solution.flow[k])
        found[f"pipes.{pipe}.velocity"] = float(value_of(results.velocity)[k])
    return found

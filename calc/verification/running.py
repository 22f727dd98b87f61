"""Running the shipped cases through the same laws, reader and solvers as any project."""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping
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
from calc.solve.section import SOLVER, settings_of
from calc.verification.check import Check
from calc.verification.reading import Case, read_cases


def run(used: Collection[str] | None = None) -> tuple[Check, ...]:
    """Return a check for each value of the shipped cases that are asked for, computed now.

    Parameters
    ----------
    used : collection of str, optional
        What a project uses, from `calc.verification.in_use`: cases that concern any of it are run, and those
        that concern no single law or method. Without it every case is run.

    Returns
    -------
    tuple of Check
        In the order of ``calc/data/verification.yaml``; one whose case has no solution did not pass.
    """
    found: list[Check] = []
    for case in read_cases():
        concerns = tuple(word for word in case.concerns if used is None or word in used)
        if concerns or not case.concerns:
            found += _checks(case, concerns)
    return tuple(found)


def _checks(case: Case, concerns: tuple[str, ...]) -> list[Check]:
    got = _works(case.works) if case.works else _laws(case.given)
    return [
        Check(
            f"{case.id}/{expected.quantity.replace('.', '-')}",
            case.title,
            case.source,
            case.source_class,
            concerns,
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
    """Return the results of a shipped project folder; nothing when it has no solution."""
    with resources.as_file(resources.files("calc").joinpath("data", "verification", name)) as folder:
        return solve_folder(folder)


def solve_folder(folder: Path) -> dict[str, float]:
    """Return heads, flows, velocities and losses of a project folder in its base case, by path; in SI.

    Raises
    ------
    ProblemsFound
        If the inputs are wrong.
    """
    project = read_project(folder, (SOLVER,))
    stated: LiquidTerms[Value] = liquid_terms(open_books(project), BASE).each(lambda view: view.values)
    works = network(project, BASE, float(value_of(liquid(ARRAYS, stated).viscosity)[0]))
    solution = solve(works, settings_of(project))
    if not solution.converged:
        return {}
    with np.errstate(all="ignore"):
        results = losses(ARRAYS, works.pipes, transition_limits(ARRAYS, works.pipes), solution.flow)
    found: dict[str, float] = {}
    for k in works.unknown.tolist():
        name, head = works.nodes[k], float(solution.head[k])
        found[f"junctions.{name}.head"] = head
        found[f"junctions.{name}.pressure_head"] = head - project.junctions[name].number("elevation")
    found |= {f"pipes.{pipe}.bore": float(works.pipes.bore[k]) for k, pipe in enumerate(works.pipes.rows)}
    used = value_of(results.fitting_coefficient)
    found |= {f"fittings.{row}.coefficient": float(used[k]) for k, row in enumerate(works.pipes.fittings.rows)}
    for quantity in ("velocity", "friction_loss", "fitting_loss", "head_loss"):
        values = value_of(getattr(results, quantity))
        found |= {f"pipes.{pipe}.{quantity}": float(values[k]) for k, pipe in enumerate(works.pipes.rows)}
    return found | {f"pipes.{pipe}.flow": float(solution.flow[k]) for k, pipe in enumerate(works.pipes.rows)}

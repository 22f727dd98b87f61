"""Empirical friction laws: whether they are used where they hold, and how they compare with Darcy–Weisbach."""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from calc.account.case import CaseAccount
from calc.account.findings.finding import Check, Remark, Solved, by_case
from calc.account.findings.geometry import ROUGHEST
from calc.account.flows import CaseColumns
from calc.equation import evaluate, value_of
from calc.physics.friction import colebrook_white
from calc.project import Effective, Project

Array = npt.NDArray[np.float64]
Flags = npt.NDArray[np.bool_]

COLDEST, WARMEST = 273.15 + 5.0, 273.15 + 25.0
NARROWEST = 0.05
FASTEST = 3.0
LEAST_REYNOLDS = 1e4
"""Hazen–Williams is fitted to water near 15 °C, above about 50 mm, up to about 3 m/s, well turbulent (from memory)."""
SMOOTHER = 0.98
"""Share of a smooth pipe's Darcy f below which a loss is less than any pipe's; the smooth law is good to 2 %."""
FULLY_ROUGH = 70.0
"""Roughness Reynolds number from which flow is fully rough (Nikuradse 1933; from memory)."""


def liquid_and_bore(project: Project) -> Iterator[Remark]:
    """Yield pipes under Hazen–Williams with another liquid, at another temperature, or of small bore."""
    found: dict[str, list[str]] = {}
    names = tuple(project.pipes)
    for case in project.cases:
        now = Effective(project, case)
        law = now.law()
        chosen = law.codes == law.words.index("hazen-williams")
        kelvin = now.numbers("fluid", "temperature")[0]
        said = []
        if np.isnan(kelvin):
            said = [(chosen, "the liquid is not stated to be water")]
        elif not COLDEST <= kelvin <= WARMEST:
            said = [(chosen, "the water is far from the fifteen degrees to which it is fitted")]
        said.append((chosen & (now.numbers("pipes", "bore") < NARROWEST), "the bore is below fifty millimetres"))
        for flags, reason in said:
            for k in np.flatnonzero(flags).tolist():
                held = found.setdefault(names[k], [])
                if reason not in held:
                    held.append(reason)
    for name, words in found.items():
        text = f"Hazen–Williams is outside its range: {' and '.join(words)}. Use a law with roughness"
        yield Remark(f"pipes.{name}", project.pipes[name].mark, text)


class Compared(NamedTuple):
    """A pipe under an empirical law as a rough pipe: the flags of what is amiss, each for every running pipe."""

    faster: Flags
    slower: Flags
    smoother: Flags
    rougher: Flags
    not_rough: Flags


def compared(case: CaseAccount, columns: CaseColumns, factor: Array) -> Compared:
    """Return how the loss of each running pipe compares with that of a rough pipe.

    Parameters
    ----------
    case, columns
        A solved case.
    factor : ndarray
        Darcy f that gives the same loss, of every running pipe; NaN where its law has its own. Shape (n,).
    """
    law = columns.terms.law
    by_hazen = law.codes == law.words.index("hazen-williams")
    by_manning = law.codes == law.words.index("manning")
    speed = np.abs(columns.results.velocity.values)
    reynolds = columns.results.reynolds.values
    moving = (speed > 0.0) & (reynolds >= case.network.pipes.turbulent_above[0])
    held = moving & np.isfinite(factor) & (by_hazen | by_manning)
    safe = np.where(held, factor, 0.02)
    safe_reynolds = np.where(held, reynolds, 1e5)
    share = relative_roughness(safe, safe_reynolds)
    smooth = safe < SMOOTHER * smooth_factor(safe_reynolds)
    rough = safe_reynolds * np.sqrt(safe / 8) * np.maximum(share, 0.0) >= FULLY_ROUGH
    return Compared(
        faster=by_hazen & (speed > FASTEST),
        slower=by_hazen & moving & (reynolds < LEAST_REYNOLDS),
        smoother=held & smooth,
        rougher=held & (share > ROUGHEST),
        not_rough=held & by_manning & ~smooth & ~rough,
    )


def smooth_factor(reynolds: Array) -> Array:
    """Return Darcy f of a smooth pipe, Prandtl–Kármán: Colebrook–White without roughness."""
    return value_of(evaluate(colebrook_white, {"reynolds": reynolds, "roughness": np.zeros(1), "bore": np.ones(1)}))


def relative_roughness(factor: Array, reynolds: Array) -> Array:
    """Return roughness over bore that gives Darcy f by Colebrook–White; negative below the smooth pipe."""
    root = 1.0 / np.sqrt(factor)
    return np.asarray(3.7 * (10.0 ** (-root / 2.0) - 2.51 * root / reynolds))


_TEXTS = {
    "faster": "Hazen–Williams is outside its range {cases}: the water flows faster than three metres a second. Use a "
    "law with roughness",
    "slower": "Hazen–Williams is outside its range {cases}: the flow is only just turbulent. Use a law with roughness",
    "smoother": "the coefficient gives less loss than a smooth pipe would have {cases}: no wall is so smooth at this "
    "flow. Lower C or raise n, or use a law with roughness",
    "rougher": "the coefficient gives the loss of a wall rougher than a twentieth of the bore {cases}. Check it, and "
    "the bore",
    "not_rough": "Manning supposes fully rough flow, and the flow is not {cases}: n would change with the flow. Use a "
    "law with roughness, or see that n is known at this flow",
}


def against_roughness(solved: Solved) -> Iterator[Remark]:
    """Yield pipes whose empirical law is out of its range at the flow found, or departs from any rough pipe."""
    found: dict[str, dict[str, list[str]]] = {name: {} for name in _TEXTS}
    for name, case, columns in solved.running:
        if not {"hazen-williams", "manning"} & {columns.terms.law.words[int(k)] for k in set(columns.terms.law.codes)}:
            continue
        factor = solved.ledger.view("pipes.equivalent_f", name, columns.running).values
        for what, flags in compared(case, columns, factor)._asdict().items():
            for k in np.flatnonzero(flags).tolist():
                found[what].setdefault(columns.running[k], []).append(name)
    for what, rows in found.items():
        yield from by_case(solved, "pipes", rows, _TEXTS[what])


CHECKS = (
    Check(
        "D28",
        "Empirical laws outside their range",
        "Hazen–Williams with another liquid than water, far from fifteen degrees, below fifty millimetres, above three "
        "metres a second or hardly turbulent; Manning where the flow is not fully rough; and either where the Darcy "
        "factor of the same loss is below that of a smooth pipe, or asks for a wall rougher than a twentieth of the "
        "bore",
        inputs=liquid_and_bore,
        results=against_roughness,
    ),
)

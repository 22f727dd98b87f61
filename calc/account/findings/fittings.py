"""Fittings and ends: losses left out, coefficients on the wrong bore or of another kind, and velocity heads."""

from __future__ import annotations

from collections.abc import Iterator
from fnmatch import fnmatchcase

import numpy as np

from calc.account.findings.finding import Check, Remark, Solved, assumed, by_case, named, parts_of
from calc.components import Record
from calc.kinds import HEAD
from calc.physics.coefficient import coefficient_of_cv, coefficient_of_kv
from calc.project import Project, stands_on_pipe

FARTHEST_BORE = 1.3
"""Bore of a fitting over that of its pipe, or the other way round, from which it is worth a look; common practice."""
LARGEST_COEFFICIENT = 200.0
"""Loss coefficient above which it looks like a flow coefficient; common practice."""
OPENEST, TIGHTEST = 0.05, 1000.0
"""Loss coefficients of a wide open and of a nearly shut valve; common practice."""
_FLOW_COEFFICIENTS = {"Kv": coefficient_of_kv, "Cv": coefficient_of_cv}
LEAST_HEAD, LEAST_SHARE = 0.1, 0.05
"""Velocity head, m, and its share of the pressure head, above both of which it is not small; common practice."""


def without_fittings(project: Project) -> Iterator[Remark]:
    """Yield pipes for which neither a fitting nor an assumption about fittings is stated."""
    reasoned = assumed(project)
    text = (
        "no fittings are stated: bends, valves and meters lose nothing here. State them, or say in an assumption that "
        "affects the 'fittings' of the pipe why they may be left out"
    )
    for pipe in project.pipes.values():
        path = f"pipes.{pipe.id}"
        if not pipe.parts.get("fittings") and not any(fnmatchcase(f"{path}.fittings", one) for one in reasoned):
            yield Remark(path, pipe.mark, text)


def bare_ends(project: Project) -> Iterator[Remark]:
    """Yield reservoir ends of pipes at which nothing is lost, on entering or leaving."""
    for pipe in project.pipes.values():
        covered = {part.id.rpartition("/")[2] for part in pipe.parts.get("ends", ())}
        for end in ("from", "to"):
            if pipe.text(end) in project.reservoirs and end not in covered:
                text = (
                    f"no entrance or exit loss at '{end}', where a reservoir is: water enters and leaves there without "
                    f"loss. State 'ends: {{{end}: square}}' or its coefficients"
                )
                yield Remark(f"pipes.{pipe.id}", pipe.mark, text)


def unlike_bores(project: Project) -> Iterator[Remark]:
    """Yield fittings whose coefficient stands on a bore far from that of the pipe."""
    for pipe, part in _parts(project):
        own = part.stated.get("bore")
        if own is None or stands_on_pipe(pipe, part):
            continue
        bores = [own.si, *(stated.si for stated in [part.stated.get("onward_bore")] if stated)]  # a step has two
        ratios = [bore / pipe.number("bore") for bore in bores]
        if not any(1.0 / FARTHEST_BORE <= ratio <= FARTHEST_BORE for ratio in ratios):
            text = (
                f"the coefficient of {named(part)} stands on a bore far from that of the pipe: a loss goes with the "
                "fourth power of it. See on which bore the source gives it; a change of bore has a loss of its own"
            )
            yield Remark(f"pipes.{pipe.id}", own.mark, text)


def large_coefficients(project: Project) -> Iterator[Remark]:
    """Yield loss coefficients of the size of a flow coefficient."""
    for pipe, part in _parts(project):
        for name in ("K", "K_reverse"):
            stated = part.stated.get(name)
            if stated is None or stated.shipped or (name == "K_reverse" and stated is part.stated.get("K")):
                continue
            if stated.si > LARGEST_COEFFICIENT:
                text = (
                    f"{name} of {named(part)} is above two hundred: that is the size of a flow coefficient Kv or Cv. "
                    "See which of them the source gives"
                )
                yield Remark(f"pipes.{pipe.id}", stated.mark, text)


def odd_flow_coefficients(project: Project) -> Iterator[Remark]:
    """Yield flow coefficients that no valve of the bore has: the loss coefficient they give is out of all practice."""
    for pipe, part in _parts(project):
        for name, law in _FLOW_COEFFICIENTS.items():
            stated, bore = part.stated.get(name), part.stated.get("bore")
            if stated is None or bore is None:
                continue
            coefficient = float(law.body(bore=bore.si, **{name: stated.si}))
            if coefficient < OPENEST:
                size = "a valve that loses less than one wide open"
            elif coefficient > TIGHTEST:
                size = "a valve that is all but shut"
            else:
                continue
            text = (
                f"{name} of {named(part)} is that of {size}, for its bore. See that it is no loss coefficient and "
                "goes with this bore, and whether the source gives Kv or Cv"
            )
            yield Remark(f"pipes.{pipe.id}", stated.mark, text)


def _parts(project: Project) -> Iterator[tuple[Record, Record]]:
    for pipe in project.pipes.values():
        for part in parts_of(pipe):
            yield pipe, part


def velocity_heads(solved: Solved) -> Iterator[Remark]:
    """Yield junctions whose velocity head is not small against the pressure head, or would change a verdict."""
    large: dict[str, list[str]] = {}
    deciding: dict[str, list[str]] = {}
    margins = _margins(solved)
    for name, _, columns in solved.running:
        rows = columns.pressure_head.rows
        kinetic = solved.ledger.view("junctions.velocity_head", name, rows).values
        pressure = np.abs(columns.pressure_head.values)
        for k in np.flatnonzero((kinetic > LEAST_HEAD) & (kinetic > LEAST_SHARE * pressure)).tolist():
            large.setdefault(rows[k], []).append(name)
        for k, row in enumerate(rows):
            if kinetic[k] > margins.get((row, name), np.inf):
                deciding.setdefault(row, []).append(name)
    text = (
        "the velocity head is more than a tenth of a metre and a twentieth of the pressure head {cases}, and is not "
        "deducted from it: the hydraulic grade line lies lower by as much. See that the difference does not matter"
    )
    yield from by_case(solved, "junctions", large, text)
    text = (
        "least pressure is met by less than the velocity head {cases}, which is not deducted: along the pipe it would "
        "not be met. Judge it with the velocity head deducted"
    )
    yield from by_case(solved, "junctions", deciding, text)


def _margins(solved: Solved) -> dict[tuple[str, str], float]:
    """Return by junction and case the margin, m, of a least pressure that is met."""
    found = {}
    for judged in solved.verdicts:
        for verdict in judged.verdicts:
            if verdict.criterion.id == "pressure-min" and verdict.met:
                margin = verdict.margin
                weight = 1.0
                if margin.column.kind.dimension != HEAD.dimension:
                    shared = [solved.ledger.shared(one, verdict.case) for one in ("fluid.density", "site.gravity")]
                    weight = float(shared[0].values[0] * shared[1].values[0])
                found[verdict.subject, verdict.case] = margin.value / weight
    return found


CHECKS = (
    Check(
        "D35",
        "Fitting losses omitted",
        "pipes without fittings, unless an assumption about them says why",
        inputs=without_fittings,
    ),
    Check(
        "D36",
        "Entrance and exit losses",
        "reservoir ends of pipes at which nothing is lost",
        inputs=bare_ends,
        refuses="such a loss at a junction",
    ),
    Check(
        "D37",
        "Velocity head dropped",
        "junctions where the velocity head, which is not deducted from the pressure head, is more than a tenth of a "
        "metre and a twentieth of it, or more than the margin of the least pressure",
        results=velocity_heads,
    ),
    Check(
        "D38",
        "Coefficient tied to the wrong bore",
        "fittings whose own bore is three tenths larger than that of the pipe, or smaller by as much",
        inputs=unlike_bores,
    ),
    Check(
        "D39",
        "Loss and flow coefficients confused",
        "loss coefficients above two hundred, and a Kv or Cv that for its bore is that of no valve, or of one all but "
        "shut",
        inputs=lambda project: (
            remark for check in (large_coefficients, odd_flow_coefficients) for remark in check(project)
        ),
    ),
)

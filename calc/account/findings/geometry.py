"""Sizes, lengths and levels: nominal sizes, orders of levels, doubles, and magnitudes that look like a slip."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from calc.account.findings.finding import Check, Remark, Solved, among, by_case
from calc.components import Record
from calc.project import Effective, Project

Array = npt.NDArray[np.float64]

NOMINAL_MILLIMETRES = (
    *(10, 15, 20, 25, 32, 40, 50, 60, 65, 80, 100, 125, 150, 200, 250, 300, 350, 400, 450, 500, 600, 700, 800, 900),
    *(1000, 1100, 1200, 1400, 1500, 1600, 1800, 2000, 2200, 2400, 2600, 2800, 3000, 3200, 3400, 3600, 3800, 4000),
)
"""Nominal diameters of ISO 6708 (from memory)."""
MOST_INCHES = 120
EXACTLY = 1e-9
"""Metres within which a bore is one of them."""
_NOMINAL = frozenset(
    round(size / EXACTLY)
    for size in (*(dn / 1000 for dn in NOMINAL_MILLIMETRES), *(n * 0.0254 for n in range(1, MOST_INCHES + 1)))
)
_KNOWN_GRADES = ("manufacturer", "measured", "surveyed", "standard")
SHORTEST = 10.0
"""Length over bore below which a pipe is hardly a pipe; common practice for flow to be fully developed."""
ROUGHEST = 0.05
"""Roughness over bore at which the chart of Moody (1944) ends."""
FASTEST = 10.0
"""Velocity, m/s, that no water main is run at; common practice."""


def nominal_bores(project: Project) -> Iterator[Remark]:
    """Yield pipes whose bore is exactly a nominal size, unless it is said to be measured or from a data sheet."""
    text = (
        "the bore is exactly a nominal size: a bore is the outside diameter less wall and lining, and differs from the "
        "name of the size. Take it from the pipe's data sheet and say so by its grade, or name the size, its standard "
        "and its class"
    )
    for pipe in project.pipes.values():
        bore = pipe.stated.get("bore")
        if bore is None or bore.shipped or not bore.unit or bore.basis.grade in _KNOWN_GRADES:
            continue
        if round(bore.si / EXACTLY) in _NOMINAL:
            yield Remark(f"pipes.{pipe.id}", bore.mark, text)


def levels_out_of_order(project: Project) -> Iterator[Remark]:
    """Yield reservoirs whose level leaves the operating range in some case."""
    low, high = _cases_outside(project)
    for cases, side in ((low, "below its lowest"), (high, "above its highest")):
        for name, held in cases.items():
            mark = project.reservoirs[name].stated["level"].mark
            where = among(held, len(project.cases))
            text = f"the level stands {side} operating level {where}. Mend the level, or the range"
            yield Remark(f"reservoirs.{name}", mark, text)


def _cases_outside(project: Project) -> tuple[dict[str, list[str]], dict[str, list[str]]]:
    low: dict[str, list[str]] = {}
    high: dict[str, list[str]] = {}
    names = list(project.reservoirs)
    for case in project.cases:
        now = Effective(project, case)
        level = now.numbers("reservoirs", "level")
        for found, beyond in (
            (low, level < now.numbers("reservoirs", "low")),
            (high, level > now.numbers("reservoirs", "high")),
        ):
            for k in np.flatnonzero(beyond).tolist():
                found.setdefault(names[k], []).append(case)
    return low, high


def doubles(project: Project) -> Iterator[Remark]:
    """Yield pipes that join the same nodes with the same length and bore as one before."""
    seen: dict[tuple[object, ...], str] = {}
    for pipe in project.pipes.values():
        ends = frozenset((pipe.text("from"), pipe.text("to")))
        first = seen.setdefault((ends, pipe.number("length"), pipe.number("bore")), pipe.id)
        if first != pipe.id:
            text = (
                f"joins the same nodes as {first}, with the same length and bore: see that it is not the same pipe "
                "entered twice. Like pipes side by side may be stated as one, with 'parallel'"
            )
            yield Remark(f"pipes.{pipe.id}", pipe.mark, text)


def stubs(project: Project) -> Iterator[Remark]:
    """Yield pipes that are short against their bore."""
    text = (
        "shorter than ten times its bore: the flow in it is not that of a long pipe, on which friction laws rest. See "
        "that the units are right, or state it as a fitting of its neighbour"
    )
    for pipe in project.pipes.values():
        if pipe.number("length") < SHORTEST * pipe.number("bore"):
            yield Remark(f"pipes.{pipe.id}", pipe.stated["length"].mark, text)


class Screen(NamedTuple):
    """When a field looks like a slip.

    Attributes
    ----------
    low, high : float
        Bounds in SI outside of which it always does; common practice.
    apart : float
        Factor by which it lies beyond all others of its field.
    words : str
        The factor, as printed.
    """

    low: float
    high: float
    apart: float
    words: str


SCREENS: Mapping[tuple[str, str], Screen] = {
    ("pipes", "length"): Screen(0.1, 5e5, 100.0, "a hundred"),
    ("pipes", "bore"): Screen(0.01, 6.0, 8.0, "eight"),
    ("pipes", "roughness"): Screen(0.0, 0.01, 100.0, "a hundred"),
    ("junctions", "withdrawal"): Screen(0.0, 20.0, 100.0, "a hundred"),
    ("junctions", "inflow"): Screen(0.0, 20.0, 100.0, "a hundred"),
}
FEWEST = 3
"""Values of a field that are needed to say that one of them is far from the others."""
FARTHEST = 500.0
"""Metres by which a level may lie from the nearest other before it looks like a slip; common practice."""


def magnitudes(project: Project) -> Iterator[Remark]:
    """Yield values that look like a slip of unit or of a decimal point."""
    for (group, field), screen in SCREENS.items():
        records = list(project.group(group).values())
        size = np.abs(np.array([record.number(field) for record in records], dtype=np.float64))
        for found, said in (
            ((size < screen.low) & (size > 0.0), f"{field} is smaller than any in practice"),
            (size > screen.high, f"{field} is larger than any in practice"),
            (_far(size, screen.apart), f"{field} is more than {screen.words} times away from that of every other"),
        ):
            yield from _slips(records, group, field, found, said)
    pipes = list(project.pipes.values())
    share = np.array([pipe.number("roughness") / pipe.number("bore") for pipe in pipes])
    yield from _slips(pipes, "pipes", "roughness", share > ROUGHEST, "roughness is more than a twentieth of the bore")
    yield from _lonely_levels(project)


def _slips(records: list[Record], group: str, field: str, found: npt.NDArray[np.bool_], said: str) -> Iterator[Remark]:
    for k in np.flatnonzero(found).tolist():
        stated = records[k].stated[field]
        if not stated.shipped:
            text = f"{said}: it looks like a slip of the unit or of the decimal point. Check it against its source"
            yield Remark(f"{group}.{records[k].id}", stated.mark, text)


def _far(size: Array, apart: float) -> npt.NDArray[np.bool_]:
    """Return which sizes lie by a factor beyond all others; zeros and what is not stated take no part."""
    held = np.flatnonzero(size > 0.0)
    far = np.zeros(len(size), dtype=bool)
    if len(held) >= FEWEST:
        order = held[np.argsort(size[held], kind="stable")]
        far[order[0]] = size[order[1]] > apart * size[order[0]]
        far[order[-1]] = size[order[-1]] > apart * size[order[-2]]
    return far


def _lonely_levels(project: Project) -> Iterator[Remark]:
    """Yield levels and elevations far from those of all other nodes."""
    held = [
        (f"{group}.{record.id}", field, record.stated[field])
        for group, field in (("reservoirs", "level"), ("junctions", "elevation"))
        for record in project.group(group).values()
        if field in record.stated
    ]
    held.sort(key=lambda one: one[2].si)
    heights = [-np.inf, *(stated.si for _, _, stated in held), np.inf]
    for k, (path, field, stated) in enumerate(held, 1):
        if min(heights[k] - heights[k - 1], heights[k + 1] - heights[k]) > FARTHEST and len(held) >= FEWEST:
            text = (
                f"{field} lies more than five hundred metres from that of every other node: it looks like a slip of "
                "the unit. Check it against its source"
            )
            yield Remark(path, stated.mark, text)


def rushing(solved: Solved) -> Iterator[Remark]:
    """Yield pipes in which water flows faster than in any main."""
    found: dict[str, list[str]] = {}
    for name, _, columns in solved.running:
        for k in np.flatnonzero(np.abs(columns.results.velocity.values) > FASTEST).tolist():
            found.setdefault(columns.running[k], []).append(name)
    text = (
        "water flows faster than ten metres a second {cases}: it looks like a slip of the bore, a level or a "
        "withdrawal. Check them against their sources"
    )
    yield from by_case(solved, "pipes", found, text)


CHECKS = (
    Check(
        "D18",
        "Nominal size used for bore",
        "a bore that is exactly a nominal diameter or a whole inch, unless its grade says that it is known",
        inputs=nominal_bores,
    ),
    Check(
        "D22",
        "Reservoir levels out of order",
        "a level outside the operating range in any case",
        inputs=levels_out_of_order,
        refuses="a lowest operating level above the highest",
    ),
    Check(
        "D25",
        "Disconnected, duplicate or very short elements",
        "pipes that join the same nodes with the same length and bore, and pipes shorter than ten times their bore",
        inputs=lambda project: (remark for check in (doubles, stubs) for remark in check(project)),
        refuses="a node or part that no pipe joins to the rest, and a length of nothing",
    ),
    Check(
        "D26",
        "No fixed head in a connected part",
        "works without a reservoir",
        refuses="a part of the works without a reservoir; a case that cuts one off has no solution",
    ),
    Check(
        "D27",
        "Implausible magnitudes",
        "sizes, lengths, levels and flows out of all practice or far from those of the rest of the works, and water "
        "faster than ten metres a second",
        inputs=magnitudes,
        results=rushing,
    ),
)

"""Units: fields written in unlike systems, and the two gallons side by side."""

from __future__ import annotations

import re
from collections.abc import Iterator
from functools import lru_cache

from calc.account.findings.finding import Check, Remark, parts_of
from calc.components import Stated
from calc.project import Project

_NAME = re.compile("[A-Za-zµ°]+")
_CUSTOMARY = frozenset(
    {
        *("in", "inch", "inches", "ft", "foot", "feet", "yd", "mi", "mile", "miles", "cfs", "psi", "lb", "lbf"),
        *("gpm", "gal", "mgd", "US", "imp", "slug", "hp", "degF", "°F"),
    }
)
_METRIC = frozenset(
    {
        *("m", "mm", "cm", "dm", "km", "µm", "ha", "L", "l", "mL", "ml", "ML", "Pa", "mPa", "hPa", "kPa", "MPa"),
        *("bar", "mbar", "mg", "g", "kg", "t", "N", "kN", "P", "cP", "St", "cSt", "W", "kW", "MW", "degC", "°C"),
    }
)
_KIND_OF = {"level": "elevation", "low": "elevation", "high": "elevation", "withdrawal": "flow", "inflow": "flow"}
"""Fields that measure one thing and are compared with each other."""


@lru_cache(maxsize=4096)
def system(unit: str) -> str:
    """Return "customary", "metric", or an empty string for a unit that belongs to both or neither."""
    names = set(_NAME.findall(unit)) - {"s", "min", "h", "d"}
    if names & _CUSTOMARY:
        return "customary"
    return "metric" if names & _METRIC else ""


def quantities(project: Project) -> Iterator[tuple[str, str, Stated]]:
    """Yield the quantities of a project that were written by hand: path, field, value."""
    for group in ("reservoirs", "junctions", "pipes", "fluid", "site"):
        for row, record in project.group(group).items():
            path = f"{group}.{row}" if row else group
            for field, stated in record.stated.items():
                if stated.unit and not stated.shipped:
                    yield f"{path}.{field}", field, stated
            for part in parts_of(record):
                own = part.stated.get("bore")
                if own is not None and own is not record.stated.get("bore"):
                    yield f"{path}.fittings", "bore", own
    for case in project.cases.values():
        for line in case.lines:
            if line.stated.unit and line.how == "with":
                yield f"cases.{case.id}", line.field, line.stated


def mixed_systems(project: Project) -> Iterator[Remark]:
    """Yield the values of a field that are written in the system of units that fewer of them use."""
    held: dict[str, dict[str, list[tuple[str, Stated]]]] = {}
    for path, field, stated in quantities(project):
        if one := system(stated.unit):
            held.setdefault(_KIND_OF.get(field, field), {}).setdefault(one, []).append((path, stated))
    for field, systems in held.items():
        if len(systems) > 1:
            fewer = min(systems.values(), key=len)
            others = next(values for values in systems.values() if values is not fewer)
            text = (
                f"written in {_units(fewer)}, where others of the kind {field} are written in {_units(others)}: a slip "
                "between the two would not show. See that the unit is the one of the source"
            )
            for path, stated in fewer:
                yield Remark(path, stated.mark, text)


def _units(values: list[tuple[str, Stated]]) -> str:
    return " and ".join(dict.fromkeys(f"'{stated.unit}'" for _, stated in values))


def both_gallons(project: Project) -> Iterator[Remark]:
    """Yield the values in imperial gallons of a project that uses US gallons too."""
    by_nation: dict[str, list[tuple[str, Stated]]] = {"imp": [], "US": []}
    for path, _, stated in quantities(project):
        names = _NAME.findall(stated.unit)
        if "imp" in names:
            by_nation["imp"].append((path, stated))
        elif "US" in names or "gpm" in names:
            by_nation["US"].append((path, stated))
    if by_nation["US"]:
        us = _units(by_nation["US"])
        for path, stated in by_nation["imp"]:
            text = (
                f"written in '{stated.unit}', where others are written in {us}: the imperial gallon is a fifth larger. "
                "See that each is the gallon of its source"
            )
            yield Remark(path, stated.mark, text)


CHECKS = (
    Check(
        "D16",
        "Mixed or missing units",
        "values of one field written partly in metric and partly in customary units",
        inputs=mixed_systems,
        refuses="a number without a unit",
    ),
    Check(
        "D17",
        "US and imperial gallon confused",
        "both gallons in one project",
        inputs=both_gallons,
        refuses="a bare gallon, or a flow in gallons that does not say which",
    ),
)

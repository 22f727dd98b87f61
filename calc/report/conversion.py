"""Conversions on the page: a number of the ledger in one unit, put into another on a line of its own.

What one of a unit is worth is a number of the ledger, from a shipped table with its source. The number in that unit is
the quantity divided by it, both printed in the units that the line converts from.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable
from functools import cache, lru_cache
from importlib import resources
from typing import Any

from calc import kinds
from calc.account.books import enter_stated
from calc.components import Stated
from calc.equation import Equation, Expression, Implicit, Leaf, Literal, Operation, Reference, Symbol, equation
from calc.equation.law import gives, takes
from calc.kinds import Kind
from calc.ledger import Derived, Ledger
from calc.physics.symbols import KELVIN, TEMPERATURE
from calc.problems import ProblemsFound
from calc.report.display import BY_FIELD, SI, Display
from calc.verification.reading import quantity
from calc.yamlfile import Mapping, Scalar, read_text

CONVERTED = ("flow", "head", "velocity", "pressure", "gradient", "density", "viscosity")
"""Fields of ``display`` whose numbers are worked out in a package, and so converted; the rest are inputs."""

PLACE = "calc/data/units.yaml"
WORTH = "units.worth"

KINDS: dict[str, Kind] = {
    "length": kinds.LENGTH,
    "flow": kinds.FLOW,
    "velocity": kinds.VELOCITY,
    "pressure": kinds.PRESSURE,
    "gradient": kinds.GRADIENT,
    "density": kinds.DENSITY,
    "viscosity": kinds.KINEMATIC_VISCOSITY,
    "dynamic_viscosity": kinds.DYNAMIC_VISCOSITY,
}
"""Kinds of the units of the shipped table, by its groups."""

DEFINITION = Reference("definition", "Definition")


@lru_cache(maxsize=1)
def worths() -> dict[str, tuple[Kind, Stated]]:
    """Return what one of each unit is worth, by the unit as printed.

    Raises
    ------
    ProblemsFound
        If the shipped file is damaged.
    """
    content = resources.files("calc").joinpath("data", "units.yaml").read_bytes()
    top, problems = read_text(PLACE, content)
    if top is None or problems:
        raise ProblemsFound(problems)
    found: dict[str, tuple[Kind, Stated]] = {}
    for group in top.entries:
        kind = KINDS[group.key.text]
        for key, value in group.value.entries if isinstance(group.value, Mapping) else ():
            worth = value.get("worth") if isinstance(value, Mapping) else None
            source = value.get("source") if isinstance(value, Mapping) else None
            if not isinstance(worth, Scalar) or not isinstance(source, Scalar):
                raise TypeError(f"{PLACE}: {key.text} lacks its worth or its source")
            found[key.text] = (kind, quantity(worth, kind, source.text))
    return found


def empirical(leaf: Leaf) -> bool:
    """Return whether the numbers of a law hold in SI alone: it divides by units, or adds amounts of them."""
    equation = leaf.residual if isinstance(leaf, Implicit) else leaf
    return _holds_units(equation.expression)


def _holds_units(node: Expression) -> bool:
    if isinstance(node, Operation):
        return any(_holds_units(part) for part in node.args)
    return isinstance(node, Literal) and bool(node.unit)


def units_needed(ledger: Ledger, display: Display) -> list[str]:
    """Return the units that a package may convert into: those displayed, and those that empirical laws ask for."""
    needed = [one.unit(field) for one in (display, *display.beside) for field in CONVERTED]
    needed = [unit for unit in needed if unit not in {display.coherent(kind) for kind, _ in worths().values()}]
    if display.system == SI.system:
        return needed
    for leaf in _worked(ledger):
        if empirical(leaf):
            needed += [SI.coherent(symbol.kind) for symbol in takes(leaf).values()]
            needed.append(display.coherent(gives(leaf).kind))
    return needed


def _worked(ledger: Ledger) -> Iterable[Leaf]:
    """Return each law whose lines are worked on the pages; those of the second opinion are only compared."""
    origins = [column.origin for column in ledger.columns if column.group not in ("second", "verification")]
    return {origin.leaf.name: origin.leaf for origin in origins if isinstance(origin, Derived)}.values()


def enter_worths(ledger: Ledger, units: Iterable[str]) -> None:
    """Enter what one of each of some units is worth; those that stand already are left."""
    standing = {row for column in ledger.find(WORTH) for row in column.rows}
    by_kind: dict[Kind, list[str]] = defaultdict(list)
    for unit in dict.fromkeys(units):
        if unit not in standing and unit in worths():
            by_kind[worths()[unit][0]].append(unit)
    for kind, rows in by_kind.items():
        enter_stated(ledger, WORTH, kind, rows, [worths()[row][1] for row in rows])


def worth_id(unit: str) -> str:
    """Return the id of what one of a unit is worth."""
    return f"units.{unit}.worth"


@cache
def conversion(kind: Kind) -> Equation:
    """Return the law by which a quantity of a kind becomes a number in a unit."""

    @equation(
        gives=Symbol("N_U", kinds.NUMBER, "number in the unit U"),
        source=DEFINITION,
        valid="any unit without a zero of its own",
        amount=Symbol("X", kind, "quantity"),
        worth=Symbol("U", kind, "worth of one unit"),
    )
    def number_in_unit(*, amount: Any, worth: Any) -> Any:  # noqa: ANN401
        """Quantity as a number in a unit."""
        return amount / worth

    return number_in_unit


@equation(
    gives=Symbol("t", kinds.NUMBER, "temperature in degrees Celsius"),
    source=DEFINITION,
    valid="any temperature",
    amount=TEMPERATURE,
)
def degrees_celsius(*, amount: Any) -> Any:  # noqa: ANN401
    """Temperature in degrees Celsius."""
    return amount / KELVIN - 273.15


@equation(
    gives=Symbol("t", kinds.NUMBER, "temperature in degrees Fahrenheit"),
    source=DEFINITION,
    valid="any temperature",
    amount=TEMPERATURE,
)
def degrees_fahrenheit(*, amount: Any) -> Any:  # noqa: ANN401
    """Temperature in degrees Fahrenheit."""
    return 1.8 * (amount / KELVIN) - 459.67


SCALES: dict[str, Equation] = {"°C": degrees_celsius, "°F": degrees_fahrenheit}
"""Scales of temperature, which have a zero of their own."""


def laws_of(display: Display) -> list[Equation]:
    """Return the laws by which a package converts: one for each kind of quantity, and one for each scale."""
    shown = {one.unit("temperature") for one in (display, *display.beside)}
    scales = [law for unit, law in SCALES.items() if unit in shown]
    return [*(conversion(BY_FIELD[field].kind) for field in CONVERTED), *scales]


def law_into(unit: str, kind: Kind) -> Equation:
    """Return the law of a conversion into a unit."""
    return SCALES.get(unit) or conversion(kind)

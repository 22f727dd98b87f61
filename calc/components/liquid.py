"""The liquid: what is stated of it, and the chain of laws that gives the rest."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields
from typing import Generic, TypeVar

from calc.equation import Evaluator
from calc.physics import water

T = TypeVar("T")
U = TypeVar("U")


@dataclass(frozen=True)
class LiquidTerms(Generic[T]):
    """What is stated: a temperature of water, or properties one by one; None where not stated."""

    altitude: T
    temperature: T | None = None
    density: T | None = None
    viscosity: T | None = None
    dynamic_viscosity: T | None = None
    vapour_pressure: T | None = None

    def each(self, convert: Callable[[T], U]) -> LiquidTerms[U]:
        """Return the same statements, each converted."""
        held = {field.name: getattr(self, field.name) for field in fields(self) if field.name != "altitude"}
        rest = {name: None if x is None else convert(x) for name, x in held.items()}
        return LiquidTerms(convert(self.altitude), **rest)


@dataclass(frozen=True)
class Liquid(Generic[T]):
    """The properties in use.

    ``vapour_pressure`` is None where neither it nor a temperature of water is stated.
    """

    density: T
    viscosity: T
    vapour_pressure: T | None
    atmospheric_pressure: T


def liquid(on: Evaluator[T], stated: LiquidTerms[T]) -> Liquid[T]:
    """Return the properties of the liquid: those stated, the rest from the temperature of water.

    Raises
    ------
    ValueError
        If density or viscosity is neither stated nor follows.
    """
    density, viscosity, vapour = stated.density, stated.viscosity, stated.vapour_pressure
    dynamic = stated.dynamic_viscosity
    if stated.temperature is not None:
        kelvin = stated.temperature
        if density is None:
            density = on.apply("fluid.density", water.density, temperature=kelvin)
        if viscosity is None and dynamic is None:
            dynamic = on.apply("fluid.dynamic_viscosity", water.dynamic_viscosity, temperature=kelvin)
        if vapour is None:
            vapour = on.apply("fluid.vapour_pressure", water.vapour_pressure, temperature=kelvin)
    if density is None:
        raise ValueError("a liquid needs a density or a temperature")
    if viscosity is None:
        if dynamic is None:
            raise ValueError("a liquid needs a viscosity or a temperature")
        viscosity = on.apply("fluid.viscosity", water.kinematic_viscosity, dynamic_viscosity=dynamic, density=density)
    height = on.apply("site.geopotential_altitude", water.geopotential_altitude, altitude=stated.altitude)
    air = on.apply("site.atmospheric_pressure", water.atmospheric_pressure, geopotential_altitude=height)
    return Liquid(density, viscosity, vapour, air)

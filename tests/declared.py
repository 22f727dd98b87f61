"""Every equation that the program declares, found by walking its modules."""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import fields, is_dataclass
from functools import lru_cache
from types import ModuleType

import calc
from calc.account.books import scaled
from calc.criteria.criterion import margin_above, margin_below
from calc.equation import Choice, Equation, Implicit, Regimes, Symbol
from calc.kinds import FLOW, KINDS
from calc.verification.entry import laws

ABOVE = ("calc.__main__", "calc.cli", "calc.publish", "calc.report", "calc.pipeline")


def modules() -> Iterator[ModuleType]:
    for found in pkgutil.walk_packages(calc.__path__, "calc."):
        if not found.name.startswith(ABOVE):
            yield importlib.import_module(found.name)


def parts(value: object) -> Iterable[object]:
    if isinstance(value, Regimes | Choice):
        return parts(value.laws)
    if isinstance(value, Mapping):
        return value.values()
    if isinstance(value, tuple):
        return value
    if is_dataclass(value) and not isinstance(value, type | Symbol):
        return [getattr(value, field.name) for field in fields(value)]
    return ()


def within(value: object) -> Iterator[Equation]:
    if isinstance(value, Equation):
        yield value
    elif isinstance(value, Implicit):
        yield from (value.residual, value.start)
    else:
        for part in parts(value):
            yield from within(part)


@lru_cache(maxsize=1)
def equations() -> tuple[Equation, ...]:
    """Return every equation; of those made for any kind, the ones made for a flow."""
    made = (scaled(FLOW), margin_above(FLOW), margin_below(FLOW), *laws(FLOW))
    found = [part for module in modules() for value in vars(module).values() for part in within(value)]
    return tuple({id(one): one for one in (*found, *made)}.values())


def for_each_kind() -> tuple[Equation, ...]:
    """Return the equations made for any kind, for every kind."""
    return tuple(one for kind in KINDS for one in (scaled(kind), margin_above(kind), margin_below(kind), *laws(kind)))


def symbols() -> tuple[Symbol, ...]:
    """Return every symbol of a module."""
    return tuple(value for module in modules() for value in vars(module).values() if isinstance(value, Symbol))

"""Declaring an equation: its symbols, kinds, source and range, and the body that runs."""

from __future__ import annotations

import inspect
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

from calc.equation.dimension import Dimensional, dimension_of
from calc.equation.expression import Expression, Term, linear, terms_of
from calc.kinds import Kind
from calc.problems import EquationError


@dataclass(frozen=True, slots=True)
class Symbol:
    """A letter for a quantity; ``h_f`` is an h with the subscript f.

    Attributes
    ----------
    text : str
        The letter, with its subscript after an underscore.
    kind : Kind
        What it measures.
    words : str
        What it stands for, in the trade's words.
    """

    text: str
    kind: Kind
    words: str


@dataclass(frozen=True, slots=True)
class Reference:
    """A published source: a key for short, and the full entry."""

    key: str
    text: str


@dataclass(frozen=True)
class Equation:
    """A named, sourced equation whose body runs on arrays and reads as slope, dimension and prose."""

    name: str
    title: str
    gives: Symbol
    takes: Mapping[str, Symbol]
    body: Callable[..., Any] = field(repr=False)
    source: Reference
    valid: str

    @cached_property
    def expression(self) -> Expression:
        """The body as a tree."""
        read = self.body(**{name: Term(name) for name in self.takes})
        if not isinstance(read, Expression):
            raise EquationError(f"{self.name}: the body does not depend on its inputs")
        return read

    def formula(self) -> str:
        """Return the equation in symbols on one line."""
        return f"{self.gives.text} = {linear(self.expression, lambda name: self.takes[name].text)}"

    def check(self) -> None:
        """Raise EquationError unless the body balances to the kind that it says it gives."""
        read = self.body(**{name: Dimensional(symbol.kind.dimension) for name, symbol in self.takes.items()})
        found = dimension_of(read)
        if found != self.gives.kind.dimension:
            raise EquationError(
                f"{self.name}: gives {self.gives.kind.phrase} in {self.gives.kind.dimension}, but the body has {found}"
            )
        letters = [symbol.text for symbol in self.takes.values()]
        if len(set(letters)) < len(letters):
            raise EquationError(f"{self.name}: two inputs share a letter: {', '.join(letters)}")
        unused = set(self.takes) - terms_of(self.expression)
        if unused:
            raise EquationError(f"{self.name}: declared and never used: {', '.join(sorted(unused))}")


def equation(
    *, gives: Symbol, source: Reference, valid: str, **takes: Symbol
) -> Callable[[Callable[..., Any]], Equation]:
    """Declare the function below as an equation.

    Parameters
    ----------
    gives : Symbol
        What the body returns.
    source : Reference
        Where the equation was published, or the definition it states.
    valid : str
        The range in which it may be trusted, in words, printed in every package.
    **takes : Symbol
        One for each keyword-only parameter of the body, in their order.

    Returns
    -------
    callable
        Makes an Equation of the function; its docstring's first line becomes the title.

    Raises
    ------
    EquationError
        If parameters and symbols differ, the body cannot be read, or it does not balance.
    """

    def declare(body: Callable[..., Any]) -> Equation:
        name = body.__name__
        parameters = inspect.signature(body).parameters
        if list(parameters) != list(takes):
            raise EquationError(f"{name}: parameters {list(parameters)} but symbols {list(takes)}")
        if any(p.kind is not inspect.Parameter.KEYWORD_ONLY for p in parameters.values()):
            raise EquationError(f"{name}: inputs are keyword-only, so that none can change places")
        title = (inspect.getdoc(body) or "").split("\n")[0].rstrip(".")
        if not title:
            raise EquationError(f"{name}: the docstring's first line is printed as its title")
        made = Equation(name, title, gives, dict(takes), body, source, valid)
        made.check()
        return made

    return declare

"""The reading of a body as prose: a tree from which formulas are set, in symbols or in numbers."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from calc.equation.reading import Amount, Reading, Unit
from calc.problems import EquationError

__all__ = ["Amount", "Expression", "Literal", "Operation", "Term", "Unit", "linear"]

LONGEST_LITERAL = 9
"""Significant digits of a number in a body: constants longer than this hide a value that needs a name."""

LARGEST_WHOLE = 1e16
"""Numbers from here on are printed with an exponent even when whole."""


@dataclass(frozen=True, eq=False)
class Expression(Reading):
    """A node of the tree."""

    def apply(self, operation: str, args: tuple[Any, ...]) -> Operation:
        """Return the operation on its operands, each made a node."""
        return Operation(operation, tuple(_node(a) for a in args))


@dataclass(frozen=True, eq=False)
class Term(Expression):
    """An input, by its name in the declaration."""

    name: str


@dataclass(frozen=True, eq=False)
class Literal(Expression):
    """A number written in the body, with its unit where it has one."""

    text: str
    unit: str = ""


@dataclass(frozen=True, eq=False)
class Operation(Expression):
    """An operation on nodes; names are those of ``reading.OPERATIONS``."""

    operation: str
    args: tuple[Expression, ...]


def _node(operand: Any) -> Expression:  # noqa: ANN401
    if isinstance(operand, Expression):
        return operand
    if isinstance(operand, Amount):
        return Literal(_digits(operand.number), operand.unit)
    return Literal(_digits(operand))


def _digits(number: float) -> str:
    if number == math.pi:
        return "π"
    whole = float(number).is_integer() and abs(number) < LARGEST_WHOLE
    text = repr(int(number)) if whole else repr(float(number))
    if len(text.split("e")[0].replace(".", "").strip("-0")) > LONGEST_LITERAL:
        raise EquationError(f"{text}: too long a number to print inside a formula; make it an input")
    return text


def terms_of(node: Expression) -> set[str]:
    """Return the names of the inputs in a tree."""
    if isinstance(node, Term):
        return {node.name}
    return {name for part in node.args for name in terms_of(part)} if isinstance(node, Operation) else set()


_PRECEDENCE = {"add": 1, "subtract": 1, "multiply": 2, "divide": 2, "negative": 3, "power": 4, "square": 4}
_SIGNS = {"add": " + ", "subtract": " - ", "multiply": " * ", "divide": " / "}


def linear(node: Expression, write: Callable[[str], str]) -> str:
    """Return a tree as one line of plain text that arithmetic software can read.

    Parameters
    ----------
    node : Expression
        The tree.
    write : callable
        Gives the text of an input from its name.

    Returns
    -------
    str
        Operators ``+ - * / ^``, functions sqrt, log10, ln, exp, sin, abs, and ``pi``; amounts as their SI number.
    """
    return _linear(node, write, 0)


def _linear(node: Expression, write: Callable[[str], str], outer: int) -> str:
    match node:
        case Term(name=name):
            return write(name)
        case Literal(text=text):
            bracketed = text.startswith("-") and outer > _PRECEDENCE["power"]
            return "pi" if text == "π" else f"({text})" if bracketed else text
        case Operation(operation=operation, args=args) if operation in _PRECEDENCE:
            rank = _PRECEDENCE[operation]
            text = _operator(operation, args, write, rank)
            return f"({text})" if rank < outer else text
        case Operation(operation=operation, args=args):
            return f"{operation}({_linear(args[0], write, 0)})"
        case _:
            raise EquationError(f"{node!r} has no prose")


def _operator(operation: str, args: tuple[Expression, ...], write: Callable[[str], str], rank: int) -> str:
    match operation:
        case "negative":
            return f"-{_linear(args[0], write, rank)}"
        case "square":
            return f"{_linear(args[0], write, rank + 1)}^2"
        case "power":
            return f"{_linear(args[0], write, rank + 1)}^{_linear(args[1], write, rank)}"
        case _:
            right = rank + (operation in ("subtract", "divide"))
            return f"{_linear(args[0], write, rank)}{_SIGNS[operation]}{_linear(args[1], write, right)}"

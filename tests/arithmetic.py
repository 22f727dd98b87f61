"""An evaluator of one-line formulas that knows nothing of the program: numbers, names, + - * / ^ and functions."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping

TOKEN = re.compile(r"\s*(?:(\d+\.?\d*(?:[eE][+-]?\d+)?)|([A-Za-z_][A-Za-z_0-9]*)|([-+*/^()]))")
FUNCTIONS: dict[str, Callable[[float], float]] = {
    "sqrt": math.sqrt,
    "log10": math.log10,
    "ln": math.log,
    "exp": math.exp,
    "sin": math.sin,
    "abs": abs,
}


class Formula:
    """A text being read from left to right; a power binds before a sign, and from the right."""

    def __init__(self, text: str, values: Mapping[str, float]) -> None:
        self.tokens: list[str] = []
        self.values = {**values, "pi": math.pi}
        at = 0
        while at < len(text.rstrip()):
            match = TOKEN.match(text, at)
            assert match, f"not arithmetic: {text[at:]!r}"
            self.tokens.append(match[0].strip())
            at = match.end()
        self.at = 0

    def next_is(self, *signs: str) -> str | None:
        if self.at < len(self.tokens) and self.tokens[self.at] in signs:
            self.at += 1
            return self.tokens[self.at - 1]
        return None

    def value(self) -> float:
        found = self.sum()
        assert self.at == len(self.tokens), f"left over: {self.tokens[self.at :]}"
        return found

    def sum(self) -> float:
        found = self.product()
        while sign := self.next_is("+", "-"):
            term = self.product()
            found = found + term if sign == "+" else found - term
        return found

    def product(self) -> float:
        found = self.signed()
        while sign := self.next_is("*", "/"):
            factor = self.signed()
            found = found * factor if sign == "*" else found / factor
        return found

    def signed(self) -> float:
        if self.next_is("-"):
            return -self.signed()
        return self.power()

    def power(self) -> float:
        found = self.atom()
        return found ** self.signed() if self.next_is("^") else found

    def atom(self) -> float:
        if self.next_is("("):
            found = self.sum()
            assert self.next_is(")")
            return found
        token = self.tokens[self.at]
        self.at += 1
        if token in FUNCTIONS and self.next_is("("):
            found = FUNCTIONS[token](self.sum())
            assert self.next_is(")")
            return found
        return self.values[token] if token in self.values else float(token)


def compute(text: str, values: Mapping[str, float]) -> float:
    """Return the value of a formula."""
    return Formula(text, values).value()

"""What can be wrong with a quantity, in the words of a problem without its place."""

from __future__ import annotations

from calc.problems import CalcError

CODES = (
    "unknown-unit",
    "bare-number",
    "wrong-dimension",
    "not-finite",
    "not-a-quantity",
    "ambiguous-unit",
)
"""Every code that `UnitTrouble` carries."""

_LONGEST_SHOWN = 60


class UnitTrouble(CalcError):
    """A text is not the quantity asked for.

    Attributes
    ----------
    code : str
        One of `CODES`.
    found, expected, hint : str
        As in `calc.problems.Problem`; ``hint`` may be empty.
    """

    def __init__(self, code: str, found: str, expected: str, hint: str = "") -> None:
        self.code = code
        self.found = found
        self.expected = expected
        self.hint = hint
        super().__init__(f"{found}; expected {expected}")


def quoted(text: str) -> str:
    """Return text in quotes for a message: on one line, printable and of bearable length."""
    shown = text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 1] + "…"
    return "'" + "".join(letter if letter.isprintable() else "?" for letter in shown) + "'"

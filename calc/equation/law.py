"""Laws: an equation, or one of the three ways in which equations combine."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from calc.equation.declaration import Equation, Symbol


@dataclass(frozen=True, slots=True)
class Bound:
    """Where the next regime begins: at a number or at the input of that name.

    ``strict`` leaves the bound itself to the regime before.
    """

    at: float | str
    strict: bool = False


@dataclass(frozen=True)
class Regimes:
    """A law that changes with one of its inputs.

    Law k governs from ``bounds[k-1]`` up to ``bounds[k]``. ``None`` for a law says that no value is defined
    there (a friction factor at rest).
    """

    name: str
    title: str
    by: str
    bounds: tuple[Bound, ...]
    laws: tuple[Law | None, ...]
    labels: tuple[str, ...]


@dataclass(frozen=True)
class Choice:
    """A law picked by a word in the inputs, such as the name of a friction law."""

    name: str
    title: str
    by: str
    laws: Mapping[str, Law | None]


@dataclass(frozen=True)
class Implicit:
    """A quantity found as the root of a residual.

    Attributes
    ----------
    residual : Equation
        Zero at the root; takes the unknown as one of its inputs.
    unknown : str
        The input that is sought.
    gives : Symbol
        The unknown as a result.
    start : Equation
        An explicit estimate, from a subset of the other inputs.
    """

    name: str
    title: str
    residual: Equation
    unknown: str
    gives: Symbol
    start: Equation


@dataclass(frozen=True)
class Labels:
    """A word for each row: ``words[codes[i]]``; what a Choice reads. ``places`` says where each was stated."""

    words: tuple[str, ...]
    codes: npt.NDArray[np.int64]
    places: tuple[str, ...] = ()

    def take(self, index: npt.NDArray[np.int64]) -> Labels:
        """Return the labels of some rows; one label for all serves as it is."""
        if len(self.codes) == 1 < len(index):
            return self
        places = tuple(self.places[int(k)] for k in index) if self.places else ()
        return Labels(self.words, self.codes[index], places)

    def word(self, row: int) -> str:
        """Return the word of a row."""
        return self.words[int(self.codes[0 if len(self.codes) == 1 else row])]

    def said(self, row: int) -> str:
        """Return the word of a row, with the place where it was stated."""
        place = self.places[0 if len(self.codes) == 1 else row] if self.places else ""
        return f"{self.word(row)} at {place}" if self.places else self.word(row)


Leaf = Equation | Implicit
Law = Equation | Implicit | Regimes | Choice


def takes(leaf: Leaf) -> dict[str, Symbol]:
    """Return the inputs that a leaf needs, by name."""
    if isinstance(leaf, Equation):
        return dict(leaf.takes)
    return {name: symbol for name, symbol in leaf.residual.takes.items() if name != leaf.unknown}


def gives(leaf: Leaf) -> Symbol:
    """Return the symbol of a leaf's result."""
    return leaf.gives

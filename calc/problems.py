"""Problems are values, collected and shown together; the errors that carry them.

::

    CalcError
      ProblemsFound      the inputs or the call are wrong: a list of Problem (exit 2)
      NotConverged       a case has no solution: with the history of the attempt (exit 3)
      IntegrityError     a package or a printed number does not prove (exit 4)
      StorageError       disk or permission (exit 5)
      EquationError      an equation is badly declared (ours, raised at import)
      Unresolved         a printed number has no line in the ledger (ours, stops publishing)

A criterion not met is a verdict and a doubtful practice is a finding; neither is a problem.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from itertools import takewhile

from calc.marks import Mark

_MOST_NEAR = 8
WIDEST = 240
"""Characters of a line that are shown with a problem."""


class CalcError(Exception):
    """The root of every error this program raises on purpose."""


@dataclass(frozen=True, slots=True, order=True)
class Problem:
    """One thing wrong in the inputs.

    Attributes
    ----------
    mark : Mark
        Where it stands.
    code : str
        A stable word for the sort of problem, such as ``unknown-unit``.
    path : str
        The place in the project, such as ``pipes.upper-main.bore``.
    found, expected : str
        What stands there and what should; a sentence is made of the two.
    hint : str
        A way out, or empty.
    """

    mark: Mark
    code: str
    path: str
    found: str
    expected: str
    hint: str = ""

    def sentence(self) -> str:
        """Return ``path: found; expected …``."""
        head = f"{self.path}: " if self.path else ""
        tail = f"; expected {self.expected}" if self.expected else ""
        return f"{head}{self.found}{tail}"


class ProblemsFound(CalcError):
    """The project is wrong.

    Attributes
    ----------
    problems : tuple of Problem
        Sorted by place.
    texts : mapping of str to str
        The text of each file read, so that the line at fault can be shown.
    """

    def __init__(self, problems: Iterable[Problem], texts: Mapping[str, str] | None = None) -> None:
        self.problems = tuple(sorted(set(problems)))
        self.texts = dict(texts or {})
        super().__init__(f"{len(self.problems)} problem(s)")

    def __str__(self) -> str:
        """Return every problem in full, in the order of their places."""
        lines = {name: text.splitlines() for name, text in self.texts.items()}
        return "\n".join(_shown(problem, lines.get(problem.mark.file, [])) for problem in self.problems)


class NotConverged(CalcError):
    """A case has no solution, or none was found; carries why."""


class IntegrityError(CalcError):
    """Something printed or filed does not prove."""


class StorageError(CalcError):
    """A file or folder cannot be read or written."""


class EquationError(CalcError):
    """An equation that is badly declared: ours, raised at import."""


class Unresolved(CalcError):
    """A number that has no line in the ledger: ours, stops publishing."""


def show(problem: Problem, texts: Mapping[str, str]) -> str:
    """Return a problem as shown to the user: place and sentence, the line, carets, the hint.

    Of a line longer than `WIDEST` that part is shown in which the problem stands, with ``…`` for the rest.
    """
    return _shown(problem, texts.get(problem.mark.file, "").splitlines())


def _shown(problem: Problem, lines: Sequence[str]) -> str:
    shown = [f"{problem.mark}: {problem.sentence()}", *underlined(problem.mark, lines)]
    if problem.hint:
        shown.append(f"  hint: {problem.hint}")
    return "\n".join(shown)


def underlined(mark: Mark, lines: Sequence[str]) -> list[str]:
    """Return the line in which a place stands, with its number, and one that underlines the place.

    Parameters
    ----------
    mark : Mark
        The place; nothing is returned of a line that is not there.
    lines : sequence of str
        Of its file.
    """
    if not 0 < mark.line <= len(lines):
        return []
    source, column = _part(lines[mark.line - 1], mark.column)
    gutter = f"{mark.line:>3}"
    length = max(1, min(mark.length, len(source) - column + 1))
    return [f"{gutter} | {source}", f"{' ' * len(gutter)} | {' ' * (column - 1)}{'^' * length}"]


def _part(line: str, column: int) -> tuple[str, int]:
    """Return the part of a line to show, and where in it a column of the whole line stands."""
    start = 0 if len(line) <= WIDEST else max(0, column - 1 - WIDEST // 3)
    end = start + WIDEST
    part = line[start:end].replace("\t", " ")
    before, after = "…" * (start > 0), "…" * (end < len(line))
    return f"{before}{part}{after}", column - start + len(before)


def nearest(word: str, known: Sequence[str]) -> str:
    """Return "did you mean 'x'?" for the known word nearest to ``word``, or an empty string.

    Of words equally near, that which begins alike for longest.
    """
    near = difflib.get_close_matches(word, known, _MOST_NEAR)
    if not near:
        return ""
    likeness = [difflib.SequenceMatcher(None, one, word).ratio() for one in near]
    alike = [one for one, ratio in zip(near, likeness, strict=True) if ratio == likeness[0]]
    return f"did you mean '{max(alike, key=lambda one: _begins_alike(one, word))}'?"


def _begins_alike(one: str, other: str) -> int:
    """Return how many letters two words have in common before they part."""
    return sum(1 for _ in takewhile(lambda pair: pair[0] == pair[1], zip(one, other, strict=False)))

"""One value held against what the program computes."""

from __future__ import annotations

from dataclasses import dataclass

from calc.components import Stated
from calc.kinds import Kind


@dataclass(frozen=True, slots=True)
class Check:
    """What was expected of a case, what was got, and whether they are near enough.

    Attributes
    ----------
    id : str
        ``case/quantity``: the row in the ledger.
    title, source, source_class : str
        Of the case.
    concerns : tuple of str
        What the case was run for, among `calc.verification.use.TITLES`; none when it is run for every issue.
    quantity : str
        The path of the value, such as ``pipes.highest-main.flow``.
    kind : Kind
        What it measures; numbers are in its SI unit.
    stated : Stated
        The expected value with its text and mark.
    limit : Stated
        The difference allowed, as written.
    relative : bool
        Whether ``limit`` is a share of the expected value.
    got : float
        As computed now; NaN when the case has no solution.
    """

    id: str
    title: str
    source: str
    source_class: str
    concerns: tuple[str, ...]
    quantity: str
    kind: Kind
    stated: Stated
    limit: Stated
    relative: bool
    got: float

    @property
    def expected(self) -> float:
        """The value as published, in SI."""
        return self.stated.si

    @property
    def difference(self) -> float:
        """What was got less what was expected."""
        return self.got - self.expected

    @property
    def allowed(self) -> float:
        """The largest difference allowed, either way."""
        return self.limit.si * abs(self.expected) if self.relative else self.limit.si

    @property
    def passed(self) -> bool:
        """Whether the difference is allowed; a NaN is not."""
        return abs(self.difference) <= self.allowed

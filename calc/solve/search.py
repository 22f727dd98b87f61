"""The search for the one head at which a junction balances: which head to try next.

Written as a generator that yields a trial and is sent its balance, so that the one who drives it evaluates
the branches: of a single case, or of many in step.
"""

from __future__ import annotations

from collections.abc import Generator, Iterable
from dataclasses import dataclass
from typing import NamedTuple

from calc.solve.height import Height

ROUNDING = 2.0**-52
WITHIN = 1e-9
"""Width (m) to which the bracket is closed around the head, its ends certified by their signs."""
SHARE = 1e-10
"""The imbalance is also brought below this share of the largest flow: on a flat curve that pins the head."""
NOISE = 8 * ROUNDING
"""An imbalance below this share of the sum of all flows is the rounding of that sum: the head is exact."""


class Balance(NamedTuple):
    """What a trial gave: the imbalance, the largest flow and the sum of all flows' magnitudes, m³/s."""

    imbalance: float
    largest: float
    total: float


@dataclass(frozen=True)
class Trial:
    """A head to try and how it was chosen."""

    height: Height
    rule: str
    uses: tuple[int, ...] = ()
    step: float = float("nan")
    reservoir: int = -1


@dataclass(frozen=True)
class Point:
    """A trial made."""

    row: int
    height: Height
    imbalance: float


@dataclass(frozen=True)
class Outcome:
    """How the search ended: the best point, the ends of the bracket, and why there is none better."""

    best: Point
    low: Point | None
    high: Point | None
    exact: bool
    allowed: float

    @property
    def width(self) -> float:
        """Width of the bracket, m; 0 for an exact balance, infinite while an end is unknown."""
        if self.exact:
            return 0.0
        if self.low is None or self.high is None:
            return float("inf")
        return self.high.height.above(self.low.height)


Trying = Generator[Trial, Balance, Outcome]
Asking = Generator[Trial, Balance, Point]


class Search:
    """The bracket so far, and the phases by which it narrows.

    Parameters
    ----------
    levels : iterable of (float, int)
        Level (m) and node of each reservoir at the junction; not empty.
    start : float or None
        Head to try first, m.
    narrowing : str
        ``chandrupatla`` or ``bisection``.
    tolerance : float
        Largest imbalance accepted, m³/s.
    """

    def __init__(
        self, levels: Iterable[tuple[float, int]], start: float | None, narrowing: str, tolerance: float
    ) -> None:
        distinct: dict[float, int] = {}
        for level, node in sorted(levels):
            distinct.setdefault(level, node)
        self.levels = list(distinct.items())
        self.start = start
        self.narrowing = narrowing
        self.tolerance = tolerance
        self.low: Point | None = None
        self.high: Point | None = None
        self.best: Point | None = None
        self.allowed = tolerance
        self.exact = False
        self.count = 0

    def run(self) -> Trying:
        """Yield trials until the head is found or cannot be told more closely."""
        for phase in (self._start, self._try_levels, self._widen, self._narrow):
            if not self.exact:
                yield from phase()
        return self.outcome()

    def outcome(self) -> Outcome:
        """Return where the search stands."""
        if self.best is None:
            raise ValueError("no trial has been made")
        return Outcome(self.best, self.low, self.high, self.exact, self.allowed)

    def _ask(self, trial: Trial) -> Asking:
        balance = yield trial
        point = Point(self.count, trial.height, balance.imbalance)
        self.count += 1
        if point.imbalance > 0:
            self.low = point
        else:
            self.high = point
        if self.best is None or not abs(point.imbalance) > abs(self.best.imbalance):
            self.best = point
            self.allowed = min(self.tolerance, max(SHARE * balance.largest, NOISE * balance.total))
            self.exact = abs(point.imbalance) <= NOISE * balance.total
        return point

    def _start(self) -> Generator[Trial, Balance, None]:
        if self.start is not None:
            yield from self._ask(Trial(Height(self.start), "start"))

    def _try_levels(self) -> Generator[Trial, Balance, None]:
        while not self.exact:
            inside = [
                (level, node)
                for level, node in self.levels
                if (self.low is None or level > self.low.height.value)
                and (self.high is None or level < self.high.height.value)
            ]
            if not inside:
                return
            level, node = inside[len(inside) // 2]
            yield from self._ask(Trial(Height(level), "level", reservoir=node))

    def _widen(self) -> Generator[Trial, Balance, None]:
        lowest, highest = self.levels[0][0], self.levels[-1][0]
        step = max(1.0, highest - lowest)
        while not self.exact:
            above = self.high is None or (
                self.low is not None
                and self.low.height.value >= highest
                and self.high.height.above(self.low.height) > step
            )
            below = self.low is None or (
                self.high is not None
                and self.high.height.value <= lowest
                and self.high.height.above(self.low.height) > step
            )
            if above and self.low is not None:
                trial = Trial(self.low.height.raised(step), "widened above", (self.low.row,), step)
            elif below and self.high is not None:
                trial = Trial(self.high.height.raised(-step), "widened below", (self.high.row,), step)
            else:
                return
            yield from self._ask(trial)
            step *= 2

    def _narrow(self) -> Generator[Trial, Balance, None]:
        low, high = self.low, self.high
        if low is None or high is None:
            return
        a, b = (low, high) if abs(low.imbalance) < abs(high.imbalance) else (high, low)
        c: Point | None = None
        while not (self.exact or self._done()):
            trial = self._choose(a, b, c)
            if trial.height in (a.height, b.height):
                return
            new = yield from self._ask(trial)
            if (new.imbalance > 0) == (a.imbalance > 0):
                a, c = new, a
            else:
                a, b, c = new, a, b

    def _done(self) -> bool:
        state = self.outcome()
        return abs(state.best.imbalance) <= state.allowed and state.width <= WITHIN

    def _choose(self, a: Point, b: Point, c: Point | None) -> Trial:
        width = b.height.above(a.height)
        half = Trial(a.height.raised(width / 2), "halved", (a.row, b.row))
        if self.narrowing == "bisection":
            return half
        if c is None:
            share = a.imbalance / (a.imbalance - b.imbalance)
            chosen = Trial(a.height.raised(width * share), "false position", (a.row, b.row))
        elif (found := _parabola(a, b, c, width)) is not None:
            share = found
            chosen = Trial(a.height.raised(width * share), "inverse quadratic", (a.row, b.row, c.row))
        else:
            return half
        step = WITHIN / 2
        if abs(width) > WITHIN and not step < share * abs(width) < abs(width) - step:
            nearer, toward = (a, width) if share * abs(width) <= step else (b, -width)
            word = "closed above" if toward > 0 else "closed below"
            return Trial(nearer.height.raised(step if toward > 0 else -step), word, (nearer.row,), step)
        return half if chosen.height in (a.height, b.height) else chosen


def _parabola(a: Point, b: Point, c: Point, width: float) -> float | None:
    """Return the share of the way from a to b, or None where the three points do not support a parabola."""
    beyond = c.height.above(b.height)
    rise = c.imbalance - b.imbalance
    if beyond == 0 or rise == 0 or c.imbalance == a.imbalance:
        return None
    place = -width / beyond
    value = (a.imbalance - b.imbalance) / rise
    if not (value * value < place and (1 - value) ** 2 < 1 - place):
        return None
    share_b = a.imbalance / (b.imbalance - a.imbalance) * (c.imbalance / (b.imbalance - c.imbalance))
    share_c = a.imbalance / (c.imbalance - a.imbalance) * (b.imbalance / (c.imbalance - b.imbalance))
    share = share_b + c.height.above(a.height) / width * share_c
    return share if 0 < share < 1 else None

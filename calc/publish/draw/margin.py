"""Names in the right margin, each beside the end of its curve, moved apart as little as may be."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from calc.publish.draw import look

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.faces import Voice
    from calc.publish.draw.geometry import Array
    from calc.publish.draw.sheet import Sheet

WRAP = 92.0  # pt: a longer name is broken
OFF = 12.0  # pt from the end of the curve to its name


@dataclass(frozen=True, slots=True)
class Ending:
    """A name for what ends at a height.

    Attributes
    ----------
    up : float
        Where the curve ends, pt.
    text : str
        Its name.
    voice : Voice
        How it is written.
    """

    up: float
    text: str
    voice: Voice

    @property
    def lines(self) -> tuple[str, ...]:
        """Return the name broken to the margin."""
        return self.voice.wrap(self.text, WRAP)


def room(endings: Sequence[tuple[str, Voice]]) -> float:
    """Return the width that the names need, leaders included, pt."""
    widths = [voice.width(line) for text, voice in endings for line in voice.wrap(text, WRAP)]
    return max(widths, default=0.0) + OFF + look.EDGE


def write(sheet: Sheet, across: float, endings: Sequence[Ending], low: float, high: float) -> None:
    """Write the names right of ``across``, kept between ``low`` and ``high``."""
    heights = np.array([len(ending.lines) * ending.voice.line for ending in endings])
    middles = spread(np.array([ending.up for ending in endings]), heights, low, high)
    for ending, middle in zip(endings, middles, strict=True):
        up = float(middle)
        ends = [(across + 1.5, ending.up), (across + 4.0, ending.up), (across + OFF - 2.0, up)]
        sheet.rule(ends, look.RULE, 0.5, layer=2.0, name="leader")
        line = ending.voice.line
        baseline = up + len(ending.lines) * line / 2 - 0.75 * line
        for text in ending.lines:
            sheet.write((across + OFF, baseline), text, ending.voice)
            baseline -= line


def spread(want: Array, size: Array, low: float, high: float) -> Array:
    """Return middles nearest to those wanted that keep order and size between ``low`` and ``high``.

    Least squared movement, by pooling neighbours that would overlap. Where the sizes fill more than the
    height, they stand from ``low`` upwards.
    """
    if len(want) == 0:
        return want
    order = np.argsort(want, kind="stable")
    sizes = size[order]
    below = np.concatenate([[0.0], np.cumsum((sizes[:-1] + sizes[1:]) / 2)])
    pools: list[list[float]] = []
    for value in want[order] - below:
        pools.append([float(value), 1.0])
        while len(pools) > 1 and pools[-2][0] > pools[-1][0]:
            last, count = pools.pop()
            first, many = pools[-1]
            pools[-1] = [(first * many + last * count) / (many + count), many + count]
    base = np.concatenate([np.full(int(count), value) for value, count in pools])
    least = low + sizes[0] / 2
    base = np.clip(base, least, max(high - sizes[-1] / 2 - below[-1], least))
    middles = np.empty(len(want))
    middles[order] = base + below
    return middles

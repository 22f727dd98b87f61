"""Scales: from a value to points on the sheet, with the values named beside them."""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, floor, isfinite, log10
from typing import TYPE_CHECKING

from calc.publish.draw import look

if TYPE_CHECKING:
    from collections.abc import Iterable

    from calc.publish.draw.faces import Voice
    from calc.publish.draw.sheet import Sheet

STEPS = (1.0, 2.0, 2.5, 5.0, 10.0)
TICK = 3.0
GROUPED_FROM = 10_000.0
PLAIN_DECADES = 4
SUPERSCRIPT = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


@dataclass(frozen=True, slots=True)
class Scale:
    """A straight scale from ``low`` at ``start`` to ``high`` at ``end`` (points)."""

    low: float
    high: float
    start: float
    end: float

    def at(self, value: float) -> float:
        """Return where a value lies, in points."""
        return self.start + (value - self.low) / (self.high - self.low) * (self.end - self.start)

    def ticks(self, most: int = 7) -> tuple[tuple[float, str], ...]:
        """Return round values within the scale, with their texts; at most about ``most``."""
        step = _step((self.high - self.low) / max(1, most))
        decimals = max(0, -floor(log10(step) + 1e-9) + (1 if _is_quarter(step) else 0))
        first, last = ceil(self.low / step - 1e-9), floor(self.high / step + 1e-9)
        return tuple((k * step, number(k * step, decimals)) for k in range(first, last + 1))


def spanning(values: Iterable[float]) -> tuple[float, float]:
    """Return the least and greatest of the values, drawn apart where they are one."""
    known = [value for value in values if isfinite(value)]
    low, high = (min(known), max(known)) if known else (0.0, 1.0)
    least = max(abs(low), abs(high), 1.0) * 1e-9
    if high - low <= least:
        apart = max(0.5, abs(low) * 1e-3)
        return low - apart, high + apart
    return low, high


def number(value: float, decimals: int) -> str:
    """Return a value of a scale as printed: true minus, thin space in long figures, never a signed zero."""
    text = f"{abs(value):,.{decimals}f}" if abs(value) >= GROUPED_FROM else f"{abs(value):.{decimals}f}"
    zero = not any(character in "123456789" for character in text)
    return ("\u2212" if value < 0 and not zero else "") + text.replace(",", "\u2009")


def decade(power: int) -> str:
    """Return a power of ten as printed: plain while it is short."""
    if power >= 0:
        return number(10.0**power, 0) if power <= PLAIN_DECADES else "10" + str(power).translate(SUPERSCRIPT)
    plain = -power < PLAIN_DECADES
    return f"{10.0**power:.{-power}f}" if plain else "10" + str(power).translate(SUPERSCRIPT)


def up_axis(sheet: Sheet, scale: Scale, across: float, voice: Voice, *, most: int = 7) -> None:
    """Rule an upright axis at ``across`` with its values on the left."""
    sheet.rule([(across, scale.start), (across, scale.end)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
    for value, text in scale.ticks(most):
        up = scale.at(value)
        sheet.rule([(across - TICK, up), (across, up)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
        sheet.write((across - TICK - 2.0, up - 0.32 * voice.size), text, voice, "right")


def across_axis(sheet: Sheet, scale: Scale, up: float, voice: Voice, *, most: int = 7, unsigned: bool = False) -> None:
    """Rule a level axis at ``up`` with its values beneath; ``unsigned`` for distances to either side."""
    sheet.rule([(scale.start, up), (scale.end, up)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
    for value, text in scale.ticks(most):
        x = scale.at(value)
        sheet.rule([(x, up), (x, up - TICK)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
        sheet.write((x, up - TICK - voice.size), text.lstrip("\u2212") if unsigned else text, voice, "center")


def widest(scale: Scale, voice: Voice, most: int = 7) -> float:
    """Return the room that the values left of an upright axis take, pt."""
    return max((voice.width(text) for _, text in scale.ticks(most)), default=0.0) + TICK + 2.0


def _step(rough: float) -> float:
    """Return the round step at or above a rough one."""
    power = 10.0 ** floor(log10(rough))
    return next((step * power for step in STEPS if step * power >= rough * (1 - 1e-9)), 10.0 * power)


def _is_quarter(step: float) -> bool:
    """Tell whether a step such as 2.5 or 0.25 needs one decimal more."""
    lead = step / 10.0 ** floor(log10(step) + 1e-9)
    return abs(lead - STEPS[2]) < 1e-6  # noqa: PLR2004

"""Convergence: each measure of how far from an answer a case was, by step, on a scale of decades.

The tolerance is a dashed line with its value. Where a measure has a sign, filled circles are more toward the
junction than away, open ones the other way. A value of exactly zero has no decade: it stands on a line of its
own beneath the scale, named 0.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from math import ceil, floor, isfinite, log10
from typing import TYPE_CHECKING

from calc.publish.draw import key, look, margin, scale
from calc.publish.draw.faces import Voice, voice
from calc.publish.draw.geometry import Box
from calc.publish.draw.placing import Label, Surroundings, place
from calc.publish.draw.settings import plain
from calc.publish.draw.sheet import Sheet

if TYPE_CHECKING:
    from collections.abc import Callable

    from matplotlib.figure import Figure

    from calc.publish.draw.geometry import Point
    from calc.report.figures import Convergence, Panel

FEW = 14  # steps whose values are all printed
TALL, LOW = 46.0, 26.0  # mm: height of the first panel and of the others
BETWEEN = 8.0  # pt
ZERO_ROOM = 16.0  # pt beneath the decades
SPARE = 0.35  # decades beyond the values
MOST_DECADES = 6  # named beside the axis
LEAST_APART = 12.0  # pt between two of them


@dataclass(frozen=True, slots=True)
class Decades:
    """A scale of decades, with a line for zero beneath where one is needed.

    Attributes
    ----------
    straight : Scale
        Of the logarithms.
    zero : float or None
        Where zero stands, in points; None where no value is zero.
    """

    straight: scale.Scale
    zero: float | None

    def at(self, value: float) -> float:
        """Return where the size of a value stands, in points."""
        if value == 0 and self.zero is not None:
            return self.zero
        return self.straight.at(log10(abs(value)))

    def ticks(self) -> list[tuple[float, str]]:
        """Return the whole decades, all or every second, third …, with their texts."""
        first, last = ceil(self.straight.low - 1e-9), floor(self.straight.high + 1e-9)
        apart = abs(self.straight.at(1.0) - self.straight.at(0.0))
        step = max(1, ceil((last - first) / MOST_DECADES), ceil(LEAST_APART / apart))
        found = [(self.straight.at(power), scale.decade(power)) for power in range(last, first - 1, -step)]
        return [*found, (self.zero, "0")] if self.zero is not None else found


@dataclass(frozen=True, slots=True)
class Voices:
    """How the sheet speaks."""

    soft: Voice
    italic: Voice
    plain: Voice


def draw(figure: Convergence) -> Figure:
    """Draw the measures, one panel each over a common axis of steps.

    Parameters
    ----------
    figure : Convergence
        With at least one step and one panel; every panel has one value and one text for each step.

    Returns
    -------
    Figure
        165 mm wide.
    """
    with plain():
        return _draw(figure).figure


def _draw(figure: Convergence) -> Sheet:
    say = Voices(voice(look.SOFT), voice(look.SOFT, slant="italic"), voice(look.INK))
    heights = [(TALL if not k else LOW) * look.POINTS_PER_MM for k in range(len(figure.panels))]
    items = _key(figure)
    full = look.WIDTH - 2 * look.EDGE
    foot = scale.TICK + say.soft.line + say.italic.line + 6.0 + key.height(items, say.soft, full) + 3.0
    sheet = Sheet(sum(heights) + BETWEEN * (len(heights) - 1) + foot)
    decades, top = [], sheet.box.top
    for panel, height in zip(figure.panels, heights, strict=True):
        decades.append(_decades(panel, top - height + 3.0, top - say.italic.line - 5.0))
        top -= height + BETWEEN
    left = sheet.box.left + max(
        say.soft.width(text) + scale.TICK + 2.0 for found in decades for _, text in found.ticks()
    )
    right = sheet.box.right - max(
        margin.room([(_limit(panel), say.soft)]) if panel.tolerance is not None else 14.0 for panel in figure.panels
    )
    steps = scale.Scale(0.4, len(figure.numbers) + 0.6, left, right)
    for panel, found in zip(figure.panels, decades, strict=True):
        _panel(sheet, panel, found, steps, say)
    _foot(figure, sheet, steps, say, foot)
    area = Box(sheet.box.left, sheet.box.foot, sheet.box.right, sheet.box.foot + key.height(items, say.soft, full))
    key.write(sheet, items, say.soft, area)
    return sheet


def alt(figure: Convergence) -> str:
    """Return the drawing in words."""
    count = len(figure.numbers)
    parts = [f"{figure.title}. {count} {figure.step}{'' if count == 1 else 's'}."]
    for panel in figure.panels:
        known = [(v, text) for v, text in zip(panel.values, panel.texts, strict=True) if v is not None]
        if not known:
            continue
        course = f"from {known[0][1]} to {known[-1][1]}" if len(known) > 1 else known[0][1]
        parts.append(f"{panel.name[:1].upper()}{panel.name[1:]}: {course}.")
        if panel.tolerance is not None:
            met = abs(known[-1][0]) <= panel.tolerance
            parts.append(f"The last is {'within' if met else 'outside'} the tolerance of {panel.tolerance_text}.")
    return " ".join(parts)


def _limit(panel: Panel) -> str:
    return f"tolerance {panel.tolerance_text}"


def _decades(panel: Panel, foot: float, top: float) -> Decades:
    """Return the scale of a panel within a height of the sheet."""
    known = [abs(value) for value in panel.values if value is not None and isfinite(value)]
    sizes = [value for value in known if value > 0]
    if panel.tolerance is not None and panel.tolerance > 0:
        sizes.append(panel.tolerance)
    powers = [log10(size) for size in sizes] or [0.0]
    low, high = min(powers) - SPARE, max(powers) + SPARE
    if floor(high) < ceil(low):
        low, high = floor(low), ceil(high)
    has_zero = any(value == 0 for value in known)
    return Decades(
        scale.Scale(low, high, foot + (ZERO_ROOM if has_zero else 0.0), top), foot + 4.0 if has_zero else None
    )


def _panel(sheet: Sheet, panel: Panel, decades: Decades, steps: scale.Scale, say: Voices) -> None:
    """Draw one measure with its axis, tolerance, points and values."""
    straight = decades.straight
    sheet.write(
        (sheet.box.left, straight.end + 5.0 + 0.25 * say.italic.size),
        say.italic.wrap(f"{panel.name}, {panel.unit}" if panel.unit else panel.name, look.WIDTH * 0.9)[0],
        say.italic,
    )
    foot = straight.start if decades.zero is None else straight.start - 3.0
    sheet.rule([(steps.start, foot), (steps.start, straight.end)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
    for up, text in decades.ticks():
        sheet.rule(
            [(steps.start - scale.TICK, up), (steps.start, up)],
            look.SOFT,
            look.AXIS_LINE,
            layer=1.5,
            name="axis",
        )
        sheet.write((steps.start - scale.TICK - 2.0, up - 0.32 * say.soft.size), text, say.soft, "right")
    if decades.zero is not None:
        sheet.rule(
            [(steps.start, decades.zero), (steps.end, decades.zero)],
            look.RULE,
            0.4,
            (1.0, 2.0),
            layer=1.5,
            name="zero",
        )
    lines: list[tuple[list[Point], float]] = []
    if panel.tolerance is not None and panel.tolerance > 0:
        up = decades.at(panel.tolerance)
        line = [(steps.start, up), (steps.end, up)]
        sheet.rule(line, look.INK, 0.6, look.LIMIT_DASH, layer=2.0, name="tolerance")
        lines.append((line, 1.0))
        margin.write(
            sheet,
            steps.end,
            [margin.Ending(up, _limit(panel), say.soft)],
            straight.start - 4.0,
            straight.end + 4.0,
        )
    _points(sheet, panel, decades, steps, say, lines=lines)


def _points(
    sheet: Sheet,
    panel: Panel,
    decades: Decades,
    steps: scale.Scale,
    say: Voices,
    *,
    lines: list[tuple[list[Point], float]],
) -> None:
    """Draw the values joined in order; a step to zero is dashed, as it has no place on the scale."""
    known = [
        (k, value, (steps.at(k + 1.0), decades.at(value)))
        for k, value in enumerate(panel.values)
        if value is not None and isfinite(value)
    ]
    for (_, a, start), (_, b, end) in pairwise(known):
        dash = (2.0, 2.0) if a == 0 or b == 0 else ()
        sheet.rule([start, end], look.INK, look.DATA_LINE, dash, name="course")
        lines.append(([start, end], 1.0))
    radius = 2.4 if len(panel.values) <= FEW else 1.8
    boxes = []
    for _, value, at in known:
        _point(sheet, at, value, radius, signed=panel.signed)
        boxes.append(Box(*at, *at).grown(radius + 1.0))
    ends = {known[0][0], known[-1][0]} if known else set()
    labels = [
        Label(((panel.texts[k], say.plain),), at, (), "NE ENE SW WSW N E S", 4.0, 0 if k in ends else 2)
        for k, _, at in known
        if panel.texts[k] and (k in ends or len(panel.values) <= FEW)
    ]
    foot = decades.straight.start if decades.zero is None else decades.zero
    frame = Box(steps.start + 1.0, foot - 5.0, sheet.box.right, decades.straight.end + 4.0)
    written = (
        Box(steps.end, decades.at(panel.tolerance) - 16.0, sheet.box.right, decades.at(panel.tolerance) + 16.0)
        if panel.tolerance
        else None
    )
    texts = (written,) if written else ()
    place(sheet, labels, Surroundings(frame, tuple(lines), tuple(boxes), texts))


def _point(sheet: Sheet, at: Point, value: float, radius: float, *, signed: bool) -> None:
    """Draw one value: filled or open by its sign; exactly zero as an upright cross, being neither."""
    if value == 0:
        for across, up in ((radius + 0.8, 0.0), (0.0, radius + 0.8)):
            sheet.rule(
                [(at[0] - across, at[1] - up), (at[0] + across, at[1] + up)],
                look.INK,
                1.0,
                layer=6.0,
                name="mark",
            )
        return
    filled = value > 0 if signed else True
    sheet.dot(at, radius, look.INK if filled else look.PAPER, look.INK, 0.9)


def _key(figure: Convergence) -> list[key.Item]:
    """Return what the marks mean, where they need saying."""
    found: list[key.Item] = []
    signs = {value > 0 for panel in figure.panels if panel.signed for value in panel.values if value}
    if signs:
        found = [
            (_sample(1.0), "more toward the junction than away"),
            (_sample(-1.0), "more away than toward"),
        ]
    if any(value == 0 for panel in figure.panels for value in panel.values):
        found.append((_sample(0.0), "exactly zero"))
    return found


def _sample(value: float) -> Callable[[Sheet, Point], None]:
    def paint(sheet: Sheet, at: Point) -> None:
        _point(sheet, at, value, 2.4, signed=True)

    return paint


def _foot(figure: Convergence, sheet: Sheet, steps: scale.Scale, say: Voices, foot: float) -> None:
    """Rule the axis of steps beneath the last panel."""
    up = sheet.box.foot + foot - 3.0
    sheet.rule([(steps.start, up), (steps.end, up)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
    every = max(1, ceil(len(figure.numbers) / 15))
    for k, value in enumerate(figure.numbers):
        x = steps.at(k + 1.0)
        sheet.rule([(x, up), (x, up - scale.TICK)], look.SOFT, look.AXIS_LINE, layer=1.5, name="axis")
        if k % every == 0:
            sheet.write((x, up - scale.TICK - say.soft.size), str(value), say.soft, "center")
    sheet.write((steps.start, up - scale.TICK - say.soft.line - say.italic.size - 1.0), figure.step, say.italic)

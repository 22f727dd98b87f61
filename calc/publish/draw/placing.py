"""Labels find a place of their own.

Each label has candidate boxes on rings about its anchors, each with a price: text on text above all, then
text on marks, text on lines, leaders through text, distance. Labels are placed by rank, then moved in
turn while that is cheaper. Nothing is random. A label that finds no free place is left out, lowest rank
first, and reported.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, pi, sin
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from calc.publish.draw import look
from calc.publish.draw.geometry import Array, Box, Point, boxes, crossings, inside, overlap

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.faces import Voice
    from calc.publish.draw.sheet import Sheet

BEARINGS = [
    "E",
    "ENE",
    "NE",
    "NNE",
    "N",
    "NNW",
    "NW",
    "WNW",
    "W",
    "WSW",
    "SW",
    "SSW",
    "S",
    "SSE",
    "SE",
    "ESE",
]
COMPASS = {name: number * pi / 8 for number, name in enumerate(BEARINGS)}
RINGS = (0.0, 3.0, 7.0, 12.0, 19.0, 28.0, 40.0, 56.0, 76.0, 100.0)
LEADER_BEYOND = 2.0  # pt from its place beside the anchor
ROUNDS = 5
MARGIN = (1.2, 0.6)  # pt about the text, across and up
HIDE = 1.5  # pt of a mark that a label may cover
TOUCH = 0.05  # pt² that two labels may share by rounding


@dataclass(frozen=True, slots=True)
class Label:
    """A label that wants a place.

    Attributes
    ----------
    lines : tuple of (str, Voice)
        From the top.
    at : Point
        What it names.
    others : tuple of Point
        Other points it may stand by, at a price.
    prefer : str
        Bearings in order of liking, such as ``NE E SE``.
    gap : float
        From the anchor to the box, pt.
    rank : int
        Lower is placed first and left out last.
    align : str
        How its lines stand to each other.
    """

    lines: tuple[tuple[str, Voice], ...]
    at: Point
    others: tuple[Point, ...] = ()
    prefer: str = "NE E SE N S"
    gap: float = 4.0
    rank: int = 1
    align: str = "left"

    @property
    def size(self) -> tuple[float, float]:
        """Return width and height of the box, pt."""
        width = max(voice.width(voice.clean(text)) for text, voice in self.lines)
        return width + 2 * MARGIN[0], sum(voice.line for _, voice in self.lines) + 2 * MARGIN[1]


@dataclass(frozen=True, slots=True)
class Surroundings:
    """What labels keep off.

    Attributes
    ----------
    frame : Box
        Where they must stay.
    lines : tuple of (sequence of Point, float)
        Lines with the weight of their avoidance.
    marks, texts : tuple of Box
        Marks (at a price) and texts already written (never).
    """

    frame: Box
    lines: tuple[tuple[Sequence[Point], float], ...] = ()
    marks: tuple[Box, ...] = ()
    texts: tuple[Box, ...] = ()

    def segments(self) -> tuple[Array, Array, Array]:
        """Return starts (s, 2), ends (s, 2) and weights (s,) of all line segments."""
        starts, ends, weights = [np.zeros((0, 2))], [np.zeros((0, 2))], [np.zeros(0)]
        for points, weight in self.lines:
            line = np.asarray(points, dtype=np.float64)
            starts.append(line[:-1])
            ends.append(line[1:])
            weights.append(np.full(len(line) - 1, weight))
        return np.concatenate(starts), np.concatenate(ends), np.concatenate(weights)


@dataclass(frozen=True, slots=True)
class Candidates:
    """Places a label may take: boxes (n, 4), price (n,), anchors and feet of leaders (n, 2), led (n,)."""

    boxes: Array
    price: Array
    anchor: Array
    foot: Array
    led: NDArray[np.bool_]


def place(sheet: Sheet, labels: Sequence[Label], around: Surroundings) -> tuple[Label, ...]:
    """Write the labels on the sheet, each where it lies clear; return those left out.

    Parameters
    ----------
    sheet : Sheet
        Drawn already but for the labels.
    labels : sequence of Label
        In any order; ties of rank go by this order.
    around : Surroundings
        What they keep off.
    """
    if not labels:
        return ()
    choices = [_candidates(label, around) for label in labels]
    order = sorted(range(len(labels)), key=lambda i: (labels[i].rank, i))
    chosen: dict[int, int] = {}
    for i in order:
        chosen[i] = _best(i, choices, chosen)
    for _ in range(ROUNDS):
        before = dict(chosen)
        for i in order:
            chosen[i] = _best(i, choices, chosen)
        if chosen == before:
            break
    left_out = []
    taken = [box.grown(-TOUCH) for box in around.texts]
    for i in order:
        box = Box(*(float(side) for side in choices[i].boxes[chosen[i]]))
        hides = labels[i].rank > 0 and any(box.meets(mark.grown(-HIDE)) for mark in around.marks)
        if hides or any(box.meets(other) for other in taken) or not _within(box, around.frame):
            left_out.append(labels[i])
            continue
        taken.append(box.grown(-TOUCH))
        _write(sheet, labels[i], box, choices[i], chosen[i])
    return tuple(left_out)


def _candidates(label: Label, around: Surroundings) -> Candidates:
    """Lay the label's box on each ring and bearing about each anchor, and price it against what is fixed."""
    width, height = label.size
    liking = {name: rank for rank, name in enumerate(label.prefer.split())}
    rows, price, anchor, ring = [], [], [], []
    for turn, (across, up) in enumerate((label.at, *label.others)):
        for name, angle in COMPASS.items():
            aside, aloft = _side(cos(angle)), _side(sin(angle))
            for reach in RINGS:
                x = across + (label.gap + reach) * cos(angle) + aside * width / 2
                y = up + (label.gap + reach) * sin(angle) + aloft * height / 2
                rows.append((x - width / 2, y - height / 2, x + width / 2, y + height / 2))
                price.append(1.6 * liking.get(name, len(liking) + 1.5) + 0.55 * reach + 2.2 * turn)
                anchor.append((across, up))
                ring.append(reach)
    box, foot_of = boxes(rows), np.asarray(anchor, dtype=np.float64)
    foot = np.clip(foot_of, box[:, :2], box[:, 2:])
    led = np.asarray(ring) > LEADER_BEYOND
    fixed = _fixed_price(box, foot_of, foot, led, around)
    return Candidates(box, np.asarray(price) + fixed, foot_of, foot, led)


def _side(part: float) -> float:
    """Return how far a box of half width 1 must stand off so that it touches the ring from its own side."""
    return 0.0 if abs(part) < 0.2 else float(np.sign(part)) * min(1.0, abs(part) * 1.5)  # noqa: PLR2004


def _fixed_price(box: Array, anchor: Array, foot: Array, led: NDArray[np.bool_], around: Surroundings) -> Array:
    """Return the price of each box (n,) against frame, lines, marks and texts."""
    frame = around.frame
    outside = (
        np.clip(frame.left - box[:, 0], 0, None)
        + np.clip(box[:, 2] - frame.right, 0, None)
        + np.clip(frame.foot - box[:, 1], 0, None)
        + np.clip(box[:, 3] - frame.top, 0, None)
    )
    starts, ends, weights = around.segments()
    near = box + np.array([-3, -2, 3, 2])
    struck = (inside(starts, ends, box) * weights).sum(1) + 0.35 * (inside(starts, ends, near) * weights).sum(1)
    marks = boxes(list(around.marks) + list(around.texts))
    leaders = np.where(
        led,
        1.2 * inside(anchor, foot, marks).sum(0) + 2.5 * (crossings(anchor, foot, starts, ends) * weights).sum(1),
        0.0,
    )
    texts = overlap(box, boxes(list(around.texts))).sum(1)
    return np.asarray(60 * outside + 3.6 * struck + 9 * overlap(box, marks).sum(1) + 40 * texts + leaders)


def _best(i: int, choices: list[Candidates], chosen: dict[int, int]) -> int:
    """Return the cheapest place for label ``i`` while all others stay."""
    mine = choices[i]
    others = [k for k in chosen if k != i]
    if not others:
        return int(np.argmin(mine.price))
    box = np.array([choices[k].boxes[chosen[k]] for k in others])
    anchor = np.array([choices[k].anchor[chosen[k]] for k in others])
    foot = np.array([choices[k].foot[chosen[k]] for k in others])
    led = np.array([bool(choices[k].led[chosen[k]]) for k in others])
    shared = overlap(mine.boxes, box).sum(1)
    price = mine.price + 40 * shared + 4.0 * (shared > 0)
    price = price + np.where(mine.led, 3.0 * inside(mine.anchor, mine.foot, box).sum(0), 0.0)
    if led.any():
        price = price + 3.0 * inside(anchor[led], foot[led], mine.boxes).sum(1)
        crossed = crossings(mine.anchor, mine.foot, anchor[led], foot[led]).sum(1)
        price = price + np.where(mine.led, 12.0 * crossed, 0.0)
    return int(np.argmin(price))


def _within(box: Box, frame: Box) -> bool:
    return (
        box.left >= frame.left - TOUCH
        and box.right <= frame.right + TOUCH
        and box.foot >= frame.foot - TOUCH
        and box.top <= frame.top + TOUCH
    )


def _write(sheet: Sheet, label: Label, box: Box, choices: Candidates, choice: int) -> None:
    """Write a label into its box, with a leader where it stands off."""
    if choices.led[choice]:
        across, up = (float(v) for v in choices.anchor[choice])
        end = (float(choices.foot[choice][0]), float(choices.foot[choice][1]))
        run = float(np.hypot(end[0] - across, end[1] - up))
        if run > LEADER_BEYOND:
            start = min(label.gap * 0.55, run * 0.4) / run
            first = (across + (end[0] - across) * start, up + (end[1] - up) * start)
            sheet.rule([first, end], look.RULE, 0.5, layer=6.5, name="leader")
    top = box.top - MARGIN[1]
    x = {"left": box.left + MARGIN[0], "center": (box.left + box.right) / 2, "right": box.right - MARGIN[0]}
    for text, voice in label.lines:
        baseline = top - voice.line + 0.25 * voice.line
        sheet.write((x[label.align], baseline), text, voice, label.align, ground=True)
        top -= voice.line

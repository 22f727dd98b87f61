"""What a schematic says beside each of its marks, and where it would like to say it."""

from __future__ import annotations

from math import radians, sin
from typing import TYPE_CHECKING

from calc.publish.draw import look
from calc.publish.draw.faces import Voice, voice
from calc.publish.draw.placing import Label

if TYPE_CHECKING:
    from calc.publish.draw.geometry import Box, Point
    from calc.report.figures import Junction, Pipe, Reservoir, Schematic

CROWD = 40  # pipes: beyond, only governing pipes and those that turn are named
QUIET = 14  # pipes: beyond, second lines of pipes and junctions are left to the table
WIDE, NARROW = 150.0, 108.0  # pt that a name may take before it is broken
CASES = 3  # cases named for a pipe that turns
STEEP = 0.8


class Names:
    """The labels of a schematic.

    Parameters
    ----------
    figure : Schematic
        What is named.
    size : float
        Size of the marks.
    """

    def __init__(self, figure: Schematic, size: float) -> None:
        count = len(figure.pipes)
        self._size = size
        self._full = count <= QUIET
        self._width = WIDE if self._full else NARROW
        named = [pipe.name for pipe in figure.pipes if count <= CROWD or pipe.governing or pipe.turns]
        self._named = frozenset(named[:CROWD])
        self._nodes = frozenset(
            end for pipe in figure.pipes if pipe.name in self._named for end in (pipe.start, pipe.end)
        )
        self._every = count <= CROWD
        self._strong, self._plain = voice(look.INK, strong=True), voice(look.INK)
        self._soft, self._violet = voice(look.SOFT), voice(look.ADDRESS, strong=True)
        self._turned, self._turned_strong = voice(look.TURNED), voice(look.TURNED, strong=True)

    def reservoir(self, reservoir: Reservoir, box: Box) -> Label:
        """Return the name and level of a reservoir, by its basin."""
        middle = (box.left + box.right) / 2
        lines = (*self._lines(reservoir.name, self._strong), (reservoir.level_text, self._plain))
        under = (middle, box.foot + 1)
        return Label(lines, (middle, box.top - 1), (under,), "N NNE NNW NE NW E W S", 2.5, 0, "center")

    def solved(self, junction: Junction, at: Point) -> Label:
        """Return the solved head of a single junction."""
        lines: tuple[tuple[str, Voice], ...] = ((f"head {junction.head_text}", self._violet),)
        if junction.elevation is not None and junction.head < junction.elevation:
            lines = (*lines, ("below the junction", self._plain))
        return Label(lines, at, (), "NE NW ENE WNW N SE SW", 5.0, 0)

    def junction(self, junction: Junction, at: Point, *, by_distance: bool) -> list[Label]:
        """Return the name of a junction, with its elevation or, where up is head, its head."""
        if not (self._every or junction.name in self._nodes):
            return []
        lines = self._lines(junction.name, self._strong if by_distance or self._full else self._plain)
        if by_distance:
            known = junction.elevation is not None
            text = f"elevation {junction.elevation_text}" if known else "elevation not given: drawn at its head"
            return [Label((*lines, (text, self._soft)), at, (), "SW SE S W E SSW SSE", 5.0, 1)]
        lines = (*lines, (junction.head_text, self._violet))
        return [Label(lines, at, (), "NE SW NW SE N S E W", 3.5 + 2 * self._size, 2)]

    def withdrawal(self, junction: Junction, tip: Point, *, above: bool) -> list[Label]:
        """Return the water taken out at a junction, at the tip of its arrow."""
        if not self._full:
            return []
        prefer = "N NE NW E W" if above else "S SE SW E W"
        return [Label(((junction.withdrawal_text, self._plain),), tip, (), prefer, 2.0, 3)]

    def pipe(self, pipe: Pipe, at: Point, near: tuple[Point, ...], bearing: float) -> list[Label]:
        """Return the name and flow of a pipe, by its arrowhead."""
        if pipe.name not in self._named:
            return []
        turns = bool(pipe.turns)
        says = "shut" if not pipe.open else pipe.flow_text or "no flow"
        speaker = self._turned_strong if turns else self._strong
        whole = f"{pipe.name} {says}"
        fits = speaker.width(speaker.clean(whole)) <= self._width
        lines = ((whole, speaker),) if fits else (*self._lines(pipe.name, speaker), (says, speaker))
        if self._full:
            lines += tuple((text, self._soft) for text in (pipe.size_text, pipe.drive_text) if text)
        if turns and self._full:
            more = len(pipe.turns) - CASES
            cases = ", ".join(pipe.turns[:CASES]) + (f" and {more} more" if more > 0 else "")
            lines += self._lines(f"the other way in: {cases}", self._turned)
        steep = abs(sin(radians(bearing))) > STEEP
        prefer = "E W NE SW SE NW" if steep else "N S NNE SSW NNW SSE NE SW NW SE"
        return [Label(lines, at, near, prefer, 6.0 * self._size, 1 if turns or pipe.governing else 2)]

    def _lines(self, text: str, say: Voice) -> tuple[tuple[str, Voice], ...]:
        return tuple((line, say) for line in say.wrap(text, self._width))

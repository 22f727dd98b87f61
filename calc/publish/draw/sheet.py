"""A blank sheet measured in points, on which the drawings rule lines and write.

Everything is placed in points from the lower left corner, so that a drawing is the same at any resolution and
no layout runs behind its back.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import PathPatch
from matplotlib.path import Path as Outline
from matplotlib.text import Text

from calc.publish.draw import look
from calc.publish.draw.geometry import Box

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.faces import Voice
    from calc.publish.draw.geometry import Point

RAISE = 0.34  # of the size: an exponent above the baseline
BELOW_TEXT = 0.25  # of the size: from the foot of a line's box to its baseline


class Sheet:
    """A sheet of the given size.

    Parameters
    ----------
    height : float
        In points.
    width : float
        In points.

    Attributes
    ----------
    figure : Figure
        What is drawn so far.
    box : Box
        The part that text may use.
    """

    def __init__(self, height: float, width: float = look.WIDTH) -> None:
        self.figure = Figure(figsize=(width / 72, height / 72), dpi=72, facecolor=look.PAPER)
        FigureCanvasAgg(self.figure)
        self._axes = self.figure.add_axes((0, 0, 1, 1))
        self._axes.set_axis_off()
        self._axes.set_xlim(0, width)
        self._axes.set_ylim(0, height)
        self.width, self.height = width, height
        self.box = Box(look.EDGE, look.EDGE, width - look.EDGE, height - look.EDGE)

    def trim(self, foot: float) -> None:
        """Cut a strip off the foot of the sheet; everything else keeps its place."""
        self.figure.set_size_inches(self.width / 72, (self.height - foot) / 72)
        self._axes.set_ylim(foot, self.height)

    def rule(
        self,
        points: Sequence[Point],
        ink: str = look.INK,
        weight: float = look.DATA_LINE,
        dash: tuple[float, ...] = (),
        *,
        layer: float = 3.0,
        name: str = "",
    ) -> None:
        """Rule a line through points; ``dash`` is in points, and ``layer`` says what lies above what."""
        across, up = zip(*points, strict=True)
        line = Line2D(across, up, color=ink, linewidth=weight, zorder=layer, clip_on=False)
        line.set_solid_capstyle("butt")
        line.set_dash_capstyle("butt")
        line.set_solid_joinstyle("round")
        if dash:
            line.set_linestyle((0, tuple(length / weight for length in dash)))
        if name:
            line.set_label(name)
        self._axes.add_line(line)

    def shape(
        self,
        points: Sequence[Point],
        fill: str = "none",
        edge: str = "none",
        weight: float = 0.7,
        *,
        layer: float = 5.0,
    ) -> None:
        """Draw a closed shape through points."""
        codes = [Outline.MOVETO, *[Outline.LINETO] * (len(points) - 1), Outline.CLOSEPOLY]
        outline = Outline([*points, points[0]], codes)
        patch = PathPatch(outline, facecolor=fill, edgecolor=edge, linewidth=weight if edge != "none" else 0.0)
        patch.set(zorder=layer, clip_on=False, joinstyle="miter")
        self._axes.add_patch(patch)

    def dot(
        self,
        at: Point,
        radius: float,
        fill: str = look.INK,
        edge: str = "none",
        weight: float = 0.7,
        *,
        layer: float = 6.0,
    ) -> None:
        """Draw a disc about a point."""
        circle = Outline.circle(at, radius)
        patch = PathPatch(circle, facecolor=fill, edgecolor=edge, linewidth=weight if edge != "none" else 0.0)
        patch.set(zorder=layer, clip_on=False)
        self._axes.add_patch(patch)

    def write(
        self,
        at: Point,
        text: str,
        voice: Voice,
        align: str = "left",
        *,
        ground: bool = False,
        layer: float = 9.0,
    ) -> Box:
        """Write one line with its baseline at a point; return the box it fills.

        ``ground`` clears what lies beneath, so that the text breaks a line cleanly.
        """
        words = voice.clean(text)
        box = line_box(at, voice.width(words), voice, align)
        if ground:
            self.shape(box.corners, look.PAPER, layer=layer - 0.5)
        parts = voice.parts(words)
        if len(parts) == 1 and parts[0][1] is voice:
            self._set(at, words, voice, align, layer)
            return box
        left = box.left
        for part, say in parts:
            blank = say.width(part) - say.width(part.lstrip())  # a page drops a blank that begins a text
            up = at[1] + (0.0 if say is voice else RAISE * voice.size)
            self._set((left + blank, up), part.strip(), say, "left", layer)
            left += say.width(part)
        return box

    def _set(self, at: Point, words: str, voice: Voice, align: str, layer: float) -> None:
        label = Text(at[0], at[1], words, color=voice.ink, fontproperties=voice.font, zorder=layer)
        label.set_horizontalalignment(align)  # type: ignore[arg-type]
        label.set_verticalalignment("baseline")
        label.set_parse_math(False)
        self._axes.add_artist(label)
        label.set_clip_on(False)


def line_box(at: Point, width: float, voice: Voice, align: str = "left") -> Box:
    """Return the box of one line whose baseline starts, is centred or ends at a point."""
    left = at[0] - {"left": 0.0, "center": width / 2, "right": width}[align]
    foot = at[1] - BELOW_TEXT * voice.size
    return Box(left, foot, left + width, foot + voice.line * 0.88)

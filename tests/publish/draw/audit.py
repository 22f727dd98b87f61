"""Prove a sheet clean: measured by the renderer on the finished drawing, not by what placed the texts."""

from __future__ import annotations

from matplotlib import rc_context
from matplotlib.backends.backend_agg import RendererAgg
from matplotlib.figure import Figure
from matplotlib.patches import PathPatch
from matplotlib.text import Text

TOLERANCE = 0.6  # pt that two boxes may share: the ends of tails and accents


def texts(figure: Figure) -> list[Text]:
    """Return every text on the sheet."""
    return [t for t in figure.findobj(Text) if t.get_visible() and t.get_text().strip()]


def ink(text: Text, renderer: RendererAgg) -> tuple[float, float, float, float]:
    """Return the box of what a text prints, from its baseline and the extent of its own letters."""
    width, height, below = renderer.get_text_width_height_descent(
        text.get_text(), text.get_fontproperties(), ismath=False
    )
    across, baseline = text.get_transform().transform(text.get_position())
    left = across - {"left": 0.0, "center": width / 2, "right": width}[text.get_horizontalalignment()]
    return left, baseline - below, left + width, baseline - below + height


def faults(figure: Figure) -> list[tuple[str, str, str]]:
    """Return texts on texts or marks, off the sheet, and below 8 pt (6 pt for an exponent)."""
    renderer = figure.canvas.get_renderer()
    found = []
    with rc_context({"text.hinting": "none"}):  # as on paper, not as on a screen of 72 dots to the inch
        measured = [(t.get_text(), ink(t, renderer), t.get_fontsize()) for t in texts(figure)]
    width, height = figure.bbox.width, figure.bbox.height
    for k, (text, box, size) in enumerate(measured):
        if box[0] < -TOLERANCE or box[1] < -TOLERANCE or box[2] > width + TOLERANCE or box[3] > height + TOLERANCE:
            found.append(("off the sheet", text, ""))
        exponent = text.startswith("\u2212") and text[1:].isdigit()
        if size < (6.0 if exponent else 8.0):
            found.append(("too small", text, str(size)))
        for other, beside, _ in measured[k + 1 :]:
            across = min(box[2], beside[2]) - max(box[0], beside[0])
            up = min(box[3], beside[3]) - max(box[1], beside[1])
            if across > TOLERANCE and up > TOLERANCE:
                found.append(("text on text", text, other))
        found += [("text on mark", text, "") for mark in marks(figure) if covers(box, mark)]
    return found


def marks(figure: Figure) -> list[tuple[float, float, float, float]]:
    """Return the boxes of the filled marks: arrowheads, dots and diamonds; not the white grounds of texts."""
    patches = [patch for patch in figure.findobj(PathPatch) if min(patch.get_facecolor()[:3]) < 0.9]
    return [
        patch.get_transform().transform_path(patch.get_path()).get_extents().extents
        for patch in patches
        if patch.get_facecolor()[3] > 0
    ]


def covers(box: tuple[float, float, float, float], mark: tuple[float, float, float, float]) -> bool:
    """Tell whether a text hides more than an eighth of a mark."""
    across = min(box[2], mark[2]) - max(box[0], mark[0])
    up = min(box[3], mark[3]) - max(box[1], mark[1])
    return across > 0 and up > 0 and across * up > (mark[2] - mark[0]) * (mark[3] - mark[1]) / 8

"""A drawing as bytes: the same bytes for the same drawing."""

from __future__ import annotations

import io
import re
from typing import TYPE_CHECKING

from matplotlib import rc_context

if TYPE_CHECKING:
    from matplotlib.figure import Figure

SETTINGS = {"svg.fonttype": "none", "svg.hashsalt": "headtrace", "path.simplify": False, "svg.image_inline": True}
METADATA = {"Date": None, "Creator": None, "Format": None, "Type": None}
_GROUP = re.compile(r'<g id="[^"]*"')


def svg(figure: Figure) -> bytes:
    """Return a drawing as SVG, its texts as text in the page's own faces.

    Names of groups are left out, so that several drawings may stand in one page.

    Parameters
    ----------
    figure : Figure
        As drawn by one of the drawings.
    """
    buffer = io.BytesIO()
    with rc_context(SETTINGS):
        figure.savefig(buffer, format="svg", dpi=72, metadata=METADATA)
    return _GROUP.sub("<g", buffer.getvalue().decode("utf-8")).encode("utf-8")

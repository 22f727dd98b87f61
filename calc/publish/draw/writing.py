"""A drawing as bytes: the same bytes for the same drawing."""

from __future__ import annotations

import base64
import io
import re

from fontTools.subset import Options, Subsetter
from fontTools.ttLib import TTFont
from matplotlib.figure import Figure
from matplotlib.text import Text

from calc.publish.draw.settings import plain

METADATA = {"Date": None, "Creator": None, "Format": None, "Type": None}
_GROUP = re.compile(r'<g id="[^"]*"')


def svg(figure: Figure, *, carried: bool = False) -> bytes:
    """Return a drawing as SVG, its texts as text in the page's own faces.

    Names of groups are left out, so that several drawings may stand in one page.

    Parameters
    ----------
    figure : Figure
        As drawn by one of the drawings.
    carried : bool
        Whether the picture brings the letters it uses along. A browser shows a picture without the faces of
        the page around it; WeasyPrint lends them, and needs none.
    """
    buffer = io.BytesIO()
    with plain():
        figure.savefig(buffer, format="svg", dpi=72, metadata=METADATA)
    written = _GROUP.sub("<g", buffer.getvalue().decode("utf-8"))
    if carried:
        written = written.replace("</style>", f"{_carry(figure)}</style>", 1)
    return written.encode("utf-8")


def _carry(figure: Figure) -> str:
    """Return style rules that hold the letters used of each face."""
    used: dict[str, tuple[str, set[str]]] = {}
    texts = [found for found in figure.findobj() if isinstance(found, Text) and found.get_text()]
    for text in texts:
        font = text.get_fontproperties()
        family, style, weight = font.get_family()[0], font.get_style(), font.get_weight()
        rule = f"font-family:'{family}';font-style:{style};font-weight:{weight}"
        _, letters = used.setdefault(str(font.get_file()), (rule, set()))
        letters.update(text.get_text())
    return "".join(
        f"@font-face{{{rule};src:url(data:font/woff2;base64,{_letters(file, letters)})}}"
        for file, (rule, letters) in sorted(used.items())
    )


def _letters(file: str, letters: set[str]) -> str:
    """Return a face cut down to some letters, as base64."""
    options = Options(flavor="woff2", notdef_outline=True, hinting=False, layout_features=["kern"])
    with TTFont(file, recalcTimestamp=False) as face:
        subsetter = Subsetter(options)
        subsetter.populate(text="".join(sorted(letters)))
        subsetter.subset(face)
        face.flavor = "woff2"
        buffer = io.BytesIO()
        face.save(buffer)
    return base64.b64encode(buffer.getvalue()).decode("ascii")

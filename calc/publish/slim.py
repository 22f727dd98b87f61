"""The screen's page made small: inline styles become classes, drawings lose what no eye can see, and only there.

What is said stays as it is; only tags are touched, and no text can look like one, since every ``<`` in a text is
escaped.
"""

from __future__ import annotations

import math
import re
from collections import Counter

INKS = {
    "#1d1a18": "var(--ink)",
    "#4a443e": "var(--soft)",
    "#7d746a": "var(--mid)",
    "#4c2563": "var(--address)",
    "#a8360a": "var(--turns)",
    "#ffffff": "var(--paper)",
}
"""Inks of the drawings that follow the page's own, so that they can be read on a dark ground."""
PLACES = 2
"""Decimals of a coordinate: a hundredth of a point."""
CURVES = 8
"""Curves of which a drawn circle is made."""
ROUND = 0.02
"""Points by which a circle may differ from its curves."""

_STYLED = re.compile(r'<[a-zA-Z][^<>]* style="([^"<>]*)"[^<>]*>')
_CLASS = re.compile(r' class="([^"]*)"')
_QUOTED = re.compile(r'(?<= )([a-z-]+)="([\w.:#-]+)"(?!/>)', re.ASCII)
_TAG = re.compile(r"<[a-z][^<>]*>")
_ROOT = re.compile(r' (?:xmlns(?::\w+)?|version|width|height)="[^"]*"')
_COMMAND = re.compile(r" ?([A-Za-z]) ?")
_NUMBER = re.compile(r"-?\d+\.\d+")
_UNTURNED = re.compile(r' transform="rotate\(-?0 [^)]*\)"')
_PAPER_ONLY = re.compile(r' data-(?:label|running|to)="[^"]*"| data-sort="(?:address|date|document|name|source)"')
_NUMBERS_PUT_IN = re.compile(
    r' role="math" aria-label="[^"]*"(?=[^<>]*>(?:(?!</td>|</li>|class="eq).)*?<data )', re.DOTALL
)
"""The words of a formula whose numbers can be followed: its text reads as arithmetic, and links stay within reach."""
_PLAIN_ROW = re.compile(r'(<tr class=")line(?: |(?="))')


def slim(page: str) -> tuple[str, str]:
    """Return a page without inline styles and without what only paper needs, and the rules of its new classes."""
    page = _NUMBERS_PUT_IN.sub("", _PAPER_ONLY.sub("", page))
    page = page.replace('<td class="tk"><span class="bx"></span></td>', '<td class="tk box"></td>')
    page = _PLAIN_ROW.sub(r"\1", page).replace(' class=""', "")
    page, rules = restyled(page)
    page = _TAG.sub(lambda tag: _QUOTED.sub(r"\1=\2", tag[0]), page)
    return re.sub(r">\s*\n\s*<", ">\n<", page), rules


def restyled(page: str) -> tuple[str, str]:
    """Return a page with a class in place of each inline style, and the rules of those classes."""
    counted = Counter(found[1] for found in _STYLED.finditer(page))
    names = {style: f"s{k}" for k, (style, _) in enumerate(counted.most_common())}

    def classed(found: re.Match[str]) -> str:
        tag = found[0].replace(f' style="{found[1]}"', "", 1)
        name = names[found[1]]
        if _CLASS.search(tag):
            return _CLASS.sub(rf' class="\1 {name}"', tag, count=1)
        return re.sub(r"^<[a-zA-Z]+", rf'\g<0> class="{name}"', tag, count=1)

    rules = [f".{name}{{{_inked(style)}}}" for style, name in names.items()]
    return _STYLED.sub(classed, page), "\n".join(rules)


def slim_drawing(svg: str) -> str:
    """Return a drawing as it stands inside a page: coordinates to a hundredth, circles as circles, no empty groups."""
    opening, rest = svg.split(">", 1)
    rest = re.sub(r"<defs>\s*<style[^>]*>.*?</style>\s*</defs>", "", rest, flags=re.DOTALL)
    if "<g " not in rest:
        rest = rest.replace("<g>", "").replace("</g>", "")
    rest = re.sub(r'<path d="([^"]*)"( style="[^"]*")/>', _shape, _UNTURNED.sub("", rest))
    rest = re.sub(r' (x|y)="(-?\d+\.\d+)"', lambda at: f' {at[1]}="{_short(at[2])}"', rest)
    return re.sub(r">\s+<", "><", f"{_ROOT.sub('', opening)}>{rest}")


def _shape(found: re.Match[str]) -> str:
    path = " ".join(found[1].split())
    circle = _circle(path)
    if circle:
        x, y, radius = (_short(str(part)) for part in circle)
        return f'<circle cx="{x}" cy="{y}" r="{radius}"{found[2]}/>'
    said = _COMMAND.sub(r"\1", _NUMBER.sub(lambda number: _short(number[0]), path))
    return f'<path d="{said}"{found[2]}/>'


def _circle(path: str) -> tuple[float, float, float] | None:
    """Return centre and radius where a path is a circle made of curves."""
    if path.count("C") != CURVES or re.sub(r"[\d. -]", "", path).upper() != "M" + "C" * CURVES + "Z":
        return None
    ends = [part.split()[-2:] for part in re.split("[MCz]", path) if part.strip()]
    points = [(float(x), float(y)) for x, y in ends]
    low, high = (tuple(side(axis) for axis in zip(*points, strict=True)) for side in (min, max))
    x, y, radius = (low[0] + high[0]) / 2, (low[1] + high[1]) / 2, (high[0] - low[0]) / 2
    apart = max(abs(math.hypot(px - x, py - y) - radius) for px, py in points)
    return (x, y, radius) if apart < ROUND else None


def _short(number: str) -> str:
    said = f"{float(number):.{PLACES}f}".rstrip("0").rstrip(".")
    return "0" if said in ("-0", "") else said


def _inked(style: str) -> str:
    for ink, named in INKS.items():
        style = style.replace(ink, named)
    return re.sub(r"\s*([:;,])\s*", r"\1", style)

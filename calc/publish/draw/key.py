"""A key beneath a drawing: the marks used on it, in words."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from calc.publish.draw.faces import Voice
    from calc.publish.draw.geometry import Box, Point
    from calc.publish.draw.sheet import Sheet

    Item = tuple[Callable[[Sheet, Point], object] | None, str]

MARK, GAP, ROW = 22.0, 12.0, 13.0


def rows(items: Sequence[Item], voice: Voice, width: float) -> list[list[tuple[Item, str, float]]]:
    """Return the items by row, each with one line of its words and where it begins across, pt."""
    found: list[list[tuple[Item, str, float]]] = [[]]
    across = 0.0
    for item in items:
        indent = MARK if item[0] else 0.0
        for part, text in enumerate(voice.wrap(item[1], width - indent)):
            need = indent + voice.width(text)
            if found[-1] and (across + need > width or part):
                found.append([])
                across = 0.0
            found[-1].append(((item[0] if not part else None, item[1]), text, across + (indent if part else 0.0)))
            across += need + GAP
    return found


def height(items: Sequence[Item], voice: Voice, width: float) -> float:
    """Return the height that the key needs, pt."""
    return len(rows(items, voice, width)) * ROW if items else 0.0


def write(sheet: Sheet, items: Sequence[Item], voice: Voice, area: Box) -> None:
    """Write the key from the top of an area downward."""
    if not items:
        return
    for k, row in enumerate(rows(items, voice, area.right - area.left)):
        baseline = area.top - k * ROW - 0.75 * ROW
        for (paint, _), text, across in row:
            left = area.left + across
            if paint:
                paint(sheet, (left + MARK / 2 - 2.0, baseline + 0.3 * voice.size))
            sheet.write((left + (MARK if paint else 0.0), baseline), text, voice)

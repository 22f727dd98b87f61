"""Marks of the drawings, in points: one vocabulary for every sheet.

A basin is an open vessel with its surface exactly at the level (the vessel is not to scale), marked by
the open triangle of a water surface. A junction is a dot; a solved head a filled diamond; flow a filled
arrowhead on the pipe; a turn two opposed half arrows; a withdrawal a stem with an open arrow.
"""

from __future__ import annotations

from math import cos, radians, sin
from typing import TYPE_CHECKING

from calc.publish.draw import look
from calc.publish.draw.geometry import Box, Point

if TYPE_CHECKING:
    from collections.abc import Sequence

    from calc.publish.draw.sheet import Sheet

BASIN_WIDTH, BASIN_DEPTH, FREEBOARD = 24.0, 12.0, 5.0
LIGHTEST, HEAVIEST = 0.8, 2.3  # weights of pipes, pt


def turned(at: Point, points: Sequence[Point], degrees: float = 0.0, size: float = 1.0) -> list[Point]:
    """Return local points scaled, turned and set about a point."""
    c, s = cos(radians(degrees)) * size, sin(radians(degrees)) * size
    return [(at[0] + x * c - y * s, at[1] + x * s + y * c) for x, y in points]


def basin(sheet: Sheet, at: Point, size: float = 1.0, side: int = 0) -> Box:
    """Draw a basin whose surface is at a point: left (-1) or right (1) of it, or about it (0)."""
    width = BASIN_WIDTH * size
    left = at[0] + {-1: -width, 0: -width / 2, 1: 0.0}[side]
    right, up = left + width, at[1]
    floor, rim = up - BASIN_DEPTH * size, up + FREEBOARD * size
    sheet.shape([(left, up), (right, up), (right, floor), (left, floor)], look.PAPER, layer=4.0)
    sheet.rule([(left, rim), (left, floor), (right, floor), (right, rim)], look.INK, 1.0, layer=5.0, name="basin")
    sheet.rule([(left, up), (right, up)], look.INK, 0.7, layer=4.5, name="surface")
    middle = (left + width / 2, up)
    sheet.shape(turned(middle, [(0, 0), (3.1, 5.2), (-3.1, 5.2)], size=size), look.PAPER, look.INK, 0.7, layer=6.0)
    for half, below in ((2.6, 2.2), (1.2, 4.2)):
        sheet.rule(
            turned(middle, [(-half, -below), (half, -below)], size=size),
            look.INK,
            0.6,
            layer=6.0,
            name="mark",
        )
    return Box(left - 1, floor - 1, right + 1, rim + 2)


def junction(sheet: Sheet, at: Point, radius: float = 2.8) -> Box:
    """Draw a junction."""
    sheet.dot(at, radius, look.INK, look.PAPER, 0.7, layer=7.0)
    return Box(at[0] - radius, at[1] - radius, at[0] + radius, at[1] + radius).grown(1)


def head(sheet: Sheet, at: Point, radius: float = 3.2) -> Box:
    """Draw the mark of the accepted solution: a filled diamond."""
    corners = turned(at, [(0, 1), (1, 0), (0, -1), (-1, 0)], size=radius)
    sheet.shape(corners, look.ADDRESS, look.PAPER, 0.5, layer=7.5)
    return Box(at[0] - radius, at[1] - radius, at[0] + radius, at[1] + radius).grown(0.5)


def flow(sheet: Sheet, at: Point, degrees: float, size: float = 1.0, ink: str = look.INK) -> Box:
    """Draw a filled arrowhead lying on a pipe."""
    sheet.shape(turned(at, [(5.8, 0), (-4.4, 3.4), (-4.4, -3.4)], degrees, size), ink, look.PAPER, 0.6, layer=7.0)
    return Box(at[0], at[1], at[0], at[1]).grown(5.0 * size)


def turn(sheet: Sheet, at: Point, degrees: float, size: float = 1.0) -> Box:
    """Draw two opposed half arrows: the direction turns round between cases."""
    for half in (1, -1):
        points = [(-6.0 * half, 1.5 * half), (6.0 * half, 1.5 * half), (2.6 * half, 4.1 * half)]
        sheet.rule(turned(at, points, degrees, size), look.TURNED, 1.0, layer=7.0, name="mark")
    return Box(at[0], at[1], at[0], at[1]).grown(6.0 * size)


def withdrawal(sheet: Sheet, at: Point, size: float = 1.0, *, above: bool = False, inflow: bool = False) -> Box:
    """Draw water leaving the works at a junction, below it or above it; or coming in."""
    side = size * (1.0 if above else -1.0)
    near, far = 4.0, 14.0
    sheet.rule([(at[0], at[1] + side * near), (at[0], at[1] + side * far)], look.INK, 0.8, layer=6.0, name="mark")
    tip, barb = (near, near + 4.0) if inflow else (far, far - 4.0)
    wings = [
        (at[0] - 2.6 * size, at[1] + side * barb),
        (at[0], at[1] + side * tip),
        (at[0] + 2.6 * size, at[1] + side * barb),
    ]
    sheet.rule(wings, look.INK, 0.8, layer=6.0, name="mark")
    foot, top = sorted((at[1] + side * near, at[1] + side * far))
    return Box(at[0] - 3.5 * size, foot, at[0] + 3.5 * size, top)


def bore_weight(bore: float, largest: float, size: float = 1.0) -> float:
    """Return the weight of a pipe's line, in proportion to its bore and never too light to see, pt."""
    return max(LIGHTEST, HEAVIEST * bore / largest) * size if largest > 0 else LIGHTEST

"""Inks, weights and sizes shared by the drawings and, by their values, with the page's style sheet.

Each ink stands at 4.5 to 1 or better against white, so that no drawing needs its colours: series differ by
dash and weight, signs by filled and open marks, and a turn of direction is said in words.
"""

from __future__ import annotations

INK = "#1d1a18"
SOFT = "#4a443e"
ADDRESS = "#4c2563"  # the accepted solution alone
TURNED = "#a8360a"  # what turns round between cases alone
RULE = "#7d746a"
PAPER = "#ffffff"

POINTS_PER_MM = 72 / 25.4
WIDTH = 165 * POINTS_PER_MM
EDGE = 2.0  # kept free along the edge of a sheet, pt

AXIS_LINE = 0.5
DATA_LINE = 0.9
SUM_LINE = 1.7
LIMIT_DASH = (4.0, 2.0)
DASHES: tuple[tuple[float, ...], ...] = (
    (),
    (5.0, 1.6),
    (1.2, 1.3),
    (7.0, 1.6, 1.4, 1.6),
    (2.8, 1.4),
    (9.0, 2.0),
    (1.2, 1.3, 4.0, 1.3),
)

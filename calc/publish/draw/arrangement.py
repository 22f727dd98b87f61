"""Where the nodes of a schematic stand: by distance from a single junction, or in order across."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from math import atan2
from typing import TYPE_CHECKING

from calc.publish.draw import order
from calc.publish.draw.marks import BASIN_DEPTH, BASIN_WIDTH, FREEBOARD
from calc.publish.draw.scale import Scale, spanning

if TYPE_CHECKING:
    from calc.publish.draw.geometry import Box, Point
    from calc.report.figures import Schematic

STAR_TO = 6  # branches drawn by distance
CLOSE = 0.16  # rad between two pipes on one side
FOOT_ROOM, HEAD_ROOM = 30.0, 38.0  # pt kept free below and above for names


@dataclass(frozen=True, slots=True)
class Arrangement:
    """Where everything stands, in points.

    Attributes
    ----------
    places : dict of str to Point
        Node by name: the surface of a reservoir, the junction itself.
    sides : dict of str to int
        Side on which a basin lies of its place: -1, 0, 1.
    heads : dict of str to float
        Heights of the solved heads of junctions.
    by_distance : bool
        Whether across is distance and up is elevation; else order and head.
    area : Box
        The part of the sheet that the works fill.
    up, across : Scale
        The scales; ``across`` shows nothing where order is drawn.
    """

    places: dict[str, Point]
    sides: dict[str, int]
    heads: dict[str, float]
    by_distance: bool
    area: Box
    up: Scale
    across: Scale


def is_star(figure: Schematic) -> bool:
    """Tell whether the works can be drawn by distance: one junction with single pipes, or one pipe alone."""
    ends = [{pipe.start, pipe.end} for pipe in figure.pipes]
    if not figure.junctions:
        return len(figure.pipes) == 1 and figure.pipes[0].length > 0
    if len(figure.junctions) > 1 or not 1 < len(ends) <= STAR_TO:
        return False
    centre = figure.junctions[0].name
    far = [name for pair in ends for name in pair - {centre}]
    whole = all(centre in pair for pair in ends) and all(pipe.length > 0 for pipe in figure.pipes)
    return whole and len(far) == len(set(far)) == len(ends) == len(figure.reservoirs)


def levels(figure: Schematic, *, by_distance: bool) -> list[float]:
    """Return every head, and where up is elevation every elevation, that the drawing must hold."""
    found = [reservoir.level for reservoir in figure.reservoirs] + [junction.head for junction in figure.junctions]
    if by_distance:
        found += [j.elevation for j in figure.junctions if j.elevation is not None]
    return found


def upright(figure: Schematic, foot: float, top: float, *, by_distance: bool) -> Scale:
    """Return the scale up the sheet, with room for names beyond the outermost nodes."""
    low, high = spanning(levels(figure, by_distance=by_distance))
    unit = (high - low) / (top - foot - FOOT_ROOM - HEAD_ROOM)
    return Scale(low - FOOT_ROOM * unit, high + HEAD_ROOM * unit, foot, top)


def arrange(figure: Schematic, area: Box, *, by_distance: bool) -> Arrangement | None:
    """Give every node its place within an area of the sheet; None where basins would lie on each other."""
    up = upright(figure, area.foot, area.top, by_distance=by_distance)
    heads = {junction.name: up.at(junction.head) for junction in figure.junctions}
    if by_distance:
        return _star(figure, area, up, heads) if figure.junctions else _lone(figure, area, up)
    return _in_order(figure, area, up, heads)


def _lone(figure: Schematic, area: Box, up: Scale) -> Arrangement:
    """Two waters and one pipe: the start left, the end at its distance."""
    pipe = figure.pipes[0]
    level = {reservoir.name: reservoir.level for reservoir in figure.reservoirs}
    across = Scale(0.0, pipe.length, area.left + 2.5 * BASIN_WIDTH, area.right - 2.5 * BASIN_WIDTH)
    places = {
        pipe.start: (across.start, up.at(level[pipe.start])),
        pipe.end: (across.end, up.at(level[pipe.end])),
    }
    return Arrangement(places, {pipe.start: -1, pipe.end: 1}, {}, by_distance=True, area=area, up=up, across=across)


def _star(figure: Schematic, area: Box, up: Scale, heads: dict[str, float]) -> Arrangement | None:
    """Try each branch on each side; None where basins would lie on each other either way."""
    junction = figure.junctions[0]
    level = {reservoir.name: reservoir.level for reservoir in figure.reservoirs}
    height = up.at(junction.head if junction.elevation is None else junction.elevation)
    best: tuple[float, Arrangement] | None = None
    for sides in product((-1, 1), repeat=len(figure.pipes)):
        if len(set(sides)) == 1:
            continue
        lengths = [side * pipe.length for side, pipe in zip(sides, figure.pipes, strict=True)]
        inset = 1.8 * BASIN_WIDTH
        across = Scale(min(lengths), max(lengths), area.left + inset, area.right - inset)
        places = {junction.name: (across.at(0.0), height)}
        where: dict[str, int] = {}
        for side, length, pipe in zip(sides, lengths, figure.pipes, strict=True):
            name = pipe.end if pipe.start == junction.name else pipe.start
            places[name] = (across.at(length), up.at(level[name]))
            where[name] = side
        price = _star_price(figure, places, where, sides)
        if price is not None and (best is None or price < best[0]):
            best = price, Arrangement(places, where, heads, by_distance=True, area=area, up=up, across=across)
    return best[1] if best else None


def _star_price(
    figure: Schematic, places: dict[str, Point], where: dict[str, int], sides: tuple[int, ...]
) -> float | None:
    """Price sides: water comes from the left, pipes on one side stand apart; None where they cannot."""
    centre = figure.junctions[0].name
    price = 0.0
    for side, pipe in zip(sides, figure.pipes, strict=True):
        toward = pipe.flow if pipe.end == centre else -pipe.flow
        price += 1.0 if toward * side > 0 else 0.0
    names = list(where)
    for i, one in enumerate(names):
        for other in names[i + 1 :]:
            if where[one] != where[other]:
                continue
            apart = _angle_between(places[centre], places[one], places[other])
            gap = (abs(places[one][0] - places[other][0]), abs(places[one][1] - places[other][1]))
            if apart < CLOSE / 2 or (gap[0] < BASIN_WIDTH + 6 and gap[1] < BASIN_DEPTH + FREEBOARD + 28):
                return None
            price += max(0.0, (CLOSE * 2 - apart) / CLOSE) * 1.5
    return price + 0.01 * abs(sum(sides))


def _angle_between(centre: Point, one: Point, other: Point) -> float:
    """Return the angle at the junction between the feet of two basins on one side, rad."""
    a, b = (atan2(point[1] - BASIN_DEPTH - centre[1], max(1e-9, abs(point[0] - centre[0]))) for point in (one, other))
    return abs(a - b)


def _in_order(figure: Schematic, area: Box, up: Scale, heads: dict[str, float]) -> Arrangement:
    """Order across, head up."""
    names = [r.name for r in figure.reservoirs] + [j.name for j in figure.junctions]
    level = [reservoir.level for reservoir in figure.reservoirs] + [j.head for j in figure.junctions]
    index = {name: i for i, name in enumerate(names)}
    pairs = [(index[pipe.start], index[pipe.end]) for pipe in figure.pipes]
    aspect = (area.top - area.foot) / (area.right - area.left)
    slots = order.order(level, pairs, aspect)
    inset = BASIN_WIDTH
    across = Scale(0.0, 1.0, area.left + inset, area.right - inset)
    spots = order.breathe(slots, level)
    places = {name: (across.at(spots[i]), up.at(level[i])) for i, name in enumerate(names)}
    sides = {reservoir.name: 0 for reservoir in figure.reservoirs}
    return Arrangement(places, sides, heads, by_distance=False, area=area, up=up, across=across)

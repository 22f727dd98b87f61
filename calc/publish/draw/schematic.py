"""Schematic to elevation: the works of one case.

One junction: across is the distance along each pipe from the junction, up is elevation, and the hydraulic
grade runs dashed from each level to the solved head. Many junctions: across is order, up is head, so that
every pipe falls the way its water runs. Lines are straight and say nothing of the ground between.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from calc.publish.draw import key, look, marks, routes, scale
from calc.publish.draw.arrangement import Arrangement, arrange, is_star, upright
from calc.publish.draw.faces import Voice, voice
from calc.publish.draw.geometry import Box
from calc.publish.draw.naming import Names
from calc.publish.draw.placing import Label, Surroundings, place
from calc.publish.draw.settings import plain
from calc.publish.draw.sheet import Sheet

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from matplotlib.figure import Figure

    from calc.publish.draw.geometry import Point
    from calc.publish.draw.routes import Route
    from calc.report.figures import Junction, Schematic

FEW, MANY, CROWD = 5, 14, 40  # pipes: sizes of sheet, and where only governing pipes are named
SIZES, SMALLEST = ((14, 1.0), (28, 0.85), (60, 0.72)), 0.55  # of marks, up to so many pipes
HEIGHT_PER_LETTER = 0.18  # mm
TALLEST = 205.0  # mm
SAID = 6  # of each kind in the alternative text
TOP_GAP, SIDE_GAP = 8.0, 8.0
BESIDE, FIRST, LAST = (-0.08, 0.08, -0.16, 0.16), 0.12, 0.88  # shares of a pipe where its name may stand
NOTE = "{} left out for want of room; the table names every pipe and junction"
UNNAMED = "governing pipes are named here; the table names every pipe and junction"


@dataclass(slots=True)
class Draft:
    """A schematic in the making: what is drawn, and what labels must keep off."""

    figure: Schematic
    sheet: Sheet
    size: float
    plan: Arrangement
    obstacles: list[Box] = field(default_factory=list)
    lines: list[tuple[Sequence[Point], float]] = field(default_factory=list)
    labels: list[Label] = field(default_factory=list)


def draw(figure: Schematic) -> Figure:
    """Draw the works.

    Parameters
    ----------
    figure : Schematic
        With at least one pipe; every pipe's ends are among its reservoirs and junctions.

    Returns
    -------
    Figure
        165 mm wide.
    """
    with plain():
        draft = (_begin(figure, star=True) if is_star(figure) else None) or _begin(figure, star=False)
        if draft is None:
            raise AssertionError  # order across always finds a place
        _works(draft)
        area, scale_room = draft.plan.area, SIDE_GAP / 2 - 1
        frame = Box(area.left - scale_room, area.foot + 1.5, area.right, area.top + TOP_GAP - 1)
        around = Surroundings(frame, tuple(draft.lines), tuple(draft.obstacles))
        left_out = place(draft.sheet, draft.labels, around)
        _note(draft, len(left_out))
    return draft.sheet.figure


def _begin(figure: Schematic, *, star: bool) -> Draft | None:
    """Rule the sheet, write its axes and key, and give the nodes their places; None where they find none."""
    small, italic = voice(look.SOFT), voice(look.SOFT, slant="italic")
    sheet = Sheet(_height(figure, star=star) * look.POINTS_PER_MM)
    items = _key(figure, star=star)
    full = sheet.box.right - sheet.box.left
    foot = sheet.box.foot + key.ROW + key.height(items, small, full)
    titles = italic.wrap(_up_title(figure, star=star), full)
    top = sheet.box.top - len(titles) * italic.line - TOP_GAP
    notes = italic.wrap(_across_title(figure, star=star), full)
    low = foot + len(notes) * italic.line + (scale.TICK + small.line if star else 0.0) + 4.0
    up = upright(figure, low, top, by_distance=star)
    left = sheet.box.left + scale.widest(up, small) + SIDE_GAP
    plan = arrange(figure, Box(left, low, sheet.box.right, top), by_distance=star)
    if plan is None:
        return None
    draft = Draft(figure, sheet, _size(len(figure.pipes)), plan)
    _axes(draft, titles, notes, small, italic)
    key.write(sheet, items, small, Box(sheet.box.left, sheet.box.foot, sheet.box.right, foot))
    return draft


def alt(figure: Schematic) -> str:
    """Return the drawing in words."""
    turning = [pipe.name for pipe in figure.pipes if pipe.turns]
    levels = ", ".join(f"{r.name} {r.level_text}" for r in figure.reservoirs[:SAID])
    heads = ", ".join(f"{j.name} {j.head_text}" for j in figure.junctions[:SAID])
    counts = ", ".join(
        _counted(len(found), noun)
        for found, noun in (
            (figure.reservoirs, "reservoir"),
            (figure.junctions, "junction"),
            (figure.pipes, "pipe"),
        )
    )
    parts = [f"{figure.title}. Schematic to elevation: {counts}."]
    parts += [f"Levels: {levels}{', …' if len(figure.reservoirs) > SAID else ''}."] if levels else []
    parts += [f"Solved heads: {heads}{', …' if len(figure.junctions) > SAID else ''}."] if heads else []
    parts += [
        f"{pipe.name}: {pipe.flow_text or 'no flow'} from {_way(pipe.start, pipe.end, pipe.flow)}."
        for pipe in figure.pipes[:SAID]
        if pipe.open
    ]
    more = ", …" if len(turning) > SAID else ""
    turns = f"Turns round between cases: {', '.join(turning[:SAID])}{more}."
    parts.append(turns if turning else "No pipe turns round between cases.")
    return " ".join(parts)


def _way(start: str, end: str, flow: float) -> str:
    return f"{start} to {end}" if flow >= 0 else f"{end} to {start}"


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def _height(figure: Schematic, *, star: bool) -> float:
    """Return the height of the sheet, mm: more for more pipes and for longer names."""
    count = len(figure.pipes)
    if star:
        return 104.0 if count < FEW else 120.0
    names = [r.name for r in figure.reservoirs] + [j.name for j in figure.junctions]
    letters = sum(10 + len(name) for name in [*names, *(pipe.name for pipe in figure.pipes)])
    plain_height = 128.0 if count <= MANY else 76.0 + 3.8 * count
    return min(TALLEST, max(plain_height, 30.0 + HEIGHT_PER_LETTER * letters))


def _size(count: int) -> float:
    """Return the size of marks for a number of pipes."""
    return next((size for most, size in SIZES if count <= most), SMALLEST)


def _up_title(figure: Schematic, *, star: bool) -> str:
    datum = figure.datum or "datum not stated"
    return f"{'elevation and head' if star else 'head (hydraulic grade)'}, {figure.level_unit}; {datum}"


def _across_title(figure: Schematic, *, star: bool) -> str:
    if not star:
        return "across: order of the nodes, not to scale; the lines are not the pipes’ profiles"
    origin = figure.junctions[0].name if figure.junctions else figure.pipes[0].start
    return f"distance along each pipe from {origin}, {figure.length_unit}; the lines are not the pipes’ profiles"


def _key(figure: Schematic, *, star: bool) -> list[key.Item]:
    """Return the marks that the sheet uses, in words."""
    found: list[key.Item] = []
    if star and any(j.elevation is not None for j in figure.junctions):
        found.append((_sample(look.ADDRESS, 0.7, look.LIMIT_DASH), "hydraulic grade"))
    if figure.junctions:
        found.append((marks.head, "solved head"))
    if any(pipe.open and pipe.flow for pipe in figure.pipes):
        found.append((lambda sheet, at: marks.flow(sheet, at, 0.0, 0.9), "flow"))
    if any(pipe.turns for pipe in figure.pipes):
        found.append((lambda sheet, at: marks.turn(sheet, at, 0.0, 0.9), "turns round between cases"))
    if any(not pipe.open for pipe in figure.pipes):
        found.append((_sample(look.SOFT, 1.6, (3.0, 2.4)), "shut"))
    water = {j.inflow for j in figure.junctions if j.withdrawal_text}
    if False in water:
        found.append((lambda sheet, at: marks.withdrawal(sheet, (at[0], at[1] + 8), 0.9), "withdrawal"))
    if True in water:
        found.append((lambda sheet, at: marks.withdrawal(sheet, (at[0], at[1] + 8), 0.9, inflow=True), "inflow"))
    found.append((None, "weight of line: bore"))
    if not star:
        found.append((None, "every pipe falls the way its water runs"))
    if len(figure.pipes) > CROWD:
        found.append((None, UNNAMED))
    return found


def _sample(ink: str, weight: float, dash: tuple[float, ...]) -> Callable[[Sheet, Point], None]:
    def paint(sheet: Sheet, at: Point) -> None:
        sheet.rule([(at[0] - 8, at[1]), (at[0] + 8, at[1])], ink, weight, dash, name="key")

    return paint


def _axes(draft: Draft, titles: tuple[str, ...], notes: tuple[str, ...], small: Voice, italic: Voice) -> None:
    """Write the scale up the sheet with its title, and what across means."""
    sheet, plan, low = draft.sheet, draft.plan, draft.plan.area.foot
    across = sheet.box.left + scale.widest(plan.up, small)
    scale.up_axis(sheet, plan.up, across, small)
    baseline = sheet.box.top - 0.8 * italic.size
    for line in titles:
        sheet.write((sheet.box.left, baseline), line, italic)
        baseline -= italic.line
    baseline = low - 0.9 * italic.size - 3.0
    if plan.by_distance:
        scale.across_axis(sheet, plan.across, low, small, unsigned=True)
        baseline -= scale.TICK + small.line
    for line in notes:
        sheet.write((across, baseline) if len(notes) == 1 else (sheet.box.left, baseline), line, italic)
        baseline -= italic.line


def _works(draft: Draft) -> None:
    """Draw reservoirs, pipes, heads and junctions, and ask for their labels."""
    figure, plan, names = draft.figure, draft.plan, Names(draft.figure, draft.size)
    for reservoir in figure.reservoirs:
        at, side = plan.places[reservoir.name], plan.sides[reservoir.name]
        box = marks.basin(draft.sheet, at, draft.size, side)
        draft.obstacles.append(box)
        draft.labels.append(names.reservoir(reservoir, box))
    laid = routes.route(figure, plan, draft.size)
    largest = max((pipe.bore for pipe in figure.pipes), default=0.0)
    for found in laid:
        weight = marks.bore_weight(found.pipe.bore, largest, draft.size)
        dash = () if found.pipe.open else (3.0, 2.4)
        draft.sheet.rule(found.points, look.SOFT, weight, dash, name=f"pipe {found.pipe.name}")
        draft.lines.append((found.points, 1.0))
    if plan.by_distance:
        _grades(draft, laid)
    for junction in figure.junctions:
        _junction(draft, names, junction, laid)
    _arrows(draft, names, laid)


def _grades(draft: Draft, laid: list[Route]) -> None:
    """Draw the hydraulic grade from each level to the solved head, where the junction is not drawn at it."""
    plan = draft.plan
    for junction in draft.figure.junctions:
        if junction.elevation is None:
            continue
        x = plan.places[junction.name][0]
        for found in laid:
            if not found.pipe.open:
                continue
            far = found.pipe.start if found.pipe.end == junction.name else found.pipe.end
            line = [plan.places[far], (x, plan.heads[junction.name])]
            draft.sheet.rule(line, look.ADDRESS, 0.7, look.LIMIT_DASH, layer=2.0, name="grade")
            draft.lines.append((line, 0.7))


def _junction(draft: Draft, names: Names, junction: Junction, laid: list[Route]) -> None:
    """Draw a junction, its head and its withdrawal."""
    plan, at = draft.plan, draft.plan.places[junction.name]
    draft.obstacles.append(marks.junction(draft.sheet, at, 2.8 * draft.size + 0.3))
    if plan.by_distance:
        top = (at[0], plan.heads[junction.name])
        if junction.elevation is not None:
            draft.sheet.rule([at, top], look.ADDRESS, 0.6, layer=2.0, name="riser")
            draft.lines.append(([at, top], 0.8))
        draft.obstacles.append(marks.head(draft.sheet, top))
        draft.labels.append(names.solved(junction, top))
    else:
        draft.obstacles.append(marks.head(draft.sheet, at, 3.6 * draft.size + 0.4))
    draft.labels += names.junction(junction, at, by_distance=plan.by_distance)
    if junction.withdrawal_text:
        above = _free_above(at, junction, laid, below_only=plan.by_distance and plan.heads[junction.name] >= at[1])
        draft.obstacles.append(marks.withdrawal(draft.sheet, at, draft.size, above=above, inflow=junction.inflow))
        tip = (at[0], at[1] + (14 if above else -14) * draft.size)
        draft.labels += names.withdrawal(junction, tip, above=above)


def _free_above(at: Point, junction: Junction, laid: list[Route], *, below_only: bool) -> bool:
    """Tell whether the space above a junction is freer of pipes than the space below."""
    if below_only:
        return False
    steep: list[float] = []
    for found in laid:
        if junction.name in (found.pipe.start, found.pipe.end):
            first, last = found.points[0], found.points[-1]
            far = last if np.hypot(first[0] - at[0], first[1] - at[1]) < 1.0 else first
            run = float(np.hypot(far[0] - at[0], far[1] - at[1])) or 1.0
            steep.append((far[1] - at[1]) / run)
    return bool(steep) and min(abs(s - 1) for s in steep) > min(abs(s + 1) for s in steep)


def _arrows(draft: Draft, names: Names, laid: list[Route]) -> None:
    """Set an arrowhead on each pipe where there is most room, mark those that turn, and ask for names."""
    samples = [np.array([found.at(t / 24)[0] for t in range(25)]) for found in laid]
    nodes = np.array(list(draft.plan.places.values()))
    for k, found in enumerate(laid):
        others = np.concatenate([*samples[:k], *samples[k + 1 :], nodes])
        share = routes.roomiest(found, others, draft.obstacles)
        at, bearing = found.at(share)
        pipe = found.pipe
        if pipe.turns:
            draft.obstacles.append(marks.turn(draft.sheet, _aside(at, bearing, 8.5 * draft.size), bearing, draft.size))
        if pipe.open and pipe.flow:
            ink = look.TURNED if pipe.turns else look.INK
            draft.obstacles.append(marks.flow(draft.sheet, at, bearing, draft.size, ink))
        near = tuple(found.at(share + step)[0] for step in BESIDE if FIRST < share + step < LAST)
        draft.labels += names.pipe(pipe, at, near, bearing)


def _aside(at: Point, bearing: float, by: float) -> Point:
    """Return the point above a line at a distance from it."""
    turn = np.radians(bearing)
    x, y = -float(np.sin(turn)), float(np.cos(turn))
    way = -1.0 if y < 0 else 1.0
    return at[0] + way * by * x, at[1] + way * by * y


def _note(draft: Draft, count: int) -> None:
    """Say at the foot that labels were left out, or cut off the line that was kept for it."""
    sheet = draft.sheet
    if count:
        italic = voice(look.SOFT, slant="italic")
        sheet.write((sheet.box.left, sheet.box.foot + 3.0), NOTE.format(_counted(count, "label")), italic)
    else:
        sheet.trim(key.ROW)

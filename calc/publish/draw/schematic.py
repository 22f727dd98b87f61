"""Schematic to elevation: the works of one case.

One junction: across is the distance along each pipe from the junction, up is elevation, and the hydraulic grade runs
dashed from each level to the solved head. Many junctions: across is order, up is head, so that every pipe falls the
way its water runs. Lines are straight and say nothing of the ground between.
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
from calc.publish.draw.sheet import Sheet

if TYPE_CHECKING:
    from collections.abc import Sequence

    from matplotlib.figure import Figure

    from calc.publish.draw.geometry import Point
    from calc.publish.draw.routes import Route
    from calc.report.figures import Junction, Schematic

FEW, MANY, CROWD = 5, 14, 40  # pipes: sizes of sheet and marks, and where only governing pipes are named
TALLEST = 212.0  # mm
TOP_GAP, SIDE_GAP = 8.0, 8.0
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
    small, italic = voice(look.SOFT), voice(look.SOFT, slant="italic")
    count = len(figure.pipes)
    star = is_star(figure)
    size = 1.0 if count <= MANY else 0.85 if count <= MANY * 2 else 0.72
    sheet = Sheet(_height(count, star=star) * look.POINTS_PER_MM)
    items = _key(figure, star=star)
    full = sheet.box.right - sheet.box.left
    foot = sheet.box.foot + key.ROW + key.height(items, small, full)
    titles = italic.wrap(_up_title(figure, star=star), full)
    top = sheet.box.top - len(titles) * italic.line - TOP_GAP
    notes = italic.wrap(_across_title(figure, star=star), full)
    low = foot + len(notes) * italic.line + (scale.TICK + small.line if star else 0.0) + 4.0
    left = sheet.box.left + scale.widest(upright(figure, low, top), small) + SIDE_GAP
    draft = Draft(figure, sheet, size, arrange(figure, Box(left, low, sheet.box.right, top)))
    _axes(draft, titles, notes, low, small, italic)
    key.write(sheet, items, small, Box(sheet.box.left, sheet.box.foot, sheet.box.right, foot))
    _works(draft)
    frame = Box(left - SIDE_GAP / 2 + 1, low + 1.5, sheet.box.right, top + TOP_GAP - 1)
    around = Surroundings(frame, tuple(draft.lines), tuple(draft.obstacles))
    left_out = place(sheet, draft.labels, around)
    _note(draft, len(left_out), italic)
    return sheet.figure


def alt(figure: Schematic) -> str:
    """Return the drawing in words."""
    turning = [pipe.name for pipe in figure.pipes if pipe.turns]
    levels = ", ".join(f"{r.name} {r.level_text}" for r in figure.reservoirs[:6])
    heads = ", ".join(f"{j.name} {j.head_text}" for j in figure.junctions[:6])
    parts = [
        f"{figure.title}. Schematic to elevation: {_counted(len(figure.reservoirs), 'reservoir')}, "
        f"{_counted(len(figure.junctions), 'junction')}, {_counted(len(figure.pipes), 'pipe')}.",
        f"Levels: {levels}{', …' if len(figure.reservoirs) > 6 else ''}." if levels else "",  # noqa: PLR2004
        f"Solved heads: {heads}{', …' if len(figure.junctions) > 6 else ''}." if heads else "",  # noqa: PLR2004
        *[
            f"{pipe.name}: {pipe.flow_text or 'no flow'} from {_way(pipe.start, pipe.end, pipe.flow)}."
            for pipe in figure.pipes[:FEW]
            if pipe.open
        ],
        f"Turns round between cases: {', '.join(turning[:6])}." if turning else "No pipe turns round between cases.",
    ]
    return " ".join(part for part in parts if part)


def _way(start: str, end: str, flow: float) -> str:
    return f"{start} to {end}" if flow >= 0 else f"{end} to {start}"


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def _height(count: int, *, star: bool) -> float:
    """Return the height of the sheet, mm."""
    if star:
        return 104.0 if count < FEW else 120.0
    return 128.0 if count <= MANY else min(TALLEST, 76.0 + 3.8 * count)


def _up_title(figure: Schematic, *, star: bool) -> str:
    datum = figure.datum or "datum not stated"
    return f"{'elevation' if star else 'head (hydraulic grade)'}, {figure.level_unit}; {datum}"


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
    if figure.junctions and star:
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
        found.append(
            (lambda sheet, at: marks.withdrawal(sheet, (at[0], at[1] + 8), 0.9, inflow=True), "inflow")
        )
    found.append((None, "weight of line: bore"))
    if not star:
        found.append((None, "every pipe falls the way its water runs"))
    if len(figure.pipes) > CROWD:
        found.append((None, UNNAMED))
    return found


def _sample(ink: str, weight: float, dash: tuple[float, ...]) -> key.Callable[[Sheet, Point], None]:
    def paint(sheet: Sheet, at: Point) -> None:
        sheet.rule([(at[0] - 8, at[1]), (at[0] + 8, at[1])], ink, weight, dash, name="key")

    return paint


def _axes(
    draft: Draft, titles: tuple[str, ...], notes: tuple[str, ...], low: float, small: Voice, italic: Voice
) -> None:
    """Write the scale up the sheet with its title, and what across means."""
    sheet, plan = draft.sheet, draft.plan
    across = sheet.box.left + scale.widest(plan.up, small)
    scale.up_axis(sheet, plan.up, across, small, most=7)
    baseline = sheet.box.top - 0.8 * italic.size
    for line in titles:
        sheet.write((sheet.box.left, baseline), line, italic)
        baseline -= italic.line
    baseline = low - 0.9 * italic.size - 3.0
    if plan.by_distance:
        drawn = scale.Scale(plan.across.low, plan.across.high, plan.across.start, plan.across.end)
        scale.across_axis(sheet, drawn, low, small, unsigned=True)
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
    """Draw the hydraulic grade from each level to the solved head, where the junction itself stands apart from it."""
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
        draft.obstacles.append(
            marks.withdrawal(draft.sheet, at, draft.size, above=above, inflow=junction.inflow)
        )
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
    """Set an arrowhead on each pipe where there is most room, mark those that turn round, and ask for names."""
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
        near = tuple(found.at(t)[0] for t in (share - 0.08, share + 0.08, share - 0.16, share + 0.16) if 0.12 < t < 0.88)  # noqa: PLR2004
        draft.labels += names.pipe(pipe, at, near, bearing)


def _aside(at: Point, bearing: float, by: float) -> Point:
    """Return the point above a line at a distance from it."""
    turn = np.radians(bearing)
    x, y = -float(np.sin(turn)), float(np.cos(turn))
    way = -1.0 if y < 0 else 1.0
    return at[0] + way * by * x, at[1] + way * by * y


def _note(draft: Draft, count: int, italic: Voice) -> None:
    """Say at the foot that labels were left out."""
    if count:
        what = NOTE.format(_counted(count, "label"))
        draft.sheet.write((draft.sheet.box.left, draft.sheet.box.foot + 3.0), what, italic)

"""Balance of a single junction: flow toward it in each branch against trial head.

The heavy line is the sum less the withdrawal; it crosses zero at the accepted head. Trials stand on it as
numbered open circles; beneath, one row a trial shows the bracket that the trial was chosen from.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from calc.publish.draw import look, margin, marks, scale
from calc.publish.draw.faces import Voice, voice
from calc.publish.draw.geometry import Box
from calc.publish.draw.placing import Label, Surroundings, place
from calc.publish.draw.settings import plain
from calc.publish.draw.sheet import Sheet

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from calc.publish.draw.geometry import Point
    from calc.report.figures import Balance, BalanceBranch, Trial

MOST_ROWS, FIRST_ROWS = 14, 11
MOST_NAMED = 6
PLOT = 76.0  # mm
ROW = 11.0  # pt
TOGETHER = 7.0  # pt: trials closer than this share a label
POINT = 2.3
SUM = "sum less withdrawal"
WIDE = " wide"


@dataclass(frozen=True, slots=True)
class Voices:
    """How the sheet speaks."""

    soft: Voice
    italic: Voice
    strong: Voice
    plain: Voice
    accepted: Voice


@dataclass(frozen=True, slots=True)
class Plan:
    """The sheet's parts: the plot, the rows beneath it, and the scales they share."""

    plot: Box
    rows: Box
    across: scale.Scale
    up: scale.Scale


def draw(figure: Balance) -> Figure:
    """Draw the balance.

    Parameters
    ----------
    figure : Balance
        With at least one branch, two heads and one trial.

    Returns
    -------
    Figure
        165 mm wide.
    """
    with plain():
        return _draw(figure).figure


def _draw(figure: Balance) -> Sheet:
    say = Voices(
        voice(look.SOFT),
        voice(look.SOFT, slant="italic"),
        voice(look.INK, strong=True),
        voice(look.INK),
        voice(look.ADDRESS, strong=True),
    )
    shown = _shown(figure)
    named = _named(figure)
    plan, sheet = _plan(figure, say, shown, named)
    _axes(figure, sheet, plan, say)
    lines = _curves(figure, sheet, plan, say, named)
    _accepted(figure, sheet, plan)
    obstacles, labels = _trials(figure, sheet, plan, say)
    head = (plan.across.at(figure.accepted_head), plan.up.at(0.0))
    obstacles.append(marks.head(sheet, head))
    labels.append(Label(((f"head {figure.accepted_text}", say.accepted),), head, (), "NE SW ENE WSW N S", 6.0, 0))
    lines.append(([(head[0], plan.rows.foot), (head[0], plan.plot.top)], 0.8))
    _rows(figure, sheet, plan, say, shown)
    frame = Box(plan.plot.left + 1, plan.plot.foot + 1, plan.plot.right - 1, plan.plot.top - 1)
    place(sheet, labels, Surroundings(frame, tuple(lines), tuple(obstacles)))
    return sheet


def alt(figure: Balance) -> str:
    """Return the drawing in words."""
    count = len(figure.trials)
    widths = [trial.width_text for trial in figure.trials if trial.width_text]
    bracket = f" Bracket from {widths[0]} wide to {widths[-1]}." if len(widths) > 1 else ""
    return (
        f"{figure.title}. Flow toward {figure.junction} in {len(figure.branches)} "
        f"branch{'' if len(figure.branches) == 1 else 'es'} against trial head. "
        f"The sum less the withdrawal is zero at head {figure.accepted_text}. "
        f"{count} trial{'' if count == 1 else 's'}.{bracket}"
    )


def _shown(figure: Balance) -> tuple[Trial | None, ...]:
    """Return the trials that have a row; None stands for those between the first and the last."""
    known = [trial for trial in figure.trials if trial.low is not None and trial.high is not None]
    if len(known) <= MOST_ROWS:
        return tuple(known)
    return (*known[:FIRST_ROWS], None, *known[-(MOST_ROWS - FIRST_ROWS - 1) :])


def _named(figure: Balance) -> tuple[BalanceBranch, ...]:
    """Return the branches that are named: all, or those that carry most at the accepted head."""
    ranked = sorted(figure.branches, key=lambda branch: -abs(branch.accepted_flow))
    chosen = {id(branch) for branch in ranked[:MOST_NAMED]}
    return tuple(branch for branch in figure.branches if id(branch) in chosen)


def _endings(figure: Balance, say: Voices, named: tuple[BalanceBranch, ...]) -> list[tuple[str, Voice, float]]:
    """Return the names in the right margin with the flow at which their curves end."""
    found = [(branch.name, say.plain, branch.flows[-1]) for branch in named]
    rest = [branch for branch in figure.branches if branch not in named]
    if rest:
        middle = sorted(branch.flows[-1] for branch in rest)[len(rest) // 2]
        found.append((f"{len(rest)} other{'' if len(rest) == 1 else 's'}", say.soft, middle))
    return [*found, (SUM, say.strong, figure.sums[-1])]


def _plan(
    figure: Balance, say: Voices, shown: tuple[Trial | None, ...], named: tuple[BalanceBranch, ...]
) -> tuple[Plan, Sheet]:
    """Divide the sheet."""
    titles = say.italic.wrap(_across_title(figure), look.WIDTH * 0.8)
    rows = len(shown) * ROW + (6.0 if shown else 0.0)
    beneath = rows + scale.TICK + say.soft.line + len(titles) * say.italic.line + 8.0
    sheet = Sheet(PLOT * look.POINTS_PER_MM + beneath + say.italic.line)
    top = sheet.box.top - say.italic.line - 6.0
    foot = sheet.box.foot + beneath
    flows = [flow for branch in figure.branches for flow in branch.flows]
    flows += [*figure.sums, 0.0, *(trial.imbalance for trial in figure.trials)]
    low, high = scale.spanning(flows)
    spare = 0.05 * (high - low)
    up = scale.Scale(low - spare, high + spare, foot, top)
    ends = margin.room([(name, speaker) for name, speaker, _ in _endings(figure, say, named)])
    widths = [trial.width_text for trial in shown if trial]
    right = max(ends, margin.room([(width + WIDE, say.soft) for width in widths]))
    left = sheet.box.left + max(scale.widest(up, say.soft), say.soft.width("bracket") + 6.0)
    heads = [*figure.heads, *(trial.head for trial in figure.trials), figure.accepted_head]
    heads += [end for trial in figure.trials for end in (trial.low, trial.high) if end is not None]
    first, last = scale.spanning(heads)
    inset = 16.0 if shown else 4.0
    area = Box(left, foot, sheet.box.right - right, top)
    across = scale.Scale(first, last, area.left + inset, area.right - 4.0)
    beneath_plot = Box(area.left, area.foot - rows, area.right, area.foot)
    return Plan(area, beneath_plot, across, up), sheet


def _across_title(figure: Balance) -> str:
    return f"trial head at {figure.junction}, {figure.level_unit}; {figure.datum or 'datum not stated'}"


def _axes(figure: Balance, sheet: Sheet, plan: Plan, say: Voices) -> None:
    """Rule the axes and the line of no flow."""
    scale.up_axis(sheet, plan.up, plan.plot.left, say.soft)
    title = f"flow toward {figure.junction}, {figure.flow_unit}"
    baseline = sheet.box.top - 0.8 * say.italic.size
    sheet.write((sheet.box.left, baseline), say.italic.wrap(title, look.WIDTH * 0.9)[0], say.italic)
    zero = plan.up.at(0.0)
    sheet.rule([(plan.plot.left, zero), (plan.plot.right, zero)], look.SOFT, look.AXIS_LINE, layer=1.5, name="zero")
    scale.across_axis(sheet, plan.across, plan.rows.foot, say.soft)
    baseline = plan.rows.foot - scale.TICK - say.soft.line - 1.0 * say.italic.size - 1.0
    for line in say.italic.wrap(_across_title(figure), look.WIDTH * 0.8):
        sheet.write((plan.plot.left, baseline), line, say.italic)
        baseline -= say.italic.line


def _curves(
    figure: Balance, sheet: Sheet, plan: Plan, say: Voices, named: tuple[BalanceBranch, ...]
) -> list[tuple[list[Point], float]]:
    """Draw each branch and the sum, named at the right; return the lines with their weight for labels."""
    lines: list[tuple[list[Point], float]] = []
    across = [plan.across.at(head) for head in figure.heads]
    for branch in figure.branches:
        points = list(zip(across, (plan.up.at(flow) for flow in branch.flows), strict=True))
        quiet = branch not in named
        dash = () if quiet else look.DASHES[named.index(branch) % len(look.DASHES)]
        weight = 0.4 if quiet else look.DATA_LINE
        sheet.rule(points, look.RULE if quiet else look.INK, weight, dash, name=f"branch {branch.name}")
        lines.append((points, 0.3 if quiet else 0.8))
    points = list(zip(across, (plan.up.at(flow) for flow in figure.sums), strict=True))
    sheet.rule(points, look.INK, look.SUM_LINE, layer=4.0, name="sum")
    lines.append((points, 1.2))
    endings = [margin.Ending(plan.up.at(flow), name, speaker) for name, speaker, flow in _endings(figure, say, named)]
    margin.write(sheet, max(across), endings, plan.plot.foot, plan.plot.top + 4.0)
    return lines


def _accepted(figure: Balance, sheet: Sheet, plan: Plan) -> None:
    """Rule the accepted head through plot and rows."""
    x = plan.across.at(figure.accepted_head)
    ends = [(x, plan.rows.foot), (x, plan.plot.top)]
    sheet.rule(ends, look.ADDRESS, 0.6, look.LIMIT_DASH, layer=2.0, name="accepted")


def _trials(figure: Balance, sheet: Sheet, plan: Plan, say: Voices) -> tuple[list[Box], list[Label]]:
    """Draw the trials as open circles; those that lie together share a label."""
    groups: list[tuple[Point, list[int]]] = []
    boxes = []
    for trial in figure.trials:
        at = (plan.across.at(trial.head), plan.up.at(trial.imbalance))
        sheet.dot(at, POINT, look.PAPER, look.INK, 0.8, layer=6.0)
        boxes.append(Box(*at, *at).grown(POINT + 0.8))
        for place_, numbers in groups:
            if abs(place_[0] - at[0]) < TOGETHER and abs(place_[1] - at[1]) < TOGETHER:
                numbers.append(trial.number)
                break
        else:
            groups.append((at, [trial.number]))
    labels = [
        Label(((runs(numbers), say.strong),), at, (), "NW SE WNW ESE N S NE SW", 4.0, 1) for at, numbers in groups
    ]
    return boxes, labels


def _rows(figure: Balance, sheet: Sheet, plan: Plan, say: Voices, shown: tuple[Trial | None, ...]) -> None:
    """Draw one row a trial: its bracket with closed ends, and the trial within it."""
    if not shown:
        return
    up = plan.rows.top - 3.0
    sheet.write((plan.plot.left - 5.0, up - ROW / 2 - 0.3 * say.soft.size), "bracket", say.soft, "right")
    for trial in shown:
        up -= ROW
        middle = up + ROW / 2
        baseline = middle - 0.3 * say.soft.size
        if trial is None or trial.low is None or trial.high is None:
            left = len(figure.trials) - len(shown) + 1
            sheet.write((plan.plot.left + 3.0, baseline), f"… {left} more trials", say.soft)
            continue
        low, high = plan.across.at(trial.low), plan.across.at(trial.high)
        sheet.rule([(low, middle), (high, middle)], look.INK, 0.8, name="bracket")
        for end in (low, high):
            sheet.rule([(end, middle - 2.6), (end, middle + 2.6)], look.INK, 0.8, name="bracket end")
        sheet.dot((plan.across.at(trial.head), middle), 1.7, look.PAPER, look.INK, 0.7)
        sheet.write((low - 4.0, baseline), str(trial.number), say.strong, "right")
        width = trial.width_text + (WIDE if trial is shown[0] and trial.width_text else "")
        sheet.write((plan.plot.right + margin.OFF - 4.0, baseline), width, say.soft)


def runs(numbers: list[int]) -> str:
    """Return numbers as printed together: 1, 4–6."""
    parts: list[list[int]] = []
    for value in numbers:
        if parts and value == parts[-1][-1] + 1:
            parts[-1].append(value)
        else:
            parts.append([value])
    return ", ".join(
        str(part[0]) if len(part) == 1 else f"{part[0]}{', ' if len(part) == 2 else '–'}{part[-1]}"  # noqa: PLR2004
        for part in parts
    )

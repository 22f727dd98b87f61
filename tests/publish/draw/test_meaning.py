"""What the drawings show is what the figures say: places, directions, signs, zeros and words."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import PathPatch

sys.path.insert(0, str(Path(__file__).parent))

import audit
import samples

from calc.publish.draw import balance, convergence, look, schematic
from calc.publish.draw.balance import runs
from calc.publish.draw.margin import spread
from calc.publish.draw.scale import Scale, decade, number


def lines(figure: Figure, name: str) -> list[np.ndarray]:
    return [line.get_xydata() for line in figure.findobj(Line2D) if line.get_label().startswith(name)]


def shapes(figure: Figure, ink: str) -> list[np.ndarray]:
    """Corners of the filled shapes of one ink."""
    rgb = tuple(int(ink[k : k + 2], 16) / 255 for k in (1, 3, 5))
    return [
        patch.get_path().vertices
        for patch in figure.findobj(PathPatch)
        if patch.get_facecolor()[3] > 0 and np.allclose(patch.get_facecolor()[:3], rgb)
    ]


def said(figure: Figure) -> list[str]:
    return [text.get_text() for text in audit.texts(figure)]


def axis(figure: Figure) -> tuple[float, float]:
    """Points for a value up the sheet, as slope and origin, read from the printed scale."""
    ticks = [
        (float(t.get_text().replace("\u2212", "-")), t.get_position()[1] + 0.32 * 8)
        for t in audit.texts(figure)
        if t.get_horizontalalignment() == "right" and t.get_text().replace("\u2212", "").isdigit()
    ]
    slope, origin = np.polyfit(*zip(*ticks, strict=True), 1)
    return float(slope), float(origin)


@pytest.mark.parametrize("withdrawal", [0.0, 12.0, 420.0])
def test_levels_and_head_lie_on_the_printed_scale(withdrawal: float) -> None:
    works = samples.star(3, withdrawal=withdrawal)
    drawn = schematic.draw(works)
    slope, origin = axis(drawn)
    surfaces = sorted(line[0][1] for line in lines(drawn, "surface"))
    assert surfaces == pytest.approx([slope * r.level + origin for r in reversed(works.reservoirs)], abs=0.2)
    heads = [shape[:-1, 1].mean() for shape in shapes(drawn, look.ADDRESS) if len(shape) == 5]
    expected = slope * works.junctions[0].head + origin
    assert min(abs(head - expected) for head in heads) < 0.2


@pytest.mark.parametrize("count", [3, 5])
def test_arrowheads_point_the_way_the_water_runs(count: int) -> None:
    works = samples.star(count)
    works = replace(works, pipes=tuple(replace(pipe, turns=()) for pipe in works.pipes))
    back = replace(works, pipes=tuple(replace(pipe, flow=-pipe.flow) for pipe in works.pipes))
    for figure in (works, back):
        drawn = schematic.draw(figure)
        tips = [shape for shape in shapes(drawn, look.INK) if len(shape) == 4]
        for pipe in figure.pipes:
            way = lines(drawn, f"pipe {pipe.name}")[0]
            run = (way[-1] - way[0]) / np.hypot(*(way[-1] - way[0]))
            mine = min(tips, key=lambda tip: abs(np.cross(np.append(run, 0), np.append(tip[0] - way[0], 0))[2]))
            assert (mine[0] - mine[1:3].mean(0)) @ run > 0
            junction = lines(drawn, "riser")[0][0]
            toward = np.hypot(*(way[-1] - junction)) < 1.0
            assert toward == ((pipe.flow > 0) == (pipe.end == "marl-cross"))


def test_no_arrowhead_without_flow_or_on_a_shut_pipe() -> None:
    works = samples.star(3)
    still = (replace(works.pipes[0], flow=0.0, turns=()), replace(works.pipes[1], open=False, turns=()))
    drawn = schematic.draw(replace(works, pipes=(*still, works.pipes[2])))
    in_key, on_pipe = 1, 1
    assert len([shape for shape in shapes(drawn, look.INK) if len(shape) == 4]) == in_key + on_pipe
    assert any(text.endswith(" shut") for text in said(drawn))


def test_the_warm_tone_is_for_turns_alone() -> None:
    works = samples.star(3)
    assert shapes(schematic.draw(works), look.TURNED)
    steady = replace(works, pipes=tuple(replace(pipe, turns=()) for pipe in works.pipes))
    drawn = schematic.draw(steady)
    assert not shapes(drawn, look.TURNED)
    assert not [text for text in audit.texts(drawn) if text.get_color() == look.TURNED]


def test_every_number_is_printed_as_given() -> None:
    works = samples.star(3)
    words = " | ".join(said(schematic.draw(works)))
    for reservoir in works.reservoirs:
        assert reservoir.level_text in words
    for pipe in works.pipes:
        assert f"{pipe.name} {pipe.flow_text}" in words
        assert pipe.size_text in words
        assert pipe.drive_text in words
    assert f"head {works.junctions[0].head_text}" in words
    assert samples.DATUM in words


def test_a_head_below_ground_and_an_unknown_elevation_are_said() -> None:
    below = said(schematic.draw(samples.star(3, withdrawal=420.0, elevation=195.0)))
    assert "below the junction" in below
    unknown = said(schematic.draw(samples.star(3, elevation=None)))
    assert "elevation not given: drawn at its head" in unknown


def test_equal_lengths_and_levels_fall_back_to_order() -> None:
    drawn = schematic.draw(samples.star(3, levels=(200.0, 200.0, 200.0), withdrawal=0.0))
    assert any(text.startswith("across: order") for text in said(drawn))
    surfaces = [line[:, 0] for line in lines(drawn, "surface")]
    assert len({round(float(x.mean())) for x in surfaces}) == 3


def test_two_waters_and_one_pipe() -> None:
    works = samples.star(2)
    pipe = replace(works.pipes[0], end="sedge", turns=())
    drawn = schematic.draw(replace(works, junctions=(), pipes=(pipe,)))
    assert audit.faults(drawn) == []
    assert any(text.startswith("distance along each pipe from ostrel") for text in said(drawn))


def test_twin_pipes_are_drawn_apart() -> None:
    works = samples.star(3)
    twin = replace(works.pipes[0], name="ostrel-relief")
    drawn = schematic.draw(replace(works, pipes=(*works.pipes, twin)))
    one, other = (lines(drawn, f"pipe {name}")[0] for name in ("ostrel-main", "ostrel-relief"))
    assert np.hypot(*(one[1] - other[1])) > 10
    assert np.allclose(one[0], other[0])
    assert np.allclose(one[-1], other[-1])


def test_above_forty_pipes_only_governing_ones_and_those_that_turn_are_named() -> None:
    works = samples.network(60)
    words = " | ".join(said(schematic.draw(works)))
    plain = [pipe for pipe in works.pipes if not (pipe.governing or pipe.turns)]
    assert plain
    assert not [pipe.name for pipe in plain if f"{pipe.name} " in words]
    assert any(pipe.name in words for pipe in works.pipes if pipe.governing)


def test_labels_left_out_are_counted() -> None:
    works = samples.network(40, names=30)
    words = said(schematic.draw(works))
    note = [text for text in words if "left out for want of room" in text]
    shown = sum(junction.head_text in words for junction in works.junctions)
    assert note or shown == len(works.junctions)


def test_the_sum_crosses_zero_at_the_accepted_head() -> None:
    figure = samples.balance(3, 30)
    drawn = balance.draw(figure)
    zero = lines(drawn, "zero")[0][0][1]
    total = lines(drawn, "sum")[0]
    crossing = np.interp(-zero, -total[:, 1], total[:, 0])
    accepted = lines(drawn, "accepted")[0][0][0]
    assert crossing == pytest.approx(accepted, abs=0.5)
    diamond = max((s for s in shapes(drawn, look.ADDRESS) if len(s) == 5), key=len)
    assert diamond[:-1].mean(0) == pytest.approx([accepted, zero], abs=1e-6)


def test_bracket_ends_close_round_the_accepted_head() -> None:
    drawn = balance.draw(samples.balance(3, 7))
    accepted = lines(drawn, "accepted")[0][0][0]
    brackets = [line for line in lines(drawn, "bracket") if line[0][1] == line[1][1]]
    assert len(brackets) == 7
    widths = [line[1][0] - line[0][0] for line in brackets]
    assert widths == sorted(widths, reverse=True)
    assert all(line[0][0] <= accepted + 0.01 and line[1][0] >= accepted - 0.01 for line in brackets)


def test_signs_are_filled_and_open_and_zero_has_its_own_line() -> None:
    figure = samples.convergence(12, zeros=True)
    drawn = convergence.draw(figure)
    panel = figure.panels[0]
    discs = {
        tuple(np.round(p.get_path().get_extents().get_points().mean(0), 1)): p.get_facecolor()[:3]
        for p in drawn.findobj(PathPatch)
    }
    course = lines(drawn, "course")[: len(panel.values) - 1]
    places = [course[0][0], *[step[1] for step in course]]
    for value, place in zip(panel.values[:-1], places, strict=False):
        fill = discs[tuple(np.round(place, 1))]
        assert value is not None
        assert (max(fill) < 0.2) == (value > 0)
    zero = lines(drawn, "zero")[0][0][1]
    assert places[-1][1] == pytest.approx(zero)
    assert zero < lines(drawn, "tolerance")[0][0][1] - 8
    assert "0" in said(drawn)
    assert "exactly zero" in said(drawn)


def test_sizes_lie_by_their_logarithms() -> None:
    figure = samples.newton()
    drawn = convergence.draw(figure)
    course = lines(drawn, "course")[:5]
    ups = [course[0][0][1], *[step[1][1] for step in course]]
    powers = [np.log10(value) for value in figure.panels[0].values if value]
    assert np.corrcoef(ups, powers)[0, 1] == pytest.approx(1.0, abs=1e-9)
    tolerance = lines(drawn, "tolerance")[0][0][1]
    slope, origin = np.polyfit(powers, ups, 1)
    assert slope * -6 + origin == pytest.approx(tolerance, abs=1e-6)


def test_the_words_for_who_cannot_see() -> None:
    words = schematic.alt(samples.star(3))
    assert "3 reservoirs, 1 junction, 3 pipes" in words
    assert "ostrel-main: 83.5 L/s from ostrel to marl-cross." in words
    assert "Turns round between cases: sedge-main." in words
    assert "7 trials. Bracket from 31.6 m wide to 0.494 m." in balance.alt(samples.balance(3, 7))
    assert "The last is within the tolerance of 1 × 10⁻⁶ L/s." in convergence.alt(samples.newton())
    assert "The last is outside the tolerance" in convergence.alt(samples.convergence(7))


@pytest.mark.parametrize(
    ("low", "high", "texts"),
    [
        (0.0, 10.0, ["0", "2", "4", "6", "8", "10"]),
        (-1.0, 1.0, ["\u22121.0", "\u22120.5", "0.0", "0.5", "1.0"]),
        (12_000.0, 14_000.0, ["12\u2009000", "12\u2009500", "13\u2009000", "13\u2009500", "14\u2009000"]),
        (0.0, 0.01, ["0.000", "0.002", "0.004", "0.006", "0.008", "0.010"]),
    ],
)
def test_scales_name_round_values(low: float, high: float, texts: list[str]) -> None:
    assert [text for _, text in Scale(low, high, 0, 100).ticks(5)] == texts


def test_numbers_of_scales() -> None:
    assert number(-0.0001, 2) == "0.00"
    assert [decade(k) for k in (-6, -3, 0, 2, 6)] == ["10⁻⁶", "0.001", "1", "100", "10⁶"]
    assert runs([1, 2, 4, 5, 6, 9]) == "1, 2, 4–6, 9"


def test_names_in_the_margin_keep_order_and_distance() -> None:
    middles = spread(np.array([5.0, 5.0, 6.0, 50.0]), np.array([10.0, 10.0, 10.0, 10.0]), 0.0, 60.0)
    assert list(middles) == pytest.approx([5.0, 15.0, 25.0, 50.0])

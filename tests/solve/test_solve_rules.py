"""The trial table: each row follows from its rule and earlier rows, and the rows are the evaluations."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from solve_cases import Array, Pipe, network, random_star

from calc.components.network import Network
from calc.solve import NARROWINGS, RULES, Settings, Trials, inputs_of, solve
from calc.solve.branch import Branches


def cases() -> list[tuple[Network, Settings]]:
    """Stars by seed, plain and from a start; every third by bisection."""
    made = []
    for seed in range(60):
        rng = np.random.default_rng(1000 + seed)
        start = {"j": float(rng.choice([-1e6, 90.0, 120.0, 400.0]))} if seed % 2 else {}
        made.append((random_star(rng), Settings(narrowing=NARROWINGS[seed % 3 == 0], start=start)))
    return made


def repeat(case: Network, settings: Settings, trials: Trials) -> None:
    """Recompute every trial head from what its rule cites, as a checker would."""
    for row, word in enumerate(trials.rule):
        level = float(case.level[trials.reservoir[row]]) if word == "level" else np.nan
        taken = inputs_of(trials, row, level, settings.start.get("j", np.nan))
        again = float(RULES[word].equation.body(**taken))
        largest = max(abs(v) for k, v in taken.items() if not k.startswith("imbalance"))
        assert again == pytest.approx(trials.head[row], abs=1e-12 * max(largest, abs(again))), (row, word)
        assert all(used < row for used in trials.uses[row])


def table_of(case: Network, settings: Settings) -> Trials:
    found = solve(case, settings)
    assert found.trials is not None
    return found.trials


def test_every_trial_head_follows_from_its_rule() -> None:
    words = set()
    for case, settings in cases():
        trials = table_of(case, settings)
        repeat(case, settings, trials)
        words |= set(trials.rule)
    assert words == set(RULES)


def test_a_changed_head_is_noticed() -> None:
    case, settings = cases()[1]
    trials = table_of(case, settings)
    head = trials.head.copy()
    head[-2] += 1e-6
    with pytest.raises(AssertionError):
        repeat(case, settings, replace(trials, head=head))


def test_a_rule_takes_no_more_than_it_names() -> None:
    for rule in RULES.values():
        assert [name for name, _, _ in rule.places] == list(rule.equation.takes)
        assert rule.equation.gives.text == "H"


def test_the_bracket_shown_is_the_one_in_force() -> None:
    for case, settings in cases():
        trials = table_of(case, settings)
        low = high = None
        for row in range(len(trials.head)):
            for end, value, kept in (
                (trials.low_end, trials.imbalance_low, low),
                (trials.high_end, trials.imbalance_high, high),
            ):
                shown = (end[row], value[row])
                expected = (np.nan, np.nan) if kept is None else (trials.head[kept], trials.imbalance[kept])
                assert np.array_equal(shown, expected, equal_nan=True)
            if trials.imbalance[row] > 0:
                assert low is None or trials.head[row] >= trials.head[low]
                low = row
            else:
                assert high is None or trials.head[row] <= trials.head[high]
                high = row


def test_imbalance_is_the_sum_of_the_flows_shown() -> None:
    for case, settings in cases():
        trials = table_of(case, settings)
        withdrawal = case.withdrawal[trials.junction]
        size = np.abs(trials.flows).sum(axis=1) + abs(withdrawal)
        assert np.all(np.abs(trials.flows.sum(axis=1) - withdrawal - trials.imbalance) <= 1e-15 * size)


def test_the_accepted_row_is_the_answer_and_no_row_is_better() -> None:
    for case, settings in cases():
        found = solve(case, settings)
        trials = found.trials
        assert trials is not None
        assert found.head[trials.junction] == trials.head[trials.accepted]
        toward = np.where(case.end[trials.branches] == trials.junction, 1.0, -1.0)
        assert np.array_equal(toward * found.flow[trials.branches], trials.flows[trials.accepted])
        assert abs(trials.imbalance[trials.accepted]) == np.min(np.abs(trials.imbalance))


def test_rows_are_the_evaluations(monkeypatch: pytest.MonkeyPatch) -> None:
    plain, asked = Branches.flows, []

    def counted(self: Branches, difference: Array, guess: Array | None = None) -> Array:
        asked.append(difference)
        return plain(self, difference, guess)

    monkeypatch.setattr(Branches, "flows", counted)
    for case, settings in cases():
        asked.clear()
        found = solve(case, settings)
        assert found.trials is not None
        assert len(asked) == len(found.trials.head) == found.iterations
        drops = np.abs(np.array(asked))
        ends = np.where(case.end == found.trials.junction, case.start, case.end)
        shown = np.abs(found.trials.head[:, None] - case.level[ends])
        assert np.all(np.abs(drops - shown) <= 1e-13 * np.maximum(np.abs(found.trials.head)[:, None], 400.0))


def test_only_the_levels_needed_are_tried() -> None:
    # five levels: halving the sorted list needs at most three
    levels = {name: 100.0 + 10.0 * i for i, name in enumerate("abcde")}
    for withdrawal in (0.0, 0.2, -0.2, 2.0, -2.0):
        case = network(levels, {"j": withdrawal}, [Pipe(name, "j", 1000.0, 0.3, 1e-4) for name in levels])
        rules = table_of(case, Settings()).rule
        assert rules[0] == "level"
        assert 1 <= rules.count("level") <= 3


def test_widening_doubles_from_the_range_of_levels() -> None:
    pipes = [Pipe("a", "j", 500.0, 0.1, factor=0.03), Pipe("b", "j", 500.0, 0.1, factor=0.03)]
    trials = table_of(network({"a": 50.0, "b": 47.0}, {"j": 0.3}, pipes), Settings())
    steps = trials.step[[word == "widened below" for word in trials.rule]]
    assert len(steps) > 5
    assert steps.tolist() == [3.0 * 2.0**i for i in range(len(steps))]
    alone = table_of(network({"a": 50.0}, {"j": -0.3}, pipes[:1]), Settings())
    assert alone.step[1] == 1.0
    assert alone.rule[1] == "widened above"


def test_bisection_halves_exactly() -> None:
    pipes = [Pipe("a", "j", 500.0, 0.2, factor=0.03), Pipe("b", "j", 800.0, 0.2, factor=0.03)]
    trials = table_of(network({"a": 64.0, "b": 32.0}, {"j": 0.01}, pipes), Settings(narrowing="bisection"))
    halved = [row for row, word in enumerate(trials.rule) if word == "halved"]
    width = trials.high_end - trials.low_end
    assert len(halved) > 30
    for count, row in enumerate(halved[:40]):  # widths 32, 16, 8 … are exact until heads run out of digits
        assert width[row] == 32.0 / 2.0**count
        assert trials.head[row] == (trials.low_end[row] + trials.high_end[row]) / 2

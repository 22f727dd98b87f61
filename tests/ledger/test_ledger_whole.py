"""Whole ledgers: the demonstration and random works, replayed, traced, exported and read by other hands."""

from __future__ import annotations

import json
import re
from pathlib import Path

import numpy as np
import pytest
from accounts import PROJECTS, Draft, accounted
from ledger_reader import Reader

from calc import pipeline
from calc.account import Account
from calc.ledger import Derived, Given, Ledger, Library, Program, Solved, Spot, exported, replay, trace
from calc.ledger.origin import Combined, Converted, Judged
from calc.verification import enter_checks, run

SEEDS = range(12)


@pytest.fixture(
    scope="module", params=[*PROJECTS, *SEEDS], ids=lambda p: p.name if isinstance(p, Path) else f"seed-{p}"
)
def account(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Account:
    if isinstance(request.param, Path):
        return pipeline.account(request.param)
    return accounted(tmp_path_factory.mktemp("works"), Draft(request.param).text())


def spots(ledger: Ledger) -> list[Spot]:
    return [Spot(column, row) for column in ledger.columns for row in range(len(column.rows))]


def test_every_number_replays(account: Account) -> None:
    count, wrong = replay(account.ledger)
    assert wrong == []
    with_rule = (Derived, Converted, Combined, Judged)
    assert count == sum(len(c.rows) for c in account.ledger.columns if isinstance(c.origin, with_rule))
    assert count > 100


def test_other_hands_replay_it_from_the_exported_text(account: Account) -> None:
    reader = Reader(json.loads(json.dumps(exported(account.ledger), allow_nan=False)))
    again = list(reader.every())
    assert len(again) == replay(account.ledger)[0]
    assert max(one.apart for one in again) <= 1e-9


def test_every_id_leads_back_to_its_number(account: Account) -> None:
    seen = set()
    for spot in spots(account.ledger):
        assert spot.id not in seen
        seen.add(spot.id)
        assert account.ledger.spot(spot.id) == spot


def test_no_number_rests_on_one_that_comes_later(account: Account) -> None:
    place = {id(column): k for k, column in enumerate(account.ledger.columns)}
    for column in account.ledger.columns:
        origin = column.origin
        views = (
            tuple(origin.inputs.values())
            if isinstance(origin, Derived)
            else (origin.terms,)
            if isinstance(origin, Combined)
            else (origin.margin,)
            if isinstance(origin, Judged)
            else ()
        )
        assert all(place[id(source)] < place[id(column)] for view in views for source in view.sources)


def test_every_leaf_of_a_trace_is_a_place_or_a_proof(account: Account) -> None:
    place = re.compile(r"(given|shipped) as '.*' at [\w./-]+:\d+:\d+")
    for spot in spots(account.ledger)[:: max(1, len(spots(account.ledger)) // 60)]:
        lines = list(trace(account.ledger, spot))
        depth = [len(line) - len(line.lstrip()) for line in lines]
        for k, line in enumerate(lines):
            deeper = k + 1 < len(lines) and depth[k + 1] > depth[k]
            if deeper or not line or "(shown above)" in line or line.startswith("proof of"):
                continue
            found = account.ledger.spot(line.split(" = ")[0].strip())
            origin = found.column.origin
            if isinstance(origin, Given | Converted | Library):
                assert place.search(line), line
            else:
                empty = isinstance(origin, Combined) and not np.any(origin.into == found.row)
                assert isinstance(origin, Solved | Program) or empty, line


def test_a_changed_value_is_found(account: Account) -> None:
    random = np.random.default_rng(7)
    columns = [
        column
        for column in account.ledger.columns
        if isinstance(column.origin, Derived | Combined | Converted) and len(column.rows)
    ]
    for column in random.choice(np.array(columns, dtype=object), 15, replace=False):
        row = int(random.integers(len(column.rows)))
        before = column.values[row]
        column.values.flags.writeable = True
        try:
            column.values[row] = before * (1 + 1e-6) if abs(before) > 1e-6 else before + 1e-3
            count, wrong = replay(account.ledger, columns=[column])
            assert (count, [one.id for one in wrong]) == (len(column.rows), [column.id(row)])
        finally:
            column.values[row] = before
            column.values.flags.writeable = False


def test_a_changed_value_is_found_by_other_hands_too(account: Account) -> None:
    told = json.loads(json.dumps(exported(account.ledger)))
    column = next(c for c in told["columns"] if c["name"] == "pipes.friction_loss")
    column["values"][0] *= 1 + 1e-7
    assert max(one.apart for one in Reader(told).every()) > 1e-8


def test_solver_and_ledger_agree(account: Account) -> None:
    # The closing error of energy is the solver's heads against the ledger's own losses.
    for case, held in account.cases.items():
        assert held.columns is not None
        level = held.network.level[~np.isnan(held.network.level)]
        allowed = 1e-9 * np.ptp(level) + 1e-11
        for column in account.ledger.find("pipes.closing_error", case):
            if column.case == case:
                assert np.max(np.abs(column.values)) <= allowed


def test_checks_stand_in_a_ledger_like_any_number() -> None:
    ledger = Ledger()
    enter_checks(ledger, run())
    assert replay(ledger)[1] == []
    again = list(Reader(json.loads(json.dumps(exported(ledger)))).every())
    assert again
    assert max(one.apart for one in again) <= 1e-12

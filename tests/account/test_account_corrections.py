"""Loop correction in the ledger: every figure found by its id, replayed from what it cites, and told as data."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from accounts import accounted
from ledger_reader import Reader

from calc.account import Account, results
from calc.account.corrections import ALL_IN_FULL, sweeps_in_full
from calc.ledger import Combined, Derived, Program, exported, replay, trace
from calc.solve import Corrections

GRID = """\
fluid: {{temperature: 10 degC}}
solver: {{method: loop-correction}}
reservoirs: {{crag: {{level: 95 m}}, moss: {{level: 74.5 m}}}}
junctions:
  {{a: {{withdrawal: 9 L/s}}, b: {{withdrawal: 4 L/s}}, c: {{inflow: 2 L/s}}, d: {{}}, e: {{withdrawal: 11 L/s}}}}
pipes:
  crag-main: {{from: crag, to: a, length: 1200 m, bore: 200 mm, roughness: 0.1 mm, ends: {{from: square}}}}
  ab: {{from: a, to: b, length: 700 m, bore: {bore}, roughness: 0.1 mm}}
  cb: {{from: c, to: b, length: 500 m, bore: {bore}, law: hazen-williams, hazen_williams_c: 120}}
  ac: {{from: a, to: c, length: 650 m, bore: 150 mm, law: manning, manning_n: 0.011, fittings: [{{K: 2}}]}}
  bd: {{from: b, to: d, length: 300 m, bore: 125 mm, law: fixed, friction_factor: 0.02}}
  cd: {{from: c, to: d, length: 400 m, bore: {bore}, roughness: 0.1 mm}}
  de: {{from: d, to: e, length: 350 m, bore: 150 mm, roughness: 0.1 mm, parallel: 2}}
  moss-main: {{from: moss, to: e, length: 900 m, bore: 200 mm, roughness: 0.1 mm}}
"""


def corrected(folder: Path, bore: str) -> tuple[Account, Corrections]:
    account = accounted(folder, GRID.format(bore=bore))
    held = account.cases["base"].solution.corrections
    assert held is not None
    assert account.solved
    assert account.confirmed
    return account, held


@pytest.fixture(scope="module", params=["short", "long"])
def table(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> tuple[Account, Corrections]:
    """Return works whose table is entered whole, and works whose table is too long for that."""
    folder = tmp_path_factory.mktemp("grid")
    account, held = corrected(folder, "60 mm" if request.param == "short" else "150 mm")
    assert (len(held.change) <= ALL_IN_FULL) == (request.param == "short")
    return account, held


def test_everything_is_replayed(table: tuple[Account, Corrections]) -> None:
    account, _ = table
    count, wrong = replay(account.ledger)
    assert wrong == []
    assert count > 500


def test_a_reader_without_the_program_gets_the_same(table: tuple[Account, Corrections]) -> None:
    account, _ = table
    own = [one for one in Reader(exported(account.ledger)).every() if one.name.startswith("loops.")]
    assert own
    assert max(one.apart for one in own) < 1e-12


def test_the_ledger_holds_what_the_solver_found(table: tuple[Account, Corrections]) -> None:
    account, held = table
    names = account.cases["base"].network.pipes.rows
    spot = account.ledger.spot
    for c, k in enumerate(held.loop.tolist()):
        trial = f"@base#{c + 1}"
        assert spot(f"loops.{k + 1}.correction{trial}").value == pytest.approx(held.change[c], rel=1e-6, abs=1e-14)
        assert spot(f"loops.{k + 1}.excess{trial}").value == pytest.approx(held.excess[c], rel=1e-6, abs=1e-10)
        assert spot(f"loops.{k + 1}.rate{trial}").value == pytest.approx(held.rate[c], rel=1e-9)
        if int(held.sweep[c]) in sweeps_in_full(held):
            for pipe in held.loops[k].pipes:
                found = spot(f"pipes.{names[pipe]}.flow{trial}")
                assert found.id == f"pipes.{names[pipe]}.flow{trial}"
                assert found.value == pytest.approx(held.flow[c, pipe], rel=1e-9, abs=1e-14)


def test_figures_of_full_sweeps_are_derived_and_the_others_recorded(table: tuple[Account, Corrections]) -> None:
    account, held = table
    names = account.cases["base"].network.pipes.rows
    kinds: set[type] = set()
    for c, k in enumerate(held.loop.tolist()):
        origin = account.ledger.spot(f"loops.{k + 1}.correction@base#{c + 1}").column.origin
        kinds.add(type(origin))
        assert isinstance(origin, Derived if int(held.sweep[c]) in sweeps_in_full(held) else Program)
    assert kinds == ({Derived} if len(held.change) <= ALL_IN_FULL else {Derived, Program})
    first = held.loops[0].pipes[0]
    for quantity, sort in (("flow", Combined), ("head_loss", Derived), ("loss_rate", Derived)):
        assert isinstance(account.ledger.spot(f"pipes.{names[first]}.{quantity}@base#1").column.origin, sort)


def test_start_flows_are_assumed_or_follow_from_withdrawals(table: tuple[Account, Corrections]) -> None:
    account, held = table
    network = account.cases["base"].network
    closing = {loop.closing for loop in held.loops}
    for pipe, name in enumerate(network.pipes.rows):
        found = account.ledger.spot(f"pipes.{name}.flow@base#0")
        assert found.value == pytest.approx(held.start[pipe], abs=1e-15)
        assert isinstance(found.column.origin, Program if pipe in closing else Combined)


def test_a_correction_is_traced_to_the_files(table: tuple[Account, Corrections]) -> None:
    account, held = table
    last = len(held.change)
    said = "\n".join(trace(account.ledger, account.ledger.spot(f"loops.{held.loop[-1] + 1}.correction@base#{last}")))
    assert "network.yaml:" in said
    assert "Cross 1936" in said
    assert "assumed at the start" in said


def test_results_tell_each_sweep(table: tuple[Account, Corrections]) -> None:
    account, held = table
    told = results(account)["cases"]["base"]
    assert told["method"] == "loop-correction"
    assert told["iterations"] == len(held.error)
    start, *sweeps = told["history"]
    assert [row["iteration"] for row in (start, *sweeps)] == list(range(told["iterations"] + 1))
    flow = dict(start["flows"])
    for row in sweeps:
        sizes = [abs(loop["correction"]) for loop in row["loops"]]
        assert row["largest_correction"] == max(sizes)
        for loop in row["loops"]:
            assert loop["correction"] == pytest.approx(-loop["excess"] / loop["rate"], rel=1e-12)
            for pipe, sign in loop["pipes"].items():
                flow[pipe] += sign * loop["correction"]
    for pipe, branch in told["branches"].items():
        assert branch["flow"] == pytest.approx(flow[pipe], abs=1e-12)
    errors = [row["largest_closing_error"] for row in sweeps]
    assert all(later < earlier for earlier, later in pairwise(errors[1:]))


def test_water_at_rest_is_told_without_a_rise(tmp_path: Path) -> None:
    text = GRID.format(bore="100 mm").replace("95 m", "74.5 m")
    for word in ("withdrawal: 9", "withdrawal: 4", "inflow: 2", "withdrawal: 11"):
        text = text.replace(word, word.partition(":")[0] + ": 0")
    account = accounted(tmp_path, text)
    held = account.cases["base"].solution.corrections
    assert held is not None
    assert np.all(held.change == 0.0)
    assert not account.ledger.find("pipes.loss_rate", "base", "#1")
    assert account.ledger.spot("loops.1.correction@base#1").value == 0.0
    assert replay(account.ledger)[1] == []


def test_a_tree_of_pipes_needs_no_correction(tmp_path: Path) -> None:
    account = accounted(
        tmp_path,
        """\
        solver: {method: loop-correction}
        reservoirs: {crag: {level: 95 m}}
        junctions: {a: {withdrawal: 9 L/s}, b: {}}
        pipes:
          main: {from: crag, to: a, length: 1200 m, bore: 200 mm, roughness: 0.1 mm}
          stub: {from: b, to: a, length: 70 m, bore: 100 mm, roughness: 0.1 mm}
        """,
    )
    told = results(account)["cases"]["base"]
    assert told["iterations"] == 0
    assert told["branches"]["main"]["flow"] == pytest.approx(0.009, rel=1e-12)
    assert told["branches"]["stub"]["flow"] == 0.0
    assert account.confirmed
    assert account.ledger.spot("pipes.stub.flow@base#0").value == 0.0

"""Hazen–Williams and Manning through the whole account: what is entered, what is absent, what a case may change."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from accounts import accounted

from calc.account import Account, results
from calc.equation import Equation
from calc.ledger import Library, Solved, replay
from calc.physics import empirical
from calc.problems import Unresolved

MIXED = """
site: {gravity: 9.81 m/s²}
friction: hazen-williams
reservoirs: {mere: {level: 80 m}, tarn: {level: 65 m}, pool: {level: 30 m}, pond: {level: 65 m}}
junctions: {cross: {elevation: 20 m, withdrawal: 12 L/s}, end: {elevation: 10 m}}
pipes:
  main: {from: mere, to: cross, length: 1500 m, bore: 500 mm, hazen_williams_c: 130}
  link: {from: tarn, to: cross, length: 1200 m, bore: 350 mm, law: manning, manning_n: 0.012, fittings: [{K: 2.5}]}
  tail: {from: cross, to: pool, length: 1800 m, bore: 400 mm, law: colebrook-white, roughness: 0.1 mm,
         hazen_williams_c: 120}
  blind: {from: cross, to: end, length: 300 m, bore: 200 mm, hazen_williams_c: 100}
  level: {from: tarn, to: pond, length: 300 m, bore: 200 mm, law: manning, manning_n: 0.013}
cases:
  aged:
    with: {pipes.tail.law: hazen-williams, constants.hazen_williams.coefficient: 10.7}
    times: {"pipes.*.hazen_williams_c": 0.8, pipes.link.manning_n: 1.2}
  rough: {with: {"pipes.*.law": colebrook-white, "pipes.*.roughness": 0.2 mm}}
"""
SMOOTH = """
reservoirs: {mere: {level: 80 m}, pool: {level: 30 m}}
pipes: {main: {from: mere, to: pool, length: 1500 m, bore: 500 mm, roughness: 0.1 mm}}
"""


@pytest.fixture(scope="module")
def mixed(tmp_path_factory: pytest.TempPathFactory) -> Account:
    return accounted(tmp_path_factory.mktemp("mixed"), MIXED)


def number(account: Account, id_: str) -> float:
    return account.ledger.spot(id_).value


def by_hazen_williams(flow: float, length: float, bore: float, c: float, k: float = 10.67) -> float:
    return float(np.sign(flow) * k * length * (abs(flow) / c) ** 1.852 / bore**4.8704)


def by_manning(flow: float, length: float, bore: float, n: float) -> float:
    return float(4 ** (10 / 3) / np.pi**2 * n**2 * length * flow * abs(flow) / bore ** (16 / 3))


def test_each_pipe_loses_by_its_own_law(mixed: Account) -> None:
    # by hand, from the flows that were found
    flow = {name: number(mixed, f"pipes.{name}.flow@base") for name in ("main", "link", "tail")}
    lost = {name: number(mixed, f"pipes.{name}.friction_loss@base") for name in flow}
    assert lost["main"] == pytest.approx(by_hazen_williams(flow["main"], 1500, 0.5, 130), rel=1e-12)
    assert lost["link"] == pytest.approx(by_manning(flow["link"], 1200, 0.35, 0.012), rel=1e-9)
    assert number(mixed, "pipes.tail.darcy_f@base") > 0.01
    assert flow["main"] + flow["link"] == pytest.approx(flow["tail"] + 0.012, abs=1e-9)


def test_a_case_changes_law_coefficient_and_constants(mixed: Account) -> None:
    flow = {name: number(mixed, f"pipes.{name}.flow@aged") for name in ("main", "link", "tail")}
    lost = {name: number(mixed, f"pipes.{name}.friction_loss@aged") for name in flow}
    assert lost["main"] == pytest.approx(by_hazen_williams(flow["main"], 1500, 0.5, 104, 10.7), rel=1e-12)
    assert lost["tail"] == pytest.approx(by_hazen_williams(flow["tail"], 1800, 0.4, 96, 10.7), rel=1e-12)
    assert lost["link"] == pytest.approx(by_manning(flow["link"], 1200, 0.35, 0.0144), rel=1e-9)
    assert number(mixed, "constants.hazen_williams.coefficient@aged") == 10.7
    assert number(mixed, "constants.hazen_williams.coefficient@base") == 10.67


def test_the_second_opinion_confirms_every_case(mixed: Account) -> None:
    assert mixed.solved
    assert mixed.confirmed
    assert list(mixed.cases) == ["base", "aged", "rough"]
    for case in mixed.cases.values():
        assert case.agreement is not None
        assert case.agreement.flow_difference is not None
        assert case.agreement.flow_difference.value < 1e-9


def test_darcy_f_is_absent_where_the_law_knows_none(mixed: Account) -> None:
    for name in ("main", "link", "blind", "level"):
        with pytest.raises(Unresolved):
            mixed.ledger.spot(f"pipes.{name}.darcy_f@base")
    branches = results(mixed)["cases"]["base"]["branches"]
    assert {name: branch["friction_factor"] is None for name, branch in branches.items()} == {
        "main": True,
        "link": True,
        "tail": False,
        "blind": True,
        "level": True,
    }
    assert results(mixed)["cases"]["rough"]["branches"]["main"]["friction_factor"] > 0.01


def test_the_equivalent_factor_gives_the_loss_by_darcy_and_weisbach(mixed: Account) -> None:
    for name, length, bore in (("main", 1500, 0.5), ("link", 1200, 0.35)):
        factor = number(mixed, f"pipes.{name}.equivalent_f@base")
        velocity = number(mixed, f"pipes.{name}.flow@base") / (np.pi / 4 * bore**2)
        loss = factor * length / bore * velocity * abs(velocity) / (2 * 9.81)
        assert loss == pytest.approx(number(mixed, f"pipes.{name}.friction_loss@base"), rel=1e-12)
    # none where the law has its own, none at rest
    for name in ("tail", "level"):
        with pytest.raises(Unresolved):
            mixed.ledger.spot(f"pipes.{name}.equivalent_f@base")


def test_nothing_moves_in_a_blind_pipe_or_between_equal_levels(mixed: Account) -> None:
    for name in ("blind", "level"):
        assert number(mixed, f"pipes.{name}.flow@base") == pytest.approx(0.0, abs=1e-12)
        assert number(mixed, f"pipes.{name}.head_loss@base") == pytest.approx(0.0, abs=1e-9)


def test_every_derived_number_is_computed_again(mixed: Account) -> None:
    count, wrong = replay(mixed.ledger)
    assert count > 100
    assert wrong == []


def test_constants_are_inputs_with_a_source(mixed: Account) -> None:
    spot = mixed.ledger.spot("constants.manning.coefficient@base")
    assert isinstance(spot.column.origin, Library)
    assert spot.column.origin.marks[spot.row].file == "calc/data/defaults.yaml"
    assert "π²" in spot.column.origin.bases[spot.row]
    assert {path for path, _ in mixed.project.defaults if path.startswith(("constants.h", "constants.m"))} == {
        "constants.hazen_williams.coefficient",
        "constants.hazen_williams.flow_exponent",
        "constants.hazen_williams.bore_exponent",
        "constants.manning.coefficient",
        "constants.manning.bore_exponent",
    }


def names(account: Account) -> set[str]:
    return {row for column in account.ledger.columns if column.group == "constants" for row in column.rows}


def test_constants_that_no_case_needs_are_not_in_the_books(tmp_path: Path) -> None:
    assert names(accounted(tmp_path / "none", SMOOTH)) == {"transition"}
    stated = SMOOTH + "constants: {manning: {coefficient: 10.3}}\n"
    assert names(accounted(tmp_path / "stated", stated)) == {"transition", "manning"}
    changed = SMOOTH + "cases: {other: {with: {constants.hazen_williams.flow_exponent: 1.85}}}\n"
    assert names(accounted(tmp_path / "changed", changed)) == {"transition", "hazen_williams"}
    law = "cases: {other: {with: {friction: manning, pipes.main.manning_n: 0.012}}}\n"
    assert names(accounted(tmp_path / "law", SMOOTH + law)) == {"transition", "manning"}


def test_units_of_the_inputs_change_nothing(tmp_path: Path) -> None:
    metric = """
    friction: hazen-williams
    reservoirs: {mere: {level: 60.96 m}, pool: {level: 45.72 m}}
    junctions: {cross: {withdrawal: 37.85411784 L/s}}
    pipes:
      main: {from: mere, to: cross, length: 609.6 m, bore: 304.8 mm, hazen_williams_c: 120}
      tail: {from: cross, to: pool, length: 914.4 m, bore: 254 mm, law: manning, manning_n: 0.012}
    """
    foot = """
    friction: hazen-williams
    reservoirs: {mere: {level: 200 ft}, pool: {level: 150 ft}}
    junctions: {cross: {withdrawal: 600 gpm}}
    pipes:
      main: {from: mere, to: cross, length: 2000 ft, bore: 12 inch, hazen_williams_c: 120}
      tail: {from: cross, to: pool, length: 3000 ft, bore: 10 inch, law: manning, manning_n: 0.012}
    """
    one, other = accounted(tmp_path / "metric", metric), accounted(tmp_path / "foot", foot)
    for name in ("main", "tail"):
        for quantity in ("flow", "friction_loss", "equivalent_f"):
            id_ = f"pipes.{name}.{quantity}@base"
            assert number(other, id_) == pytest.approx(number(one, id_), rel=1e-9)


def test_the_trials_rest_on_what_each_law_needs(tmp_path: Path) -> None:
    text = MIXED.replace(", end: {elevation: 10 m}", "").replace(
        "  blind: {from: cross, to: end, length: 300 m, bore: 200 mm, hazen_williams_c: 100}\n", ""
    )
    ledger = accounted(tmp_path, text).ledger
    resting = {}
    for name in ("main", "link", "tail"):
        origin = ledger.spot(f"pipes.{name}.flow_toward@base#1").column.origin
        assert isinstance(origin, Solved)
        resting[name] = set(origin.inputs)
    always = {"head at the far end", "trial head", "length", "bore", "parallel", "gravity"}
    constants = {f"hazen williams {word}" for word in ("coefficient", "flow exponent", "bore exponent")}
    assert resting["main"] == always | {"hazen williams c"} | constants
    assert resting["link"] - always == {
        *("manning n", "manning coefficient", "manning bore exponent"),
        *("link/1 count", "link/1 K forward", "link/1 K in reverse", "link/1 bore"),
    }
    assert resting["tail"] == always | {"roughness", "viscosity"}


@pytest.mark.parametrize("one", [empirical.hazen_williams, empirical.manning], ids=lambda one: one.name)
def test_a_slip_in_a_law_is_seen_by_the_second_opinion(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, one: Equation
) -> None:
    body = one.body
    monkeypatch.setattr(type(one), "__setattr__", object.__setattr__)
    monkeypatch.setattr(one, "body", lambda **given: 1.001 * body(**given))
    account = accounted(tmp_path, MIXED)
    assert account.solved
    assert not account.confirmed

"""Columns and views by themselves: what may be entered, what is found, what a case takes from another."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from calc.equation import Labels
from calc.kinds import FLOW, HEAD, LENGTH, NUMBER
from calc.ledger import (
    Accountant,
    Column,
    Given,
    Judged,
    Ledger,
    Library,
    Origin,
    Program,
    Solved,
    View,
    exported,
    proofs,
    replay,
    trace,
)
from calc.marks import Mark
from calc.physics import energy, friction, velocity
from calc.problems import CalcError, Unresolved

PARENTS = {"low": "base", "peak": "low"}


def given(*written: str, line: int = 3) -> Given:
    marks = tuple(Mark("network.yaml", line + k, 7) for k in range(len(written)))
    return Given(marks, written, ("",) * len(written))


def enter(ledger: Ledger, name: str, case: str = "base", **values: float) -> Column:
    origin = given(*(f"{value} m" for value in values.values()))
    return ledger.enter(name, HEAD, list(values), list(values.values()), origin, case=case)


def test_a_row_enters_once() -> None:
    ledger = Ledger(PARENTS)
    enter(ledger, "pipes.length", a=1.0, b=2.0)
    with pytest.raises(CalcError, match="stands already"):
        enter(ledger, "pipes.length", b=3.0)
    with pytest.raises(CalcError, match="comes twice"):
        ledger.enter("pipes.bore", LENGTH, ["a", "a"], [1.0, 2.0], given("1 m", "2 m"), case="base")
    enter(ledger, "pipes.length", c=3.0)
    enter(ledger, "pipes.length", "low", b=4.0)
    assert len(ledger.columns) == 3


@pytest.mark.parametrize("bad", [np.nan, np.inf, -np.inf])
def test_only_finite_numbers_enter(bad: float) -> None:
    with pytest.raises(CalcError, match="the number of b is not finite"):
        enter(Ledger(), "pipes.length", a=1.0, b=bad)


def test_numbers_and_rows_are_as_many() -> None:
    with pytest.raises(CalcError, match="2 numbers for 1 rows"):
        Ledger().enter("pipes.length", LENGTH, ["a"], [1.0, 2.0], given("1 m"), case="base")


def test_a_column_cannot_be_written_to_and_keeps_no_tie_to_what_it_was_made_of() -> None:
    values = np.array([1.0, 2.0])
    column = Ledger().enter("pipes.length", LENGTH, ["a", "b"], values, given("1 m", "2 m"), case="base")
    values[0] = 9.0
    assert column.values[0] == 1.0
    with pytest.raises(ValueError, match="read-only"):
        column.values[0] = 9.0
    with pytest.raises(AttributeError):
        column.name = "pipes.bore"  # type: ignore[misc]


def test_an_input_that_a_case_does_not_state_is_its_parents() -> None:
    ledger = Ledger(PARENTS)
    enter(ledger, "pipes.length", a=1.0, b=2.0)
    enter(ledger, "pipes.length", "low", b=5.0)
    found = {row: ledger.spot(f"pipes.{row}.length@peak") for row in "ab"}
    assert {row: spot.value for row, spot in found.items()} == {"a": 1.0, "b": 5.0}
    assert {row: spot.id for row, spot in found.items()} == {"a": "pipes.a.length@base", "b": "pipes.b.length@low"}
    np.testing.assert_array_equal(ledger.view("pipes.length", "peak", ["b", "a", "c"]).values, [5.0, 1.0, np.nan])


def test_a_result_is_never_a_parents() -> None:
    ledger = Ledger(PARENTS)
    said: tuple[Origin, ...] = (Solved("F = 0", "newton", 3, ()), Program("counted"))
    for k, origin in enumerate(said):
        ledger.enter(f"pipes.result_{k}", FLOW, ["a"], [0.3], origin, case="base")
        assert ledger.spot(f"pipes.a.result_{k}@base").value == 0.3
        with pytest.raises(Unresolved):
            ledger.spot(f"pipes.a.result_{k}@peak")
    flow = View.whole(ledger.columns[0])
    enter(ledger, "pipes.bore", a=0.5)
    books = Accountant(ledger, "base")
    books.apply("pipes.velocity", velocity.mean_velocity, flow_each=flow, bore=ledger.view("pipes.bore", "base", ["a"]))
    with pytest.raises(Unresolved):
        ledger.spot("pipes.a.velocity@peak")


def test_what_follows_from_inputs_alone_is_inherited_with_them() -> None:
    ledger = Ledger(PARENTS)
    head, elevation = enter(ledger, "junctions.head", a=30.0), enter(ledger, "junctions.elevation", a=20.0)
    Accountant(ledger, "base").apply(
        "junctions.pressure_head", energy.pressure_head, head=View.whole(head), elevation=View.whole(elevation)
    )
    assert ledger.spot("junctions.a.pressure_head@peak").value == 10.0


def test_a_name_without_a_case_means_the_base_case() -> None:
    ledger = Ledger(PARENTS)
    enter(ledger, "pipes.length", a=1.0)
    assert ledger.spot("pipes.a.length").id == "pipes.a.length@base"
    ledger.enter("criteria.least", NUMBER, ["velocity-max"], [0.25], Program("least"))
    assert ledger.spot("criteria.velocity-max.least").value == 0.25
    assert ledger.spot("criteria.velocity-max.least@peak").id == "criteria.velocity-max.least"


def test_trials_have_ids_of_their_own() -> None:
    ledger = Ledger(PARENTS)
    origin = Solved("trial", "bracketing", 2, ())
    ledger.enter("junctions.head", HEAD, ["1", "2"], [180.0, 190.0], origin, case="base", of="marl-cross")
    ledger.enter("junctions.head", HEAD, ["marl-cross"], [188.2], origin, case="base")
    assert ledger.spot("junctions.marl-cross.head@base#2").value == 190.0
    assert ledger.spot("junctions.marl-cross.head@base").value == 188.2
    with pytest.raises(Unresolved):
        ledger.spot("junctions.marl-cross.head@base#3")


@pytest.mark.parametrize(
    "bad", ["", "pipes", "pipes.length", "pipes.a.lenght@base", "pipes..@", "a@b@c", "pipes.z.length@base"]
)
def test_an_id_that_leads_nowhere_names_the_nearest(bad: str) -> None:
    ledger = Ledger(PARENTS)
    enter(ledger, "pipes.length", a=1.0)
    with pytest.raises(Unresolved, match="no number has the id"):
        ledger.spot(bad)
    if len(bad) > 10:
        with pytest.raises(Unresolved, match=r"did you mean 'pipes\.a\.length@base'"):
            ledger.spot(bad)


def test_a_shared_number_serves_every_row_and_is_replayed_for_each() -> None:
    ledger = Ledger(PARENTS)
    enter(ledger, "pipes.bore", a=0.1, b=0.2)
    enter(ledger, "pipes.velocity", a=1.0, b=-2.0)
    ledger.enter("fluid.viscosity", NUMBER, [""], [1e-6], given("1e-6"), case="base")
    result = Accountant(ledger, "base").apply(
        "pipes.reynolds",
        velocity.reynolds_number,
        velocity=ledger.view("pipes.velocity", "base", ["a", "b"]),
        bore=ledger.view("pipes.bore", "base", ["a", "b"]),
        viscosity=ledger.shared("fluid.viscosity", "base"),
    )
    np.testing.assert_allclose(result.values, [1e5, 4e5], rtol=1e-15)
    assert replay(ledger) == (2, [])
    told = exported(ledger)["columns"][-1]["origin"]
    assert told["formula"] == "abs(velocity) * bore / viscosity"
    assert told["inputs"]["viscosity"] == {"column": 2, "row": 0}
    with pytest.raises(Unresolved, match=r"fluid\.density@base"):
        ledger.shared("fluid.density", "base")


def test_rows_without_a_value_stay_absent() -> None:
    # At rest no friction factor is defined; the other row has one.
    ledger = Ledger(PARENTS)
    reynolds = ledger.enter("pipes.reynolds", NUMBER, ["still", "slow"], [0.0, 640.0], given("0", "640"), case="base")
    laminar = ledger.enter("constants.laminar_below", NUMBER, [""], [2000.0], given("2000"), case="base")
    upper = ledger.enter("constants.turbulent_above", NUMBER, [""], [4000.0], given("4000"), case="base")
    view = View.whole(reynolds)
    got = Accountant(ledger, "base").apply(
        "pipes.darcy_f",
        friction.FRICTION_FACTOR,
        by=Labels(("haaland",), np.array([0])),
        reynolds=view,
        roughness=view,
        bore=view,
        friction_factor=view,
        laminar_below=ledger.serving(laminar),
        turbulent_above=ledger.serving(upper),
        factor_laminar=view,
        factor_turbulent=view,
    )
    np.testing.assert_array_equal(got.values, [np.nan, 0.1])
    assert ledger.columns[-1].rows == ("slow",)
    origin: Any = ledger.columns[-1].origin
    assert origin.label == "laminar"
    assert set(origin.inputs) == {"reynolds"}


def test_totals_and_extremes() -> None:
    ledger = Ledger(PARENTS)
    column = enter(ledger, "fittings.loss", a=1.0, b=-4.0, c=2.5)
    books = Accountant(ledger, "base")
    into = np.array([0, 1, 0])
    total = books.total("pipes.fitting_loss", HEAD, View.whole(column), into, ("p", "q", "r"))
    np.testing.assert_array_equal(total.values, [3.5, -4.0, 0.0])
    for operation, value in (("largest", 2.5), ("least", -4.0), ("largest size", 4.0)):
        name = f"pipes.{operation.replace(' ', '_')}"
        found = books.combine(name, operation, View.whole(column), np.zeros(3, dtype=np.int64), [""], words="all")
        assert found.values[0] == value
    signed = books.combine(
        "pipes.signed", "sum", View.whole(column), np.zeros(3, dtype=np.int64), [""], words="all", signs=[1, -1, -1]
    )
    assert signed.values[0] == 2.5
    assert replay(ledger) == (7, [])


def test_a_total_of_nothing_is_nothing() -> None:
    ledger = Ledger(PARENTS)
    none = View((), np.zeros(0, dtype=np.int64), np.zeros(0, dtype=np.int64), ())
    got = Accountant(ledger, "base").total("pipes.fitting_loss", HEAD, none, np.zeros(0, dtype=np.int64), ("p",))
    np.testing.assert_array_equal(got.values, [0.0])
    assert ledger.columns[0].kind is HEAD


def test_a_verdict_is_its_margin() -> None:
    ledger = Ledger(PARENTS)
    margin = View.whole(enter(ledger, "pipes.margin", a=0.0, b=-1e-9, c=2.0))
    met = ledger.enter("pipes.met", NUMBER, margin.rows, [1.0, 0.0, 1.0], Judged(margin), case="base")
    assert replay(ledger) == (3, [])
    assert [next(iter(trace(ledger, ledger.spot(met.id(k))))) for k in range(2)] == [
        "pipes.a.met@base = 1   met: the margin is not negative",
        "pipes.b.met@base = 0   not met: the margin is negative",
    ]
    wrong = Ledger()
    again = View.whole(enter(wrong, "pipes.margin", a=-1.0))
    wrong.enter("pipes.met", NUMBER, ["a"], [1.0], Judged(again), case="base")
    assert [one.id for one in replay(wrong)[1]] == ["pipes.a.met@base"]


def test_a_solved_number_is_proved_after_its_tree() -> None:
    ledger = Ledger(PARENTS)
    origin = Solved("F = 0", "newton", 3, ("junctions.imbalance",))
    column = ledger.enter("junctions.head", HEAD, ["j"], [30.0], origin, case="base")
    proof = ledger.enter("junctions.imbalance", FLOW, ["j"], [1e-15], Program("as found"), case="base")
    assert [spot.column for spot in proofs(ledger, column, 0)] == [proof]
    assert list(trace(ledger, ledger.spot("junctions.j.head@base"))) == [
        "junctions.j.head@base = 30 m   solved: F = 0 (newton, 3 iterations); proof below",
        "",
        "proof of junctions.j.head@base:",
        "  junctions.j.imbalance@base = 1e-15 m³/s   as found",
    ]


def test_a_shipped_value_says_so_in_its_trace() -> None:
    ledger = Ledger()
    origin = Library((Mark("calc/data/defaults.yaml", 8, 20),), ("9.80665 m/s²",), ("standard gravity",))
    ledger.enter("site.gravity", NUMBER, [""], [9.80665], origin, case="base")
    assert list(trace(ledger, ledger.spot("site.gravity@base"))) == [
        "site.gravity@base = 9.80665   shipped as '9.80665 m/s²' at calc/data/defaults.yaml:8:20 [standard gravity]"
    ]


def test_an_origin_without_a_form_is_refused() -> None:
    ledger = Ledger()
    ledger.enter("pipes.length", LENGTH, ["a"], [1.0], Origin(), case="base")
    with pytest.raises(CalcError, match="no form for the origin"):
        exported(ledger)
    with pytest.raises(CalcError, match="no words for the origin"):
        list(trace(ledger, ledger.spot("pipes.a.length@base")))

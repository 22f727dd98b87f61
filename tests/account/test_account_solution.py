"""What the account of a solved project must satisfy, on random works and on small ones by hand."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from accounts import Draft, accounted
from scipy.optimize import brentq

from calc.account import Account
from calc.components.pipe import LAW_INPUT
from calc.ledger import Derived, trace
from calc.project import network
from calc.solve.branch import Branches

SEEDS = range(20, 32)

STAR = """
site: {gravity: 9.81 m/s²}
fluid: {density: 1000 kg/m³, viscosity: 1e-6 m²/s, vapour_pressure: 2 kPa}
friction: fixed
reservoirs: {top: {level: 50 m}, side: {level: 40 m}, foot: {level: 20 m}}
junctions: {cross: {elevation: 12 m, withdrawal: 30 L/s}}
pipes:
  top-main: {from: top, to: cross, length: 900 m, bore: 250 mm, friction_factor: 0.02, ends: {from: square}}
  side-main: {from: cross, to: side, length: 700 m, bore: 150 mm, friction_factor: 0.022}
  foot-main:
    {from: cross, to: foot, length: 1100 m, bore: 200 mm, friction_factor: 0.019, fittings: [{K: 3, K_reverse: 5}]}
cases:
  repair: {title: Side main shut, with: {pipes.side-main.open: false}}
"""


@pytest.fixture(scope="module", params=SEEDS)
def account(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Account:
    return accounted(tmp_path_factory.mktemp("works"), Draft(request.param).text())


@pytest.fixture(scope="module")
def star(tmp_path_factory: pytest.TempPathFactory) -> Account:
    return accounted(tmp_path_factory.mktemp("star"), STAR)


def value(account: Account, id_: str) -> float:
    return account.ledger.spot(id_).value


def test_every_case_is_solved_and_confirmed(account: Account) -> None:
    assert account.solved
    assert account.confirmed
    assert set(account.cases) == {"base", "low", "peak"}


def test_the_ledgers_losses_are_the_solvers(account: Account) -> None:
    for held in account.cases.values():
        assert held.columns is not None
        mine = held.columns.results.head_loss.values
        theirs = Branches(held.network).losses(held.solution.flow)[0][held.network.open]
        np.testing.assert_allclose(mine, theirs, rtol=1e-12, atol=0)


def test_the_ledgers_inputs_are_the_solvers(account: Account) -> None:
    for held in account.cases.values():
        assert held.columns is not None
        terms, arrays = held.columns.terms, held.network.pipes
        regimes = any(LAW_INPUT[terms.law.words[code]] == "roughness" for code in set(terms.law.codes.tolist()))
        limits = ("laminar_below", "turbulent_above") if regimes else ()  # of no meaning where no law has a transition
        for name in ("length", "bore", "parallel", "viscosity", "gravity", *limits):
            np.testing.assert_allclose(getattr(terms, name).values, getattr(arrays, name), rtol=1e-15, err_msg=name)
        for name in ("count", "coefficient_forward", "coefficient_reverse", "bore"):
            mine, theirs = getattr(terms.fittings, name), getattr(arrays.fittings, name)
            np.testing.assert_allclose(mine.values, theirs, rtol=1e-15, err_msg=name)
        reservoirs = held.columns.head.values[: len(account.project.reservoirs)]
        np.testing.assert_array_equal(reservoirs, held.network.level[: len(reservoirs)])


def test_mass_is_kept_at_every_junction_and_over_the_whole(account: Account) -> None:
    for case, held in account.cases.items():
        largest = np.max(np.abs(held.solution.flow))
        assert abs(value(account, f"balance.largest_imbalance@{case}")) <= 1e-9 * largest + 1e-12
        outflow = sum(value(account, f"reservoirs.{name}.outflow@{case}") for name in account.project.reservoirs)
        drawn = sum(value(account, f"junctions.{name}.withdrawal@{case}") for name in account.project.junctions)
        assert outflow == pytest.approx(drawn, abs=len(held.network.nodes) * (1e-9 * largest + 1e-12))
        assert drawn == pytest.approx(float(np.sum(held.network.withdrawal)), rel=1e-12)


def test_energy_closes_along_every_branch_and_between_reservoirs(account: Account) -> None:
    for case, held in account.cases.items():
        level = held.network.level[~np.isnan(held.network.level)]
        allowed = 1e-9 * np.ptp(level) + 1e-11
        assert abs(value(account, f"balance.largest_energy_error@{case}")) <= allowed
        assert len(held.paths) == len(level) - 1
        ends = {path.end for path in held.paths} | {path.start for path in held.paths}
        assert ends == set(account.project.reservoirs)
        for path in held.paths:
            loss = sum(
                sign * value(account, f"pipes.{pipe}.head_loss@{case}")
                for pipe, sign in zip(path.pipes, path.signs, strict=True)
            )
            assert value(account, f"paths.{path.id}.loss@{case}") == pytest.approx(loss, rel=1e-12, abs=1e-12)
            apart = value(account, f"reservoirs.{path.start}.level@{case}") - value(
                account, f"reservoirs.{path.end}.level@{case}"
            )
            assert loss == pytest.approx(apart, abs=len(path.pipes) * allowed)
            assert value(account, f"paths.{path.id}.closing_error@{case}") == pytest.approx(apart - loss, abs=1e-12)


def test_the_second_opinion_agrees_within_its_allowance(account: Account) -> None:
    for case, held in account.cases.items():
        agreement = held.agreement
        assert agreement is not None
        assert agreement.agrees
        assert not agreement.evaluated
        assert agreement.flow_allowed is not None
        largest = np.max(np.abs(held.solution.flow))
        level = held.network.level[~np.isnan(held.network.level)]
        assert agreement.flow_allowed.value == pytest.approx(1e-6 * largest + 1e-9, rel=1e-12)
        assert value(account, f"second.allowed_head_difference@{case}") == pytest.approx(
            1e-6 * np.ptp(level) + 1e-6, rel=1e-12
        )
        assert value(account, f"second.largest_flow_difference@{case}") <= agreement.flow_allowed.value


def test_every_loss_has_the_sign_of_its_flow(account: Account) -> None:
    for held in account.cases.values():
        assert held.columns is not None
        results = held.columns.results
        flow = np.sign(results.flow_each.values)
        for view in (results.velocity, results.friction_loss, results.head_loss):
            assert np.all(np.sign(view.values) * flow >= 0)


def test_a_star_by_hand(star: Account) -> None:
    # One equation by hand: sum of sqrt((z - H)/r) toward the junction equals 30 L/s, r = (f L/D + K)/(2 g A^2).
    area = {name: np.pi / 4 * bore**2 for name, bore in (("top", 0.25), ("side", 0.15), ("foot", 0.2))}
    friction = {"top": 0.02 * 900 / 0.25, "side": 0.022 * 700 / 0.15, "foot": 0.019 * 1100 / 0.2}
    fitting = {"top": 0.5, "side": 0.0, "foot": 3.0}
    level = {"top": 50.0, "side": 40.0, "foot": 20.0}

    def toward(name: str, head: float) -> float:
        drop = level[name] - head
        resistance = (friction[name] + fitting[name]) / (2 * 9.81 * area[name] ** 2)
        return float(np.sign(drop) * np.sqrt(abs(drop) / resistance))

    head = brentq(lambda h: sum(toward(name, h) for name in level) - 0.03, 20, 50, xtol=1e-12)
    assert value(star, "junctions.cross.head@base") == pytest.approx(head, abs=1e-9)
    assert value(star, "pipes.top-main.flow@base") == pytest.approx(toward("top", head), rel=1e-10)
    assert value(star, "pipes.side-main.flow@base") == pytest.approx(-toward("side", head), rel=1e-10)
    assert value(star, "pipes.foot-main.flow@base") == pytest.approx(-toward("foot", head), rel=1e-10)
    assert value(star, "reservoirs.foot.outflow@base") == pytest.approx(toward("foot", head), rel=1e-10)
    assert value(star, "junctions.cross.pressure_head@base") == pytest.approx(head - 12, abs=1e-9)
    assert value(star, "junctions.cross.pressure@base") == pytest.approx(9810 * (head - 12), abs=1e-5)
    fastest = max(abs(toward(name, head)) / area[name] for name in level)
    assert value(star, "junctions.cross.velocity_head@base") == pytest.approx(fastest**2 / 19.62, rel=1e-9)
    assert value(star, "pipes.foot-main.fitting_loss@base") == pytest.approx(
        3 * (toward("foot", head) / area["foot"]) ** 2 / 19.62, rel=1e-9
    )


def test_a_shut_pipe_carries_nothing_and_says_where_it_was_shut(star: Account) -> None:
    assert value(star, "pipes.side-main.flow@repair") == 0.0
    lines = list(trace(star.ledger, star.ledger.spot("pipes.side-main.flow@repair")))
    number = next(k for k, line in enumerate(STAR.splitlines(), 1) if "false" in line)
    place = f"network.yaml:{number}:{STAR.splitlines()[number - 1].index('false') + 1}"
    assert lines == [f"pipes.side-main.flow@repair = 0 m³/s   shut at {place}: nothing flows"]
    held = star.cases["repair"]
    assert held.columns is not None
    assert held.columns.running == ("top-main", "foot-main")
    assert [path.pipes for path in held.paths] == [("top-main", "foot-main")]
    assert value(star, "reservoirs.side.outflow@repair") == 0.0


def test_a_shut_pipe_holds_the_difference_of_head_between_its_ends(star: Account) -> None:
    network, head = star.cases["repair"].network, star.cases["repair"].columns.head.values
    at = network.pipes.rows.index("side-main")
    spot = star.ledger.spot("pipes.side-main.head_loss@repair")
    assert spot.value == head[network.start[at]] - head[network.end[at]]
    assert spot.value != 0
    assert "Difference of head across a shut pipe" in next(iter(trace(star.ledger, spot)))


def test_what_another_case_found_is_not_told_of_a_shut_pipe(star: Account) -> None:
    for quantity in ("velocity", "friction_loss", "reynolds", "closing_error"):
        with pytest.raises(Exception, match="no number has the id"):
            star.ledger.spot(f"pipes.side-main.{quantity}@repair")


def test_no_pipe_open_between_two_reservoirs(tmp_path: Path) -> None:
    account = accounted(
        tmp_path,
        """
        reservoirs: {a: {level: 30 m}, b: {level: 20 m}}
        pipes: {only: {from: a, to: b, length: 100 m, bore: 100 mm, roughness: 0.1 mm, open: false}}
        """,
    )
    assert account.solved
    assert account.confirmed
    assert account.cases["base"].paths == ()
    assert value(account, "reservoirs.a.outflow@base") == 0.0


def test_a_reservoir_cut_off_is_left_out_of_the_paths(tmp_path: Path) -> None:
    account = accounted(
        tmp_path, STAR.replace("pipes.side-main.open: false", "pipes.*-main.open: true, pipes.top-main.open: false")
    )
    assert {path.id for path in account.cases["repair"].paths} == {"side/foot"}
    assert value(account, "reservoirs.top.outflow@repair") == 0.0


def test_a_junction_cut_off_has_no_answer_and_the_other_cases_stand(tmp_path: Path) -> None:
    account = accounted(tmp_path, STAR.replace("pipes.side-main.open", '"pipes.*.open"'))
    held = account.cases["repair"]
    assert not account.solved
    assert held.columns is None
    assert "cross" in held.solution.reason
    assert account.cases["base"].columns is not None
    with pytest.raises(Exception, match="no number has the id"):
        account.ledger.spot("junctions.cross.head@repair")


def test_the_liquid_of_a_case_is_the_solvers(account: Account) -> None:
    for case, held in account.cases.items():
        assert value(account, f"fluid.viscosity@{case}") == held.network.pipes.viscosity[0]
        again = network(account.project, case, value(account, f"fluid.viscosity@{case}"))
        np.testing.assert_array_equal(again.withdrawal, held.network.withdrawal)


def test_the_transition_is_worked_from_its_two_ends(tmp_path: Path) -> None:
    account = accounted(
        tmp_path,
        """
        fluid: {density: 900 kg/m³, viscosity: 2e-5 m²/s}
        reservoirs: {a: {level: 20.5 m}, b: {level: 20 m}}
        pipes: {link: {from: a, to: b, length: 60 m, bore: 100 mm, roughness: 0.2 mm}}
        """,
    )
    reynolds = value(account, "pipes.link.reynolds@base")
    assert 2000 < reynolds < 4000
    spot = account.ledger.spot("pipes.link.darcy_f@base")
    assert isinstance(spot.column.origin, Derived)
    assert spot.column.origin.label == "transition"
    upper = value(account, "pipes.link.factor_turbulent@base")
    share = np.log(reynolds / 2000) / np.log(2)
    assert spot.value == pytest.approx((64 / 2000) ** (1 - share) * upper**share, rel=1e-13)
    text = "\n".join(trace(account.ledger, spot))
    assert "constants.transition.laminar_below@base = 2000   shipped as '2000' at calc/data/defaults.yaml" in text
    assert account.confirmed


def test_a_head_to_start_from_and_a_tolerance_lead_to_the_inputs(tmp_path: Path) -> None:
    text = STAR + "solver: {start: {cross: 33 m}, tolerance: 2e-6 L/s}\n"
    ledger = accounted(tmp_path, text).ledger
    first = "\n".join(trace(ledger, ledger.spot("junctions.cross.head@base#1")))
    assert "solver.cross.start = 33 m   given as '33 m' at network.yaml:14:25" in first
    assert ledger.spot("solver.test_1_limit@base").value == pytest.approx(2e-9, rel=1e-15)
    assert "given as '2e-6 L/s' at network.yaml:14:43" in "\n".join(
        trace(ledger, ledger.spot("solver.test_1_limit@base"))
    )

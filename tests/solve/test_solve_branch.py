"""The flow that loses a given head, one branch at a time."""

from __future__ import annotations

import numpy as np
import pytest
from solve_cases import Pipe, network, random_pipe

from calc.physics.friction import LAW_NAMES
from calc.solve.branch import Branches

G, NU = 9.81, 1.0e-6


def flow_of(pipe: Pipe, difference: float, guess: float | None = None) -> float:
    branches = Branches(network({"a": 0.0, "b": 0.0}, {}, [pipe]))
    begin = None if guess is None else np.array([guess])
    return float(branches.flows(np.array([difference]), begin)[0])


@pytest.mark.parametrize("difference", [-80.0, -1e-3, 1e-30, 1e-9, 0.4, 12.0, 1e6])
def test_fixed_factor_against_its_closed_form(difference: float) -> None:
    # Darcy–Weisbach solved for Q by hand, fittings and end losses on the same velocity head
    pipe = Pipe("a", "b", 730.0, 0.25, factor=0.023, parallel=2, fittings=[(2, 0.7, 1.9), (1, 0.4, 0.1)])
    lost = 0.023 * 730.0 / 0.25 + (2 * 0.7 + 0.4 if difference > 0 else 2 * 1.9 + 0.1)
    speed = np.sqrt(2 * G * abs(difference) / lost)
    expected = np.sign(difference) * 2 * np.pi / 4 * 0.25**2 * speed
    assert flow_of(pipe, difference) == pytest.approx(expected, rel=3e-15)


@pytest.mark.parametrize("difference", [-3e-4, 1e-12, 2e-3])
def test_laminar_flow_against_hagen_and_poiseuille(difference: float) -> None:
    # Q = π g D⁴ h / (128 ν L); below Re 2000 for all three
    expected = np.pi * G * 0.02**4 * difference / (128 * NU * 40.0)
    assert abs(4 * expected / (np.pi * 0.02 * NU)) < 2000
    assert flow_of(Pipe("a", "b", 40.0, 0.02, 1e-5), difference) == pytest.approx(expected, rel=3e-15)


@pytest.mark.parametrize("difference", [-55.0, 0.8, 7.0, 900.0])
@pytest.mark.parametrize("roughness", [0.0, 1e-5, 1.5e-4, 5e-3])
def test_colebrook_white_against_its_explicit_form(difference: float, roughness: float) -> None:
    # Given the head loss, Re√f = √(2gD³h/L)/ν is known and Colebrook–White gives f at once
    length, bore = 1300.0, 0.2
    s = np.sqrt(2 * G * bore**3 * abs(difference) / length) / NU
    root = -2 * np.log10(roughness / (3.7 * bore) + 2.51 / s)
    expected = np.sign(difference) * np.pi / 4 * bore * NU * s * root
    assert flow_of(Pipe("a", "b", length, bore, roughness), difference) == pytest.approx(expected, rel=5e-15)


def test_any_guess_leads_to_the_same_flow() -> None:
    pipe = Pipe("a", "b", 900.0, 0.15, 2e-4, fittings=[(1, 3.0, 3.0)])
    found = [flow_of(pipe, 6.5, guess) for guess in (None, 1e-14, 1e-3, -0.02, 40.0, 1e9, 0.0, np.nan)]
    assert found == pytest.approx([found[0]] * len(found), rel=2e-15)


def test_flow_is_exactly_zero_where_shut_or_level() -> None:
    pipes = [
        Pipe("a", "b", roughness=1e-4, open=False),
        Pipe("a", "b", factor=0.02),
        Pipe("a", "b", factor=0.02),
    ]
    flows = Branches(network({"a": 0.0, "b": 0.0}, {}, pipes)).flows(np.array([5.0, 0.0, -0.0]))
    assert flows.tolist() == [0.0, 0.0, 0.0]


@pytest.mark.parametrize("seed", range(5))
def test_many_pipes_at_once_lose_what_is_asked(seed: int) -> None:
    rng = np.random.default_rng(seed)
    branches = Branches(network({"a": 0.0, "b": 0.0}, {}, [random_pipe(rng, "a", "b") for _ in range(400)]))
    asked = rng.choice([-1.0, 1.0], 400) * 10 ** rng.uniform(-12, 4, 400)
    loss, slope = branches.losses(branches.flows(asked))
    assert loss == pytest.approx(asked, rel=2e-13)  # the steepest stretch of the transition doubles rounding
    assert np.all(slope > 0)


@pytest.mark.parametrize("difference", [-80.0, 1e-12, 1e-3, 0.4, 1e6])
def test_empirical_laws_against_their_closed_forms(difference: float) -> None:
    # Hazen–Williams and Manning solved for Q by hand
    size = abs(difference) / 730.0
    flow = (size * 120.0**1.852 * 0.25**4.8704 / 10.67) ** (1 / 1.852)
    found = flow_of(Pipe("a", "b", 730.0, 0.25, hazen_williams_c=120.0), difference)
    assert found == pytest.approx(np.sign(difference) * flow, rel=1e-14)
    flow = 2 * np.sqrt(size * np.pi**2 / 4 ** (10 / 3) / 0.012**2 * 0.25 ** (16 / 3))
    found = flow_of(Pipe("a", "b", 730.0, 0.25, parallel=2, manning_n=0.012), difference)
    assert found == pytest.approx(np.sign(difference) * flow, rel=1e-14)


@pytest.mark.parametrize("law", LAW_NAMES)
def test_head_lost_rises_with_flow_through_every_regime(law: str) -> None:
    stated = {"fixed": {"factor": 0.03}, "hazen-williams": {"hazen_williams_c": 110.0}, "manning": {"manning_n": 0.013}}
    given = stated.get(law, {"roughness": 3e-4})
    branches = Branches(network({"a": 0.0, "b": 0.0}, {}, [Pipe("a", "b", 100.0, 0.1, law=law, **given)] * 2000))
    asked = np.geomspace(1e-8, 1e3, 2000)
    assert np.all(np.diff(branches.flows(asked)) > 0)
    assert np.all(np.diff(branches.flows(-asked)) < 0)

"""Faults planted in the first path alone: the second opinion, with its own code, must see each."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from accounts import accounted

from calc import pipeline
from calc.account import opinion as opinion_module
from calc.components import Network
from calc.equation import Equation
from calc.physics import fitting, friction
from calc.solve import Settings, Solution, solve

WORKS = """
reservoirs: {mere: {level: 60 m}, tarn: {level: 41 m}, pool: {level: 35 m}}
junctions: {cross: {withdrawal: 15 L/s}}
pipes:
  main: {from: mere, to: cross, length: 900 m, bore: 250 mm, roughness: 0.1 mm, fittings: [{K: 6, K_reverse: 1}]}
  link: {from: tarn, to: cross, length: 700 m, bore: 150 mm, roughness: 0.2 mm}
  tail: {from: cross, to: pool, length: 1100 m, bore: 200 mm, roughness: 0.1 mm, fittings: [{kind: bend-90}]}
"""

Plant = Callable[[pytest.MonkeyPatch], None]


def rewrite(monkeypatch: pytest.MonkeyPatch, one: Equation, change: Callable[..., Any]) -> None:
    """Put another body in the place of an equation's, as a slip of the pen would."""
    body = one.body
    monkeypatch.setattr(type(one), "__setattr__", object.__setattr__)
    monkeypatch.setattr(one, "body", lambda **given: change(body, **given))


def factor_up(monkeypatch: pytest.MonkeyPatch) -> None:
    rewrite(monkeypatch, friction.darcy_weisbach, lambda body, **given: 1.01 * body(**given))


def fitting_lost(monkeypatch: pytest.MonkeyPatch) -> None:
    rewrite(monkeypatch, fitting.fitting_loss, lambda body, **given: 0.0 * body(**given))


def solving(monkeypatch: pytest.MonkeyPatch, change: Callable[[Network], Network]) -> None:
    def changed(network: Network, settings: Settings) -> Solution:
        return solve(change(network), settings)

    monkeypatch.setattr(pipeline, "solve", changed)


def pipe_flipped(monkeypatch: pytest.MonkeyPatch) -> None:
    def flipped(network: Network) -> Network:
        start, end = network.start.copy(), network.end.copy()
        start[0], end[0] = end[0], start[0]
        return replace(network, start=start, end=end)

    solving(monkeypatch, flipped)


def withdrawal_forgotten(monkeypatch: pytest.MonkeyPatch) -> None:
    solving(monkeypatch, lambda network: replace(network, withdrawal=np.zeros_like(network.withdrawal)))


def level_slipped(monkeypatch: pytest.MonkeyPatch) -> None:
    solving(monkeypatch, lambda network: replace(network, level=network.level + np.array([0.01, 0, 0, 0])))


def test_nothing_planted_is_confirmed(tmp_path: Path) -> None:
    account = accounted(tmp_path, WORKS)
    agreement = account.cases["base"].agreement
    assert account.confirmed
    assert agreement is not None
    assert agreement.flow_difference is not None
    assert agreement.flow_difference.value < 1e-9


@pytest.mark.parametrize("plant", [factor_up, fitting_lost, pipe_flipped, withdrawal_forgotten, level_slipped])
def test_a_planted_fault_is_seen(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, plant: Plant) -> None:
    plant(monkeypatch)
    account = accounted(tmp_path, WORKS)
    assert not account.confirmed
    (found,) = [one for one in account.findings if one.id == "D46"]
    assert "does not confirm" in found.text


def test_a_large_network_is_evaluated_and_says_so(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(opinion_module, "LARGEST_RESOLVED", 2)
    account = accounted(tmp_path, WORKS)
    agreement = account.cases["base"].agreement
    assert agreement is not None
    assert (agreement.agrees, agreement.evaluated) == (True, True)
    (found,) = [one for one in account.findings if one.id == "D46"]
    assert "did not solve the large network again" in found.text


@pytest.mark.parametrize("plant", [factor_up, pipe_flipped, withdrawal_forgotten])
def test_a_planted_fault_is_seen_by_evaluation_too(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, plant: Plant
) -> None:
    monkeypatch.setattr(opinion_module, "LARGEST_RESOLVED", 2)
    plant(monkeypatch)
    assert not accounted(tmp_path, WORKS).confirmed

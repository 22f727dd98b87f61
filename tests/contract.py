"""Published works as project folders, solved by the command itself and told as its data."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest
import yaml

from calc.cli.command import outcome_of_call
from calc.project.shipped import defaults

PUBLISHED = Path(__file__).parent / "published"
GRAVITY = 9.81
BORE, FACTOR, C = 0.3, 0.02, 100.0
"""Bore, Darcy f and Hazen–Williams C of a pipe that stands for a resistance h = r Qⁿ."""

Constants = tuple[float, float, float]
"""Coefficient, exponent of flow and exponent of bore of the Hazen–Williams law in SI."""

SHIPPED: Constants = (
    defaults()["constants.hazen_williams.coefficient"].si,
    defaults()["constants.hazen_williams.flow_exponent"].si,
    defaults()["constants.hazen_williams.bore_exponent"].si,
)


def published(name: str) -> dict[str, dict[str, Any]]:
    """Return the cases of a file of published values, by id."""
    return {case["id"]: case for case in yaml.safe_load((PUBLISHED / f"{name}.yaml").read_text(encoding="utf-8"))}


def named(case: Mapping[str, Any]) -> str:
    """Return the id, and where the answer comes from: one computed by us is no external answer."""
    return f"{case['id']}-{case['expected_origin']}"


def compare(got: Mapping[str, float], expected: Mapping[str, Any]) -> None:
    """Assert that results, in SI, are as near to what was expected as was said beside it."""
    assert got.keys() >= expected.keys()
    for name, one in expected.items():
        value = got[name] * one.get("scale", 1.0)
        assert value == pytest.approx(one["value"], rel=one.get("rtol"), abs=one.get("atol")), name


class Works:
    """A project folder in the making, in SI; heads and flows are told by id once it is solved."""

    def __init__(
        self, gravity: float = GRAVITY, viscosity: float = 1e-6, hazen_williams: Constants | None = None
    ) -> None:
        self.gravity, self.viscosity, self.hazen_williams = gravity, viscosity, hazen_williams
        self.reservoirs: dict[str, float] = {}
        self.junctions: dict[str, str] = {}
        self.pipes: dict[str, str] = {}

    @classmethod
    def of(cls, inputs: Mapping[str, Any], hazen_williams: Constants | None = None) -> Works:
        """Begin with the gravity and viscosity of a case."""
        return cls(inputs.get("g", GRAVITY), inputs.get("nu_m2s", 1e-6), hazen_williams)

    def reservoir(self, name: str, level: float) -> None:
        self.reservoirs[name] = level

    def junction(self, name: str, withdrawal: float = 0.0, elevation: float | None = None) -> None:
        height = "" if elevation is None else f", elevation: {elevation!r} m"
        self.junctions[name] = f"withdrawal: {float(withdrawal)!r} m³/s{height}"

    def pipe(self, name: str, start: str, end: str, entry: Mapping[str, Any], more: str = "") -> None:
        """Add a pipe by its entry in a case; ``more`` is YAML for further fields."""
        sized = f"length: {entry.get('L_m', 1.0)!r} m, bore: {entry.get('D_m', BORE)!r} m"
        match entry.get("law", "eps" if "eps_m" in entry else "f"):
            case "f":
                law = f"law: fixed, friction_factor: {entry['f']!r}"
            case "eps":
                law = f"roughness: {entry['eps_m']!r} m"
            case "HW":
                law = f"law: hazen-williams, hazen_williams_c: {entry['C']!r}"
            case "manning":
                law = f"law: manning, manning_n: {entry['n']!r}"
            case "r" if entry.get("n", 2.0) == 2.0:
                length = entry["r"] * self.gravity * math.pi**2 * BORE**5 / (8 * FACTOR)
                sized, law = f"length: {length!r} m, bore: {BORE} m", f"law: fixed, friction_factor: {FACTOR}"
            case "r":
                k, a, b = self.hazen_williams or SHIPPED
                assert entry["n"] == a
                sized = f"length: {entry['r'] * C**a * BORE**b / k!r} m, bore: {BORE} m"
                law = f"law: hazen-williams, hazen_williams_c: {C}"
            case other:
                raise ValueError(other)
        self.pipes[name] = f"from: {start}, to: {end}, {sized}, {law}{more}"

    def text(self) -> str:
        lines = [f"site: {{gravity: {self.gravity!r} m/s²}}"]
        lines += [f"fluid: {{density: 1000 kg/m³, viscosity: {self.viscosity!r} m²/s}}"]
        if self.hazen_williams is not None:
            k, a, b = self.hazen_williams
            lines += [f"constants: {{hazen_williams: {{coefficient: {k}, flow_exponent: {a}, bore_exponent: {b}}}}}"]
        lines += ["reservoirs:", *(f"  {name}: {{level: {level!r} m}}" for name, level in self.reservoirs.items())]
        if self.junctions:
            lines += ["junctions:", *(f"  {name}: {{{stated}}}" for name, stated in self.junctions.items())]
        lines += ["pipes:", *(f"  {name}: {{{stated}}}" for name, stated in self.pipes.items())]
        return "\n".join(lines) + "\n"

    def solved(self, folder: Path, method: str = "") -> Told:
        """Return what ``headtrace solve --json`` tells of the base case."""
        folder.mkdir(parents=True, exist_ok=True)
        asked = f"solver: {{method: {method}}}\n" if method else ""
        (folder / "network.yaml").write_text(self.text() + asked, encoding="utf-8")
        outcome = outcome_of_call(["solve", str(folder), "--json"])
        assert outcome.status == 0, outcome.remarks
        told = json.loads(outcome.said)
        assert told["format"] == "headtrace-results/1"
        base = told["cases"]["base"]
        assert base["converged"]
        assert base["second_opinion"]["agrees"]
        return Told(base)


class Told:
    """Results of the base case as data."""

    def __init__(self, base: Mapping[str, Any]) -> None:
        self.base = base

    def head(self, name: str) -> float:
        return float(self.base["nodes"][name]["head"])

    def of(self, pipe: str, quantity: str = "flow") -> float:
        return float(self.base["branches"][pipe][quantity])


def between(inputs: Mapping[str, Any], fall: float) -> Works:
    """Return works of two reservoirs, one higher by so much than the other."""
    works = Works.of(inputs)
    works.reservoir("high", fall)
    works.reservoir("low", 0.0)
    return works

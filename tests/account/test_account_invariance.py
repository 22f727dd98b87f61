"""What must change nothing: units, names, order; what must only turn a sign: the direction a pipe is drawn in."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest
from accounts import accounted

from calc.account import Account

PLAIN = """
site: {gravity: 9.81 m/s²}
fluid: {temperature: 10 degC}
reservoirs:
  upper: {level: 60.96 m}
  lower: {level: 45.72 m}
  east: {level: 48.768 m}
junctions:
  north: {elevation: 30.48 m, withdrawal: 37.85411784 L/s}
  south: {elevation: 24.384 m, inflow: 0.0028316846592 m³/s}
pipes:
  main: {from: upper, to: north, length: 609.6 m, bore: 304.8 mm, roughness: 0.127 mm, ends: {from: square}}
  link: {from: north, to: south, length: 304.8 m, bore: 203.2 mm, roughness: 0.127 mm,
         fittings: [{K: 2, K_reverse: 7, bore: 152.4 mm}, {kind: bend-45}]}
  tail: {from: south, to: lower, length: 914.4 m, bore: 254 mm, roughness: 0.254 mm, parallel: 2}
  spur: {from: east, to: south, length: 152.4 m, bore: 152.4 mm, roughness: 0.127 mm, law: haaland}
criteria:
  pressure-min: {limit: 172.36893232917082 kPa}
  velocity-max: {limit: 0.9144 m/s}
cases:
  low: {with: {reservoirs.upper.level: 42.672 m}}
"""

FOOT = """
site: {gravity: 32.18503937007874 ft/s²}
fluid: {temperature: 50 degF}
reservoirs:
  upper: {level: 200 ft}
  lower: {level: 150 ft}
  east: {level: 160 ft}
junctions:
  north: {elevation: 100 ft, withdrawal: 600 gpm}
  south: {elevation: 80 ft, inflow: 0.1 ft³/s}
pipes:
  main: {from: upper, to: north, length: 2000 ft, bore: 12 inch, roughness: 0.005 inch, ends: {from: square}}
  link: {from: north, to: south, length: 1000 ft, bore: 8 inch, roughness: 0.005 inch,
         fittings: [{K: 2, K_reverse: 7, bore: 6 inch}, {kind: bend-45}]}
  tail: {from: south, to: lower, length: 3000 ft, bore: 10 inch, roughness: 0.01 inch, parallel: 2}
  spur: {from: east, to: south, length: 500 ft, bore: 6 inch, roughness: 0.005 inch, law: haaland}
criteria:
  pressure-min: {limit: 25 psi}
  velocity-max: {limit: 3 ft/s}
cases:
  low: {with: {reservoirs.upper.level: 140 ft}}
"""


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> Account:
    return accounted(tmp_path_factory.mktemp("plain"), PLAIN)


def flows(account: Account, case: str) -> dict[str, float]:
    held = account.cases[case]
    return dict(zip(held.network.pipes.rows, held.solution.flow.tolist(), strict=True))


def heads(account: Account, case: str) -> dict[str, float]:
    held = account.cases[case]
    return dict(zip(held.network.nodes, held.solution.head.tolist(), strict=True))


def verdicts(account: Account) -> dict[tuple[str, str, str], tuple[float, float, bool]]:
    return {
        (judged.id, one.subject, one.case): (one.value.value, one.margin.value, one.met)
        for judged in account.verdicts
        for one in judged.verdicts
    }


def same(first: dict[str, float], second: dict[str, float], within: float) -> None:
    assert first.keys() == second.keys()
    for name, value in first.items():
        assert second[name] == pytest.approx(value, rel=within, abs=within), name


def test_the_same_works_in_other_units(plain: Account, tmp_path: Path) -> None:
    other = accounted(tmp_path, FOOT)
    for case in ("base", "low"):
        same(flows(plain, case), flows(other, case), 1e-11)
        same(heads(plain, case), heads(other, case), 1e-11)
    first, second = verdicts(plain), verdicts(other)
    assert first.keys() == second.keys()
    for key, (value, margin, met) in first.items():
        assert second[key][:2] == pytest.approx((value, margin), rel=1e-10, abs=1e-10)
        assert second[key][2] == met
    assert plain.met == other.met


def test_other_names_give_the_same_numbers(plain: Account, tmp_path: Path) -> None:
    names = {"upper": "z-mere", "lower": "b_mere", "east": "Quern", "north": "a1", "south": "north-2"}
    names |= {"main": "tail-0", "link": "K", "tail": "9th", "spur": "x_y"}
    text = re.sub(r"\b[a-z]+\b", lambda match: names.get(match[0], match[0]), PLAIN)
    text = text.replace("b_mere: {level", "b_mere: {level")
    other = accounted(tmp_path, text)
    for case in ("base", "low"):
        same({names[name]: flow for name, flow in flows(plain, case).items()}, flows(other, case), 1e-13)
        same({names[name]: head for name, head in heads(plain, case).items()}, heads(other, case), 1e-13)


def test_another_order_gives_the_same_numbers(plain: Account, tmp_path: Path) -> None:
    lines = PLAIN.replace(",\n         fittings", ", fittings").strip().splitlines()
    blocks: list[list[str]] = []
    for line in lines:
        blocks.append([line]) if not line.startswith(" ") else blocks[-1].append(line)
    text = "\n".join(line for block in reversed(blocks) for line in (block[0], *reversed(block[1:])))
    other = accounted(tmp_path, text)
    for case in ("base", "low"):
        same(flows(plain, case), flows(other, case), 1e-11)
        same(heads(plain, case), heads(other, case), 1e-11)


def test_a_pipe_drawn_the_other_way_turns_its_sign(plain: Account, tmp_path: Path) -> None:
    text = PLAIN.replace("from: north, to: south", "from: south, to: north").replace(
        "K: 2, K_reverse: 7", "K: 7, K_reverse: 2"
    )
    text = text.replace("from: upper, to: north", "from: north, to: upper").replace("{from: square}", "{to: square}")
    other = accounted(tmp_path, text)
    for case in ("base", "low"):
        signs = {"main": -1, "link": -1, "tail": 1, "spur": 1}
        same({name: signs[name] * flow for name, flow in flows(plain, case).items()}, flows(other, case), 1e-12)
        same(heads(plain, case), heads(other, case), 1e-12)
        for name, sign in signs.items():
            for quantity in ("velocity", "friction_loss", "fitting_loss", "head_loss"):
                one, two = (x.ledger.spot(f"pipes.{name}.{quantity}@{case}").value for x in (plain, other))
                assert two == pytest.approx(sign * one, rel=1e-9, abs=1e-11)
    assert {key: met for key, (_, _, met) in verdicts(plain).items()} == {
        key: met for key, (_, _, met) in verdicts(other).items()
    }


def test_the_direction_decides_which_coefficient_loses(plain: Account) -> None:
    turned = {}
    for case in ("base", "low"):
        flow = plain.ledger.spot(f"pipes.link.flow@{case}").value
        turned[case] = flow < 0
        coefficient = plain.ledger.spot(f"fittings.link/1.coefficient@{case}").value
        assert coefficient == (7.0 if flow < 0 else 2.0)
    assert turned == {"base": False, "low": True}


def test_scaling_laws_for_a_fixed_factor(tmp_path: Path) -> None:
    # With f and K fixed, head differences scale with the square of the flow and lengths shared by all pipes.
    text = """
    friction: fixed
    reservoirs: {a: {level: %s m}, b: {level: %s m}, c: {level: 0 m}}
    junctions: {j: {withdrawal: %s L/s}}
    pipes:
      p: {from: a, to: j, length: 400 m, bore: 200 mm, friction_factor: 0.02, fittings: [{K: 4}]}
      q: {from: j, to: b, length: 300 m, bore: 150 mm, friction_factor: 0.025}
      r: {from: c, to: j, length: 500 m, bore: 250 mm, friction_factor: 0.018}
    """
    small = accounted(tmp_path / "small", text % (10, 4, 8))
    large = accounted(tmp_path / "large", text % (90, 36, 24))
    same({name: 3 * flow for name, flow in flows(small, "base").items()}, flows(large, "base"), 1e-9)
    # a bracket of a nanometre is enough for the search
    same({name: 9 * head for name, head in heads(small, "base").items()}, heads(large, "base"), 1e-9)


def test_raising_every_level_raises_every_head(plain: Account, tmp_path: Path) -> None:
    def raised(match: re.Match[str]) -> str:
        return f"level: {float(match[1]) + 100:.6f} m"

    other = accounted(tmp_path, re.sub(r"level: ([\d.]+) m", raised, PLAIN))
    for case in ("base", "low"):
        same(flows(plain, case), flows(other, case), 1e-10)
        lifted = {name: head + 100 for name, head in heads(plain, case).items()}
        same(lifted, heads(other, case), 1e-12)


def test_n_parallel_pipes_are_n_pipes(tmp_path: Path) -> None:
    text = """
    reservoirs: {a: {level: 30 m}, b: {level: 20 m}}
    junctions: {j: {withdrawal: 10 L/s}}
    pipes:
      p: {from: a, to: j, length: 400 m, bore: 200 mm, roughness: 0.1 mm}
"""
    twin = "      q%s: {from: j, to: b, length: 300 m, bore: 150 mm, roughness: 0.1 mm, fittings: [{K: 2}]%s}\n"
    one = accounted(tmp_path / "one", text + twin % ("", ", parallel: 3"))
    three = accounted(tmp_path / "three", text + "".join(twin % (k, "") for k in range(3)))
    assert np.isclose(heads(one, "base")["j"], heads(three, "base")["j"], rtol=0, atol=2e-9)
    assert flows(one, "base")["q"] == pytest.approx(3 * flows(three, "base")["q1"], rel=1e-9)
    assert one.ledger.spot("pipes.q.velocity@base").value == pytest.approx(
        three.ledger.spot("pipes.q1.velocity@base").value, rel=1e-9
    )

"""What follows from inputs in the ledger: bores of sizes, coefficients of computed fittings, case by case."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from accounts import accounted
from ledger_reader import Reader

from calc.account import Account, following
from calc.ledger import Converted, Derived, Ledger, Library, replay
from calc.ledger.export import exported

WORKS = """\
reservoirs: {combe: {level: 182 m}, lode: {level: 168.5 m}}
pipes:
  combe-main:
    from: combe
    to: lode
    length: 1900 m
    bore: {size: DN300, standard: EN 545, class: C40}
    roughness: {material: cement-mortar-lined}
    fittings:
      - {kind: bend, angle: 60 deg, radius_ratio: 1.5, count: 2}
      - {kind: step, onward_bore: 254.6 mm}
      - {kind: taper, onward_bore: 350 mm, angle: 20 deg}
      - {kind: taper, onward_bore: 250 mm, angle: 60 deg, bore: 300 mm}
      - {Kv: 2400}
      - {Cv: 2800}
      - {K: 2.5, K_reverse: 3}
cases:
  narrow: {times: {pipes.combe-main.bore: 0.8}}
  wide: {after: narrow, with: {pipes.combe-main.bore: 400 mm}}
  turned: {with: {reservoirs.lode.level: 190 m}}
  rough: {with: {pipes.combe-main.roughness: {material: old-cast-iron}}}
"""


@pytest.fixture(scope="module")
def works(tmp_path_factory: pytest.TempPathFactory) -> Account:
    return accounted(tmp_path_factory.mktemp("works"), WORKS)


def number(ledger: Ledger, name: str) -> float:
    return ledger.spot(name).value


def test_the_bore_of_a_size_is_derived_from_the_table(works: Account) -> None:
    """326 mm outside, 4.6 mm least wall (EN 545:2010) and 1.3 mm + 0.001 DN (memory), 4 mm lining: 305.6 mm."""
    ledger = works.ledger
    for name, wanted in (("outside_diameter", 0.326), ("wall", 0.0062), ("lining", 0.004), ("pressure_rating", 40e5)):
        spot = ledger.spot(f"pipes.combe-main.{name}@base")
        assert isinstance(spot.column.origin, Library)
        assert spot.value == pytest.approx(wanted, rel=1e-12)
        assert spot.column.origin.marks[spot.row].file == "calc/data/sizes.yaml"
    bore = ledger.spot("pipes.combe-main.bore@base")
    assert isinstance(bore.column.origin, Derived)
    assert bore.value == pytest.approx(0.3056, rel=1e-12)
    (rough,) = (column for column in ledger.find("pipes.roughness", "base") if column.case == "base")
    assert isinstance(rough.origin, Library)
    assert rough.origin.marks[0].file == "calc/data/materials.yaml"


def test_every_column_that_follows_can_be_computed_again(works: Account) -> None:
    """By replay, and by a reader of the exported ledger that knows nothing of the program."""
    columns = [column for case in works.cases for column in following(works.ledger.columns, case)]
    count, wrong = replay(works.ledger, columns=columns)
    assert (count > 20, wrong) == (True, [])
    again = list(Reader(json.loads(json.dumps(exported(works.ledger)))).every())
    assert max(one.apart for one in again if one.name.startswith("fittings.")) < 1e-12
    assert max(one.apart for one in again if one.name == "pipes.bore") < 1e-12


CASES = {"base": 0.3056, "narrow": 0.8 * 0.3056, "wide": 0.4, "turned": 0.3056}


@pytest.mark.parametrize("case", CASES)
def test_coefficients_follow_the_bore_of_the_case(works: Account, case: str) -> None:
    """On the bore D of the case, by the laws written out once more."""
    bore, ledger = CASES[case], works.ledger
    k = {n: number(ledger, f"fittings.combe-main/{n}.K@{case}") for n in range(1, 8)}
    back = {n: number(ledger, f"fittings.combe-main/{n}.K_reverse@{case}") for n in (2, 3, 4, 7)}
    assert k[1] == pytest.approx((0.131 + 1.847 / 3**3.5) * 2 / 3, rel=1e-12)
    narrowing, widening = {}, {}
    for n, onward, before in ((2, 0.2546, bore), (3, 0.35, bore), (4, 0.25, 0.3)):
        share = min(onward, before) / max(onward, before)
        steep = {2: (0.5, 1.0), 3: (0.8 * 0.17364817766693, 2.6 * 0.17364817766693), 4: (0.5 * 0.5**0.5, 1.0)}[n]
        narrowing[n], widening[n] = steep[0] * (1 - share**2), steep[1] * (1 - share**2) ** 2
        forward = (widening, narrowing) if before < onward else (narrowing, widening)
        assert (k[n], back[n]) == pytest.approx((forward[0][n], forward[1][n]), rel=1e-9)
        smaller = number(ledger, f"fittings.combe-main/{n}.smaller_bore@{case}")
        assert smaller == pytest.approx(min(onward, before), rel=1e-12)
    area = 3.141592653589793 / 4 * bore**2
    assert k[5] == pytest.approx(2 * 100 * (area * 3600 / 2400) ** 2, rel=1e-12)  # 1 bar, 1000 kg/m³
    assert k[6] == pytest.approx(2 * 6894.757 / 999 * (area / (2800 * 6.30901964e-5)) ** 2, rel=1e-6)
    assert (k[7], back[7]) == (2.5, 3.0)


def test_a_case_enters_only_what_its_bore_changes(works: Account) -> None:
    def entered(case: str) -> set[str]:
        columns = [column for column in works.ledger.columns if column.name == "fittings.K" and column.case == case]
        return {row.rpartition("/")[2] for column in columns for row in column.rows}

    assert entered("base") == {"1", "2", "3", "4", "5", "6", "7"}
    assert entered("narrow") == entered("wide") == {"2", "3", "5", "6"}
    assert entered("turned") == entered("rough") == set()


def test_the_loss_of_each_fitting_stands_on_its_smaller_bore(works: Account) -> None:
    """h = K V²/2g with V in the smaller bore; where flow turns, the coefficient in reverse."""
    ledger = works.ledger
    for case in CASES:
        flow = number(ledger, f"pipes.combe-main.flow@{case}")
        for n in (2, 3, 4):
            smaller = number(ledger, f"fittings.combe-main/{n}.smaller_bore@{case}")
            coefficient = number(ledger, f"fittings.combe-main/{n}.{'K' if flow > 0 else 'K_reverse'}@{case}")
            speed = flow / (3.141592653589793 / 4 * smaller**2)
            wanted = coefficient * speed * abs(speed) / (2 * 9.80665)
            assert number(ledger, f"fittings.combe-main/{n}.loss@{case}") == pytest.approx(wanted, rel=1e-9)
    assert number(ledger, "pipes.combe-main.flow@turned") < 0 < number(ledger, "pipes.combe-main.flow@base")
    assert works.confirmed


OTHER_UNITS = {
    "254.6 mm": f"{254.6 / 25.4!r} in",
    "60 deg, radius": "1.0471975511965976 rad, radius",
    "20 deg": "0.3490658503988659 rad",
    "Kv: 2400": f"Kv: {2400 / 3.6!r} L/s",
    "Cv: 2800": f"Cv: {2800 * 231 * 0.0254**3 * 60!r} m³/h",
    "bore: 300 mm": "bore: 0.3 m",
    "1900 m": f"{1900 / 0.3048!r} ft",
}


def test_units_of_the_inputs_change_nothing(works: Account, tmp_path: Path) -> None:
    text = WORKS
    for old, new in OTHER_UNITS.items():
        assert old in text
        text = text.replace(old, new)
    other = accounted(tmp_path, text)
    for column in works.ledger.columns:
        if column.name in ("fittings.K", "fittings.K_reverse", "pipes.bore", "pipes.flow", "pipes.head_loss"):
            for row, value in zip(column.rows, column.values.tolist(), strict=True):
                again = other.ledger.view(column.name, column.case, (row,)).values[0]
                assert again == pytest.approx(value, rel=1e-8), column.id(column.index[row])


def test_a_bare_kv_is_converted_from_its_own_unit(works: Account) -> None:
    spot = works.ledger.spot("fittings.combe-main/5.Kv@base")
    assert isinstance(spot.column.origin, Converted)
    assert (spot.column.origin.written[0], spot.column.origin.units[0]) == ("2400", "m³/h")
    assert spot.value == pytest.approx(2400 / 3600, rel=1e-15)

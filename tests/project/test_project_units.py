"""Every quantity of the demos and samples, respelt in other units, is the same quantity.

Factors are exact and not the program's: the international yard and pound of 1959 (0.9144 m, 0.45359237 kg), the US
gallon of 231 in³, the imperial gallon of 4.54609 L, the standard atmosphere of 101 325 Pa, standard gravity of
9.80665 m/s² (NIST Special Publication 811, appendix B).
"""

from __future__ import annotations

import dataclasses
import json
import math
import re
from collections.abc import Iterator, Mapping
from fractions import Fraction
from pathlib import Path
from typing import Any, NamedTuple

import pytest
from accounts import PROJECTS, ROOT

from calc import pipeline
from calc.account import results
from calc.components import Stated
from calc.marks import Mark
from calc.project import Project

SAMPLES = sorted(path.parent for path in (ROOT / "calc" / "data" / "samples").glob("*/project.yaml"))
FOLDERS = [*PROJECTS, *SAMPLES]
WAYS = 5
"""Other units in which each quantity is respelt."""

F = Fraction
FOOT, INCH, POUND, G = F("0.3048"), F("0.0254"), F("0.45359237"), F("9.80665")
US_GALLON, IMPERIAL_GALLON = 231 * INCH**3, F("0.00454609")
PSI = POUND * G / INCH**2
PI = F("3.14159265358979323846264338327950288419716939937510582")
UNITS: tuple[dict[str, Fraction], ...] = (
    {"m": F(1), "mm": F("0.001"), "cm": F("0.01"), "km": F(1000), "ft": FOOT, "in": INCH, "yd": 3 * FOOT},
    {"m³/s": F(1), "L/s": F("0.001"), "m³/h": F(1, 3600), "ML/d": F(1000, 86400), "gpm": US_GALLON / 60}
    | {"cfs": FOOT**3, "us_mgd": 10**6 * US_GALLON / 86400, "imp_gpm": IMPERIAL_GALLON / 60, "L/min": F(1, 60000)},
    {"Pa": F(1), "kPa": F(1000), "bar": F(100000), "psi": PSI, "atm": F(101325), "MPa": F(10**6), "mbar": F(100)}
    | {"kgf/cm²": G * 10**4, "lbf/ft²": PSI / 144},
    {"m/s": F(1), "ft/s": FOOT, "km/h": F(1000, 3600), "ft/min": FOOT / 60, "mm/s": F("0.001"), "mi/h": F("0.44704")},
    {"m/s²": F(1), "ft/s²": FOOT, "cm/s²": F("0.01"), "mm/s²": F("0.001"), "in/s²": INCH, "km/h²": F(1000, 3600**2)},
    {"m²/s": F(1), "mm²/s": F(1, 10**6), "cSt": F(1, 10**6), "St": F(1, 10**4), "ft²/s": FOOT**2, "cm²/s": F(1, 10**4)},
    {"Pa·s": F(1), "mPa·s": F("0.001"), "cP": F("0.001"), "P": F("0.1"), "lb/ft/s": POUND / FOOT, "kg/m/s": F(1)},
    {"kg/m³": F(1), "g/L": F(1), "kg/L": F(1000), "t/m³": F(1000), "lb/ft³": POUND / FOOT**3, "g/mL": F(1000)},
    {"s": F(1), "min": F(60), "h": F(3600), "d": F(86400), "s²/s": F(1), "h²/h": F(3600)},
    {"°": PI / 180, "rad": F(1)},
    {"": F(1), "%": F("0.01"), "m/km": F("0.001"), "ft/1000 ft": F("0.001"), "mm/m": F("0.001"), "in/ft": F(1, 12)},
)
"""Exact factors to SI, a row for each dimension; only temperatures have a zero of their own."""

SCALES = {"K": (F(1), F(0)), "°C": (F(1), F("273.15")), "°F": (F(5, 9), F("459.67") * 5 / 9)}
NAMES = {"US mgd": "us_mgd", "imp gpm": "imp_gpm", "ft³/s": "cfs"}
"""How some are printed, and how they are written here."""

COUNTED = ("count", "parallel")
"""Whole numbers, which have no unit."""


class Place(NamedTuple):
    """A value of a project: where it stands in the model, and as what."""

    path: str
    stated: Stated


def places(held: object, path: str = "") -> Iterator[Place]:
    """Yield every stated value of a project."""
    if isinstance(held, Stated):
        yield Place(path, held)
    elif isinstance(held, Mapping):
        for key, value in held.items():
            yield from places(value, f"{path}.{key}")
    elif isinstance(held, tuple) and not hasattr(held, "_fields"):
        for number, value in enumerate(held):
            yield from places(value, f"{path}[{number}]")
    elif dataclasses.is_dataclass(held):
        for field in dataclasses.fields(held):
            yield from places(getattr(held, field.name), f"{path}.{field.name}")


def is_quantity(place: Place) -> bool:
    """Return whether a value was written in the folder as a number of some kind."""
    stated = place.stated
    written = not stated.shipped and not isinstance(stated.value, str | bool)
    return written and math.isfinite(stated.number) and not place.path.endswith(COUNTED)


def quantities(project: Project) -> dict[Mark, Stated]:
    """Return each quantity written in the folder once, by its mark."""
    return {place.stated.mark: place.stated for place in places(project) if is_quantity(place)}


def scales_of(stated: Stated) -> tuple[str, dict[str, tuple[Fraction, Fraction]]]:
    """Return the name of the unit in which a quantity is written, and all units of its dimension."""
    unit = NAMES.get(stated.unit, stated.unit)
    if unit in SCALES:
        return unit, SCALES
    (row,) = (row for row in UNITS if unit in row)
    return unit, {name: (factor, F(0)) for name, factor in row.items()}


def respelt(stated: Stated, way: int) -> str:
    """Return the same quantity in another unit of its dimension, to 30 figures."""
    unit, scales = scales_of(stated)
    others = [name for name in scales if name != unit]
    other = others[way % len(others)]
    number = re.match(r"[-+0-9.]+(?:[eE][-+]?[0-9]+)?", stated.written)
    assert number is not None
    (factor, zero), (new_factor, new_zero) = scales[unit], scales[other]
    return f"{figures((F(number[0]) * factor + zero - new_zero) / new_factor)} {other}".strip()


def figures(exact: Fraction, count: int = 30) -> str:
    """Return a number to so many figures, written with a power of ten."""
    if not exact:
        return "0"
    power = math.floor(math.log10(abs(exact))) - count
    return f"{round(exact / F(10) ** power)}e{power}"


def mutated(project: Project, folder: Path, way: int) -> Path:
    """Write the folder anew, with every quantity respelt at its mark."""
    folder.mkdir()
    lines = {file.name: project.texts[file.name].split("\n") for file in project.files}
    for mark, stated in sorted(quantities(project).items(), key=lambda item: -item[0].column):
        line = lines[mark.file][mark.line - 1]
        at = mark.column - 1 + (line[mark.column - 1] in "\"'")
        assert line.startswith(stated.written, at), mark
        lines[mark.file][mark.line - 1] = line[:at] + respelt(stated, way) + line[at + len(stated.written) :]
    for name, held in lines.items():
        (folder / name).write_text("\n".join(held), encoding="utf-8")
    return folder


def same(one: Any, other: Any, within: float, path: str = "") -> None:  # noqa: ANN401
    """Assert that two trees of data say the same, numbers within a share and a small difference."""
    if isinstance(one, dict):
        assert one.keys() == other.keys(), path
        for key in one:
            same(one[key], other[key], within, f"{path}.{key}")
    elif isinstance(one, list):
        assert len(one) == len(other), path
        for number, pair in enumerate(zip(one, other, strict=True)):
            same(*pair, within, f"{path}[{number}]")
    elif isinstance(one, float):
        assert other == pytest.approx(one, rel=within, abs=within), path
    else:
        assert one == other, path


def test_a_quantity_is_respelt_exactly() -> None:
    # by hand: 100 ft = 30.48 m; 50 °F = 10 °C; 500 gpm = 500 x 231 in³/min
    mark = Mark("", 1, 1)
    length = Stated(30.48, "100 ft", mark, 100.0, "ft", 0.3048)
    assert respelt(length, 0) == "3048000000000000000000000000000e-29 m"
    warmth = Stated(283.15, "50 degF", mark, 50.0, "°F", 5 / 9, 255.372)
    assert float(respelt(warmth, 1).split()[0]) == pytest.approx(10.0, rel=1e-15)
    flow = Stated(0.0315, "500 gpm", mark, 500.0, "gpm")
    assert float(respelt(flow, 0).split()[0]) == pytest.approx(500 * 231 * 0.0254**3 / 60, rel=1e-14)


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
def test_each_quantity_in_other_units_is_the_same(folder: Path, tmp_path: Path) -> None:
    project = pipeline.read(folder)
    held = list(places(project))
    assert len(quantities(project)) > 20
    for way in range(WAYS):
        again = list(places(pipeline.read(mutated(project, tmp_path / str(way), way))))
        assert [place.path for place in again] == [place.path for place in held]
        changed = 0
        for before, after in zip(held, again, strict=True):
            if not is_quantity(before):
                assert after.stated.value == before.stated.value, before.path
                continue
            assert after.stated.si == pytest.approx(before.stated.si, rel=1e-12, abs=0), before.path
            assert after.stated.unit != before.stated.unit, before.path
            changed += 1
        assert changed >= len(quantities(project))


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
def test_a_folder_in_other_units_has_the_same_results(folder: Path, tmp_path: Path) -> None:
    account = pipeline.account(folder)
    again = pipeline.account(mutated(account.project, tmp_path / "again", 3))
    told = [json.loads(json.dumps(results(one))) for one in (account, again)]
    assert told[0].pop("digest") != told[1].pop("digest")
    for one in told:
        for case in one["cases"].values():
            del case["history"]  # the trials near the answer are rounding
    same(*told, within=1e-8)

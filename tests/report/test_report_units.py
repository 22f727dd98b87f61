"""Units of a package: every unit may be chosen, both systems tell the same results, and none strays into the other.

Units are held to their published definitions: the international foot of 0.3048 m and pound of 0.45359237 kg (agreement
of 1959), standard gravity of 9.80665 m/s² (3rd General Conference on Weights and Measures, 1901), the US gallon of 231
cubic inches; and to `scipy.constants`, which follows NIST Special Publication 811.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from pathlib import Path

import pytest
from accounts import accounted
from pages import Figures, figure_of, numbers, parts_within, plain, table, tables
from scipy import constants
from works import LOOP, US, work

from calc import kinds, pipeline
from calc.account import Account, results
from calc.ledger import replay
from calc.publish import pdf
from calc.publish.pictures import all_drawn
from calc.publish.seal import seal_document
from calc.report.conversion import degrees_celsius, degrees_fahrenheit, empirical, worths
from calc.report.display import Display
from calc.report.document import Document, Formula, Number, Row, Table
from calc.report.numbers import Format, parsed, read_back, shown, written
from calc.report.section import DISPLAY
from calc.report.shown import SHOWN, Shown

FOOT, INCH, POUND, GRAVITY = 0.3048, 0.3048 / 12, 0.45359237, 9.80665
FORCE, GALLON, MINUTE, DAY = POUND * GRAVITY, 231 * (0.3048 / 12) ** 3, 60, 86400
WORTH = {
    "m": 1,
    "km": 1000,
    "mm": 0.001,
    "ft": FOOT,
    "in": INCH,
    "mi": 5280 * FOOT,
    "m³/s": 1,
    "L/s": 0.001,
    "L/min": 0.001 / MINUTE,
    "m³/h": 1 / 3600,
    "m³/d": 1 / DAY,
    "ML/d": 1000 / DAY,
    "ft³/s": FOOT**3,
    "gpm": GALLON / MINUTE,
    "MGD": 1e6 * GALLON / DAY,
    "m/s": 1,
    "ft/s": FOOT,
    "Pa": 1,
    "kPa": 1000,
    "MPa": 1e6,
    "bar": 1e5,
    "psi": FORCE / INCH**2,
    "lbf/ft²": FORCE / FOOT**2,
    "m/km": 0.001,
    "ft/1000 ft": 0.001,
    "%": 0.01,
    "kg/m³": 1,
    "lb/ft³": POUND / FOOT**3,
    "slug/ft³": FORCE / FOOT / FOOT**3,
    "m²/s": 1,
    "mm²/s": 1e-6,
    "ft²/s": FOOT**2,
    "Pa·s": 1,
    "lbf·s/ft²": FORCE / FOOT**2,
    "K": 1,
    "": 1,
}
"""What one of each unit is in SI, from the definitions above."""

METRIC = (
    *("m", "mm", "km", "m²", "m³", "m/s", "m/s²", "m²/s", "mm²/s", "m/km", "°C", "kg/m³"),
    *("L/s", "L/min", "ML/d", "m³/s", "m³/h", "m³/d", "Pa", "kPa", "MPa", "bar", "Pa·s"),
)
CUSTOMARY = (
    *("ft", "in", "mi", "ft²", "ft³", "ft/s", "ft/s²", "ft²/s", "ft/1000 ft", "°F", "lb/ft³", "slug/ft³"),
    *("gpm", "MGD", "ft³/s", "psi", "lbf/ft²", "lbf·s/ft²"),
)
METRIC_TEXT, CUSTOMARY_TEXT = (
    re.compile(rf"(?:^|[0-9,] ?)({'|'.join(re.escape(unit) for unit in units)})[.,;]?$")
    for units in (METRIC, CUSTOMARY)
)
"""A unit by itself, or after a number or a comma, at the end of a text."""


@pytest.fixture(scope="module")
def twins(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Account]:
    """Return the same works shown in different units."""
    folder = tmp_path_factory.mktemp("twins")
    shown_as = {"si": "display: {units: SI}\n", "us": US, "dual": "display: {units: US, beside: SI}\n"}
    shown_as["dual-si"] = "display: {units: SI, beside: US, flow: m3/h, paper: Letter}\n"
    return {name: accounted(folder / name, text + LOOP) for name, text in shown_as.items()}


@pytest.fixture(scope="module")
def documents(twins: dict[str, Account]) -> dict[str, Document]:
    return {name: pipeline.document(account, "checking") for name, account in twins.items()}


# --- units and their figures ------------------------------------------------------------------------------------


def test_units_are_worth_what_their_definitions_say() -> None:
    for unit, (_, stated) in worths().items():
        assert stated.si == pytest.approx(WORTH[unit], rel=1e-15, abs=0), unit
        assert stated.basis.source


def test_definitions_agree_with_a_reference_library() -> None:
    pairs = [
        (FOOT, constants.foot),
        (INCH, constants.inch),
        (POUND, constants.pound),
        (FORCE, constants.pound_force),
        (GALLON, constants.gallon_US),
        (WORTH["psi"], constants.psi),
        (WORTH["mi"], constants.mile),
        (WORTH["slug/ft³"], constants.slug / constants.foot**3),
    ]
    for ours, theirs in pairs:
        assert ours == pytest.approx(theirs, rel=1e-14)


@pytest.mark.parametrize("one", SHOWN, ids=lambda one: one.field)
def test_every_unit_of_a_field_shows_a_value_by_its_definition(one: Shown) -> None:
    for unit in one.decimals:
        if not unit.startswith("°"):
            for value in (0.0, 1.0, 0.3, 412.75):
                assert shown(value, one.kind, unit) == pytest.approx(value / WORTH[unit], rel=1e-14)
                assert shown(1 / WORTH[unit], one.kind, unit) == pytest.approx(WORTH[unit] ** -2, rel=1e-14)


# Temperature: 0 °C is 273.15 K and 32 °F; 100 °C is 212 °F (definition of both scales).
@pytest.mark.parametrize(
    ("kelvin", "celsius", "fahrenheit"),
    [(273.15, "0.00", "32.00"), (373.15, "100.00", "212.00"), (283.15, "10.00", "50.00"), (233.15, "−40.00", "−40.00")],
)
def test_temperatures_stand_on_their_scale(kelvin: float, celsius: str, fahrenheit: str) -> None:
    for unit, text in (("°C", celsius), ("°F", fahrenheit)):
        form = parsed(Format(unit, decimals=2).spec)
        assert form == Format(unit, decimals=2)
        assert written(kelvin, kinds.TEMPERATURE, form) == text
    assert float(degrees_celsius.body(amount=kelvin)) == pytest.approx(read_back(celsius), abs=1e-9)
    assert float(degrees_fahrenheit.body(amount=kelvin)) == pytest.approx(read_back(fahrenheit), abs=1e-9)


# --- choosing ---------------------------------------------------------------------------------------------------


CHOICES = [(one, spelling, unit) for one in SHOWN for spelling, unit in one.spellings.items()]


@pytest.mark.parametrize(("one", "spelling", "unit"), CHOICES, ids=lambda x: x if isinstance(x, str) else x.field)
def test_every_spelling_of_every_unit_is_read_and_shown(tmp_path: Path, one: Shown, spelling: str, unit: str) -> None:
    folder = tmp_path / "works"
    folder.mkdir()
    text = f'display: {{{one.field}: "{spelling}"}}\nreservoirs: {{a: {{level: 9 m}}, b: {{level: 8 m}}}}\n'
    text += "pipes: {p: {from: a, to: b, length: 90 m, bore: 200 mm, roughness: 0.1 mm}}\n"
    (folder / "network.yaml").write_text(text, encoding="utf-8")
    display = Display.of(pipeline.read(folder).sections["display"])
    assert display.unit(one.field) == unit
    form = display.form(one.field)
    assert parsed(form.spec) == form
    text = written(417.25 * WORTH[unit], one.kind, form) if unit in WORTH else "417.25"
    assert read_back(text) == pytest.approx(417.25, rel=0.002)


def test_the_fields_of_the_section_are_those_that_can_be_shown() -> None:
    told = {field.name for field in DISPLAY.fields}
    assert told == {"units", "beside", "paper", *(one.field for one in SHOWN)}


def test_every_kind_has_a_coherent_unit_in_both_systems() -> None:
    for system in ("SI", "US"):
        display = Display(system, {one.field: one.usual[system] for one in SHOWN})
        for kind in kinds.KINDS:
            unit = display.coherent(kind)
            # coherent: products of metre, kilogram, second or of foot, slug, second; no factor but powers of those
            dimension = kind.dimension
            slug = FORCE / FOOT
            worth = FOOT ** float(dimension.length) * slug ** float(dimension.mass) if system == "US" else 1.0
            assert shown(1.0, kind, unit) == pytest.approx(1 / worth, rel=1e-14), kind.name


# --- one calculation, two displays ------------------------------------------------------------------------------


def test_results_in_si_do_not_depend_on_the_display(twins: dict[str, Account]) -> None:
    told = [results(account) for account in twins.values()]
    for one in told:
        one.pop("digest")  # of the inputs, which say the display
        one.pop("project")  # named after its folder
    assert all(one == told[0] for one in told)


@pytest.mark.parametrize("name", ["us", "dual", "dual-si"])
def test_each_number_of_a_ledger_replays(twins: dict[str, Account], documents: dict[str, Document], name: str) -> None:
    assert documents[name].sections
    assert replay(twins[name].ledger)[1] == []


def test_the_same_numbers_stand_in_both_packages(documents: dict[str, Document]) -> None:
    """Read from the pages, converted by the definitions: a table in US units is that in SI."""
    compared = 0
    for key in ("schedule", "pipes-base", "losses-base", "junctions-base", "properties", "pipes-warm"):
        for si, us in zip(table(documents["si"], key).rows, table(documents["us"], key).rows, strict=True):
            for one, other in zip(si.cells, us.cells, strict=True):
                a, b = figure_of(one), figure_of(other)
                if a and b and a.form.unit in WORTH and b.form.unit in WORTH:
                    compared += same(a, b)
    assert compared > 60


def same(a: Number, b: Number) -> bool:
    """Check that two printed numbers are one quantity, to half of their last places."""
    first, second = Figures.read(a.text), Figures.read(b.text)
    left, right = first.value * WORTH[a.form.unit], second.value * WORTH[b.form.unit]
    half = 0.5001 * (first.last * WORTH[a.form.unit] + second.last * WORTH[b.form.unit])
    assert a.ref == b.ref
    assert abs(left - right) <= half, (a, b)
    return True


@pytest.mark.parametrize("name", ["dual", "dual-si"])
def test_parallel_columns_tell_the_same(documents: dict[str, Document], name: str) -> None:
    pairs = 0
    keys = ("schedule", "pipes-", "losses-", "fittings-", "junctions-", "verdicts-", "criteria", "flows", "properties")
    for key in keys:
        for held in tables(documents[name], key):
            found = list(twice(held))
            assert found, held.key
            for a, b in found:
                if not a.form.unit.startswith("°"):
                    pairs += same(a, b)
    assert pairs > 150


def twice(held: Table) -> Iterator[tuple[Number, Number]]:
    """Yield the numbers of a row that stand in it twice, in two units."""
    for row in held.rows:
        seen: dict[tuple[str, int], Number] = {}
        counts: dict[str, int] = {}
        for cell in row.cells:
            number = figure_of(cell)
            if number is None or number.form.unit not in WORTH:
                continue
            first = next((one for one in seen.values() if one.ref == number.ref), None)
            if first is not None and first.form.unit != number.form.unit:
                yield first, number
            counts[number.ref] = counts.get(number.ref, 0) + 1
            seen[number.ref, counts[number.ref]] = number


def test_parallel_columns_carry_their_units(documents: dict[str, Document]) -> None:
    heads = [(plain(one.head), one.unit) for one in table(documents["dual"], "pipes-base").columns]
    assert heads == [
        ("pipe", ""),
        *[("from", ""), ("head", "ft"), ("head", "m")],
        *[("to", ""), ("head", "ft"), ("head", "m")],
        *[("loss", "ft"), ("loss", "m"), ("gradient, one in", ""), ("flow", "gpm"), ("flow", "L/s")],
    ]


# --- conversions ------------------------------------------------------------------------------------------------


def conversions(document: Document) -> Iterator[tuple[Row, Formula]]:
    for held in tables(document):
        for row in held.rows:
            for part in parts_within(row.cells[0]):
                if isinstance(part, Formula) and part.operands and part.law.name in CONVERSIONS:
                    yield row, part


CONVERSIONS = ("number_in_unit", "degrees_celsius", "degrees_fahrenheit")


@pytest.mark.parametrize("name", ["demo", "laws-us", "empirical-us", "loop-us", "great"])
def test_a_conversion_is_the_quantity_over_the_worth_of_a_unit(name: str) -> None:
    found = 0
    for row, part in conversions(work(name).document):
        assert part.operands is not None
        assert part.result is not None
        unit = part.result.form.unit
        if "worth" not in part.operands:
            continue
        amount, worth = part.operands["amount"], part.operands["worth"]
        assert amount.form.unit == worth.form.unit
        by_definition = WORTH[unit] / WORTH[worth.form.unit]
        read = Figures.read(worth.text)
        assert abs(read.value - by_definition) <= 0.5001 * read.last, row.address
        assert amount.ref == part.result.ref
        found += 1
    assert found > 3


def test_what_an_empirical_law_takes_and_gives_is_converted_around_it() -> None:
    document = work("empirical-us").document
    rows = [row for held in tables(document, "derivation-base") for row in held.rows]
    laws = [next((p for p in row.cells[0] if isinstance(p, Formula)), None) for row in rows]
    worked = [k for k, law in enumerate(laws) if law is not None and law.law.name in ("hazen_williams", "manning")]
    assert len(worked) == 2
    for k in worked:
        law = laws[k]
        assert law is not None
        assert law.operands is not None
        assert law.result is not None
        assert law.result.form.unit == "m"
        measured = {n.ref: n.form.unit for n in law.operands.values() if n.form.unit}
        assert set(measured.values()) == {"m", "m³/s"}
        before = {one.result.ref: one.result.form.unit for one in laws[:k] if one is not None and one.result}
        assert {ref: before.get(ref) for ref in measured} == measured
        after = laws[k + 1]
        assert after is not None
        assert after.result is not None
        assert (after.result.ref, after.result.form.unit) == (law.result.ref, "ft")


def test_each_conversion_stands_once_in_a_section() -> None:
    for name in ("demo", "empirical-us", "loop-us"):
        seen = [
            (row.address.partition(".")[0], p.result.ref, p.result.form.unit)
            for row, p in conversions(work(name).document)
            if p.result
        ]
        assert len(set(seen)) == len(seen)


# --- nothing of the other system --------------------------------------------------------------------------------


def strays(document: Document, other: re.Pattern[str]) -> Iterator[tuple[str, str]]:
    """Yield units of the other system where none should be: outside of inputs, conversions and empirical lines."""
    for section in document.sections:
        if section.key in ("software", "listing", "method", "references"):
            continue  # published cases, files as read, laws as published
        for held in (block for block in section.blocks if isinstance(block, Table)):
            for row in held.rows:
                formula = next((p for p in row.cells[0] if isinstance(p, Formula)), None)
                excused = formula is not None and (formula.law.name in CONVERSIONS or empirical(formula.law))
                if excused or (row.refs and row.refs[0].startswith("units.")):
                    continue
                for part in (p for cell in row.cells for p in parts_within(cell)):
                    text = part if isinstance(part, str) else part.form.unit if isinstance(part, Number) else ""
                    if other.search(text.strip()):
                        yield row.address, text
            yield from ((held.key, one.unit) for one in held.columns if other.search(one.unit))


@pytest.mark.parametrize("name", ["laws-us", "transition-us", "empirical-us", "loop-us"])
def test_no_metric_unit_strays_into_a_us_package(name: str) -> None:
    assert list(strays(work(name).document, METRIC_TEXT)) == []


@pytest.mark.parametrize("name", ["demo", "laws", "transition", "empirical", "loop", "oil", "great"])
def test_no_customary_unit_strays_into_a_metric_package(name: str) -> None:
    assert list(strays(work(name).document, CUSTOMARY_TEXT)) == []
    printed = (one for one in numbers(work(name).document) if not one.ref.startswith("verification."))
    assert not [number for number in printed if number.form.unit in CUSTOMARY]


def test_drawings_are_in_the_units_of_the_tables() -> None:
    drawn = [
        block.drawing
        for section in work("laws-us").document.sections
        for block in section.blocks
        if hasattr(block, "drawing")
    ]
    assert len(drawn) == 3
    for drawing in drawn:
        texts = [text for text in everything(drawing) if any(c.isdigit() for c in text)]
        assert texts
        assert not [text for text in texts if METRIC_TEXT.search(text)]


def everything(value: object) -> Iterator[str]:
    """Yield every text in a drawing, but names."""
    if isinstance(value, str):
        yield value
    elif isinstance(value, tuple):
        for one in value:
            yield from everything(one)
    elif hasattr(value, "__dataclass_fields__"):
        for field in value.__dataclass_fields__:
            yield from everything(getattr(value, field))


def test_levels_on_a_drawing_are_those_printed_beside_them() -> None:
    drawing = next(
        block.drawing
        for section in work("laws-us").document.sections
        for block in section.blocks
        if hasattr(block, "drawing") and hasattr(block.drawing, "reservoirs")
    )
    assert (drawing.level_unit, drawing.length_unit) == ("ft", "ft")
    for one in drawing.reservoirs:
        value, unit = one.level_text.split(" ")
        assert unit == "ft"
        assert one.level == pytest.approx(Figures.read(value).value, abs=0.005)
    # the works state these levels in metres
    stated = {"hill": 250.0, "mill": 231.0, "weir": 222.25}
    assert {one.name: one.level * FOOT for one in drawing.reservoirs} == pytest.approx(stated, rel=1e-12)


def test_the_schedule_tells_each_pipe_as_stated() -> None:
    rows = {
        plain(row.cells[0]): [plain(cell) for cell in row.cells[1:]]
        for row in table(work("laws-us").document, "schedule").rows
    }
    heads = [(plain(one.head), one.unit) for one in table(work("laws-us").document, "schedule").columns[3:7]]
    assert heads == [("length", "ft"), ("bore", "in"), ("roughness", "ft"), ("Darcy f", "")]
    # 2100 m, 300 mm and 0.0185; 950 m, 250 mm and 0.3 mm, as the works state them
    fixed = ["hill", "meet", f"{2100 / FOOT:.1f}", f"{0.3 / INCH:.3f}", "–", "0.0185", "fixed Darcy f"]
    rough = ["meet", "mill", f"{950 / FOOT:.1f}", f"{0.25 / INCH:.3f}", f"{0.0003 / FOOT:.6f}", "–", "Haaland"]
    assert (rows["fixed-main"], rows["haaland-main"]) == (fixed, rough)


def test_the_conventions_name_the_units_and_inputs_their_system() -> None:
    said = [plain(row.cells[0]) for row in table(work("loop-us").document, "conventions").rows]
    told = next(text for text in said if text.startswith("Tables and drawings"))
    assert "flow in ft³/s" in told
    assert "length in mi" in told
    assert any("foot, slug, second" in text for text in said)
    assert any("in SI" in text and "data files" in text for text in said)
    heads = [plain(one.head) for one in table(work("loop-us").document, "inputs").columns]
    assert heads[1:3] == ["as written", "in US units"]


def test_a_seal_reads_units_with_figures_in_them(documents: dict[str, Document], twins: dict[str, Account]) -> None:
    for name in ("us", "dual"):
        page = pdf.sheet_html(documents[name], twins[name].ledger, all_drawn(documents[name]))
        assert seal_document(page, documents[name], twins[name].ledger) > 1000

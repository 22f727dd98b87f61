"""Checks of the inputs alone: each remarks where it should, and not beside it."""

from __future__ import annotations

from pathlib import Path
from typing import NamedTuple

import pytest
from sound_works import PROJECT, SOUND, account_of, findings, spoiled


class Spoilt(NamedTuple):
    """What is changed, the check that remarks on it, and of which subjects; an empty tuple where it must not."""

    what: str
    check: str
    changes: tuple[tuple[str, str], ...]
    subjects: tuple[str, ...]
    words: str = ""
    added: str = ""
    project: str = PROJECT


BORE = "bore: {value: 204.6 mm, source: S1}"
ROUGHNESS = "roughness: {value: 0.1 mm, source: S1, range: [0.05 mm, 0.3 mm]}"
BEND = "fittings: [{kind: bend-90}]"
HAZEN = (ROUGHNESS, "hazen_williams_c: {value: 130, source: S1, range: [110, 140]}\n    law: hazen-williams")


def brae(fields: str) -> str:
    """Return a third pipe, beside the lower one."""
    return (
        f"  brae: {{from: cross, to: tarn, {fields}, roughness: {{value: 0.1 mm, source: S1}}, ends: {{to: square}},\n"
        "    fittings: [{kind: bend-45}]}\n"
    )


LONG_BRAE = brae("length: {value: 900 m, source: S1}, bore: {value: 151.6 mm, source: S1}")

CASES = [
    # D16: one field in two systems
    Spoilt(
        "a bore in inches",
        "D16",
        ((BORE, "bore: {value: 8.055 inch, source: S1}"),),
        ("pipes.upper.bore",),
        "'inch', where others of the kind bore are written in 'mm'",
    ),
    Spoilt(
        "a length in feet among metres",
        "D16",
        (("{value: 400 m, source: S1}", "{value: 1312 ft, source: S1}"),),
        ("pipes.upper.length",),
        "'ft'",
    ),
    Spoilt(
        "a level in feet in a case",
        "D16",
        (),
        ("cases.low",),
        "'ft'",
        added="cases: {low: {with: {reservoirs.mere.level: {value: 128 ft, source: S1}}}}\n",
    ),
    Spoilt("a length in kilometres", "D16", (("{value: 400 m, source: S1}", "{value: 0.4 km, source: S1}"),), ()),
    # D17: the imperial gallon is 1.20095 US gallons (Weights and Measures Act 1985; NIST SP 811)
    Spoilt(
        "both gallons",
        "D17",
        (("{value: 5 L/s, source: S1}", "{value: 60 imp_gpm, source: S1}"),),
        ("junctions.cross.withdrawal",),
        "a fifth larger",
        added="cases: {low: {with: {junctions.cross.withdrawal: {value: 70 us_gpm, source: S1}}}}\n",
    ),
    Spoilt("one gallon", "D17", (("{value: 5 L/s, source: S1}", "{value: 60 imp_gpm, source: S1}"),), ()),
    # D18: nominal sizes of ISO 6708 and whole inches of ASME B36.10 (both from memory)
    Spoilt("a bore of DN 200", "D18", ((BORE, "bore: {value: 200 mm, source: S1}"),), ("pipes.upper",)),
    Spoilt("a bore of DN 200 in metres", "D18", ((BORE, "bore: {value: 0.2 m, source: S1}"),), ("pipes.upper",)),
    Spoilt("a bore of eight inches", "D18", ((BORE, "bore: {value: 203.2 mm, source: S1}"),), ("pipes.upper",)),
    Spoilt("a bore of a data sheet", "D18", ((BORE, "bore: {value: 200 mm, source: S1, grade: manufacturer}"),), ()),
    Spoilt("a bore beside DN 200", "D18", ((BORE, "bore: {value: 200.1 mm, source: S1}"),), ()),
    Spoilt(
        "a size of a standard", "D18", ((BORE, "bore: {size: DN200, standard: EN 545, class: C40, source: S1}"),), ()
    ),
    Spoilt(
        "a size of a standard", "D03", ((BORE, "bore: {size: DN200, standard: EN 545, class: C40, source: S1}"),), ()
    ),
    Spoilt(
        "a size from nowhere",
        "D03",
        ((BORE, "bore: {size: DN200, standard: EN 545, class: C40}"),),
        ("pipes.upper",),
        "size has no source",
    ),
    Spoilt(
        "a lining that nobody states",
        "D05",
        ((BORE, "outside_diameter: {value: 222 mm, source: S1}\n    wall: {value: 5 mm, source: S1}"),),
        ("pipes.*.lining",),
        "by default",
    ),
    # D22
    Spoilt(
        "a level above the highest",
        "D22",
        (("level: {value: 40 m", "level: {value: 41.2 m"),),
        ("reservoirs.mere",),
        "above its highest operating level in every case",
    ),
    Spoilt(
        "a level below the lowest in a case",
        "D22",
        (),
        ("reservoirs.mere",),
        "below its lowest operating level in case low",
        added="cases: {low: {with: {reservoirs.mere.level: {value: 37.9 m, source: S1}}}}\n",
    ),
    Spoilt("a level at the highest", "D22", (("level: {value: 40 m", "level: {value: 41 m"),), ()),
    # D25
    Spoilt(
        "a pipe entered twice",
        "D25",
        (),
        ("pipes.brae",),
        "joins the same nodes as lower",
        added=brae("length: {value: 650 m, source: S1}, bore: {value: 252.8 mm, source: S1}"),
    ),
    Spoilt("another pipe beside it", "D25", (), (), added=LONG_BRAE),
    Spoilt(
        "a pipe shorter than ten bores",
        "D25",
        (("{value: 400 m, source: S1}", "{value: 2.0 m, source: S1}"),),
        ("pipes.upper",),
        "ten times its bore",
    ),
    Spoilt("a pipe of eleven bores", "D25", (("{value: 400 m, source: S1}", "{value: 2.3 m, source: S1}"),), ()),
    # D27: a slip of metres for kilometres, of centimetres for millimetres; Moody's chart ends at k/D = 0.05
    Spoilt(
        "a length in kilometres taken for metres",
        "D27",
        (("{value: 400 m, source: S1}", "{value: 400 km, source: S1}"),),
        ("pipes.upper",),
        "a hundred times",
        added=LONG_BRAE,
    ),
    Spoilt(
        "a bore in centimetres",
        "D27",
        ((BORE, "bore: {value: 204.6 cm, source: S1}"),),
        ("pipes.upper",),
        "eight times",
        added=LONG_BRAE,
    ),
    Spoilt(
        "a bore of seven metres",
        "D27",
        ((BORE, "bore: {value: 7 m, source: S1}"),),
        ("pipes.upper",),
        "larger than any in practice",
    ),
    Spoilt("bores of 150 to 250 mm", "D27", (), (), added=LONG_BRAE),
    Spoilt(
        "a roughness of a sixteenth of the bore",
        "D27",
        ((ROUGHNESS, "roughness: {value: 13 mm, source: S1}"),),
        ("pipes.upper", "pipes.upper"),
        "a twentieth",
    ),
    Spoilt(
        "a withdrawal in cubic metres a second",
        "D27",
        (("{value: 5 L/s, source: S1}", "{value: 25 m³/s, source: S1}"),),
        ("junctions.cross", "pipes.upper", "pipes.lower"),
        "withdrawal",
    ),
    Spoilt(
        "a level in feet taken for metres",
        "D27",
        (("level: {value: 30 m", "level: {value: 980 m"),),
        ("reservoirs.tarn", "pipes.upper", "pipes.lower"),
        "five hundred metres",
    ),
    Spoilt("levels two hundred metres apart", "D27", (("level: {value: 30 m", "level: {value: 240 m"),), ()),
    # D28: Hazen–Williams is fitted to water at 60 °F in pipes above 2 inches (from memory)
    Spoilt(
        "Hazen–Williams for oil",
        "D28",
        (
            HAZEN,
            (
                "{temperature: {value: 12 degC, source: S1}}",
                "{density: {value: 870 kg/m³, source: S1}, viscosity: {value: 2 mm²/s, source: S1}}",
            ),
        ),
        ("pipes.upper",),
        "not stated to be water",
    ),
    Spoilt(
        "Hazen–Williams for hot water",
        "D28",
        (HAZEN, ("value: 12 degC", "value: 60 degC")),
        ("pipes.upper",),
        "fifteen degrees",
    ),
    Spoilt(
        "Hazen–Williams for a small bore",
        "D28",
        (HAZEN, (BORE, "bore: {value: 41.6 mm, source: S1}")),
        ("pipes.upper",),
        "below fifty millimetres",
    ),
    Spoilt("Hazen–Williams for a main", "D28", (HAZEN,), ()),
    # D29: C and n of handbooks for pipes
    Spoilt(
        "a C of forty",
        "D29",
        ((ROUGHNESS, HAZEN[1].replace("value: 130", "value: 40").replace("110,", "30,")),),
        ("pipes.upper",),
        "Hazen–Williams C",
    ),
    Spoilt(
        "an n of a rough channel",
        "D29",
        ((ROUGHNESS, "manning_n: {value: 0.045, source: S1, deviation: 5 %}\n    law: manning"),),
        ("pipes.upper",),
        "Manning n",
    ),
    Spoilt(
        "an n of concrete",
        "D29",
        ((ROUGHNESS, "manning_n: {value: 0.013, source: S1, deviation: 5 %}\n    law: manning"),),
        (),
    ),
    Spoilt(
        "a roughness of six millimetres",
        "D29",
        ((ROUGHNESS, "roughness: {value: 6 mm, source: S1}"),),
        ("pipes.upper",),
        "five millimetres",
    ),
    Spoilt(
        "a roughness beside Hazen–Williams",
        "D29",
        ((ROUGHNESS, f"{ROUGHNESS}\n    {HAZEN[1]}"),),
        ("pipes.upper",),
        "roughness is stated, and the pipe's friction law uses it in no case",
    ),
    Spoilt(
        "a roughness that a case uses",
        "D29",
        ((ROUGHNESS, f"{ROUGHNESS}\n    {HAZEN[1]}"),),
        (),
        added="cases: {rough: {with: {pipes.upper.law: haaland}}}\n",
    ),
    # D31
    Spoilt("no range of a roughness", "D31", ((ROUGHNESS, "roughness: {value: 0.1 mm, source: S1}"),), ("pipes",)),
    Spoilt(
        "a case of rougher pipes",
        "D31",
        ((ROUGHNESS, "roughness: {value: 0.1 mm, source: S1}"),),
        (),
        added="cases: {old: {times: {'pipes.*.roughness': {value: 3, source: S1}}}}\n",
    ),
    # D32: a Fanning factor of 0.005 is a Darcy factor of 0.02
    Spoilt(
        "a Fanning factor",
        "D32",
        ((ROUGHNESS, "friction_factor: {value: 0.005, source: S1, deviation: 5 %}\n    law: fixed"),),
        ("pipes.upper",),
        "Fanning",
    ),
    Spoilt(
        "a Darcy factor",
        "D32",
        ((ROUGHNESS, "friction_factor: {value: 0.02, source: S1, deviation: 5 %}\n    law: fixed"),),
        (),
    ),
    # D34
    Spoilt(
        "no temperature",
        "D34",
        (("fluid: {temperature: {value: 12 degC, source: S1}}\n", ""),),
        ("fluid.temperature",),
        "by default",
    ),
    Spoilt(
        "a temperature from nowhere",
        "D34",
        (("{value: 12 degC, source: S1}", "12 degC"),),
        ("fluid.temperature",),
        "neither source nor grade",
    ),
    Spoilt(
        "a temperature that is measured",
        "D34",
        (("{value: 12 degC, source: S1}", "{value: 12 degC, grade: measured}"),),
        (),
    ),
    Spoilt(
        "a temperature that an assumption names",
        "D34",
        (("fluid: {temperature: {value: 12 degC, source: S1}}\n", ""),),
        (),
        project=PROJECT + "assumptions: {A1: {text: Cold water, affects: [fluid.temperature]}}\n",
    ),
    # D38: a loss goes with the fourth power of the bore
    Spoilt(
        "a meter of half the bore",
        "D38",
        ((BEND, "fittings: [{K: 2, bore: 100 mm, source: S1}]"),),
        ("pipes.upper",),
        "fitting 1",
    ),
    Spoilt(
        "a step down from the pipe's bore",
        "D38",
        ((BEND, "fittings: [{kind: step, bore: 100 mm, onward_bore: 204.6 mm, source: S1}]"),),
        (),
    ),
    Spoilt("a meter of a size less", "D38", ((BEND, "fittings: [{K: 2, bore: 160 mm, source: S1}]"),), ()),
    # D39: Kv of a 200 mm control valve is some hundreds of m³/h
    Spoilt("a Kv for a K", "D39", ((BEND, "fittings: [{K: 630, source: S1}]"),), ("pipes.upper",), "Kv or Cv"),
    # K = 2 · 1 bar · A² / (ρ Kv²): for 204.6 mm, Kv 2.5 m³/h is K 448,000, Kv 600 is 7.8, Kv 9000 is 0.035 (by hand)
    Spoilt("a K for a Kv", "D39", ((BEND, "fittings: [{Kv: 2.5, source: S1}]"),), ("pipes.upper",), "all but shut"),
    Spoilt(
        "a Kv beyond its bore", "D39", ((BEND, "fittings: [{Kv: 9000, source: S1}]"),), ("pipes.upper",), "wide open"
    ),
    Spoilt("a Kv of its bore", "D39", ((BEND, "fittings: [{Kv: 600, source: S1}]"),), ()),
    Spoilt("a Cv of its bore", "D39", ((BEND, "fittings: [{Cv: 700, source: S1}]"),), ()),
    Spoilt("a K of a throttled valve", "D39", ((BEND, "fittings: [{K: 120, source: S1}]"),), ()),
]


@pytest.mark.parametrize("case", CASES, ids=[f"{one.check} {one.what}" for one in CASES])
def test_a_check_remarks_where_it_should(tmp_path: Path, case: Spoilt) -> None:
    found = [
        one
        for one in findings(tmp_path, spoiled(*case.changes, added=case.added), case.project)
        if one.id == case.check
    ]
    assert tuple(one.subject for one in found) == case.subjects
    assert not case.words or any(case.words in one.text for one in found)
    assert all(one.place.startswith("network.yaml:") for one in found)


def test_sound_works_have_none(tmp_path: Path) -> None:
    account = account_of(tmp_path, SOUND)
    assert account.findings == ()
    assert not any(outcome.found or outcome.unmade for outcome in account.checks)

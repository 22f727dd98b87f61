"""Every problem, at its place and in its words. Places are counted by hand in the texts shown here."""

# ruff: noqa: ISC004 - lines of input and of messages stand whole

from __future__ import annotations

import re
from pathlib import Path

import pytest
from project_folders import SOUND, problems_in, with_line

from calc import units
from calc.problems import show
from calc.project import CODES

IN_JUNCTION = "{elevation: 171.0 m}"
SECOND_LAW = "    roughness: 0.15 mm\n  sedge-link"


def junction(fields: str) -> str:
    """Return the sound folder with other fields of marl-cross, which begin at column 16 of line 5."""
    return with_line(IN_JUNCTION, f"{{{fields}}}")


def added(text: str) -> str:
    """Return the sound folder with lines added from line 19 on."""
    return SOUND + text


CASES: list[tuple[str, str, str]] = [
    # values
    (
        "bare-number",
        with_line("bore: 384.4 mm", "bore: 384.4"),
        "11:11: pipes.upper-main.bore: '384.4' has no unit; expected a bore, such as '384.4 mm'",
    ),
    (
        "wrong-dimension",
        with_line("bore: 384.4 mm", "bore: 200 kg"),
        "11:11: pipes.upper-main.bore: '200 kg' is a mass; expected a bore, such as '200 mm'",
    ),
    (
        "unknown-unit",
        with_line("bore: 384.4 mm", "bore: 384.4 mn"),
        "11:11: pipes.upper-main.bore: '384.4 mn' ",
    ),
    (
        "ambiguous-unit",
        junction("withdrawal: 200 gal/min"),
        "5:28: junctions.marl-cross.withdrawal: '200 gal/min' ",
    ),
    (
        "not-a-quantity",
        with_line("bore: 384.4 mm", "bore: wide"),
        "11:11: pipes.upper-main.bore: 'wide' is not a quantity; expected a bore, such as '384.4 mm'",
    ),
    (
        "not-a-quantity",
        with_line("    bore: 384.4 mm", "    parallel: 2.5\n    bore: 384.4 mm"),
        "11:15: pipes.upper-main.parallel: '2.5' is not a whole number; expected a whole number from 1 to 1000",
    ),
    (
        "not-finite",
        with_line("length: 1850 m", "length: 1e999 m"),
        "10:13: pipes.upper-main.length: '1e999 m' is too large to compute with; expected a length",
    ),
    (
        "not-finite",
        with_line("length: 1850 m", "length: nan"),
        "10:13: pipes.upper-main.length: 'nan' is not a finite number; expected a length",
    ),
    (
        "out-of-range",
        with_line("length: 1850 m", "length: -3 m"),
        "10:13: pipes.upper-main.length: '-3 m' is out of range; expected a length above 0 m",
    ),
    (
        "out-of-range",
        with_line("length: 1850 m", "length: 1e300 m"),
        "10:13: pipes.upper-main.length: '1e300 m' is out of range; expected a length of at most 100000000 m",
    ),
    (
        "out-of-range",
        added("fluid: {temperature: 101 degC}\n"),
        "19:22: fluid.temperature: '101 degC' is out of range; expected a temperature from 0.01 to 100 °C",
    ),
    (
        "out-of-range",
        added("site: {gravity: 32.2 ft/s²}\nfluid: {density: 1 kg/m³, viscosity: 1 mm²/s}\n"),
        "20:18: fluid.density: '1 kg/m³' is out of range; expected a density from 100 to 20000 kg/m³",
    ),
    (
        "out-of-range",
        added("site: {altitude: 9.1 km}\n"),
        "19:18: site.altitude: '9.1 km' is out of range; expected an elevation from -430 to 9000 m",
    ),
    (
        "out-of-range",
        with_line("    bore: 384.4 mm", "    parallel: 0\n    bore: 384.4 mm"),
        "11:15: pipes.upper-main.parallel: '0' is out of range; expected a whole number from 1 to 1000",
    ),
    (
        "bad-text",
        added("project: {title: ''}\n"),
        "19:18: project.title: nothing is written here; expected a text",
    ),
    (
        "bad-word",
        with_line("    bore: 384.4 mm", "    open: no\n    bore: 384.4 mm"),
        "11:11: pipes.upper-main.open: unknown word 'no'; expected one of true or false",
    ),
    (
        "bad-word",
        with_line("length: 1850 m", "length: {value: 1850 m, grade: guessed}"),
        "10:36: pipes.upper-main.length.grade: unknown grade 'guessed'; expected one of surveyed, drawing, "
        "manufacturer, measured, standard or assumed",
    ),
    (
        "bad-date",
        added("revisions: [{revision: P01, date: 2026-02-30, change: First issue}]\n"),
        "19:35: revisions[1].date: '2026-02-30' is not a date; expected year, month and day, such as '2026-11-02'",
    ),
    (
        "wrong-order",
        added("constants: {transition: {laminar_below: 4000, turbulent_above: 4000}}\n"),
        "19:41: constants.transition: '4000' is not below 'turbulent_above', '4000'; expected laminar_below < "
        "turbulent_above",
    ),
    (
        "wrong-order",
        with_line("{level: 214.60 m}", "{level: 214.60 m, low: 217 m, high: 216 m}"),
        "2:33: reservoirs.upper.low: '217 m' is above '216 m'; expected 'low' at most 'high'",
    ),
    (
        "wrong-order",
        with_line("length: 1850 m", "length: {value: 1850 m, range: [1860 m, 1840 m]}"),
        "10:37: pipes.upper-main.length.range: '1860 m' is not below '1840 m'; expected two values: [low, high]",
    ),
    # shapes and keys
    (
        "wrong-shape",
        with_line("bore: 384.4 mm", "bore: [384.4 mm]"),
        "11:11: pipes.upper-main.bore: a list stands here; expected a value, or {value: …, source: …}",
    ),
    (
        "wrong-shape",
        added("people: [me]\n"),
        "19:9: people: a list stands here; expected a mapping of ids to persons",
    ),
    (
        "wrong-shape",
        with_line("{level: 214.60 m}", "214.60 m"),
        "2:10: reservoirs.upper: '214.60 m' stands here; expected a mapping: the fields of a reservoir",
    ),
    (
        "unknown-key",
        with_line("    length: 1850 m", "    lenght: 1850 m\n    length: 1850 m"),
        "10:5: pipes.upper-main.lenght: unknown key 'lenght'; expected one of from, to, length",
    ),
    (
        "unknown-key",
        added("reservoir: {}\n"),
        "19:1: reservoir: unknown key 'reservoir'; expected one of project, purpose",
    ),
    (
        "unknown-key",
        with_line("bore: 384.4 mm", "bore: {value: 384.4 mm, sauce: S1}"),
        "11:29: pipes.upper-main.bore.sauce: unknown key 'sauce'; expected one of value, source",
    ),
    (
        "unknown-key",
        added("solver: {methud: newton}\n"),
        "19:10: solver.methud: unknown key 'methud'; expected one of method, tolerance or start",
    ),
    (
        "missing-key",
        with_line("    bore: 384.4 mm\n", ""),
        "7:3: pipes.upper-main.bore: 'bore' is missing; expected a pipe with 'bore: 384.4 mm'",
    ),
    (
        "missing-key",
        with_line("bore: 384.4 mm", "bore: {source: S1}") + "references: {S1: {title: Schedule}}\n",
        "11:11: pipes.upper-main.bore: there is no value here; expected 'value'",
    ),
    (
        "missing-key",
        added("criteria: {velocity-max: {applies_to: pipes.*}}\n"),
        "19:12: criteria.velocity-max.limit: 'limit' is missing; expected a criterion with 'limit: 2.5 m/s'",
    ),
    (
        "missing-key",
        added("fluid: {kind: brine, density: 1100 kg/m³}\n"),
        "19:1: fluid.viscosity: 'viscosity' is missing; expected 'density' and 'viscosity' together",
    ),
    (
        "missing-key",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    fittings: [{count: 2}]\n  sedge-link"),
        "13:16: pipes.upper-main.fittings[1]: no coefficient is stated; expected 'kind: …' or 'K: …'",
    ),
    (
        "excluded-pair",
        junction("withdrawal: 12 L/s, inflow: 3 L/s"),
        "5:36: junctions.marl-cross.inflow: 'withdrawal' and 'inflow' both stand here; expected one of the two",
    ),
    (
        "excluded-pair",
        added("fluid: {temperature: 10 degC, density: 999 kg/m³, viscosity: 1.3 mm²/s}\n"),
        "19:31: fluid.density: 'temperature' and 'density' both stand here; expected one of the two",
    ),
    (
        "bad-id",
        with_line("  marl-cross: {", "  marl/cross: {"),
        "5:3: junctions.marl/cross: 'marl/cross' is not an id; expected the id of a junction: at most 64 letters, "
        "digits, _ and -",
    ),
    (
        "shared-id",
        with_line("  marl-cross: {elevation", "  vell: {}\n  marl-cross: {elevation"),
        "5:3: junctions.vell: 'vell' is also the id of a reservoir, at network.yaml:3:3; expected an id that no "
        "other node has",
    ),
    (
        "duplicate-id",
        added(
            "revisions:\n"
            "  - {revision: P01, date: 2026-11-02, change: First}\n"
            "  - {revision: P01, date: 2026-11-03, change: Second}\n"
        ),
        "21:16: revisions[2].revision: the revision 'P01' stands twice, first at network.yaml:20:16; expected each "
        "revision once",
    ),
    (
        "excluded-pair",
        with_line("length: 1850 m", "length: {value: 1850 m, range: [1840 m, 1860 m], deviation: 5 %}"),
        "10:65: pipes.upper-main.length.deviation: 'range' and 'deviation' both stand here; expected one of the two",
    ),
    (
        "wrong-shape",
        with_line("length: 1850 m", "length: {value: 1850 m, range: [1840 m]}"),
        "10:36: pipes.upper-main.length.range: a list stands here; expected two values: [low, high]",
    ),
    (
        "out-of-range",
        with_line("length: 1850 m", "length: {value: 1850 m, deviation: -5 %}"),
        "10:40: pipes.upper-main.length.deviation: '-5 %' is out of range; expected a pure number above 0",
    ),
    (
        "wrong-dimension",
        added("fluid: {temperature: {value: 10 degC, deviation: 2 degC}}\n"),
        "19:50: fluid.temperature.deviation: '2 degC' is a point on a scale; expected a difference, such as '2 K'",
    ),
    (
        "not-a-quantity",
        with_line("    bore: 384.4 mm", "    open: {value: true, range: [true, false]}\n    bore: 384.4 mm"),
        "11:32: pipes.upper-main.open.range: 'true' is no quantity that could vary; expected a quantity",
    ),
    (
        "wrong-shape",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    fittings: {K: 1}\n  sedge-link"),
        "13:15: pipes.upper-main.fittings: a mapping stands here; expected a list of fittings: [{kind: bend-90}, …]",
    ),
    (
        "wrong-shape",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    fittings: [bend-90]\n  sedge-link"),
        "13:16: pipes.upper-main.fittings[1]: 'bend-90' stands here; expected a mapping: {kind: …} or {K: …}",
    ),
    (
        "unknown-key",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    ends: {form: square}\n  sedge-link"),
        "13:12: pipes.upper-main.ends.form: unknown key 'form'; expected one of from or to",
    ),
    (
        "missing-key",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    ends: {from: {exit: 1}}\n  sedge-link"),
        "13:18: pipes.upper-main.ends.from.entry: 'entry' is missing; expected a reservoir end with 'entry: 2.5'",
    ),
    (
        "out-of-range",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    ends: {from: {entry: 0.5, exit: -1}}\n  sedge-link"),
        "13:37: pipes.upper-main.ends.from.exit: '-1' is out of range; expected a pure number of at least 0",
    ),
    (
        "excluded-pair",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    fittings: [{kind: bend-90, K: 1}]\n  sedge-link"),
        "13:32: pipes.upper-main.fittings[1].K: 'kind' and 'K' both stand here; expected one of the two",
    ),
    (
        "unknown-key",
        added("people: {designer: {name: A. Vell}}\n"),
        "19:10: people.designer: unknown key 'designer'; expected one of originator, checker or approver",
    ),
    (
        "bad-date",
        added("people: {checker: {name: B. Marl, date: 3 May}}\n"),
        "19:41: people.checker.date: '3 May' is not a date; expected year, month and day, such as '2026-11-02'",
    ),
    (
        "unknown-key",
        added("constants: {gravity: 9.81 m/s²}\n"),
        "19:13: constants.gravity: unknown key 'gravity'; expected one of transition",
    ),
    (
        "wrong-shape",
        added("revisions: [P01]\n"),
        "19:13: revisions[1]: 'P01' stands here; expected a mapping: {revision: …, date: …, change: …}",
    ),
    (
        "wrong-shape",
        added("project: {title: {value: Ostrel}}\n"),
        "19:18: project.title: a mapping stands here; expected a text",
    ),
    (
        "wrong-shape",
        with_line("from: upper", "from: [upper]"),
        "8:11: pipes.upper-main.from: a list stands here; expected the id of a reservoir or junction",
    ),
    (
        "unknown-key",
        added("cases: {low: {wiht: {}}}\n"),
        "19:15: cases.low.wiht: unknown key 'wiht'; expected one of title, after, with or times",
    ),
    (
        "unknown-path",
        added("cases: {low: {with: {fluid.colour: 2}}}\n"),
        "19:22: cases.low.with.fluid.colour: there is no field 'colour' in 'fluid'; expected one of kind, temperature",
    ),
    (
        "wrong-order",
        added("cases: {odd: {with: {reservoirs.upper.low: 217 m, reservoirs.upper.high: 216 m}}}\n"),
        "19:74: cases.odd.with.reservoirs.upper.high: low of 'upper' is above its high",
    ),
    # references, nodes, kinds, laws
    (
        "unknown-reference",
        with_line("length: 1850 m", "length: {value: 1850 m, source: S9}"),
        "10:37: pipes.upper-main.length.source: there is no reference 'S9'; expected the id of one of the references",
    ),
    (
        "unknown-node",
        with_line("to: marl-cross", "to: marl-crosses"),
        "9:9: pipes.upper-main.to: there is no node 'marl-crosses'; expected the id of a reservoir or junction",
    ),
    (
        "unknown-node",
        added("solver: {start: {ostrel: 190 m}}\n"),
        "19:18: solver.start.ostrel: there is no node 'ostrel'; expected the id of a reservoir or junction",
    ),
    (
        "unknown-kind",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    fittings: [{kind: bend-91}]\n  sedge-link"),
        "13:23: pipes.upper-main.fittings[1].kind: unknown kind 'bend-91'; expected one of bend-90, bend-90-long",
    ),
    (
        "unknown-kind",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    ends: {from: round}\n  sedge-link"),
        "13:18: pipes.upper-main.ends.from: unknown shape 'round'; expected one of square, rounded or projecting",
    ),
    (
        "unknown-kind",
        added("fluid: {kind: brine}\n"),
        "19:15: fluid.kind: unknown fluid 'brine'; expected 'water'",
    ),
    (
        "unknown-law",
        added("friction: colebrook\n"),
        "19:11: friction: unknown friction law 'colebrook'; expected one of colebrook-white, swamee-jain, haaland "
        "or fixed",
    ),
    (
        "unknown-law",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    law: moody\n  sedge-link"),
        "13:10: pipes.upper-main.law: unknown friction law 'moody'; expected one of colebrook-white",
    ),
    (
        "wrong-end",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    ends: {to: square}\n  sedge-link"),
        "13:12: pipes.upper-main.ends.to: 'to' of the pipe is a junction; expected an end at a reservoir",
    ),
    # what fields say together
    (
        "missing-law-input",
        with_line("    roughness: 0.15 mm\n", ""),
        "7:3: pipes.upper-main.roughness: 'roughness' is missing, which the law colebrook-white needs; expected "
        "'roughness: 0.15 mm'",
    ),
    (
        "missing-law-input",
        with_line(SECOND_LAW, "    roughness: 0.15 mm\n    law: fixed\n  sedge-link"),
        "7:3: pipes.upper-main.friction_factor: 'friction_factor' is missing, which the law fixed needs; expected "
        "'friction_factor: 0.02'",
    ),
    (
        "rough-bore",
        with_line("roughness: 0.15 mm", "roughness: 0.5 m"),
        "11:11: pipes.upper-main.bore: '384.4 mm' is no larger than the roughness, '0.5 m'; expected a bore far "
        "larger than the roughness",
    ),
    (
        "self-loop",
        with_line("from: upper", "from: marl-cross"),
        "9:9: pipes.upper-main.to: the pipe begins and ends at 'marl-cross'; expected two different nodes",
    ),
    # the works as a whole
    (
        "no-reservoirs",
        with_line("  upper: {level: 214.60 m}\n  vell: {level: 183.0 m}\n", ""),
        "1:1: reservoirs: there are no reservoirs; expected at least one under 'reservoirs'",
    ),
    (
        "no-pipes",
        "reservoirs: {upper: {level: 214.60 m}}\n",
        "1:1: pipes: there are no pipes; expected at least one under 'pipes'",
    ),
    (
        "no-reservoir",
        with_line("  marl-cross: {", "  brae: {}\n  holm: {}\n  marl-cross: {")
        + "  brae-link: {from: brae, to: holm, length: 90 m, bore: 100 mm, roughness: 0.1 mm}\n",
        "5:3: junctions.brae: no reservoir is joined to brae and holm; expected a pipe that leads to a reservoir",
    ),
    (
        "not-connected",
        with_line("  marl-cross: {", "  brae: {}\n  marl-cross: {"),
        "5:3: junctions.brae: no pipe joins this node; expected at least one pipe",
    ),
    (
        "not-connected",
        with_line("  vell: {", "  tarn: {level: 300 m}\n  vell: {").replace("junctions:\n", "junctions:\n  brae: {}\n")
        + "  brae-link: {from: tarn, to: brae, length: 90 m, bore: 100 mm, roughness: 0.1 mm}\n",
        "3:3: reservoirs.tarn: tarn and brae are a part by themselves; expected works that hang together",
    ),
    # paths and cases
    (
        "unknown-path",
        added("cases: {low: {with: {reservoirs.uper.level: 209 m}}}\n"),
        "19:22: cases.low.with.reservoirs.uper.level: none of the reservoirs has the id 'uper'; expected an id, or "
        "* for any",
    ),
    (
        "unknown-path",
        added("cases: {low: {with: {reservoirs.upper.levle: 209 m}}}\n"),
        "19:22: cases.low.with.reservoirs.upper.levle: there is no field 'levle' in reservoirs; expected one of "
        "level, low or high",
    ),
    (
        "unknown-path",
        added("cases: {low: {times: {'tanks.*.level': 2}}}\n"),
        "19:23: cases.low.times.tanks.*.level: 'tanks.*.level' leads nowhere; expected group.id.field with group "
        "one of reservoirs, junctions or pipes",
    ),
    (
        "unknown-path",
        added("assumptions: {A1: {text: Old mains, affects: [pipes.east.roughness]}}\n"),
        "19:47: assumptions.A1.affects: none of the pipes has the id 'east'; expected an id, or * for any",
    ),
    (
        "unknown-path",
        added("criteria: {velocity-max: {limit: 2.5 m/s, applies_to: pipes.upper-main.bore}}\n"),
        "19:55: criteria.velocity-max.applies_to: 'pipes.upper-main.bore' is a field; expected components",
    ),
    (
        "fixed-field",
        added("cases: {low: {with: {pipes.upper-main.to: vell}}}\n"),
        "19:22: cases.low.with.pipes.upper-main.to: 'to' is the same in every case; expected a quantity, a word, or "
        "true or false that may change",
    ),
    (
        "fixed-field",
        added("cases: {low: {times: {pipes.upper-main.open: 2}}}\n"),
        "19:23: cases.low.times.pipes.upper-main.open: 'open' is not a quantity, and cannot be multiplied; expected "
        "a quantity",
    ),
    (
        "fixed-field",
        added("cases: {warm: {times: {fluid.temperature: 2}}}\n"),
        "19:24: cases.warm.times.fluid.temperature: 'temperature' is a temperature, and cannot be multiplied",
    ),
    (
        "unknown-case",
        added("cases: {low: {after: drawdwn}, drawdown: {title: Lowest}}\n"),
        "19:22: cases.low.after: there is no case 'drawdwn'; expected one of base, low or drawdown",
    ),
    (
        "unknown-case",
        added("criteria: {velocity-max: {limit: 2.5 m/s, cases: [peak]}}\n"),
        "19:51: criteria.velocity-max.cases: there is no case 'peak'; expected one of base",
    ),
    (
        "case-cycle",
        added("cases: {low: {after: peak}, peak: {after: low}}\n"),
        "19:22: cases.low.after: low after peak after low; expected cases that begin at the inputs",
    ),
    (
        "base-case",
        added("cases: {base: {with: {reservoirs.upper.level: 209 m}}}\n"),
        "19:16: cases.base.with: the case 'base' is the inputs as they stand, and has no 'with'; expected a title "
        "at most",
    ),
    (
        "unknown-criterion",
        added("criteria: {velocity-mx: {limit: 2.5 m/s}}\n"),
        "19:12: criteria.velocity-mx: unknown criterion 'velocity-mx'; expected one of velocity-max, velocity-min",
    ),
    (
        "wrong-group",
        added("criteria: {velocity-max: {limit: 2.5 m/s, applies_to: 'junctions.*'}}\n"),
        "19:55: criteria.velocity-max.applies_to: 'junctions.*' are junctions; expected pipes, such as 'pipes.*'",
    ),
    (
        "wrong-dimension",
        added("criteria: {pressure-min: {limit: 10 L/s}}\n"),
        "19:34: criteria.pressure-min.limit: '10 L/s' is a flow; expected a head, such as '10 m' or a pressure",
    ),
    # what cases lead to
    (
        "out-of-range",
        added("cases: {odd: {times: {'pipes.*.length': -1}}}\n"),
        "19:41: cases.odd.times.pipes.*.length: times -1 makes 'length' of 'upper-main' -1850 m; expected a length "
        "above 0 m",
    ),
    (
        "out-of-range",
        added("cases: {odd: {with: {site.gravity: 9 m/s²}}}\n"),
        "19:36: cases.odd.with.site.gravity: '9 m/s²' is out of range; expected an acceleration from 9.7 to 10 m/s²",
    ),
    (
        "rough-bore",
        added("cases: {odd: {times: {pipes.sedge-link.roughness: 2000}}}\n"),
        "19:51: cases.odd.times.pipes.sedge-link.roughness: the bore of 'sedge-link' is no larger than its roughness",
    ),
    (
        "missing-law-input",
        added("cases: {odd: {with: {pipes.upper-main.law: fixed}}}\n"),
        "19:44: cases.odd.with.pipes.upper-main.law: the law fixed needs 'friction_factor', which 'upper-main' does "
        "not state; expected 'friction_factor'",
    ),
    (
        "missing-law-input",
        added("cases: {odd: {with: {friction: fixed}}}\n"),
        "19:32: cases.odd.with.friction: the law fixed needs 'friction_factor', which 'upper-main' does not state",
    ),
    (
        "excluded-pair",
        junction("inflow: 3 L/s") + "cases: {odd: {with: {junctions.marl-cross.withdrawal: 3 L/s}}}\n",
        "19:22: cases.odd.with.junctions.marl-cross.withdrawal: 'inflow' of 'marl-cross' stands already, and "
        "excludes 'withdrawal'; expected one of the two",
    ),
    (
        "excluded-pair",
        added("cases: {odd: {with: {fluid.density: 998 kg/m³}}}\n"),
        "19:22: cases.odd.with.fluid.density: 'temperature' stands already, and excludes 'density'",
    ),
    (
        "wrong-order",
        added("cases: {odd: {with: {constants.transition.laminar_below: 5000}}}\n"),
        "19:58: cases.odd.with.constants.transition.laminar_below: laminar_below of 'transition' is not below "
        "turbulent_above",
    ),
    # words for later
    ("not-yet", added("pumps: {}\n"), "19:1: pumps: 'pumps' is not part of this version yet"),
    ("not-yet", added("studies: {}\n"), "19:1: studies: 'studies' is not part of this version yet"),
    (
        "not-yet",
        added("constants: {manning: {coefficient: 10.2936}}\n"),
        "19:13: constants.manning: 'manning' is not part of this version yet",
    ),
    (
        "not-yet",
        SOUND.replace("    length: 1200 m\n    bore: 250 mm\n    roughness: 0.15 mm\n", "    segments: []\n"),
        "16:5: pipes.sedge-link.segments: 'segments' is not part of this version yet",
    ),
    (
        "not-yet",
        SOUND.replace("to: vell", "to: spout") + "outlets: {spout: {elevation: 160 m}}\n",
        "19:1: outlets: 'outlets' is not part of this version yet",
    ),
    ("not-yet", added("friction: manning\n"), "19:11: friction: 'manning' is not part of this version yet"),
    (
        "not-yet",
        with_line("{level: 183.0 m}", "{level: 183.0 m, storage: {area: 250 m²}}"),
        "3:26: reservoirs.vell.storage: 'storage' is not part of this version yet",
    ),
    (
        "not-yet",
        with_line("bore: 384.4 mm", "bore: {size: DN400, class: C30}"),
        "11:12: pipes.upper-main.bore.size: 'size' is not part of this version yet",
    ),
    (
        "not-yet",
        added("solver: {method: loop-correction}\n"),
        "19:18: solver.method: 'loop-correction' is not part of this version yet",
    ),
    (
        "not-yet",
        added("solver: {trials: 9}\n"),
        "19:10: solver.trials: 'trials' is not part of this version yet",
    ),
    (
        "not-yet",
        added("display: {units: US}\n"),
        "19:18: display.units: 'US' is not part of this version yet",
    ),
    (
        "not-yet",
        added("criteria: {clearance-min: {limit: 1 m}}\n"),
        "19:12: criteria.clearance-min: 'clearance-min' is not part of this version yet",
    ),
    (
        "not-yet",
        added("cases: {odd: {with: {pumps.lift.speed: 90 %}}}\n"),
        "19:22: cases.odd.with.pumps.lift.speed: 'pumps.lift.speed' is not part of this version yet",
    ),
]


@pytest.mark.parametrize(("code", "text", "said"), CASES, ids=[f"{n}-{case[0]}" for n, case in enumerate(CASES)])
def test_a_fault_gives_one_problem_at_its_place_in_its_words(tmp_path: Path, code: str, text: str, said: str) -> None:
    """One, so that a fault drags no others along."""
    (found,) = problems_in(tmp_path, text)
    assert show(found, {}).startswith(f"network.yaml:{said}")
    assert found.code == code


def test_every_code_has_a_test() -> None:
    assert set(CODES) == {case[0] for case in CASES}


def test_every_code_in_the_sources_is_declared() -> None:
    sources = Path(__file__).parents[2].joinpath("calc", "project").glob("*.py")
    text = "\n".join(source.read_text("utf-8") for source in sources)
    written = set(re.findall(r'\.note\(\s*[^"]*?"([a-z]+-[a-z-]+)"', text))
    written |= set(re.findall(r'(?:code=|"bad-word" if|code: str = )\s*"([a-z]+-[a-z-]+)"', text))
    assert written <= set(CODES)
    assert set(units.trouble.CODES) <= set(CODES)


def test_the_sound_folder_has_no_problem(tmp_path: Path) -> None:
    assert problems_in(tmp_path, SOUND) == ()


def test_all_problems_come_at_once_in_order(tmp_path: Path) -> None:
    text = with_line("bore: 384.4 mm", "bore: 384.4").replace("1200 m", "1200 kg").replace("{level: 214.60 m}", "{}")
    found = problems_in(tmp_path, text + "friction: moody\ncases: {low: {with: {reservoirs.uper.level: 2 m}}}\n")
    assert [(problem.mark.line, problem.code) for problem in found] == [
        (2, "missing-key"),
        (11, "bare-number"),
        (16, "wrong-dimension"),
        (19, "unknown-law"),
        (20, "unknown-path"),
    ]


def test_the_line_is_shown_with_carets_and_hint(tmp_path: Path) -> None:
    (found,) = problems_in(tmp_path, with_line("to: marl-cross", "to: marl-cros"))
    assert show(found, {"network.yaml": with_line("to: marl-cross", "to: marl-cros")}) == (
        "network.yaml:9:9: pipes.upper-main.to: there is no node 'marl-cros'; expected the id of a reservoir or "
        "junction\n"
        "  9 |     to: marl-cros\n"
        "    |         ^^^^^^^^^\n"
        "  hint: did you mean 'marl-cross'?"
    )

"""Small works that bring every law, regime and oddity of a calculation; their data are invented."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import NamedTuple

from accounts import ROOT, accounted

from calc import pipeline
from calc.account import Account, keep_account, open_books
from calc.report.document import Document
from calc.solve import solve
from calc.solve.section import settings_of

DEMO = ROOT / "projects" / "ostrel-transfer-main"

OIL = """\
fluid: {density: 870 kg/m³, viscosity: 0.35 Pa·s}
reservoirs: {tank-farm: {level: 40 m}, quay: {level: 20 m}}
junctions: {bend: {elevation: 12 m, withdrawal: 1.5 L/s}}
pipes:
  shore-line: {from: tank-farm, to: bend, length: 800 m, bore: 203 mm, roughness: 0.05 mm, fittings: [{K: 1.2}]}
  quay-line: {from: bend, to: quay, length: 400 m, bore: 203 mm, roughness: 0.05 mm}
"""

TRANSITION = """\
fluid: {kind: water, temperature: 12 degC}
reservoirs: {tarn: {level: 102.4 m}, trough: {level: 100 m}, sink: {level: 99.1 m}}
junctions: {split: {elevation: 90 m}}
pipes:
  thin: {from: tarn, to: split, length: 420 m, bore: 26 mm, roughness: 0.01 mm, law: LAW}
  slow: {from: split, to: trough, length: 500 m, bore: 24 mm, roughness: 0.01 mm, law: LAW, ends: {to: square}}
  crawl: {from: sink, to: split, length: 900 m, bore: 20 mm, roughness: 0.02 mm, law: LAW}
"""

LAWS = """\
friction: swamee-jain
constants: {transition: {laminar_below: 2100, turbulent_above: 3800}}
reservoirs: {hill: {level: 250 m}, mill: {level: 231 m}, weir: {level: 222.25 m}}
junctions: {meet: {elevation: 200 m, withdrawal: 18 L/s}}
pipes:
  fixed-main: {from: hill, to: meet, length: 2100 m, bore: 300 mm, law: fixed, friction_factor: 0.0185, parallel: 3}
  haaland-main: {from: meet, to: mill, length: 950 m, bore: 250 mm, roughness: 0.3 mm, law: haaland}
  default-main: {from: weir, to: meet, length: 1300 m, bore: 400 mm, roughness: 1.5 mm,
                 fittings: [{K: 0.8, K_reverse: 1.7, bore: 350 mm, count: 2}, {kind: bend-90}], ends: {from: rounded}}
"""

EMPIRICAL = """\
friction: hazen-williams
constants: {hazen_williams: {coefficient: 10.674}}
reservoirs: {scar: {level: 180 m}, holm: {level: 171.5 m}, garth: {level: 149 m}}
junctions: {gate: {elevation: 131 m, withdrawal: 25 L/s}, stub: {elevation: 128 m, withdrawal: 2 L/s}}
pipes:
  scar-main: {from: scar, to: gate, length: 2400 m, bore: 375 mm, hazen_williams_c: 128, ends: {from: square}}
  holm-main: {from: gate, to: holm, length: 1150 m, bore: 300 mm, law: manning, manning_n: 0.0125, parallel: 2}
  garth-main: {from: gate, to: garth, length: 1900 m, bore: 350 mm, law: colebrook-white, roughness: 0.3 mm}
  stub-main: {from: gate, to: stub, length: 90 m, bore: 150 mm, hazen_williams_c: 95}
cases:
  aged: {title: Old bores, times: {"pipes.*.hazen_williams_c": 0.75, "pipes.*.manning_n": 1.25}}
  rough: {title: By roughness, with: {"pipes.*.law": haaland, "pipes.*.roughness": 1 mm}}
criteria: {velocity-max: {limit: 2 m/s}, gradient-max: {limit: 9 m/km}}
"""

LOOP = """\
reservoirs: {north: {level: 80 m}, south: {level: 62 m}}
junctions:
  ash: {elevation: 40 m, withdrawal: 30 L/s}
  beech: {elevation: 35 m, inflow: 6 L/s}
pipes:
  north-ash: {from: north, to: ash, length: 900 m, bore: 250 mm, roughness: 0.1 mm, ends: {from: square}}
  ash-beech: {from: beech, to: ash, length: 400 m, bore: 200 mm, roughness: 0.1 mm}
  ash-beech-old: {from: ash, to: beech, length: 460 m, bore: 150 mm, roughness: 1 mm, fittings: [{K: 3, K_reverse: 1}]}
  beech-south: {from: beech, to: south, length: 700 m, bore: 250 mm, roughness: 0.1 mm, ends: {to: projecting}}
cases:
  shut: {title: Old link shut, with: {pipes.ash-beech-old.open: false}}
  warm: {title: Warm water at double draw, with: {fluid.temperature: 25 degC}, times: {"junctions.*.withdrawal": 2}}
criteria:
  pressure-min: {limit: 2 bar}
  velocity-max: {limit: 1.4 m/s}
"""

PLAIN = """\
reservoirs: {fell: {level: 312.5 m}, dale: {level: 290 m}}
pipes:
  drop: {from: dale, to: fell, length: 1520 m, bore: 200 mm, roughness: 0.25 mm, ends: {from: square, to: square}}
"""

DRY = """\
reservoirs: {brook: {level: 52 m}, pond: {level: 50 m}}
junctions: {draw: {elevation: 49 m, withdrawal: 95 L/s}}
pipes:
  brook-arm: {from: brook, to: draw, length: 600 m, bore: 200 mm, roughness: 0.3 mm}
  pond-arm: {from: pond, to: draw, length: 500 m, bore: 150 mm, roughness: 0.3 mm}
criteria: {pressure-min: {limit: 10 m}}
"""

GREAT = """\
display: {flow: m3/s, paper: Letter}
reservoirs: {high-lake: {level: 940.25 m}, low-lake: {level: 610.5 m}, forebay: {level: 655 m}}
junctions: {fork: {elevation: 402 m, withdrawal: 1.25 m³/s}}
pipes:
  lake-main: {from: high-lake, to: fork, length: 21.4 km, bore: 1850 mm, roughness: 0.6 mm, ends: {from: rounded}}
  valley-main: {from: fork, to: low-lake, length: 8.15 km, bore: 1400 mm, roughness: 0.3 mm, parallel: 2}
  forebay-main: {from: forebay, to: fork, length: 950 m, bore: 900 mm, roughness: 0.3 mm}
solver: {narrowing: bisection, start: {fork: 700 m}}
criteria: {pressure-max: {limit: 25 bar}, gradient-max: {limit: 12 m/km}}
"""


RING = """\
fluid: {temperature: 10 degC}
solver: {method: loop-correction}
reservoirs: {upper-pool: {level: 214.6 m}, lower-pool: {level: 198.2 m}}
junctions:
  cross: {elevation: 171 m, withdrawal: 12 L/s}
  gate: {elevation: 165 m, withdrawal: 18 L/s}
  fold: {elevation: 160 m, withdrawal: 25 L/s}
  yard: {elevation: 162 m, withdrawal: 8 L/s}
  hut: {elevation: 161 m}
pipes:
  upper-main: {from: upper-pool, to: cross, length: 1850 m, bore: 254.6 mm, roughness: 0.15 mm, ends: {from: square}}
  north-ring: {from: cross, to: gate, length: 900 m, bore: 200 mm, law: fixed, friction_factor: 0.021}
  east-ring: {from: gate, to: fold, length: 700 m, bore: 150 mm, roughness: 0.15 mm, fittings: [{K: 2.5, K_reverse: 4}]}
  south-ring: {from: yard, to: fold, length: 800 m, bore: 150 mm, law: hazen-williams, hazen_williams_c: 130}
  west-ring: {from: cross, to: yard, length: 1000 m, bore: 200 mm, law: manning, manning_n: 0.011}
  middle: {from: gate, to: yard, length: 600 m, bore: 100 mm, roughness: 0.15 mm, law: haaland}
  lower-main: {from: fold, to: lower-pool, length: 1500 m, bore: 200 mm, roughness: 0.15 mm, ends: {to: square}}
  hut-lane: {from: yard, to: hut, length: 60 m, bore: 25 mm, roughness: 0.01 mm}
cases:
  low: {title: Low upper pool, with: {reservoirs.upper-pool.level: 205 m, pipes.middle.open: false}}
"""

FORMS = """\
reservoirs: {combe: {level: 182 m}, lode: {level: 168.5 m}}
junctions: {lock: {elevation: 120 m, inflow: 4 L/s}}
pipes:
  combe-main:
    from: combe
    to: lock
    length: 1900 m
    bore: {size: DN300, standard: EN 545, class: C40}
    roughness: {material: cement-mortar-lined}
    ends: {from: square}
    fittings:
      - {kind: bend, angle: 60 deg, radius_ratio: 1.5, count: 2}
      - {kind: step, onward_bore: 254.6 mm}
      - {kind: step, onward_bore: 400 mm}
      - {kind: taper, onward_bore: 400 mm, angle: 20 deg}
      - {kind: taper, onward_bore: 250 mm, angle: 60 deg, bore: 300 mm}
      - {Kv: 2400}
  lode-main:
    from: lode
    to: lock
    length: 6200 ft
    size: 12 in
    standard: AWWA C151
    class: PC350
    lining: 0.2 in
    law: hazen-williams
    hazen_williams_c: {material: ductile-iron-lined}
    fittings: [{Cv: 5200}, {Kv: 650 L/s, bore: 250 mm}, {kind: bend, angle: 0.5 rad, radius_ratio: 3}]
  lode-link: {from: lock, to: lode, length: 1700 m, outside_diameter: 323.8 mm, wall: 9.53 mm, roughness: 0.05 mm}
cases:
  scaled: {title: Smaller bore, times: {pipes.combe-main.bore: 0.9}}
  wide: {title: Wider bore, after: scaled, with: {pipes.combe-main.bore: 420 mm, pipes.lode-main.bore: 15 in}}
  rough: {title: Old pipe, with: {"pipes.*.roughness": {material: old-cast-iron}}}
"""

US = "display: {units: US}\n"


class Work(NamedTuple):
    """A folder of text, accounted for and composed."""

    name: str
    account: Account
    document: Document


TEXTS = {
    "oil": OIL,
    "transition": TRANSITION.replace("LAW", "colebrook-white"),
    "transition-haaland": TRANSITION.replace("LAW", "haaland"),
    "transition-swamee-jain": TRANSITION.replace("LAW", "swamee-jain"),
    "laws": LAWS,
    "laws-colebrook": LAWS.replace("friction: swamee-jain", "friction: colebrook-white"),
    "empirical": EMPIRICAL,
    "loop": LOOP,
    "plain": PLAIN,
    "dry": DRY,
    "great": GREAT,
    "ring": RING,
    "forms": FORMS,
    "transition-us": US + TRANSITION.replace("LAW", "colebrook-white"),
    "laws-us": US + LAWS,
    "empirical-us": US + EMPIRICAL,
    "ring-us": US + RING,
    "forms-us": US + FORMS,
    "loop-us": US.replace("}", ", flow: cfs, length: mi}") + LOOP,
}
NAMES = ("demo", *TEXTS)


@cache
def work(name: str) -> Work:
    """Return works by name; each is accounted for once."""
    if name == "demo":
        account = pipeline.account(DEMO)
    else:
        with TemporaryDirectory() as folder:
            account = accounted(Path(folder) / name, TEXTS[name])
    return Work(name, account, pipeline.document(account, "checking"))


def given_up(folder: Path, case: str, after: int) -> Work:
    """Return works of which one case is given up after a few trials or iterations."""
    project = pipeline.read(folder)
    ledger = open_books(project)
    solved = pipeline.solve_cases(project, ledger)
    network = solved[case][0]
    solved[case] = (network, solve(network, replace(settings_of(project), limit=after)))
    account = keep_account(project, ledger, solved)
    return Work(case, account, pipeline.document(account, "checking"))

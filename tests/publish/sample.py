"""A document with every kind of block, over a small ledger built by hand. Its values are no answer to any problem."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from calc import kinds
from calc.equation import Equation, Implicit
from calc.kinds import Kind
from calc.ledger import (
    Accountant,
    Column,
    Combined,
    Converted,
    Derived,
    Given,
    Judged,
    Ledger,
    Library,
    Program,
    Solved,
    View,
)
from calc.marks import Mark
from calc.physics import energy, fitting, friction, velocity, water
from calc.report import figures
from calc.report.document import (
    Block,
    Bullets,
    Cite,
    Contents,
    Document,
    Figure,
    Formula,
    Heading,
    Index,
    Letter,
    Listing,
    Masthead,
    Notes,
    Number,
    Own,
    Paragraph,
    Parts,
    Quoted,
    Row,
    Section,
    SignOff,
    Soft,
    Strong,
    Table,
    TableColumn,
)
from calc.report.numbers import Format, written

PIPES = ("upper-ostrel-gravity-transfer-main", "sedge-link", "vell-rising-main")
NETWORK = """\
reservoirs:
  upper: {level: 214.60 m}
  vell: {level: 183.0 m}   # from the survey; REMARK
pipes:
  upper-ostrel-gravity-transfer-main: {length: 1850 m, bore: 384.4 mm, roughness: 0.15 mm}
  sedge-link: {length: 920.5 m, bore: 297.6 mm, roughness: 0.15 mm}
\tvell-rising-main: {length: 2410 m, bore: 397.2 mm, roughness: 0.3 mm}
""".replace("REMARK", "a remark that runs past the end of a printed line, as in real files, " * 2)
CASES = """\
cases:
  drawdown: {title: "Низкий уровень ≤ 209", with: {reservoirs.upper.level: 209.20 m}}
"""
FILES = {"network.yaml": NETWORK.encode(), "cases.yaml": CASES.encode()}


def ledger() -> Ledger:
    """Return a ledger with every kind of origin."""
    made = Ledger(parents={"drawdown": "base"})
    _inputs(made)
    _chain(made, "base", (0.0831, -0.0204, -0.0507))
    _chain(made, "drawdown", (0.0612, 0.0118, -0.0610))
    limit = Given((Mark("network.yaml", 2, 4),), ("2.5 m/s",), ("S5",))
    made.enter("criteria.limit", kinds.VELOCITY, ["velocity-max"], [2.5], limit)
    margin = made.enter("criteria.margin", kinds.VELOCITY, ["velocity-max"], [1.78], limit, case="base")
    made.enter("criteria.met", kinds.NUMBER, ["velocity-max"], [1.0], Judged(View.whole(margin)), case="base")
    made.enter("program.tolerance", kinds.FLOW, ["newton"], [1e-9], Program("stop: largest imbalance"))
    made.enter(
        "junctions.imbalance",
        kinds.FLOW,
        ["1", "2", "3"],
        [0.0413, -0.00082, 3.1e-11],
        Program("trial"),
        case="base",
        of="marl-cross",
    )
    return made


def _inputs(made: Ledger) -> None:
    def marks(count: int) -> tuple[Mark, ...]:
        return tuple(Mark("network.yaml", 5 + k, 41) for k in range(count))

    lengths = Given(marks(3), ("1850 m", "920.5 m", "2410 m"), ("S2", "", "S2"))
    made.enter("pipes.length", kinds.LENGTH, PIPES, [1850.0, 920.5, 2410.0], lengths, case="base")
    written_ = ("384.4 mm", "297.6 mm", "397.2 mm")
    bores = Converted(marks(3), written_, ("S2",) * 3, (384.4, 297.6, 397.2), ("mm",) * 3, (0.001,) * 3, (0.0,) * 3)
    made.enter("pipes.bore", kinds.BORE, PIPES, [0.3844, 0.2976, 0.3972], bores, case="base")
    rough = Converted(
        marks(3),
        ("0.15 mm", "0.15 mm", "0.3 mm"),
        ("A1",) * 3,
        (0.15, 0.15, 0.3),
        ("mm",) * 3,
        (0.001,) * 3,
        (0.0,) * 3,
    )
    made.enter("pipes.roughness", kinds.ROUGHNESS, PIPES, [0.00015, 0.00015, 0.0003], rough, case="base")
    made.enter(
        "pipes.parallel", kinds.NUMBER, PIPES, [1.0] * 3, Library(marks(3), ("1",) * 3, ("default",) * 3), case="base"
    )
    site = Library((Mark("defaults.yaml", 3, 12),), ("9.80665 m/s²",), ("standard gravity",))
    made.enter("site.gravity", kinds.ACCELERATION, [""], [9.80665], site)
    made.enter("fluid.temperature", kinds.TEMPERATURE, [""], [283.15], Given(marks(1), ("10 degC",), ("",)))
    made.enter("site.laminar_below", kinds.NUMBER, [""], [2000.0], site)
    made.enter("site.turbulent_above", kinds.NUMBER, [""], [4000.0], site)
    made.enter(
        "pipes.coefficient",
        kinds.NUMBER,
        PIPES,
        [2.5, 0.8, 1.5],
        Given(marks(3), ("2.5", "0.8", "1.5"), ("",) * 3),
        case="base",
    )
    made.enter("pipes.count", kinds.NUMBER, PIPES, [1.0, 1.0, 1.0], Given(marks(3), ("1",) * 3, ("",) * 3), case="base")


def _chain(made: Ledger, case: str, flows: Sequence[float]) -> None:
    books = Accountant(made, case)
    solved = Solved("F = 0 at the junction", "bracketing", 7, ("junctions.imbalance",))
    flow = View.whole(made.enter("pipes.flow", kinds.FLOW, PIPES, flows, solved, case=case))
    get = {
        name: made.view(f"pipes.{name}", case, PIPES)
        for name in ("length", "bore", "roughness", "parallel", "coefficient", "count")
    }
    gravity, temperature = made.shared("site.gravity"), made.shared("fluid.temperature")
    density = books.apply("fluid.density", water.density, temperature=temperature)
    dynamic = books.apply("fluid.dynamic_viscosity", water.dynamic_viscosity, temperature=temperature)
    viscosity = books.apply("fluid.viscosity", water.kinematic_viscosity, dynamic_viscosity=dynamic, density=density)
    books.apply("fluid.vapour_pressure", water.vapour_pressure, temperature=temperature)
    each = books.apply("pipes.flow_each", velocity.flow_each, flow=flow, parallel=get["parallel"])
    speed = books.apply("pipes.velocity", velocity.mean_velocity, flow_each=each, bore=get["bore"])
    reynolds = books.apply(
        "pipes.reynolds", velocity.reynolds_number, velocity=speed, bore=get["bore"], viscosity=viscosity
    )
    rough = {"roughness": get["roughness"], "bore": get["bore"], "reynolds": reynolds}
    factor = books.apply("pipes.friction_factor", friction.colebrook_white, by=None, **rough)
    books.apply("pipes.factor_haaland", friction.haaland, by=None, **rough)
    books.apply("pipes.factor_swamee_jain", friction.swamee_jain, by=None, **rough)
    loss = books.apply(
        "pipes.friction_loss",
        friction.darcy_weisbach,
        factor=factor,
        length=get["length"],
        bore=get["bore"],
        velocity=speed,
        gravity=gravity,
    )
    fittings = books.apply(
        "pipes.fitting_loss",
        fitting.fitting_loss,
        count=get["count"],
        coefficient=get["coefficient"],
        velocity=speed,
        gravity=gravity,
    )
    head = books.apply("pipes.head_loss", energy.head_loss, friction_loss=loss, fitting_loss=fittings)
    books.total("balance.closing", kinds.HEAD, head, np.zeros(3, dtype=np.int64), ("path",))


FORMS: dict[Kind, Format] = {
    kinds.FLOW: Format("m³/s", decimals=6),
    kinds.VELOCITY: Format("m/s", decimals=4),
    kinds.LENGTH: Format("m", decimals=1),
    kinds.BORE: Format("m", decimals=4),
    kinds.ROUGHNESS: Format("m", significant=2),
    kinds.HEAD: Format("m", decimals=4),
    kinds.ACCELERATION: Format("m/s²", decimals=5),
    kinds.NUMBER: Format("", significant=6),
    kinds.KINEMATIC_VISCOSITY: Format("m²/s", significant=5),
    kinds.DYNAMIC_VISCOSITY: Format("Pa·s", significant=5),
    kinds.DENSITY: Format("kg/m³", decimals=3),
    kinds.TEMPERATURE: Format("K", decimals=2),
    kinds.PRESSURE: Format("Pa", decimals=1),
}


@dataclass(frozen=True)
class Scribe:
    """Writes numbers of a ledger."""

    ledger: Ledger

    def number(self, ref: str, form: Format | None = None, *, with_unit: bool = False) -> Number:
        spot = self.ledger.spot(ref)
        form = form or FORMS[spot.column.kind]
        return Number(ref, form, written(spot.value, spot.column.kind, form), with_unit)

    def worked(self, law: Equation | Implicit, pipe: str, case: str, result: str, names: dict[str, str]) -> Formula:
        equation = law.residual if isinstance(law, Implicit) else law
        known = {
            name: self.number(names.get(name, f"pipes.{pipe}.{name}@{case}"))
            for name in equation.takes
            if name != getattr(law, "unknown", None)
        }
        return Formula(law, known, self.number(result))


def document(paper: str = "A4", made: Ledger | None = None) -> Document:
    """Return the document."""
    scribe = Scribe(made or ledger())
    sections = _numbered(
        [
            ("decision", "Purpose", (), _decision(scribe)),
            ("contents", "Contents and revisions", (), [Contents()]),
            (
                "basis",
                "Design basis, datum and conventions",
                ("What holds for the whole of this calculation.",),
                _basis(),
            ),
            ("inputs", "Inputs", ("Each given number, with its source.",), _inputs_said(scribe)),
            ("method", "Method", (), _method()),
            (
                "derivation",
                "Flow, velocity and loss worked once",
                (Quoted("Drawdown, ≤ 209.20 m"), " is worked here."),
                _derivation(scribe),
            ),
            ("wide", "Schedule of branches", (), [_schedule(scribe)]),
            ("checks", "Checks", (), _checks(scribe)),
            ("figures", "Figures", (), _figures()),
            ("listing", "Input files", (), _listings()),
            ("index", "Index of numbers", (), [_index(scribe)]),
        ]
    )
    addresses, used = _found(sections)
    return Document(
        "Ostrel transfer main",
        "OTM-HY-014",
        "P01",
        "2026-11-02",
        "Issued for checking: preliminary, not for construction",
        paper,
        "sha256:6b5c6bf793c5aa10ff",
        sections,
        addresses,
        used,
    )


def _numbered(plan: list[tuple[str, str, Parts, list[Block]]]) -> tuple[Section, ...]:
    """Give lines their addresses."""
    made = []
    for count, (key, title, lead, blocks) in enumerate(plan, 1):
        line = 0
        said: list[Block] = []
        for block in blocks:
            if isinstance(block, Table):
                rows = []
                for row in block.rows:
                    line += row.tone != "group"
                    rows.append(Row("" if row.tone == "group" else f"{count}.{line}", row.cells, row.refs, row.tone))
                said.append(Table(block.key, block.columns, tuple(rows), block.lettered, block.tick))
            elif isinstance(block, Bullets):
                items = []
                for _, parts in block.items:
                    line += 1
                    items.append((f"{count}.{line}", parts))
                said.append(Bullets(tuple(items)))
            else:
                said.append(block)
        made.append(Section(key, str(count), title, lead, tuple(said)))
    return tuple(made)


def _found(sections: tuple[Section, ...]) -> tuple[dict[str, str], dict[str, tuple[str, ...]]]:
    addresses: dict[str, str] = {}
    for section in sections:
        for block in section.blocks:
            for row in block.rows if isinstance(block, Table) else ():
                for ref in row.refs:
                    addresses[ref] = row.address
    users = tuple(addresses)
    return addresses, {ref: users[k + 1 : k + 4] for k, ref in enumerate(users)}


def _decision(scribe: Scribe) -> list[Block]:
    columns = (
        TableColumn(("question",), role="statement"),
        TableColumn(("governing",), "", "right", 25, edge=True, role="value"),
        TableColumn((), "", "left", 13, role="unit"),
        TableColumn(("from",), "", "left", 22, edge=True, role="from"),
    )
    flow = scribe.number("pipes.sedge-link.flow@base", Format("L/s", decimals=1))
    rows = (
        Row(
            "",
            (
                (Soft(("Does the upper main keep within the greatest velocity?",)), " ", Strong(("Yes.",))),
                (Strong((scribe.number("criteria.velocity-max.margin@base", Format("m/s", decimals=2, sign="+")),)),),
                ("m/s",),
                (Cite(("pipes.sedge-link.velocity@base",)),),
            ),
        ),
        Row(
            "",
            (
                (Strong(("Which way does water run in ", Quoted("sedge-link"), "? From the junction.")),),
                (flow,),
                ("L/s",),
                (Cite(("pipes.sedge-link.flow@base",)),),
            ),
            tone="flag",
        ),
    )
    verdicts = (
        TableColumn(("criterion",), role="statement"),
        TableColumn(("found",), "m/s", "right", 20, edge=True),
        TableColumn(("limit",), "m/s", "right", 20),
        TableColumn(("verdict",), "", "left", 24),
    )
    form = Format("m/s", decimals=2)
    judged = tuple(
        Row(
            "",
            (
                ("Greatest velocity, ", Quoted(pipe)),
                (scribe.number(f"pipes.{pipe}.velocity@base", form),),
                (scribe.number("criteria.velocity-max.limit", form),),
                (Strong(("not met",), bar=True) if k == 1 else "met",),
            ),
            tone="flag" if k == 1 else "",
        )
        for k, pipe in enumerate(PIPES)
    )
    return [
        Masthead(
            (Quoted("Ostrel transfer main"),),
            (Quoted("Steady flows between 3 reservoirs"),),
            "Issued for checking: preliminary, not for construction",
            (
                ("number", (Own("OTM-HY-014", "document"),)),
                ("revision", (Own("P01", "document"), ", ", Own("2026-11-02", "date"))),
                ("client", (Quoted("Ostrel Valley Water Company, Works Division 4"),)),
                ("datum", (Quoted("Site grid 2019"),)),
                ("friction law", ("Colebrook–White",)),
                ("program", ("Headtrace ", Own("0.1.0", "name"))),
                ("digest", (Own("6b5c 6bf7 93c5", "id"),)),
            ),
        ),
        Paragraph(
            (
                Strong(("One criterion is not met: ",), bar=True),
                "the flow in ",
                Quoted("sedge-link"),
                " is ",
                scribe.number("pipes.sedge-link.flow@base", Format("L/s", decimals=1), with_unit=True),
                ", against ",
                scribe.number("program.newton.tolerance", Format("L/s", significant=1, bound=1e-3), with_unit=True),
                " allowed.",
            )
        ),
        Table("purpose", columns, rows),
        Table("verdicts", verdicts, judged),
        Notes(
            (
                (
                    "open assumptions",
                    (Own("A1", "source"), ": ", Quoted("roughness of the upper main judged from its age, 1974"), "."),
                ),
                ("cautions", ("Steady flow of one liquid in full pipes; surge and air lie outside this calculation.",)),
            )
        ),
        SignOff((("Originator", "M. Halloran 3rd"), ("Checker", ""), ("Approver", "")), seal_area=True),
    ]


def _basis() -> list[Block]:
    text = "Branch flow is positive from the first node to the second; in a balance, flow toward the junction is."
    return [
        Heading(("Conventions",)),
        Bullets(
            (
                ("", (text,)),
                (
                    "",
                    (
                        "Pressure head is ",
                        Letter("h_p"),
                        " = ",
                        Letter("H"),
                        " − ",
                        Letter("z"),
                        "; the greatest ",
                        Letter("|V|"),
                        " is printed beside it.",
                    ),
                ),
                ("", ("The formula ", Formula(velocity.mean_velocity), " holds.")),
            )
        ),
        Heading(("Cautions",)),
        Paragraph((text, " ", text, " ", Soft((text,)))),
        Paragraph(("A licensed engineer must take responsibility for this calculation.",), "caution"),
        Paragraph(("Small print of no consequence.",), "small"),
    ]


def _inputs_said(scribe: Scribe) -> list[Block]:
    columns = (
        TableColumn(("given",), role="statement"),
        TableColumn(("value",), "", "right", 21, edge=True, role="value"),
        TableColumn((), "", "left", 13, role="unit"),
        TableColumn(("source",), "", "left", 24, edge=True),
        TableColumn(("grade",), "", "left", 25),
        TableColumn(("place",), "", "left", 31),
        TableColumn(("into",), "", "left", 19, edge=True, role="into"),
    )
    rows = []
    for pipe in PIPES:
        rows.append(Row("", ((Quoted(pipe),),), tone="group"))
        for name, form in (
            ("length", Format("m", decimals=1)),
            ("bore", Format("mm", decimals=1)),
            ("roughness", Format("mm", decimals=2)),
        ):
            ref = f"pipes.{pipe}.{name}@base"
            source = (
                (Own("S2", "source"), ", page ", Own("14", "source"))
                if name == "length"
                else (Strong(("no source",), bar=True),)
            )
            rows.append(
                Row(
                    "",
                    (
                        (name,),
                        (scribe.number(ref, form),),
                        (form.unit,),
                        source,
                        ("manufacturer",),
                        (Own("network.yaml:23", "file"),),
                        (Cite((ref,), into=True),),
                    ),
                    (ref,),
                )
            )
    return [Table("inputs", columns, tuple(rows))]


def _method() -> list[Block]:
    columns = (
        TableColumn(("relation",), role="statement"),
        TableColumn(("source",), "", "left", 36, edge=True),
        TableColumn(("range",), "", "left", 36),
    )
    laws = (
        velocity.flow_each,
        velocity.mean_velocity,
        velocity.reynolds_number,
        friction.darcy_weisbach,
        friction.hagen_poiseuille,
        friction.colebrook_white,
        friction.haaland,
        friction.swamee_jain,
        friction.transition_factor,
        fitting.fitting_loss,
        fitting.forward_coefficient,
        energy.closing_error,
        water.density,
        water.dynamic_viscosity,
        water.vapour_pressure,
        water.atmospheric_pressure,
    )
    rows = []
    for law in laws:
        equation = law.residual if isinstance(law, Implicit) else law
        rows.append(
            Row(
                "",
                (
                    (equation.title, Formula(law)),
                    (Own(equation.source.key, "source"),),
                    (Own(equation.valid, "source"),),
                ),
            )
        )
    return [Table("method", columns, tuple(rows))]


def _derivation(scribe: Scribe) -> list[Block]:
    columns = (
        TableColumn(("statement",), role="statement"),
        TableColumn(("value",), "", "right", 24, edge=True, role="value"),
        TableColumn((), "", "left", 13, role="unit"),
        TableColumn(("from",), "", "left", 19, edge=True, role="from"),
        TableColumn(("into",), "", "left", 19, role="into"),
    )
    rows = [line for pipe, case in ((PIPES[0], "base"), (PIPES[1], "base")) for line in _worked(scribe, pipe, case)]
    water_names = {"temperature": "fluid.temperature"}
    for law, name in (
        (water.density, "density"),
        (water.dynamic_viscosity, "dynamic_viscosity"),
        (water.vapour_pressure, "vapour_pressure"),
    ):
        ref = f"fluid.{name}@base"
        rows.append(
            _line(scribe, law.title, scribe.worked(law, "", "base", ref, water_names), ref, ("fluid.temperature",))
        )
    return [Heading(("Worked lines of ", Quoted(PIPES[0]))), Table("derivation", columns, tuple(rows))]


def _worked(scribe: Scribe, pipe: str, case: str) -> list[Row]:
    shared = {"gravity": "site.gravity", "viscosity": "fluid.viscosity@base"}
    plan = (
        ("flow_each", velocity.flow_each, {}),
        ("velocity", velocity.mean_velocity, {}),
        ("reynolds", velocity.reynolds_number, {}),
        ("friction_factor", friction.colebrook_white, {}),
        ("factor_haaland", friction.haaland, {}),
        ("factor_swamee_jain", friction.swamee_jain, {}),
        ("friction_loss", friction.darcy_weisbach, {"factor": f"pipes.{pipe}.friction_factor@{case}"}),
        ("fitting_loss", fitting.fitting_loss, {}),
        ("head_loss", energy.head_loss, {}),
    )
    rows = []
    for name, law, names in plan:
        ref = f"pipes.{pipe}.{name}@{case}"
        formula = scribe.worked(law, pipe, case, ref, {**shared, **names})
        sources = tuple(number.ref for number in (formula.operands or {}).values())
        rows.append(_line(scribe, law.title, formula, ref, sources))
    return rows


def _line(scribe: Scribe, title: str, formula: Formula, ref: str, sources: tuple[str, ...]) -> Row:
    number = scribe.number(ref)
    return Row(
        "", ((title, formula), (number,), (number.form.unit,), (Cite(sources),), (Cite((ref,), into=True),)), (ref,)
    )


def _schedule(scribe: Scribe) -> Table:
    columns = [TableColumn(("branch",), role="statement")]
    plan = [
        ("velocity", Format("m/s", decimals=3)),
        ("reynolds", Format("", significant=4)),
        ("friction_factor", Format("", decimals=5)),
        ("friction_loss", Format("m", decimals=3)),
        ("fitting_loss", Format("m", decimals=3)),
        ("head_loss", Format("m", decimals=3)),
    ] * 2
    columns += [
        TableColumn((name.replace("_", " "),), form.unit, "right", 19, edge=k % 3 == 0)
        for k, (name, form) in enumerate(plan)
    ]
    rows = [
        Row(
            "",
            (
                (Quoted(pipe),),
                *(
                    (scribe.number(f"pipes.{pipe}.{name}@{'base' if k < 6 else 'drawdown'}", form),)
                    for k, (name, form) in enumerate(plan)
                ),
            ),
        )
        for pipe in PIPES
        for _ in range(14)
    ]
    return Table("schedule", tuple(columns), tuple(rows), lettered=True)


def _checks(scribe: Scribe) -> list[Block]:
    columns = (
        TableColumn(("along the path",), role="statement"),
        TableColumn(("friction",), "m", "right", 24, edge=True),
        TableColumn(("head",), "m", "right", 24),
        TableColumn(("from",), "", "left", 22, edge=True, role="from"),
    )
    form = Format("m", decimals=3)
    rows = [
        Row(
            "",
            (
                (Quoted(pipe),),
                (scribe.number(f"pipes.{pipe}.friction_loss@base", form),),
                (scribe.number(f"pipes.{pipe}.head_loss@base", form),),
                (Cite((f"pipes.{pipe}.head_loss@base",)),),
            ),
        )
        for pipe in PIPES
        for _ in range(12)
    ]
    total = scribe.number("balance.path.closing@base", form)
    rows.append(Row("", ((Strong(("Sum",)),), (), (Strong((total,)),), ()), tone="sum"))
    rows.append(Row("", ((Strong(("Proved",)),), (), (Strong((total,)),), ()), tone="proved"))
    trials = Table(
        "trials",
        (TableColumn(("trial",), role="statement"), TableColumn(("imbalance",), "L/s", "right", 30, edge=True)),
        tuple(
            Row(
                "",
                (
                    (Own(str(k), "id"),),
                    (
                        scribe.number(
                            f"junctions.marl-cross.imbalance@base#{k}", Format("L/s", significant=3, sign="+")
                        ),
                    ),
                ),
            )
            for k in (1, 2, 3)
        ),
        tick=False,
    )
    return [Heading(("Energy",)), Table("energy", columns, tuple(rows)), Heading(("Trials",)), trials]


def _figures() -> list[Block]:
    reservoirs = (
        figures.Reservoir("upper", 214.6, "214.60 m"),
        figures.Reservoir("sedge", 189.2, "189.20 m"),
        figures.Reservoir("vell", 183.0, "183.00 m"),
    )
    junctions = (figures.Junction("marl-cross", 188.21, "188.21 m", 171.0, "171.00 m", "12.0 L/s"),)
    pipes = tuple(
        figures.Pipe(name, start, "marl-cross", flow, f"{abs(flow)} L/s", length, 384.4, f"{length} m")
        for name, start, flow, length in (
            ("upper-main", "upper", 83.1, 1850.0),
            ("sedge-link", "sedge", 20.4, 920.5),
            ("vell-main", "vell", -50.7, 2410.0),
        )
    )
    scheme = figures.Schematic("Works, base case", reservoirs, junctions, pipes, datum="site grid")
    steps = figures.Convergence(
        "Convergence, base case",
        "trial",
        (1, 2, 3),
        (
            figures.Panel(
                "imbalance",
                "L/s",
                (41.3, -0.82, 3e-8),
                ("41.3", "−0.82", "< 1 × 10^−6"),
                1e-6,
                "1 × 10^−6",
                signed=True,
            ),
        ),
    )
    return [
        Figure("1", ("The works to elevation, ", Quoted("base"), "."), scheme),
        Heading(("Convergence",)),
        Figure("2", ("How the answer was found.",), steps),
    ]


def _listings() -> list[Block]:
    return [Listing(name, tuple(content.decode().splitlines()), "5e" * 32) for name, content in FILES.items()]


def _index(scribe: Scribe) -> Index:
    return Index(tuple((column.id(row), "4.1") for column in scribe.ledger.columns for row in range(len(column.rows))))


def inputs(column: Column, row: int) -> list[str]:
    """Return the ids of the numbers that a number is computed from, proofs left out."""
    origin = column.origin
    views = {Derived: "inputs", Solved: "inputs"}.get(type(origin))
    found: list[Any] = []
    if views:
        found = [view.spot(row) for view in getattr(origin, views).values()]
    elif isinstance(origin, Combined):
        found = [origin.terms.spot(int(k)) for k in np.flatnonzero(origin.into == row)]
    elif isinstance(origin, Judged):
        found = [origin.margin.spot(row)]
    return [one[0].id(one[1]) for one in found if one is not None]

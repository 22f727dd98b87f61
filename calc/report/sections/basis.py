"""Design basis: datum, conventions, the liquid, and the works drawn to elevation."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from calc.account import CaseAccount
from calc.components.pipe import LAW_CONSTANTS
from calc.ledger import Derived, Ledger, Spot
from calc.report import figures
from calc.report.composer import Composer, Sheet, column, figure_column
from calc.report.derivation import COLUMNS, displayed, lines
from calc.report.display import SI, Display
from calc.report.document import (
    Cite,
    Figure,
    Heading,
    Paragraph,
    Part,
    Parts,
    Quoted,
    Strong,
    TableColumn,
    named_unit,
)
from calc.report.sections.schedule import add_schedule, laws_of_pipes

CONVENTIONS = (
    "Flow in a branch is positive from its ‘from’ to its ‘to’; velocity and losses carry the sign of the flow.",
    "In the balance of a junction, flow toward the junction is positive; a withdrawal leaves it.",
    (
        "The head of a node is total head, common to all branch ends there. Along a pipe the hydraulic grade line "
        "lies the velocity head below the energy line."
    ),
    (
        "Pressure head is head less elevation; the velocity head is not deducted, and the largest at the node is "
        "printed beside it. Pressures are gauge unless called absolute."
    ),
    "With parallel pipes the flow is the total; velocity, Reynolds number, friction and fittings are per pipe.",
    (
        "A reservoir is held at its level. At a reservoir end the entry loss holds when water leaves the reservoir "
        "and the exit loss when it enters. A coefficient without a reverse value holds both ways."
    ),
)


FACTOR = "The friction factor is Darcy f throughout."
NO_FACTOR = (
    "Hazen–Williams and Manning have no friction factor; where Darcy f stands beside them it is the factor of "
    "Darcy–Weisbach that gives the same loss."
)


def _factor(composer: Composer) -> list[str]:
    """Say what a friction factor is, as far as the laws of the pipes have one."""
    laws = {law for case in composer.account.cases.values() for law in laws_of_pipes(case)}
    own, none = laws - LAW_CONSTANTS.keys(), laws & LAW_CONSTANTS.keys()
    return [*([FACTOR] if own else []), *([NO_FACTOR] if none else [])]


def compose_basis(composer: Composer) -> None:
    """Compose the design basis."""
    lead = "What is taken as true, which way is positive, and where the levels stand."
    sheet = composer.begin("basis", "Design basis", lead)
    project = composer.account.project
    datum = project.header.text("datum")
    statements: list[Parts] = [("Purpose: ", Quoted(stated.text)) for stated in project.purpose]
    if datum:
        statements.append(("Levels and elevations are above the datum: ", Quoted(datum), "."))
    else:
        statements.append((Strong(("The datum of levels and elevations is not stated.",), bar=True),))
    statements += [(text,) for text in (*CONVENTIONS, *_factor(composer))]
    statements += _units(composer.display)
    columns = (column("statement", role="statement"),)
    sheet.table("conventions", columns, [sheet.row(parts) for parts in statements])
    _liquid(sheet)
    _schematic(sheet)
    sheet.close()


COHERENT = {
    "SI": "metre, kilogram, second and pascal",
    "US": "foot, slug, second and pound-force; temperatures are absolute, in kelvin",
}
"""The units of worked lines, in words."""


def _units(display: Display) -> list[Parts]:
    """Say in which units the package is written."""
    tables: list[Part] = ["Tables and drawings: "]
    for field in TOLD:
        tables += [", " if len(tables) > 1 else "", f"{field} in ", named_unit(display.unit(field))]
    tables.append(".")
    for other in display.beside:
        tables.append(f" Parallel columns repeat results in the usual {other.system} units, where these are others.")
    worked = (
        f"Worked lines are in the coherent units {COHERENT[display.system]}, in which formulas hold without factors. "
        "What stands in another unit is converted on a line of its own: the quantity divided by the worth of one unit."
    )
    if display.system != SI.system:
        worked += " Empirical laws are worked in SI, what they take converted before them, what they give after."
    data = (
        "The data files of this package (results, ledger, tables) are in SI. Published cases in the software record "
        "are in the units in which they were published."
    )
    return [tuple(tables), (worked,), (data,)]


TOLD = ("flow", "head", "elevation", "length", "bore", "velocity", "pressure", "gradient", "temperature")
"""Fields of ``display`` whose units are told among the conventions."""


def derived_of(ledger: Ledger, groups: tuple[str, ...], case: str) -> list[Spot]:
    """Return the derived numbers of sections that stand once, in a case."""
    return [
        Spot(one, row)
        for one in ledger.columns
        if one.case == case and one.group in groups and isinstance(one.origin, Derived)
        for row in range(len(one.rows))
    ]


def _liquid(sheet: Sheet) -> None:
    for case in sheet.composer.account.project.cases:
        spots = [s for s in derived_of(sheet.composer.ledger, ("fluid", "site"), case) if s.column.of == ""]
        if spots:
            sheet.add(Heading(("Liquid and air", *(() if case == "base" else (", case ", Quoted(case))))))
            in_use = list(_in_use(sheet.composer.ledger, case))
            rows = [row for spot in spots for row in lines(sheet, spot)]
            rows += [row for spot in in_use for row in displayed(sheet, [spot])]
            sheet.table("liquid", COLUMNS, rows)
            _properties(sheet, in_use)


PROPERTIES = (
    ("fluid.temperature", "temperature"),
    ("fluid.density", "density"),
    ("fluid.viscosity", "kinematic viscosity"),
    ("fluid.vapour_pressure", "vapour pressure, absolute"),
    ("site.atmospheric_pressure", "atmospheric pressure, absolute"),
    ("site.gravity", "acceleration of gravity"),
)
"""Properties in use, by their columns."""


def _in_use(ledger: Ledger, case: str) -> Iterator[Spot]:
    """Yield the properties of liquid and air in a case, as stated or worked out."""
    for wanted, _ in PROPERTIES:
        yield from (Spot(one, 0) for one in ledger.find(wanted, case)[:1])


def _properties(sheet: Sheet, in_use: list[Spot]) -> None:
    """Add the properties in use, in the units of the tables."""
    words = dict(PROPERTIES)
    columns = (
        column("in use", role="statement"),
        figure_column("value", width=34, edge=True),
        column("", 18, role="unit"),
        TableColumn(("from",), width=30, edge=True, role="from"),
    )
    rows = []
    for spot in in_use:
        number = sheet.composer.number(spot)
        rows.append(sheet.row((words[spot.column.name],), (number,), (number.form.unit,), (Cite((spot.id,)),)))
    sheet.results("properties", columns, rows)


def _schematic(sheet: Sheet) -> None:
    solved = [case for case in sheet.composer.account.cases.values() if case.columns is not None]
    if not solved:
        return
    case = solved[0]
    sheet.add(Heading(("Levels and branches",)))
    drawing = schematic(sheet.composer, case, solved)
    turning = any(pipe.turns for pipe in drawing.pipes)
    words = " A pipe marked as turning runs the other way in the case named." if turning else ""
    caption: Parts = (
        "The works to elevation in case ",
        Quoted(case.id),
        ". Levels to scale; lines are not the pipes’ profiles." + words,
    )
    sheet.add(Figure(sheet.composer.figure_number(), caption, drawing))
    if len(sheet.composer.account.project.pipes) > MOST_NAMED:
        sheet.add(Paragraph(("Pipes not named in the figure stand in the tables of each case.",), "small"))
    add_schedule(sheet, case)


MOST_NAMED = 40


def schematic(composer: Composer, case: CaseAccount, solved: list[CaseAccount]) -> figures.Schematic:
    """Return the works of a case as a figure; pipes that run the other way elsewhere say in which case."""
    project, ledger = composer.account.project, composer.ledger

    def text(id_: str) -> str:
        number = composer.number(id_)
        return f"{number.text} {number.form.unit}".strip()

    reservoirs = tuple(
        figures.Reservoir(r, composer.display.shown(ledger.spot(id_).value, "elevation"), text(id_))
        for r in project.reservoirs
        for id_ in [f"reservoirs.{r}.level@{case.id}"]
    )
    junctions = tuple(_junction(composer, case.id, j, text) for j in project.junctions)
    flows = {one.id: dict(zip(one.network.pipes.rows, one.solution.flow, strict=True)) for one in solved}
    largest = max((abs(float(q)) for q in flows[case.id].values()), default=0.0)
    pipes = tuple(_pipe(composer, case, pipe, flows, solved, largest, text) for pipe in case.network.pipes.rows)
    datum = project.header.text("datum")
    title = f"{project.header.text('title')}, case {case.id}"
    units = composer.unit("elevation"), composer.unit("length")
    return figures.Schematic(title, reservoirs, junctions, pipes, *units, datum)


def _junction(composer: Composer, case: str, junction: str, text: Callable[[str], str]) -> figures.Junction:
    ledger = composer.ledger
    head = f"junctions.{junction}.head@{case}"
    elevation = f"junctions.{junction}.elevation@{case}"
    stated = bool([c for c in ledger.find("junctions.elevation", case) if junction in c.index])
    drawn = [c for c in ledger.find("junctions.withdrawal", case) if junction in c.index]
    withdrawal = ledger.spot(f"junctions.{junction}.withdrawal@{case}").value if drawn else 0.0
    number = composer.turned(f"junctions.{junction}.withdrawal@{case}", "size") if withdrawal else None
    return figures.Junction(
        junction,
        composer.display.shown(ledger.spot(head).value, "elevation"),
        text(head),
        composer.display.shown(ledger.spot(elevation).value, "elevation") if stated else None,
        text(elevation) if stated else "",
        f"{number.text} {number.form.unit}" if number else "",
        inflow=withdrawal < 0,
    )


def _pipe(  # noqa: PLR0917 - what one drawing of a pipe rests on
    composer: Composer,
    case: CaseAccount,
    pipe: str,
    flows: dict[str, dict[str, float]],
    solved: list[CaseAccount],
    largest: float,
    text: Callable[[str], str],
) -> figures.Pipe:
    record = composer.account.project.pipes[pipe]
    row = case.network.pipes.rows.index(pipe)
    flow = float(flows[case.id][pipe])
    number = composer.turned(f"pipes.{pipe}.flow@{case.id}", "size")
    shown = flow if any(c in "123456789" for c in number.text) else 0.0
    other = tuple(one.title for one in solved if flows[one.id][pipe] * flow < 0)
    return figures.Pipe(
        pipe,
        record.text("from"),
        record.text("to"),
        shown,
        f"{number.text} {number.form.unit}",
        composer.display.shown(float(case.network.pipes.length[row]), "length"),
        composer.display.shown(float(case.network.pipes.bore[row]), "bore"),
        f"{text(f'pipes.{pipe}.length@{case.id}')}, {text(f'pipes.{pipe}.bore@{case.id}')}",
        "",
        other,
        governing=abs(flow) >= largest / 2,
        open=bool(case.network.open[row]),
    )

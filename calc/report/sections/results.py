"""Results of a case: one derivation worked in full, and tables of all the others."""

from __future__ import annotations

import hashlib

import numpy as np

from calc.account import CaseAccount
from calc.components.pipe import LAW_CONSTANTS
from calc.ledger import Derived, Ledger, Spot
from calc.report.composer import NOTHING, Composer, Sheet, cited, column, figure_column, name
from calc.report.derivation import COLUMNS, displayed, lines
from calc.report.document import Heading, Own, Paragraph, Parts, Row, Soft, Strong, TableColumn
from calc.report.numbers import Format
from calc.report.selection import shown_junctions, shown_pipes
from calc.report.tables import junctions_file, pipes_file

CHAIN = (
    "flow_each",
    "velocity",
    "reynolds",
    "darcy_f",
    "friction_loss",
    "fitting_loss",
    "head_loss",
    "closing_error",
    "velocity_head",
    "one_in",
    "equivalent_f",
    "fitting_share",
)
"""Quantities of a pipe in the order of the chain of laws."""

FITTING_CHAIN = ("velocity", "coefficient", "loss")
NODE_CHAIN = ("pressure_head", "pressure")


def _here(ledger: Ledger, column_name: str, case: str, row: str) -> Spot | None:
    for one in ledger.find(column_name, case):
        if one.case == case and row in one.index:
            return Spot(one, one.index[row])
    return None


def governing_pipe(case: CaseAccount) -> str | None:
    """Return the open pipe that loses most head, whose derivation is worked."""
    if case.columns is None or not case.columns.running:
        return None
    losses = np.abs(case.columns.results.head_loss.values)
    return case.columns.running[int(np.argmax(losses))]


def add_derivation(sheet: Sheet, case: CaseAccount) -> None:
    """Add one worked derivation for each kind of line, of the governing pipe where it serves."""
    pipe = governing_pipe(case)
    if pipe is None:
        return
    ledger = sheet.composer.ledger
    sheet.add(Heading(("Head lost in ", name(pipe), ", worked once")))
    rows: list[Row] = []
    for quantity in CHAIN:
        if quantity == "fitting_loss":
            rows += _worked_fittings(sheet, case, pipe)
        spot = _here(ledger, f"pipes.{quantity}", case.id, pipe)
        if spot is not None:
            rows += lines(sheet, spot)
    rows += _other_laws(sheet, case, pipe)
    shown = [_here(ledger, f"pipes.{quantity}", case.id, pipe) for quantity in ("flow", *CHAIN)]
    rows += displayed(sheet, [spot for spot in shown if spot is not None])
    junctions = case.columns.pressure_head.rows if case.columns else ()
    for quantity in NODE_CHAIN:
        spot = _here(ledger, f"junctions.{quantity}", case.id, junctions[0]) if junctions else None
        if spot is not None:
            rows += lines(sheet, spot, name(junctions[0]), ": ")
            rows += displayed(sheet, [spot], name(junctions[0]), ": ") if quantity == "pressure" else []
    sheet.table(f"derivation-{case.id}", COLUMNS, rows)
    sheet.add(Paragraph(("Every other pipe and node repeats these lines; their results follow.",), "small"))


def _worked_fittings(sheet: Sheet, case: CaseAccount, pipe: str) -> list[Row]:
    """Work one fitting of the pipe: the one that loses most."""
    ledger = sheet.composer.ledger
    spots = [
        Spot(one, k)
        for one in ledger.find("fittings.loss", case.id)
        if one.case == case.id
        for k, row in enumerate(one.rows)
        if row.rpartition("/")[0] == pipe
    ]
    if not spots:
        return []
    worst = max(spots, key=lambda s: abs(s.value)).column
    fitting = worst.rows[max(spots, key=lambda s: abs(s.value)).row]
    held = [_here(ledger, f"fittings.{quantity}", case.id, fitting) for quantity in FITTING_CHAIN]
    return [row for spot in held if spot is not None for row in lines(sheet, spot, name(fitting), ": ")]


def _other_laws(sheet: Sheet, case: CaseAccount, pipe: str) -> list[Row]:
    """Work one line for each law or regime that governs some other pipe and not this one."""
    ledger = sheet.composer.ledger
    rows: list[Row] = []
    for quantity in CHAIN:
        for one in ledger.find(f"pipes.{quantity}", case.id):
            if one.case != case.id or not isinstance(one.origin, Derived):
                continue
            if pipe not in one.index:
                rows += lines(sheet, Spot(one, 0), name(one.rows[0]), ": ")
    return rows


def add_tables(sheet: Sheet, case: CaseAccount) -> None:
    """Add the tables of pipes, fittings and nodes."""
    _pipes(sheet, case)
    _fittings(sheet, case)
    _nodes(sheet, case)


def _pipes(sheet: Sheet, case: CaseAccount) -> None:
    composer = sheet.composer
    names, head, flow = shown_pipes(case), composer.unit("head"), composer.unit("flow")
    sheet.add(Heading(("Pipes: heads and flows",)))
    columns: tuple[TableColumn, ...] = (
        column("pipe", role="statement"),
        column("from", 24, edge=True),
        figure_column("head", head, 16.5),
        column("to", 24, edge=True),
        figure_column("head", head, 16.5),
        figure_column("loss", head, 16, edge=True),
        TableColumn(("gradient, one in",), align="right", width=19, role="value"),
        figure_column("flow", flow, 16.5, edge=True),
    )
    sheet.results(f"pipes-{case.id}", columns, [_pipe_row(sheet, case, pipe) for pipe in names])
    sheet.add(Heading(("Pipes: velocities and losses",)))
    factors = _factors(case, names)
    columns = (
        column("pipe", role="statement"),
        figure_column("velocity", composer.unit("velocity"), 19.5, edge=True),
        figure_column("Reynolds", width=20),
        *(figure_column(words, width=18) for words in factors.values()),
        figure_column("friction", head, 19.5, edge=True),
        figure_column("fittings", head, 19.5),
        figure_column("share of fittings", "%", 19.5),
        figure_column("loss", head, 16),
    )
    sheet.results(f"losses-{case.id}", columns, [_loss_row(sheet, case, pipe, tuple(factors)) for pipe in names])
    said = "Losses and velocity carry the sign of the flow, positive from ‘from’ to ‘to’."
    if EQUIVALENT in factors:
        said += " Hazen–Williams and Manning know neither viscosity nor Darcy f, and are applied at every Reynolds"
        said += " number; printed is the Darcy f by which Darcy–Weisbach would give the same loss."
    if not case.network.open.all():
        said += " The loss of a shut pipe is the difference of head between its ends."
    if len(names) < len(case.network.pipes.rows):
        said += " The pipes that lose most head are printed."
    sheet.add(Paragraph((said,), "small"))
    if len(names) < len(case.network.pipes.rows):
        _cite_file(sheet, "All pipes", f"results/{case.id}-pipes.csv", pipes_file(composer.ledger, case))


def _cite_file(sheet: Sheet, what: str, path: str, content: bytes) -> None:
    """Put a table in the package, and cite it by its digest."""
    sheet.composer.files[path] = content
    digest = hashlib.sha256(content).hexdigest()
    cited: Parts = (Own(path, "file"), " of this package, digest ", Own(digest, "document"))
    parts: Parts = (f"{what} stand in SI in ", *cited, ".")
    sheet.add(Paragraph(parts, "small"))


def _node_head(composer: Composer, case: str, node: str) -> Spot:
    group, quantity = ("reservoirs", "level") if node in composer.account.project.reservoirs else ("junctions", "head")
    return composer.ledger.spot(f"{group}.{node}.{quantity}@{case}")


def _pipe_row(sheet: Sheet, case: CaseAccount, pipe: str) -> Row:
    composer = sheet.composer
    record = composer.account.project.pipes[pipe]
    cells: list[Parts] = [(name(pipe),)]
    for end in ("from", "to"):
        node = record.text(end)
        cells += [(name(node),), (composer.number(_node_head(composer, case.id, node), composer.form("head")),)]
    return _told(sheet, case, pipe, cells, ("head_loss", "one_in", "flow"))


EQUIVALENT = "equivalent_f"
"""The factor of an empirical law, which takes none: that of the same loss."""


def _factors(case: CaseAccount, names: tuple[str, ...]) -> dict[str, str]:
    """Return the factors that the laws of some pipes have, with the heads of their columns."""
    law = case.network.pipes.law
    words = {law.word(case.network.pipes.rows.index(pipe)) for pipe in names}
    factors = {"darcy_f": "Darcy f"} if words - LAW_CONSTANTS.keys() or not words else {}
    return factors | ({EQUIVALENT: "Darcy f, same loss"} if words & LAW_CONSTANTS.keys() else {})


def _loss_row(sheet: Sheet, case: CaseAccount, pipe: str, factors: tuple[str, ...]) -> Row:
    wanted = ("velocity", "reynolds", *factors, "friction_loss", "fitting_loss", "fitting_share", "head_loss")
    return _told(sheet, case, pipe, [(name(pipe),)], wanted)


def _told(sheet: Sheet, case: CaseAccount, pipe: str, cells: list[Parts], wanted: tuple[str, ...]) -> Row:
    """Return a row with quantities of a pipe; a dash where the law defines no value."""
    refs: list[str] = []
    shut = not case.network.open[case.network.pipes.rows.index(pipe)]
    for quantity in wanted:
        spot = _here(sheet.composer.ledger, f"pipes.{quantity}", case.id, pipe)
        if spot is None:
            cells.append((Soft(("shut",)) if shut else NOTHING,))
            shut = False  # said once
            continue
        refs.append(spot.id)
        cells.append((sheet.composer.number(spot),))
    return sheet.row(*cells, refs=refs)


def _fittings(sheet: Sheet, case: CaseAccount) -> None:
    composer, ledger = sheet.composer, sheet.composer.ledger
    columns = (
        column("fitting or end", role="statement"),
        figure_column("count", width=15.5, edge=True),
        figure_column("K in use", width=20),
        figure_column("velocity", composer.unit("velocity"), 20, edge=True),
        figure_column("loss", composer.unit("head"), 20),
        TableColumn(("from",), width=30, edge=True, role="from"),
    )
    rows = []
    fittings = case.columns.terms.fittings.rows if case.columns else ()
    shown = set(shown_pipes(case))
    for fitting in fittings:
        if fitting.rpartition("/")[0] not in shown:
            continue
        spots = [_here(ledger, f"fittings.{quantity}", case.id, fitting) for quantity in FITTING_CHAIN]
        count = ledger.spot(f"fittings.{fitting}.count@{case.id}")
        held = [spot for spot in spots if spot is not None]
        said = kind_of_fitting(composer, fitting)
        kind: Parts = (Soft((", ", name(said))),) if said else ()
        coefficient = Format(decimals=3)
        cells: list[Parts] = [(name(fitting), *kind), (composer.number(count),)]
        by_name = {spot.column.quantity: spot for spot in held}
        cells.append((composer.number(by_name["coefficient"], coefficient),))
        cells += [
            (composer.number(by_name["velocity"]),),
            (composer.number(by_name["loss"], composer.form("head", 1)),),
        ]
        cells.append((cited(ledger, held[1:2]),))
        rows.append(sheet.row(*cells, refs=[spot.id for spot in held]))
    if rows:
        sheet.add(Heading(("Fittings and reservoir ends",)))
        sheet.results(f"fittings-{case.id}", columns, rows)


def kind_of_fitting(composer: Composer, fitting: str) -> str:
    """Return the kind or note of a fitting or end as the project has it, empty where it has none."""
    pipe, _, _ = fitting.rpartition("/")
    record = composer.account.project.pipes[pipe]
    for part in (*record.parts.get("ends", ()), *record.parts.get("fittings", ())):
        if part.id == fitting:
            noted = next((s.basis.note for s in part.stated.values() if s.basis.note), "")
            return part.text("kind") or part.text("note") or noted
    return ""


def _nodes(sheet: Sheet, case: CaseAccount) -> None:
    composer, ledger = sheet.composer, sheet.composer.ledger
    head = composer.unit("head")
    columns = (
        column("junction", role="statement"),
        figure_column("head", head, 24, edge=True),
        figure_column("elevation", composer.unit("elevation"), 24),
        figure_column("pressure head", head, 26, edge=True),
        figure_column("pressure", composer.unit("pressure"), 24),
        figure_column("largest velocity head", head, 28, edge=True),
    )
    rows = []
    negative = False
    for junction in shown_junctions(composer.account, case):
        cells: list[Parts] = [(name(junction),)]
        refs = []
        below = False
        for quantity in ("head", "elevation", "pressure_head", "pressure", "velocity_head"):
            found = _here(ledger, f"junctions.{quantity}", case.id, junction)
            if found is None and quantity == "elevation":
                stated = [c for c in ledger.find("junctions.elevation", case.id) if junction in c.index]
                found = Spot(stated[0], stated[0].index[junction]) if stated else None
            if found is None:
                cells.append((NOTHING,))
                continue
            if quantity != "elevation":
                refs.append(found.id)
            cells.append((composer.number(found),))
            below = below or (quantity == "pressure_head" and found.value < 0)
        rows.append(sheet.row(*cells, refs=refs, tone="flag" if below else ""))
        negative = negative or below
    if rows:
        sheet.add(Heading(("Junctions",)))
        sheet.results(f"junctions-{case.id}", columns, rows)
    if len(rows) < len(composer.account.project.junctions):
        content = junctions_file(composer.ledger, case)
        _cite_file(sheet, "All junctions", f"results/{case.id}-junctions.csv", content)
    if negative:
        said = " The pipes may not run full there, and then these results do not hold."
        sheet.add(Paragraph((Strong(("The head lies below a junction.",), bar=True), said)))

"""Opening the books: every number that the project states becomes a ledger column, case by case."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Iterator, Mapping, Sequence
from functools import cache
from typing import Any

import numpy as np

from calc.account.following import PROJECT, enter_bores, enter_coefficients, enter_withdrawals
from calc.components import SCHEMAS, Count, Quantity, Record, Schema, Stated
from calc.components.fitting import SCHEMA as FITTING_SCHEMA
from calc.components.liquid import LiquidTerms, liquid
from calc.equation import Equation, Symbol, equation
from calc.kinds import (
    ACCELERATION,
    DENSITY,
    DYNAMIC_VISCOSITY,
    ELEVATION,
    FLOW,
    HEAD,
    KINEMATIC_VISCOSITY,
    NUMBER,
    PRESSURE,
    TEMPERATURE,
    Kind,
)
from calc.ledger import Accountant, Column, Converted, Derived, Given, Ledger, Library, View
from calc.ledger.column import ABSENT
from calc.physics.dimensions import bore_within
from calc.project import BASE, Line, Project, in_order, stands_on_pipe

SINGLE: dict[str, dict[str, Kind]] = {
    "fluid": {
        "temperature": TEMPERATURE,
        "density": DENSITY,
        "viscosity": KINEMATIC_VISCOSITY,
        "vapour_pressure": PRESSURE,
    },
    "site": {"altitude": ELEVATION, "gravity": ACCELERATION},
    "constants": {
        "laminar_below": NUMBER,
        "turbulent_above": NUMBER,
        "coefficient": NUMBER,
        "flow_exponent": NUMBER,
        "bore_exponent": NUMBER,
    },
}
"""Kinds of the fields of sections that stand once; under ``constants`` those of all its groups."""


@cache
def scaled(kind: Kind) -> Equation:
    """Return the law by which ``times`` multiplies a quantity of a kind."""

    @equation(
        gives=Symbol("y", kind, "value in this case"),
        source=PROJECT,
        valid="as the case states",
        factor=Symbol("k_c", NUMBER, "factor of the case"),
        before=Symbol("y_0", kind, "value before"),
    )
    def scaled_value(*, factor: Any, before: Any) -> Any:  # noqa: ANN401
        """Value times the factor of the case."""
        return factor * before

    return scaled_value


def basis_text(stated: Stated) -> str:
    """Return what a value rests on, in one line: source, page, grade, note."""
    basis = stated.basis
    page = f"p. {basis.page}" if basis.page else ""
    return ", ".join(part for part in (basis.source, page, basis.grade, basis.note) if part)


def enter_stated(
    ledger: Ledger,
    name: str,
    kind: Kind,
    rows: Sequence[str],
    values: Sequence[Stated],
    *,
    case: str = "",
) -> None:
    """Enter stated values as columns, one for each way in which they were stated."""
    sorts: dict[str, list[int]] = defaultdict(list)
    for k, stated in enumerate(values):
        plain = stated.factor == 1.0 and stated.offset == 0.0
        sorts["library" if stated.shipped else "given" if plain else "converted"].append(k)
    for sort, chosen in sorts.items():
        some = [values[k] for k in chosen]
        marks, written = tuple(x.mark for x in some), tuple(x.written for x in some)
        bases = tuple(map(basis_text, some))
        origin: Given | Converted | Library
        if sort == "library":
            origin = Library(marks, written, bases)
        elif sort == "given":
            origin = Given(marks, written, bases)
        else:
            origin = Converted(
                marks,
                written,
                bases,
                tuple(x.number for x in some),
                tuple(x.unit for x in some),
                tuple(x.factor for x in some),
                tuple(x.offset for x in some),
            )
        ledger.enter(name, kind, [rows[k] for k in chosen], [x.si for x in some], origin, case=case)


def numeric_fields(schema: Schema) -> dict[str, Kind]:
    """Return the fields of a schema that hold numbers, with their kinds."""
    return {
        field.name: field.form.kind if isinstance(field.form, Quantity) else NUMBER
        for field in schema.fields
        if isinstance(field.form, Quantity | Count)
    }


def open_books(project: Project) -> Ledger:
    """Return a ledger that holds every number that the project states, and the properties of its liquid."""
    ledger = Ledger({case.id: case.after or BASE for case in project.cases.values() if case.id != BASE})
    for schema in SCHEMAS:
        _enter_group(ledger, schema, project.group(schema.group).values())
    _enter_group(ledger, FITTING_SCHEMA, _parts(project))
    _enter_solver(ledger, project)
    for group, kinds in SINGLE.items():
        for row, record in project.group(group).items():
            for field, kind in kinds.items():
                if field in record.stated:
                    exact = _kind_of(record, field, kind)
                    name = f"{group}.{_named(field, exact)}"
                    enter_stated(ledger, name, exact, [row], [record.stated[field]], case=BASE)
    _enter_derived(ledger, project, BASE)
    for case in project.cases.values():
        if case.id != BASE:
            _enter_changes(ledger, project, case.id, case.lines)
            _enter_derived(ledger, project, case.id)
    return ledger


def _parts(project: Project) -> Iterator[Record]:
    """Yield ends and fittings; one on its pipe's own bore states none, for a case may change that bore."""
    for pipe in project.pipes.values():
        for part in in_order(pipe):
            if stands_on_pipe(pipe, part):
                stated = {name: value for name, value in part.stated.items() if name != "bore"}
                yield Record(part.id, part.mark, stated)
            else:
                yield part


def _enter_solver(ledger: Ledger, project: Project) -> None:
    """Enter the tolerance and the heads to start from, where the project states them."""
    section = project.sections.get("solver")
    if section is None:
        return
    if "tolerance" in section.stated:
        enter_stated(ledger, "solver.tolerance", FLOW, [""], [section.stated["tolerance"]])
    starts = section.parts.get("start", ())
    if starts:
        rows, values = [part.id for part in starts], [part.stated["value"] for part in starts]
        enter_stated(ledger, "solver.start", HEAD, rows, values)


def _enter_group(ledger: Ledger, schema: Schema, records: Iterable[Record]) -> None:
    held = list(records)
    for field, kind in numeric_fields(schema).items():
        having = [record for record in held if field in record.stated and not record.stated[field].follows]
        if having:
            rows = [record.id for record in having]
            values = [record.stated[field] for record in having]
            enter_stated(ledger, f"{schema.group}.{field}", kind, rows, values, case=BASE)


def _kind_of(record: Record, field: str, kind: Kind) -> Kind:
    if field == "viscosity" and record.text("viscosity_kind").startswith("dynamic"):
        return DYNAMIC_VISCOSITY
    return kind


def _named(field: str, kind: Kind) -> str:
    return "dynamic_viscosity" if kind is DYNAMIC_VISCOSITY else field


def _enter_changes(ledger: Ledger, project: Project, case: str, lines: Sequence[Line]) -> None:
    """Enter what a case's own lines set or multiply; steps on the way to a value have names of their own."""
    steps: dict[tuple[str, str], dict[str, list[Line]]] = defaultdict(lambda: defaultdict(list))
    for line in lines:
        if isinstance(line.stated.value, float | int) and not isinstance(line.stated.value, bool):
            for row in line.rows:
                standing = steps[line.group, line.field][row]
                if line.how == "with":
                    standing.clear()
                standing.append(line)
    # inflows first: where one stands, a factor on the withdrawal finds none
    for (group, field), by_row in sorted(steps.items(), key=lambda item: item[0][1] != "inflow"):
        kind = _field_kind(project, group, field)
        name = f"{group}.{_named(field, kind)}"
        for level in range(max(map(len, by_row.values()))):
            for how in ("with", "times"):
                for last in (True, False):
                    chosen = {
                        row: standing[level]
                        for row, standing in by_row.items()
                        if len(standing) > level and standing[level].how == how and (len(standing) == level + 1) == last
                    }
                    if chosen:
                        _enter_step(ledger, name, kind, case, level=level, chosen=chosen, last=last)


def _enter_step(
    ledger: Ledger,
    name: str,
    kind: Kind,
    case: str,
    *,
    level: int,
    chosen: Mapping[str, Line],
    last: bool,
) -> None:
    rows = list(chosen)
    values = [line.stated for line in chosen.values()]
    result = name if last else f"{name}_step_{level + 1}"
    if next(iter(chosen.values())).how == "with":
        enter_stated(ledger, result, kind, rows, values, case=case)
        return
    before_name = name if level == 0 else f"{name}_step_{level}"
    before = View.assembled([c for c in ledger.find(before_name, case) if is_stated(c)], rows)
    # a factor on a value that nothing states changes nothing
    standing = before.which != ABSENT
    if name == "junctions.withdrawal":
        standing &= ledger.view("junctions.inflow", case, rows).which == ABSENT
    kept = np.flatnonzero(standing)
    if not len(kept):
        return
    rows = [rows[int(k)] for k in kept]
    factor_name = f"{name}_factor" if level == 0 else f"{name}_factor_{level + 1}"
    enter_stated(ledger, factor_name, NUMBER, rows, [values[int(k)] for k in kept], case=case)
    factor = ledger.view(factor_name, case, rows)
    Accountant(ledger, case).apply(result, scaled(kind), factor=factor, before=before.take(kept))


def _field_kind(project: Project, group: str, field: str) -> Kind:
    if group in SINGLE:
        record = next(iter(project.group(group).values()))
        return _kind_of(record, field, SINGLE[group][field])
    schema = next(schema for schema in SCHEMAS if schema.group == group)
    return numeric_fields(schema)[field]


def _enter_derived(ledger: Ledger, project: Project, case: str) -> None:
    """Enter what follows from the inputs before anything is solved: withdrawals, bores, coefficients, the liquid."""
    enter_withdrawals(ledger, project, case)
    if case == BASE:
        enter_bores(ledger, project)
    enter_coefficients(ledger, project, case)
    if case == BASE or any(line.group in ("fluid", "site") for line in project.cases[case].lines):
        liquid(Accountant(ledger, case), liquid_terms(ledger, case))


def liquid_terms(ledger: Ledger, case: str) -> LiquidTerms[View]:
    """Return what is stated of the liquid in a case."""

    def stated(name: str) -> View | None:
        columns = [column for column in ledger.find(name, case) if is_stated(column)]
        return ledger.serving(columns[0]) if columns else None

    return LiquidTerms(
        altitude=ledger.shared("site.altitude", case),
        temperature=stated("fluid.temperature"),
        density=stated("fluid.density"),
        viscosity=stated("fluid.viscosity"),
        dynamic_viscosity=stated("fluid.dynamic_viscosity"),
        vapour_pressure=stated("fluid.vapour_pressure"),
    )


def is_stated(column: Column) -> bool:
    """Return whether a column holds what the inputs state, be it by a factor of a case or by outside dimensions."""
    origin = column.origin
    if isinstance(origin, Derived):
        return origin.law is scaled(column.kind) or origin.law is bore_within
    return isinstance(origin, Given | Converted | Library)

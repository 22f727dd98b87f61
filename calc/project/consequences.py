"""What the changes of a case lead to: values out of range, laws that lack an input, excluded pairs."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
import numpy.typing as npt

from calc.components import Field, Quantity
from calc.components.pipe import LAW_INPUT
from calc.project.arrays import Effective, needing
from calc.project.bounds import outside
from calc.project.cases import lines_in
from calc.project.model import Case, Line, Project
from calc.project.paths import GROUPS, SINGLE
from calc.project.reader import Reader
from calc.project.settings import CONSTANTS, VISCOSITIES
from calc.project.wording import quoted

Mask = npt.NDArray[np.bool_]


def check_cases(reader: Reader, project: Project) -> None:
    """Note at each line of each case what it leads to; what an earlier case did is noted there alone."""
    for case in project.cases.values():
        if case.lines:
            now = Effective(project, case.id)
            for line in case.lines:
                _check_range(reader, project, now, case, line)
                _check_excluded(reader, project, case, line)
                if line.group == "friction" or (line.group == "pipes" and line.field == "law"):
                    _check_law(reader, now, case, line)
            _check_bores(reader, now, case)
            _check_orders(reader, now, case)


def _path(case: Case, line: Line) -> str:
    return f"cases.{case.id}.{line.how}.{line.path}"


def _check_range(reader: Reader, project: Project, now: Effective, case: Case, line: Line) -> None:
    """Note that ``times`` takes a value out of its range."""
    field = _field(project, line)
    if line.how != "times" or field is None or not isinstance(field.form, Quantity):
        return
    values = now.numbers(line.group, line.field)[now.rows(line)]
    for row, value in zip(line.rows, values.tolist(), strict=True):
        wanted = "" if np.isnan(value) else outside(field.form, value)
        if wanted:
            name = f"'{line.field}' of {quoted(row)}" if row else f"'{line.field}'"
            found = f"times {line.stated.written} makes {name} {value:.6g} {field.form.kind.unit}".rstrip()
            reader.note(line.stated.mark, "out-of-range", _path(case, line), found, wanted)
            return


def _field(project: Project, line: Line) -> Field | None:
    schema = GROUPS.get(line.group) or SINGLE.get(line.group) or CONSTANTS.get(line.rows[0])
    field = schema.field(line.field) if schema else None
    if line.group == "fluid" and line.field == "viscosity" and project.fluid.text("viscosity_kind").startswith("d"):
        return Field("viscosity", VISCOSITIES[1])
    return field


def _check_excluded(reader: Reader, project: Project, case: Case, line: Line) -> None:
    """Note that a case sets one of two fields of which the other stands."""
    schema = GROUPS.get(line.group) or SINGLE.get(line.group)
    for pair in schema.excludes if schema and line.how == "with" else ():
        if line.field not in pair:
            continue
        other = pair[0] if line.field == pair[1] else pair[1]
        if schema is not None and (field := schema.field(other)) is not None and field.fixed:
            continue  # a bore that a case sets takes the place of that which follows from a size
        standing = _standing(project, case, line.group, other)
        row = next((row for row in line.rows if row in standing), None)
        if row is not None:
            name = f" of {quoted(row)}" if row else ""
            found = f"'{other}'{name} stands already, and excludes '{line.field}'"
            hint = f"change '{other}' instead"
            reader.note(line.mark, "excluded-pair", _path(case, line), found, "one of the two", hint)


def _standing(project: Project, case: Case, group: str, field: str) -> set[str]:
    """Return the rows in which a field is stated or set in the chain.

    The default temperature of the liquid counts as stated, the default withdrawal of a junction does not.
    """
    found = {
        row
        for row, record in project.group(group).items()
        if (stated := record.stated.get(field)) is not None and not (stated.shipped and group in GROUPS)
    }
    for _, line in lines_in(project, case.id):
        if line.group == group and line.field == field and line.how == "with":
            found.update(line.rows)
    return found


def _check_law(reader: Reader, now: Effective, case: Case, line: Line) -> None:
    """Note that pipes lack what the law set by a line needs."""
    name = line.stated.text
    needed = LAW_INPUT[name]
    law = now.law()
    lacking = needing(needed, law) & np.isnan(now.numbers("pipes", needed))
    lacking &= law.codes == law.words.index(name)
    lacking &= _reached(now, line)
    pipes = list(now.inputs.groups["pipes"])
    if lacking.any():
        pipe = pipes[int(np.argmax(lacking))]
        found = f"the law {name} needs '{needed}', which {quoted(pipe)} does not state"
        hint = f"set 'pipes.{pipe}.{needed}' in the case too, or state it with the pipe"
        reader.note(line.stated.mark, "missing-law-input", _path(case, line), found, f"'{needed}'", hint)


def _reached(now: Effective, line: Line) -> Mask:
    reached = np.zeros(len(now.inputs.groups["pipes"]), dtype=bool)
    if line.group == "friction":
        return now.inputs.follows.copy()
    reached[now.rows(line)] = True
    return reached


def _check_bores(reader: Reader, now: Effective, case: Case) -> None:
    """Note that lines leave a bore no larger than its roughness."""
    lines = [line for line in case.lines if line.group == "pipes" and line.field in ("bore", "roughness")]
    if not lines:
        return
    bore = now.numbers("pipes", "bore")
    rough = (bore > 0.0) & (bore <= now.numbers("pipes", "roughness"))  # one that is not above zero is told already
    _note_last(
        reader,
        now,
        case,
        lines,
        rough,
        code="rough-bore",
        words="the bore of {} is no larger than its roughness",
    )


def _note_last(
    reader: Reader, now: Effective, case: Case, lines: Iterable[Line], wrong: Mask, *, code: str, words: str
) -> None:
    """Note rows that are wrong at the last line that reaches each, once a line."""
    left = wrong.copy()
    for line in reversed(list(lines)):
        here = np.zeros_like(left)
        here[now.rows(line)] = True
        here &= left
        if here.any():
            row = list(now.inputs.groups[line.group])[int(np.argmax(here))]
            found = words.format(quoted(row))
            reader.note(line.stated.mark, code, _path(case, line), found, "values that can stand together")
            left &= ~here


def _check_orders(reader: Reader, now: Effective, case: Case) -> None:
    """Note that lines turn two limits round."""
    limits = [line for line in case.lines if line.group == "constants"]
    if limits:
        wrong = now.numbers("constants", "laminar_below") >= now.numbers("constants", "turbulent_above")
        _note_last(
            reader,
            now,
            case,
            limits,
            wrong,
            code="wrong-order",
            words="laminar_below of {} is not below turbulent_above",
        )
    levels = [line for line in case.lines if line.group == "reservoirs" and line.field in ("low", "high")]
    if levels:
        wrong = now.numbers("reservoirs", "low") > now.numbers("reservoirs", "high")
        _note_last(reader, now, case, levels, wrong, code="wrong-order", words="low of {} is above its high")

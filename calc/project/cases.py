"""Operating cases: what each changes, by path, and the changes in force in a case."""

from __future__ import annotations

from collections.abc import Mapping

from calc.components import Count, Flag, Quantity, Record, Stated, Word
from calc.components.fields import Form
from calc.kinds import NUMBER, TEMPERATURE
from calc.project.judging import note_unknown_case
from calc.project.model import BASE, Case, Change, How, Line, Project
from calc.project.notes import empty
from calc.project.paths import Target, follow
from calc.project.reader import Reader
from calc.project.records import read_group
from calc.project.settings import VISCOSITIES
from calc.project.wording import quoted
from calc.yamlfile import Entry, Node, Scalar
from calc.yamlfile import Mapping as MappingNode
from calc.yamlfile.collector import without_collector

Key = tuple[str, str, str]
"""Group, row and field of a value."""

_KEYS = ("title", "after", "with", "times")


def read_cases(
    reader: Reader, entry: Entry | None, works: Mapping[str, Mapping[str, object]], fluid: Record
) -> dict[str, Case]:
    """Return the cases, ``base`` first.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    entry : Entry or None
        ``cases`` as it stands.
    works : mapping
        The ids of each group of components.
    fluid : Record
        The liquid, whose viscosity may be of two kinds.
    """
    members = read_group(reader, entry.value, "cases", "a case") if entry else []
    found = {BASE: Case(BASE, entry.key.mark if entry else fluid.mark)}
    for key, member in members:
        found[key.text] = _read_case(reader, key, member, works, fluid)
    written = entry.value.keys() if entry and isinstance(entry.value, MappingNode) else ()
    afters = {key.text: member.get("after") for key, member in members}
    for name, node in afters.items():
        if isinstance(node, Scalar) and not empty(node) and node.text not in (*found, *written):
            note_unknown_case(reader, node, f"cases.{name}.after", found)
    _check_circles(reader, found, afters)
    return found


def _read_case(
    reader: Reader, key: Scalar, member: MappingNode, works: Mapping[str, Mapping[str, object]], fluid: Record
) -> Case:
    title, after, lines = None, "", list[Line]()
    path = f"cases.{key.text}"
    for name, value in member.entries:
        at = f"{path}.{name.text}"
        if name.text not in _KEYS:
            reader.unknown(name, at, _KEYS)
        elif name.text == "title":
            title = reader.text(value, at)
        elif key.text == BASE:
            found = f"the case '{BASE}' is the inputs as they stand, and has no '{name.text}'"
            hint = "change the inputs themselves, or give the case another id"
            reader.note(name.mark, "base-case", at, found, "a title at most", hint)
        elif name.text == "after":
            scalar = None if empty(value) else reader.scalar(value, at, "the id of a case")
            after = "" if scalar is None or scalar.text == BASE else scalar.text
        else:
            changes = reader.mapping(value, at, "a mapping: {reservoirs.upper.level: 209.20 m}")
            for change in changes.entries if changes else ():
                line = _read_line(reader, change, at, name.text, works=works, fluid=fluid)
                if line is not None:
                    lines.append(line)
    return Case(key.text, key.mark, title, after, tuple(lines))


def _read_line(
    reader: Reader,
    entry: Entry,
    path: str,
    how: str,
    *,
    works: Mapping[str, Mapping[str, object]],
    fluid: Record,
) -> Line | None:
    where, what = entry
    at = f"{path}.{where.text[:120]}"
    target = follow(reader, where, at, works)
    if target is None or target.field is None:
        return None
    if target.field.fixed:
        found = f"'{target.field.name}' is the same in every case"
        reader.note(where.mark, "fixed-field", at, found, "a field that a case may change", target.field.fixed)
        return None
    if how == "times":
        stated = _read_factor(reader, target, where, what, at)
        return None if stated is None else _line(where, target, "times", stated)
    form = target.field.form
    if target.group == "fluid" and target.field.name == "viscosity":
        dynamic = fluid.text("viscosity_kind") == VISCOSITIES[1].kind.name
        form = VISCOSITIES[1] if dynamic else VISCOSITIES[0]
    if not isinstance(form, Quantity | Count | Word | Flag):
        found = f"'{target.field.name}' is the same in every case"
        hint = "state the pipe twice, each with 'open'" if target.group == "pipes" else ""
        expected = "a quantity, a word, or true or false that may change"
        reader.note(where.mark, "fixed-field", at, found, expected, hint)
        return None
    code = "unknown-law" if target.field.name == "law" else "bad-word"
    stated = reader.value(form, what, at, code)
    return None if stated is None else _line(where, target, "with", stated)


def _read_factor(reader: Reader, target: Target, where: Scalar, what: Node, at: str) -> Stated | None:
    """Return the pure number that ``times`` multiplies by, for fields that are amounts."""
    form: Form | None = target.field.form if target.field else None
    if isinstance(form, Quantity) and form.kind is not TEMPERATURE:
        return reader.value(Quantity(NUMBER), what, at)
    name = target.field.name if target.field else ""
    what_it_is = "a temperature" if isinstance(form, Quantity) else "not a quantity"
    found = f"'{name}' is {what_it_is}, and cannot be multiplied"
    reader.note(
        where.mark,
        "fixed-field",
        at,
        found,
        "a quantity",
        f"set it under 'with': {{{quoted(where.text)}: …}}",
    )
    return None


def _line(where: Scalar, target: Target, how: How, stated: Stated) -> Line:
    name = target.field.name if target.field else ""
    return Line(where.text, target.group, target.rows, name, how, stated, where.mark)


def _check_circles(reader: Reader, cases: dict[str, Case], afters: Mapping[str, Node | None]) -> None:
    """Note cases that come after themselves, once a circle."""
    settled: set[str] = set()
    for name in cases:
        trail: list[str] = []
        at = name
        while at and at not in settled and at not in trail:
            trail.append(at)
            at = cases[at].after if at in cases else ""
        if at in trail:
            circle = trail[trail.index(at) :]
            node = afters[circle[0]]
            mark = node.mark if node is not None else cases[circle[0]].mark
            found = " after ".join([*circle, circle[0]])
            reader.note(mark, "case-cycle", f"cases.{circle[0]}.after", found, "cases that begin at the inputs")
        settled.update(trail)


def chain(cases: Mapping[str, Case], name: str) -> tuple[Case, ...]:
    """Return a case with all that it comes after, the first one first."""
    found: list[Case] = []
    while name and name != BASE:
        found.insert(0, cases[name])
        name = cases[name].after
    return tuple(found)


def lines_in(project: Project, case: str) -> list[tuple[Case, Line]]:
    """Return every line in force in a case with the case that it stands in, in the order of their effect."""
    return [(one, line) for one in chain(project.cases, case) for line in one.lines]


def changes_in(project: Project, case: str) -> dict[Key, tuple[Change, ...]]:
    """Return the changes in force in a case.

    A ``with`` drops all that came before it. A change of ``friction`` is also given for the ``law`` of every
    pipe that follows it.

    Parameters
    ----------
    project : Project
        The project.
    case : str
        Id of the case.

    Returns
    -------
    dict of (group, row, field) to tuple of Change
        In the order in which they act on the value stated.
    """
    found: dict[Key, tuple[Change, ...]] = {}
    own_law: set[str] = set()
    with without_collector():
        for one, line in lines_in(project, case):
            reach = [(line.group, row, line.field) for row in line.rows]
            if line.group == "pipes" and line.field == "law":
                own_law.update(line.rows)
            elif line.group == "friction":
                reach += [
                    ("pipes", name, "law")
                    for name, pipe in project.pipes.items()
                    if name not in own_law and follows_friction(project, pipe)
                ]
            for group, row, field in reach:
                change = Change(line.path, group, row, field, line.how, line.stated, one.id)
                before = () if line.how == "with" else found.get((group, row, field), ())
                found[group, row, field] = (*before, change)
    return found


def follows_friction(project: Project, pipe: Record) -> bool:
    """Return whether a pipe's law is the default of the project."""
    return pipe.stated.get("law") is project.friction

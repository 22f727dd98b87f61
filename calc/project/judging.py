"""Reading criteria: a limit of the right kind, what it applies to, and in which cases."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import replace

from calc.components import Field, Quantity, Record, Schema, Stated, Text
from calc.criteria import ALL, Criterion
from calc.kinds import GRADIENT, VELOCITY, Kind
from calc.project import later
from calc.project.header import joined, scalars
from calc.project.model import Project
from calc.project.paths import follow, matching
from calc.project.reader import BASIS_KEYS, Reader
from calc.project.records import read_fields, read_group
from calc.project.wording import listed, quoted
from calc.yamlfile import Entry, Node, Scalar
from calc.yamlfile import Mapping as MappingNode

BY_ID: dict[str, Criterion] = {criterion.id: criterion for criterion in ALL}
_SCHEMA = Schema("criteria", "criterion", (Field("title", Text()),))
WITHOUT_SIGN = (GRADIENT, VELOCITY)
"""Kinds that criteria judge without sign, so that a limit below zero says nothing."""
_OWN_KEYS = ("limit", "applies_to", "cases")


def read_criteria(
    reader: Reader, entry: Entry | None, works: Mapping[str, Mapping[str, object]], cases: Collection[str]
) -> dict[str, Record]:
    """Return the criteria by id.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    entry : Entry or None
        ``criteria`` as it stands.
    works : mapping
        The ids of each group of components.
    cases : collection of str
        The ids of the cases.
    """
    found = {}
    for key, member in read_group(reader, entry.value, "criteria", "a criterion", ids=False) if entry else ():
        path = f"criteria.{key.text[:60]}"
        criterion = BY_ID.get(key.text)
        if criterion is not None:
            found[key.text] = _read(reader, criterion, key, member, works=works, cases=cases)
        elif key.text in later.CRITERIA:
            reader.not_yet(key.mark, path, key.text, later.CRITERIA[key.text])
        else:
            words = f"unknown criterion {quoted(key.text)}"
            known = list(BY_ID)
            expected = f"one of {listed(known)}"
            reader.note(key.mark, "unknown-criterion", path, words, expected, reader.near(key.text, known))
    return found


def _read(
    reader: Reader,
    criterion: Criterion,
    key: Scalar,
    member: MappingNode,
    *,
    works: Mapping[str, Mapping[str, object]],
    cases: Collection[str],
) -> Record:
    path = f"criteria.{criterion.id}"
    stated, parts = read_fields(reader, _SCHEMA, member, path, key.mark, extra=(*_OWN_KEYS, *BASIS_KEYS))
    if "limit" in parts:
        _read_limit(reader, criterion, parts["limit"][1], f"{path}.limit", stated)
    else:
        reader.note(
            key.mark, "missing-key", f"{path}.limit", "'limit' is missing",
            f"a criterion with 'limit: {criterion.kinds[0].example}'",
        )  # fmt: skip
    basis = reader.basis(member, path)
    if "limit" in stated and any((basis.source, basis.page, basis.grade, basis.note)):
        stated["limit"] = replace(stated["limit"], basis=basis)
    stated["applies_to"] = _read_applies(reader, criterion, key, parts.get("applies_to"), works)
    stated["cases"] = _read_cases(reader, key, parts.get("cases"), f"{path}.cases", cases)
    return Record(criterion.id, key.mark, stated)


def limit_forms(criterion: Criterion) -> tuple[Quantity, ...]:
    """Return the forms in which the limit of a criterion may be given."""
    return tuple(Quantity(kind, at_least=0.0 if kind in WITHOUT_SIGN else None) for kind in criterion.kinds)


def _read_limit(reader: Reader, criterion: Criterion, node: Node, path: str, stated: dict[str, Stated]) -> None:
    """Read a limit in any of the kinds a criterion takes, and say which."""
    forms = limit_forms(criterion)
    used: list[Kind] = []

    def read(scalar: Scalar, at: str) -> Stated | None:
        got = reader.quantity(scalar, at, forms)
        if got is None:
            return None
        used.append(got[1].kind)
        return got[0]

    one = read(node, path) if isinstance(node, Scalar) else reader.supported(node, path, read)
    if one is not None:
        stated["limit"] = one
        stated["kind"] = Stated(used[0].name, one.written, one.mark)


def _read_applies(
    reader: Reader,
    criterion: Criterion,
    key: Scalar,
    part: tuple[Scalar, Node] | None,
    works: Mapping[str, Mapping[str, object]],
) -> Stated:
    """Return the patterns of what a criterion applies to, joined; all of its group by default."""
    path = f"criteria.{criterion.id}.applies_to"
    if part is None:
        every = f"{criterion.group}.*"
        return Stated(every, every, key.mark, shipped=True)
    written = scalars(reader, part[1], path, "a path, or a list of paths")
    for scalar in written:
        group = scalar.text.partition(".")[0]
        if group in {*works, "constants"} - {criterion.group}:
            found = f"{quoted(scalar.text)} are {group}"
            reader.note(scalar.mark, "wrong-group", path, found, f"{criterion.group}, such as '{criterion.group}.*'")
            continue
        target = follow(reader, scalar, path, works, whole=True)
        if target is not None and target.field is not None:
            found = f"{quoted(scalar.text)} is a field"
            reader.note(scalar.mark, "unknown-path", path, found, f"components, such as '{criterion.group}.*'")
    return joined(written, part[1].mark)


def _read_cases(
    reader: Reader, key: Scalar, part: tuple[Scalar, Node] | None, path: str, cases: Collection[str]
) -> Stated:
    """Return the ids of the cases in which a criterion holds, joined; ``all`` by default."""
    if part is None:
        return Stated("all", "all", key.mark, shipped=True)
    written = scalars(reader, part[1], path, "'all', or a list of cases")
    for scalar in written:
        if scalar.text != "all" and scalar.text not in cases:
            note_unknown_case(reader, scalar, path, cases)
    return joined(written, part[1].mark)


def note_unknown_case(reader: Reader, scalar: Scalar, path: str, cases: Collection[str]) -> None:
    """Note a case that does not exist."""
    found = f"there is no case {quoted(scalar.text)}"
    expected = f"one of {listed(list(cases))}"
    reader.note(scalar.mark, "unknown-case", path, found, expected, reader.near(scalar.text, cases))


def subjects_of(project: Project, criterion: Record) -> tuple[str, ...]:
    """Return the ids of the components that a criterion applies to, in the order of the files."""
    group = BY_ID[criterion.id].group
    ids = project.group(group)
    patterns = [path.partition(".")[2] for path in criterion.text("applies_to").split(", ")]
    if "*" in patterns:
        return tuple(ids)
    wanted = {one for pattern in patterns for one in matching(pattern, ids)}
    return tuple(one for one in ids if one in wanted)


def cases_of(project: Project, criterion: Record) -> tuple[str, ...]:
    """Return the ids of the cases in which a criterion holds, in the order of the project."""
    wanted = criterion.text("cases").split(", ")
    return tuple(one for one in project.cases if "all" in wanted or one in wanted)

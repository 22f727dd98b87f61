"""Reading the works: reservoirs, junctions and pipes, from YAML or from tables."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path

from calc.components import NO_BASIS, Count, Name, Quantity, Record, Schema, Stated, junction, pipe, reservoir
from calc.components.pipe import LAW_INPUT
from calc.marks import Mark
from calc.project import shipped
from calc.project.fittings import read_ends, read_fittings
from calc.project.notes import empty
from calc.project.reader import BASIS_KEYS, Reader
from calc.project.records import Fields, Parts, read_fields, read_group
from calc.project.sizes import read_dimensions, unfolded
from calc.project.wording import quoted
from calc.yamlfile import Entry, Scalar, SourceFile, read_table
from calc.yamlfile import Mapping as MappingNode

Records = dict[str, Record]


@dataclass
class Works:
    """The three groups as read, and the tables they came from."""

    reservoirs: Records = field(default_factory=dict)
    junctions: Records = field(default_factory=dict)
    pipes: Records = field(default_factory=dict)
    tables: list[SourceFile] = field(default_factory=list)
    texts: dict[str, str] = field(default_factory=dict)
    whole: bool = True


def read_works(reader: Reader, folder: Path, top: Mapping[str, Entry], friction: Stated | None) -> Works:
    """Read reservoirs, junctions and pipes.

    Parameters
    ----------
    reader : Reader
        Takes the problems; its ``nodes`` are set here.
    folder : Path
        Where tables lie.
    top : mapping of str to Entry
        The top-level keys.
    friction : Stated or None
        The default law; None when it could not be read.

    Returns
    -------
    Works
        ``whole`` is False when an id or an end of a pipe is in doubt, so that connections say nothing.
    """
    works = Works()
    nodes: dict[str, Mark] = {}
    for name, records, schema in (
        ("reservoirs", works.reservoirs, reservoir.SCHEMA),
        ("junctions", works.junctions, junction.SCHEMA),
    ):
        before = len(reader.problems)
        for key, member in _members(reader, works, folder, top.get(name), f"a {schema.singular}"):
            path = f"{name}.{key.text}"
            stated, _ = _read_row(reader, schema, member, path, key.mark, works)
            _complete_node(reader, name, stated, member, path)
            if key.text in nodes:
                found = f"{quoted(key.text)} is also the id of a reservoir, at {nodes[key.text]}"
                reader.note(key.mark, "shared-id", path, found, "an id that no other node has")
                continue
            nodes[key.text] = key.mark
            records[key.text] = Record(key.text, key.mark, stated)
        _doubt(reader, name, before)
    if not works.reservoirs:
        reader.doubtful.add("reservoirs")
    doubtful = not reader.doubtful.isdisjoint(("reservoirs", "junctions"))
    reader.nodes = None if doubtful else {*nodes, *_outlets(top)}
    before = len(reader.problems)
    members = _members(reader, works, folder, top.get("pipes"), "a pipe")
    _doubt(reader, "pipes", before)
    for key, member in members:
        works.pipes[key.text] = _read_pipe(reader, key, member, works, friction)
    if not works.pipes:
        reader.doubtful.add("pipes")
    ends = ("from", "to")
    later_joins = any(name in top for name in ("outlets", "pumps", "valves"))
    works.whole = not (doubtful or "pipes" in reader.doubtful or later_joins) and all(
        all(end in one.stated for end in ends) and one.text("from") != one.text("to") for one in works.pipes.values()
    )
    _expect_some(reader, works, top)
    return works


NEEDED = ("reservoirs", "pipes")
"""Groups of which a project has at least one."""

_HARMLESS = frozenset(
    {
        *("ambiguous-unit", "bare-number", "not-a-quantity", "not-finite", "unknown-unit", "wrong-dimension"),
        *("bad-text", "bad-word", "excluded-pair", "missing-key", "not-yet", "out-of-range", "unknown-key"),
        *("unknown-reference", "wrong-order"),
    }
)
"""Problems of nodes after which their ids still stand; after others, nothing is said of unknown nodes."""


def _doubt(reader: Reader, group: str, before: int) -> None:
    """Note that some ids of a group could not be read."""
    if any(problem.code not in _HARMLESS for problem in reader.problems[before:]):
        reader.doubtful.add(group)


def _outlets(top: Mapping[str, Entry]) -> tuple[str, ...]:
    """Return the ids of outlets: they are for later, but a pipe to one is not a pipe to nowhere."""
    entry = top.get("outlets")
    return entry.value.keys() if entry and isinstance(entry.value, MappingNode) else ()


def _members(
    reader: Reader, works: Works, folder: Path, entry: Entry | None, what: str
) -> list[tuple[Scalar, MappingNode]]:
    """Return ids and mappings of a group, from where it stands or from its table."""
    if entry is None:
        return []
    path, node = entry.key.text, entry.value
    table = node.get("table") if isinstance(node, MappingNode) else None
    if isinstance(node, MappingNode) and isinstance(table, Scalar):
        for key, _ in node.entries:
            if key.text != "table":
                found = f"{quoted(key.text)} stands beside a table"
                hint = "put every one of them in the table, or all here"
                reader.note(key.mark, "excluded-pair", f"{path}.{key.text}", found, "the table alone", hint)
        read = read_table(folder, table, path)
        reader.problems.extend(read.problems)
        reader.told |= {problem.mark for problem in read.problems}
        if read.file is not None and all(one.name != read.file.name for one in works.tables):
            works.tables.append(read.file)
            works.texts[read.file.name] = read.text
        node = read.rows
    return read_group(reader, node, path, what)


def _read_row(  # noqa: PLR0917 - as fields are read
    reader: Reader, schema: Schema, member: MappingNode, path: str, mark: Mark, works: Works
) -> tuple[Fields, Parts]:
    """Read the fields of a component; in a table, its columns source, page, grade and note hold for a row."""
    if all(file.name != member.mark.file for file in works.tables):
        return read_fields(reader, schema, member, path, mark)
    stated, parts = read_fields(reader, schema, member, path, mark, extra=BASIS_KEYS)
    basis = reader.basis(member, path)
    for one in schema.fields if basis != NO_BASIS else ():
        if one.name in stated and isinstance(one.form, Quantity | Count | Name):
            stated[one.name] = replace(stated[one.name], basis=basis)
    return stated, parts


def _complete_node(reader: Reader, group: str, stated: Fields, member: MappingNode, path: str) -> None:
    if group == "junctions" and not {"withdrawal", "inflow"} & set(member.keys()):
        default = shipped.defaults()["junctions.withdrawal"]
        stated["withdrawal"] = reader.defaults["junctions.*.withdrawal"] = default
    if "low" in stated and "high" in stated and stated["low"].si > stated["high"].si:
        low, high = stated["low"], stated["high"]
        found = f"{quoted(low.written)} is above {quoted(high.written)}"
        reader.note(low.mark, "wrong-order", f"{path}.low", found, "'low' at most 'high'")


def _read_pipe(reader: Reader, key: Scalar, member: MappingNode, works: Works, friction: Stated | None) -> Record:
    path = f"pipes.{key.text}"
    member = unfolded(reader, member, path)
    stated, parts = _read_row(reader, pipe.SCHEMA, member, path, key.mark, works)
    for name in ("parallel", "open"):
        if name not in stated:
            stated[name] = reader.defaults[f"pipes.*.{name}"] = shipped.defaults()[f"pipes.{name}"]
    present = member.keys()
    if "law" not in present and friction is not None:
        stated["law"] = friction
    read_dimensions(reader, stated, present, path, key.mark)
    _check_pipe(reader, stated, present, path, key.mark)
    return Record(key.text, key.mark, stated, _read_parts(reader, key.text, stated, parts, works))


def _read_parts(reader: Reader, name: str, stated: Fields, parts: Parts, works: Works) -> dict[str, tuple[Record, ...]]:
    found: dict[str, tuple[Record, ...]] = {}
    bore = stated.get("bore")
    if "ends" in parts:
        at_reservoir: dict[str, bool] = {}
        for end in ("from", "to"):
            if end in stated and reader.nodes is not None:
                at_reservoir[end] = stated[end].text in works.reservoirs
        found["ends"] = read_ends(reader, parts["ends"][1], name, bore, at_reservoir)
    if "fittings" in parts:
        found["fittings"] = read_fittings(reader, parts["fittings"][1], name, bore)
    return found


def _check_pipe(reader: Reader, stated: Fields, present: tuple[str, ...], path: str, mark: Mark) -> None:
    """Note what the fields of one pipe say together."""
    if "from" in stated and "to" in stated and stated["from"].text == stated["to"].text:
        found = f"the pipe begins and ends at {quoted(stated['to'].text)}"
        reader.note(stated["to"].mark, "self-loop", f"{path}.to", found, "two different nodes")
    roughness, bore = stated.get("roughness"), stated.get("bore")
    if roughness and bore and bore.si <= roughness.si:
        found = f"{quoted(bore.written)} is no larger than the roughness, {quoted(roughness.written)}"
        reader.note(bore.mark, "rough-bore", f"{path}.bore", found, "a bore far larger than the roughness")
    whole = "segments" not in present
    if whole and "law" in stated and (needed := LAW_INPUT[stated["law"].text]) not in present:
        note_missing_input(reader, mark, f"{path}.{needed}", needed, stated["law"])


def note_missing_input(reader: Reader, mark: Mark, path: str, needed: str, law: Stated) -> None:
    """Note that a pipe does not state what its friction law needs."""
    found = f"'{needed}' is missing, which the law {law.text} needs"
    field = pipe.SCHEMA.field(needed)
    form = field.form if field else None
    example = field.example if field and field.example else form.kind.example if isinstance(form, Quantity) else ""
    hint = f"the law is stated at {law.mark}" if not law.shipped else f"{law.text} is the law by default"
    reader.note(mark, "missing-law-input", path, found, f"'{needed}: {example}'", hint)


def _expect_some(reader: Reader, works: Works, top: Mapping[str, Entry]) -> None:
    """Note that there are no reservoirs or no pipes at all."""
    for name, records in zip(NEEDED, (works.reservoirs, works.pipes), strict=True):
        entry = top.get(name)
        if records or (entry is not None and not empty(entry.value) and not _hollow(reader, works, entry)):
            continue
        first = top.get("pipes") or top.get("junctions") or next(iter(top.values()), None)
        mark = entry.key.mark if entry else Mark(first.key.mark.file if first else "network.yaml", 1, 1)
        reader.note(mark, f"no-{name}", name, f"there are no {name}", f"at least one under '{name}'")


def _hollow(reader: Reader, works: Works, entry: Entry) -> bool:
    """Return whether a group has no members: an empty mapping, or a sound table without a row."""
    if not isinstance(entry.value, MappingNode):
        return False
    table = entry.value.get("table")
    if not isinstance(table, Scalar):
        return not entry.value.entries
    return table.text in works.texts and all(problem.mark.file != table.text for problem in reader.problems)

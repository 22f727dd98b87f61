"""Reading records: the fields of a component or section against its schema."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from calc.components import Ends, Field, Fittings, Node, Schema, Stated
from calc.marks import Mark
from calc.project import later
from calc.project.notes import empty
from calc.project.reader import LONGEST_ID, Reader
from calc.project.wording import quoted
from calc.yamlfile import Mapping as MappingNode
from calc.yamlfile import Node as YamlNode
from calc.yamlfile import Scalar

_CODES = {"law": "unknown-law", "kind": "unknown-kind"}
"""Fields whose words have a code of their own."""

Fields = dict[str, Stated]
Parts = dict[str, tuple[Scalar, YamlNode]]


_KNOWN: dict[int, tuple[tuple[Field, ...], Mapping[str, Field]]] = {}
"""By identity, since hashing a schema takes longer than reading a record; the fields kept keep their id."""


def _by_name(fields: tuple[Field, ...]) -> Mapping[str, Field]:
    kept = _KNOWN.get(id(fields))
    if kept is None:
        kept = _KNOWN[id(fields)] = (fields, {field.name: field for field in fields})
    return kept[1]


def read_fields(
    reader: Reader, schema: Schema, node: MappingNode, path: str, mark: Mark, *, extra: Iterable[str] = ()
) -> tuple[Fields, Parts]:
    """Read the fields of one record.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    schema : Schema
        What may stand here.
    node : Mapping
        What stands here.
    path, mark : str, Mark
        Of the record, for problems of the whole.
    extra : iterable of str
        Keys that the caller reads itself.

    Returns
    -------
    dict of str to Stated
        Fields that could be read.
    dict of str to (Scalar, Node)
        ``extra`` keys, ends and fittings, as they stand.
    """
    known = _by_name(schema.fields)
    later_here = later.FIELDS.get(schema.group, {})
    got: Fields = {}
    parts: Parts = {}
    for key, value in node.entries:
        name = key.text
        field = known.get(name)
        if name in extra or (field is not None and isinstance(field.form, Ends | Fittings)):
            parts[name] = (key, value)
        elif field is not None:
            stated = _read_field(reader, field, value, f"{path}.{name}")
            if stated is not None:
                got[name] = stated
        elif name in later_here:
            reader.not_yet(key.mark, f"{path}.{name}", name, later_here[name])
        else:
            reader.unknown(key, f"{path}.{name}", (*known, *extra))
    _require(reader, schema, node, path, mark)
    return got, parts


def _read_field(reader: Reader, field: Field, node: YamlNode, path: str) -> Stated | None:
    if isinstance(field.form, Node):
        return read_node(reader, node, path)
    return reader.value(field.form, node, path, _CODES.get(field.name, "bad-word"))


def read_node(reader: Reader, node: YamlNode, path: str) -> Stated | None:
    """Return the id of a node that exists."""
    scalar = reader.scalar(node, path, "the id of a reservoir or junction")
    if scalar is None:
        return None
    if reader.nodes is not None and scalar.text not in reader.nodes:
        hint = reader.near(scalar.text, reader.nodes)
        found = f"there is no node {quoted(scalar.text)}"
        reader.note(scalar.mark, "unknown-node", path, found, "the id of a reservoir or junction", hint)
        return None
    return Stated(scalar.text, scalar.text, scalar.mark)


def _require(reader: Reader, schema: Schema, node: MappingNode, path: str, mark: Mark) -> None:
    """Note required fields that are not there and pairs of which both are."""
    present = node.keys()
    later_here = later.FIELDS.get(schema.group, {})
    for field in schema.fields:
        if field.required and field.name not in present:
            if later_for_all(later_here, present):
                continue
            missing(reader, schema.singular, field, f"{path}.{field.name}", mark)
    for names in schema.either:
        first = schema.field(names[0])
        if first is not None and not set(names) & set(present) and not later_for_all(later_here, present):
            missing(reader, schema.singular, first, f"{path}.{first.name}", mark, names[1:])
    noted: set[str] = set()
    for one, other in schema.excludes:
        if one in present and other in present and one not in noted:
            noted.add(one)
            at = next(key.mark for key, _ in node.entries if key.text == other)
            found = f"'{one}' and '{other}' both stand here"
            reader.note(at, "excluded-pair", f"{path}.{other}", found, "one of the two")


def later_for_all(later_here: Mapping[str, str], present: Iterable[str]) -> bool:
    """Return whether a word that is for later stands here in place of required fields."""
    return "segments" in later_here and "segments" in present


def missing(  # noqa: PLR0917 - as a problem is told
    reader: Reader, what: str, field: Field, path: str, mark: Mark, others: Iterable[str] = ()
) -> None:
    """Note a required field that is not there, nor any of the others that would do."""
    kind = getattr(field.form, "kind", None)
    wanted = f"'{field.name}: {kind.example}'" if kind is not None else f"'{field.name}'"
    article = "an" if what[0] in "aeiou" else "a"
    instead = "".join(f", or '{other}'" for other in others)
    expected = f"{article} {what} with {wanted}{instead}"
    reader.note(mark, "missing-key", path, f"'{field.name}' is missing", expected)


def read_group(
    reader: Reader, node: YamlNode, path: str, what: str, *, ids: bool = True
) -> list[tuple[Scalar, MappingNode]]:
    """Return the ids of a group with the mapping of each.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    node : Node
        A mapping of ids to mappings.
    path, what : str
        Of the group, and the phrase for one of its members, such as "a pipe".
    ids : bool
        Whether keys must be ids.
    """
    group = reader.mapping(node, path, f"a mapping of ids to {what.partition(' ')[2]}s")
    found: list[tuple[Scalar, MappingNode]] = []
    for key, value in group.entries if group else ():
        at = f"{path}.{key.text}" if len(key.text) <= LONGEST_ID else f"{path}.…"
        if ids and not reader.id(key, at, what):
            continue
        member = reader.mapping(value, at, f"a mapping: the fields of {what}")
        if member is None and empty(value):
            member = MappingNode((), key.mark)
        if member is not None:
            found.append((key, member))
    return found

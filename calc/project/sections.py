"""Reading the sections that layers above declare."""

from __future__ import annotations

from calc.components import Record, Schema
from calc.marks import Mark
from calc.project import later
from calc.project.notes import empty
from calc.project.reader import Reader
from calc.project.records import Fields, read_fields, read_node
from calc.project.section import SectionSchema
from calc.project.wording import quoted
from calc.project.works import Works
from calc.yamlfile import Entry, Node, Scalar
from calc.yamlfile import Mapping as MappingNode


def read_section(reader: Reader, schema: SectionSchema, entry: Entry | None, works: Works) -> Record:
    """Return a section; empty where the folder has none.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    schema : SectionSchema
        What may stand there.
    entry : Entry or None
        What stands there.
    works : Works
        For the marks of an absent section, which are those of the first reservoir.
    """
    if entry is None or empty(entry.value):
        first = next(iter(works.reservoirs.values()), None)
        return Record("", entry.key.mark if entry else first.mark if first else Mark("network.yaml", 1, 1), {})
    node = reader.mapping(entry.value, schema.name, "a mapping")
    if node is None:
        return Record("", entry.key.mark, {})
    kept = MappingNode(tuple(one for one in node.entries if not _for_later(reader, schema, one)), node.mark)
    by_node = {field.name: field for field in schema.by_node}
    stated, parts = read_fields(
        reader,
        Schema(schema.name, schema.name, schema.fields),
        kept,
        schema.name,
        entry.key.mark,
        extra=by_node,
    )
    found = {
        name: _by_node(reader, by_node[name].form, value, f"{schema.name}.{name}", works)
        for name, (_, value) in parts.items()
    }
    return Record("", entry.key.mark, stated, found)


def _for_later(reader: Reader, schema: SectionSchema, entry: Entry) -> bool:
    """Note a field, or a word in one, that this version does not serve."""
    name, path = entry.key.text, f"{schema.name}.{entry.key.text}"
    hint = later.hint_for(schema.later, name)
    if hint is not None:
        reader.not_yet(entry.key.mark, path, name, hint)
        return True
    if isinstance(entry.value, Scalar):
        hint = later.hint_for(schema.later, name, entry.value.text)
        if hint is not None:
            reader.not_yet(entry.value.mark, path, entry.value.text, hint)
    return hint is not None


def _by_node(reader: Reader, form: object, node: Node, path: str, works: Works) -> tuple[Record, ...]:
    """Return one record a node, with its quantity under ``value``."""
    found: list[Record] = []
    mapping = reader.mapping(node, path, "a mapping of node ids to values")
    for key, value in mapping.entries if mapping else ():
        at = f"{path}.{key.text[:64]}"
        named = read_node(reader, key, at)
        stated = reader.value(form, value, at)  # type: ignore[arg-type]
        if named is not None and named.text in works.reservoirs:
            words = f"{quoted(named.text)} is a reservoir, whose head is its level"
            reader.note(key.mark, "wrong-group", at, words, "the id of a junction", "leave it out")
        elif named is not None and stated is not None:
            fields: Fields = {"value": stated}
            found.append(Record(key.text, key.mark, fields))
    return tuple(found)

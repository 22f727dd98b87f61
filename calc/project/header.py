"""Reading what a project says of itself: title block, purpose, people, references, assumptions, revisions."""

from __future__ import annotations

import datetime as dt
import re
from pathlib import Path

from calc.components import Field, Record, Schema, Stated, Text, Word
from calc.marks import Mark
from calc.project import shipped
from calc.project.notes import empty
from calc.project.reader import Reader
from calc.project.records import read_fields, read_group
from calc.project.wording import quoted
from calc.yamlfile import Entry, Node, Scalar
from calc.yamlfile import Mapping as MappingNode
from calc.yamlfile import Sequence as ListNode

ROLES = ("originator", "checker", "approver")
_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", re.ASCII)


def _texts(*names: str, required: tuple[str, ...] = ()) -> tuple[Field, ...]:
    return tuple(Field(name, Text(), required=name in required) for name in names)


HEADER = Schema("project", "project", _texts("number", "title", "revision", "client", "site", "datum"))
PERSON = Schema(
    "people",
    "person",
    _texts("name", "organisation", "position", "qualification", "registration", "date", required=("name",)),
)
REFERENCE = Schema(
    "references",
    "reference",
    _texts("title", "edition", "kind", "date", "author", "publisher", "number", "note", required=("title",)),
)
ASSUMPTION = Schema(
    "assumptions",
    "assumption",
    (Field("text", Text(), required=True), Field("state", Word(("open", "verified")))),
)
REVISION = Schema(
    "revisions",
    "revision",
    _texts("revision", "date", "change", "by", required=("revision", "date", "change")),
)


def read_header(reader: Reader, folder: Path, entry: Entry | None) -> tuple[Record, tuple[str, ...]]:
    """Return the title block, and the paths of what stands by default.

    ``number`` and ``title`` are the folder's name where they are not stated, ``revision`` the first one.
    """
    node = reader.mapping(entry.value, "project", "a mapping: {number: …, title: …}") if entry else None
    default = shipped.defaults()["project.revision"]
    mark = entry.key.mark if entry else default.mark
    stated: dict[str, Stated] = {}
    if node is not None:
        stated, _ = read_fields(reader, HEADER, node, "project", mark)
    name = folder.resolve().name or "project"
    named = Stated(name, name, mark, shipped=True)
    missing = []
    for field, value in (("number", named), ("title", named), ("revision", default)):
        if field not in stated:
            stated[field] = value
            missing.append(f"project.{field}")
    if "revision" not in stated or stated["revision"] is default:
        reader.defaults["project.revision"] = default
    return Record("", mark, stated), tuple(missing)


def read_purpose(reader: Reader, entry: Entry | None) -> tuple[Stated, ...]:
    """Return the sentences of the purpose; one text alone will do."""
    if entry is None or empty(entry.value):
        return ()
    many = isinstance(entry.value, ListNode)
    items = entry.value.items if isinstance(entry.value, ListNode) else (entry.value,)
    read = [reader.text(item, f"purpose[{at}]" if many else "purpose") for at, item in enumerate(items, 1)]
    return tuple(one for one in read if one is not None)


def read_people(reader: Reader, entry: Entry | None) -> dict[str, Record]:
    """Return the people by role."""
    found = {}
    for key, member in read_group(reader, entry.value, "people", "a person", ids=False) if entry else ():
        path = f"people.{key.text}"
        if key.text not in ROLES:
            reader.unknown(key, path, ROLES)
            continue
        stated, _ = read_fields(reader, PERSON, member, path, key.mark)
        if "date" in stated:
            check_date(reader, stated["date"], f"{path}.date")
        found[key.text] = Record(key.text, key.mark, stated)
    return found


def read_references(reader: Reader, entry: Entry | None) -> dict[str, Record]:
    """Return the references, whose ids ``source`` may name from here on."""
    members = read_group(reader, entry.value, "references", "a reference") if entry else []
    reader.references = frozenset(key.text for key, _ in members)
    found = {}
    for key, member in members:
        stated, _ = read_fields(reader, REFERENCE, member, f"references.{key.text}", key.mark)
        found[key.text] = Record(key.text, key.mark, stated)
    return found


def read_assumptions(reader: Reader, entry: Entry | None) -> tuple[dict[str, Record], list[tuple[Scalar, str]]]:
    """Return the assumptions, and the paths they affect, which can be followed once the works are known."""
    found = {}
    affects: list[tuple[Scalar, str]] = []
    members = read_group(reader, entry.value, "assumptions", "an assumption") if entry else []
    for key, member in members:
        path = f"assumptions.{key.text}"
        stated, parts = read_fields(reader, ASSUMPTION, member, path, key.mark, extra=("basis", "affects"))
        if member.get("state") is None:
            stated["state"] = reader.defaults["assumptions.*.state"] = shipped.defaults()["assumptions.state"]
        if "basis" in parts and (basis := reader.reference(parts["basis"][1], f"{path}.basis")):
            stated["basis"] = basis
        if "affects" in parts:
            paths = scalars(reader, parts["affects"][1], f"{path}.affects", "a list of paths")
            affects += [(scalar, f"{path}.affects") for scalar in paths]
            stated["affects"] = joined(paths, parts["affects"][1].mark)
        found[key.text] = Record(key.text, key.mark, stated)
    return found, affects


def scalars(reader: Reader, node: Node, path: str, expected: str) -> list[Scalar]:
    """Return the scalars of a list; one alone will do."""
    if isinstance(node, Scalar):
        return [node] if node.text else []
    items = reader.items(node, path, expected)
    got = (reader.scalar(item, f"{path}[{at}]", "a text") for at, item in enumerate(items, 1))
    return [scalar for scalar in got if scalar is not None]


def joined(parts: list[Scalar], mark: Mark) -> Stated:
    """Return several texts as one, divided by commas."""
    text = ", ".join(part.text for part in parts)
    return Stated(text, text, mark)


def read_revisions(reader: Reader, entry: Entry | None) -> tuple[Record, ...]:
    """Return the revisions, each with a date of the calendar and a letter or number of its own."""
    found: dict[str, Record] = {}
    items = reader.items(entry.value, "revisions", "a list: [{revision: …, date: …, change: …}]") if entry else ()
    for at, item in enumerate(items, 1):
        path = f"revisions[{at}]"
        if not isinstance(item, MappingNode):
            reader.wrong_shape(item, path, "a mapping: {revision: …, date: …, change: …}")
            continue
        stated, _ = read_fields(reader, REVISION, item, path, item.mark)
        if "date" in stated:
            check_date(reader, stated["date"], f"{path}.date")
        name = stated["revision"].text if "revision" in stated else f"[{at}]"
        if name in found:
            mark = stated["revision"].mark
            first = found[name].stated["revision"].mark
            words = f"the revision {quoted(name)} stands twice, first at {first}"
            reader.note(mark, "duplicate-id", f"{path}.revision", words, "each revision once")
            continue
        found[name] = Record(name, item.mark, stated)
    return tuple(found.values())


def check_date(reader: Reader, date: Stated, path: str) -> None:
    """Note a date that is not one of the calendar, year first."""
    try:
        sound = _DATE.fullmatch(date.text) and dt.date.fromisoformat(date.text)
    except ValueError:
        sound = None
    if not sound:
        found = f"{quoted(date.text)} is not a date"
        reader.note(date.mark, "bad-date", path, found, "year, month and day, such as '2026-11-02'")

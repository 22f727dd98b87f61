"""Reading what a project says of itself: title block, purpose, people, references, assumptions, revisions."""

from __future__ import annotations

from pathlib import Path

from calc.components import Date, Field, Record, Schema, Stated, Text, Word
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


def _texts(required: tuple[str, ...] = (), **words: str) -> tuple[Field, ...]:
    return tuple(Field(name, Text(), name in required, *said.split(" | ")) for name, said in words.items())


HEADER = Schema(
    "project",
    "project",
    _texts(
        number="number of the calculation | OTM-HY-014",
        title="title of the calculation | Ostrel transfer main",
        revision="revision, which stands under 'revisions' too | P01",
        client="whom the calculation is for | Ostrel Valley Water Undertaking",
        site="where the works are | Marl Cross, Ostrel valley",
        datum="what levels are measured from | Ostrel Local Datum, survey of 2025",
    ),
)
PERSON = Schema(
    "people",
    "person",
    (
        *_texts(
            ("name",),
            name="name | M. Arden",
            organisation="employer | Ostrel Valley Water Undertaking",
            position="position | Senior engineer",
            qualification="qualification | BEng",
            registration="registration as an engineer | 204817",
        ),
        Field("date", Date(), words="when this person signed", example="2026-11-02"),
    ),
)
REFERENCE = Schema(
    "references",
    "reference",
    _texts(
        ("title",),
        title="title | Topographic and tank survey",
        edition="edition or revision | Rev 2",
        kind="what it is: survey, drawing, standard … | survey",
        date="its date | 2025-09-18",
        author="author | T. Halloway",
        publisher="publisher | Ostrel Valley Water Undertaking",
        number="number under which it is filed | OTM-SV-003",
        note="note | Sheets 1 to 14",
    ),
)
ASSUMPTION = Schema(
    "assumptions",
    "assumption",
    (
        Field("text", Text(), required=True, words="what is assumed", example="The mains are clean"),
        Field("state", Word(("open", "verified")), words="whether it has been verified", example="open"),
    ),
)
_REVISION = _texts(
    ("revision", "change"),
    revision="revision | P01",
    change="what changed | First issue for checking",
    by="who made it | M. Arden",
)
REVISION = Schema(
    "revisions",
    "revision",
    (
        _REVISION[0],
        Field("date", Date(), required=True, words="date, printed on every page", example="2026-11-02"),
        *_REVISION[1:],
    ),
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
        name = stated["revision"].text if "revision" in stated else f"[{at}]"
        if name in found:
            mark = stated["revision"].mark
            first = found[name].stated["revision"].mark
            words = f"the revision {quoted(name)} stands twice, first at {first}"
            reader.note(mark, "duplicate-id", f"{path}.revision", words, "each revision once")
            continue
        found[name] = Record(name, item.mark, stated)
    return tuple(found.values())

"""Reading the fittings and reservoir ends of a pipe: records with coefficients both ways."""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache

from calc.components import Quantity, Record, Schema, Stated, Text, Word
from calc.components.fields import Field
from calc.components.fitting import FLOW_COEFFICIENTS, FORM_FIELDS, NEEDS, computed_kind
from calc.components.fitting import SCHEMA as FITTING_SCHEMA
from calc.kinds import NUMBER
from calc.marks import Mark
from calc.project import shipped
from calc.project.notes import empty
from calc.project.reader import BASIS_KEYS, Reader
from calc.project.records import Fields, read_fields
from calc.yamlfile import Mapping, Node, Scalar

COEFFICIENT = Quantity(NUMBER, at_least=0.0)


@lru_cache(maxsize=1)
def schema() -> Schema:
    """Return the schema of a fitting with the kinds of the shipped table."""
    kinds = Word((*shipped.fittings(), *(name for name in NEEDS if name not in FLOW_COEFFICIENTS)))
    own = tuple(Field("kind", kinds) if f.name == "kind" else f for f in FITTING_SCHEMA.fields)
    place = Field("at", Word(("from", "to", "along")), words="where it stands in the pipe")
    return Schema("fittings", "fitting", (*own, place), FITTING_SCHEMA.excludes, FITTING_SCHEMA.either)


def read_fittings(reader: Reader, node: Node, pipe: str, bore: Stated | None) -> tuple[Record, ...]:
    """Read the fittings of a pipe.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    node : Node
        The list as it stands.
    pipe : str
        Id of the pipe; fittings are numbered under it from 1.
    bore : Stated or None
        Bore of the pipe, on which a fitting stands unless it says otherwise.
    """
    fields = schema()
    found = []
    path = f"pipes.{pipe}.fittings"
    for number, item in enumerate(reader.items(node, path, "a list of fittings: [{kind: bend-90}, …]"), 1):
        at = f"{path}[{number}]"
        member = reader.mapping(item, at, "a mapping: {kind: …}, {K: …}, {Kv: …} or {Cv: …}")
        if member is None:
            if empty(item):
                reader.note(item.mark, "wrong-shape", at, "nothing is written here", "{kind: …} or {K: …}")
            continue
        stated, _ = read_fields(reader, fields, member, at, item.mark, extra=BASIS_KEYS)
        _complete(reader, stated, member, at, bore)
        if ("K" in stated and "K_reverse" in stated) or _computable(stated):
            found.append(Record(f"{pipe}/{number}", item.mark, stated))
    return tuple(found)


def _complete(reader: Reader, stated: Fields, member: Mapping, at: str, bore: Stated | None) -> None:
    """Add coefficients, basis and defaults to what stands in a fitting."""
    basis = reader.basis(member, at)
    note = member.get("note")
    if note is not None and basis.note:
        stated["note"] = Stated(basis.note, basis.note, note.mark)
    _check_form(reader, stated, member, at)
    for name in ("K", "K_reverse", "kind", "bore", "Kv", "Cv", *FORM_FIELDS):
        if name in stated and any((basis.source, basis.page, basis.grade, basis.note)):
            stated[name] = replace(stated[name], basis=basis)
    if computed_kind(stated):
        if "kind" in stated and (form := shipped.computed_fittings().get(stated["kind"].text)):
            stated["title"] = form.title  # a kind of the table beside Kv or Cv has none, and is told as a problem
    elif "kind" in stated:
        row = shipped.fittings()[stated["kind"].text]
        stated.setdefault("K", row.forward)
        stated.setdefault("K_reverse", row.reverse)
        stated["title"] = row.title
    elif "K" in stated:
        stated.setdefault("K_reverse", stated["K"])
    _count_and_bore(reader, stated, bore)


def _computable(stated: Fields) -> bool:
    kind = computed_kind(stated)
    return bool(kind) and all(name in stated for name in NEEDS[kind])


def _check_form(reader: Reader, stated: Fields, member: Mapping, at: str) -> None:
    """Note what a computed kind lacks, and what stands beside a kind that makes nothing of it."""
    kind = computed_kind(stated)
    wanted = NEEDS.get(kind, ())
    present = member.keys()
    if "kind" in present and "kind" not in stated:
        return  # which is told already
    what = f"'{kind}'" if kind in FLOW_COEFFICIENTS else f"the kind '{kind}'" if kind else ""
    for name in wanted:
        field = FITTING_SCHEMA.field(name)
        if name not in present and field is not None and isinstance(field.form, Quantity):
            example = field.example or field.form.kind.example
            reader.note(member.mark, "missing-key", f"{at}.{name}", f"'{name}' is missing", f"'{name}: {example}'")
    for key, _ in member.entries:
        idle = key.text in FORM_FIELDS and key.text not in wanted
        if idle or (kind and key.text == "K_reverse"):
            found = f"'{key.text}' stands beside {what or 'a stated coefficient'}, which does not take it"
            takers = [name for name, needs in NEEDS.items() if key.text in needs]
            expected = f"{key.text} with kind {' or '.join(takers)}" if takers else "'K_reverse' beside 'K'"
            reader.note(key.mark, "excluded-pair", f"{at}.{key.text}", found, expected, "leave it out")


def _count_and_bore(reader: Reader, stated: Fields, bore: Stated | None) -> None:
    if "count" not in stated:
        stated["count"] = reader.defaults["fittings.*.count"] = shipped.defaults()["fittings.count"]
    if bore is not None:
        stated.setdefault("bore", bore)


def read_ends(
    reader: Reader, node: Node, pipe: str, bore: Stated | None, at_reservoir: dict[str, bool]
) -> tuple[Record, ...]:
    """Read the losses at the reservoir ends of a pipe.

    Forward flow leaves a reservoir at ``from`` (the entry of the pipe) and enters one at ``to`` (its exit).

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    node : Node
        ``{from: square}``, ``{to: {entry: 0.5, exit: 1.0}}`` or both.
    pipe : str
        Id of the pipe.
    bore : Stated or None
        Bore of the pipe.
    at_reservoir : dict
        For ``from`` and ``to``, whether a reservoir is there; an end that is not known is left out.
    """
    path = f"pipes.{pipe}.ends"
    mapping = reader.mapping(node, path, "a mapping: {from: square} or {to: square}")
    found = []
    for key, value in mapping.entries if mapping else ():
        at = f"{path}.{key.text}"
        if key.text not in ("from", "to"):
            reader.unknown(key, at, ("from", "to"))
        elif not at_reservoir.get(key.text, True):
            hint = "leave it out, or state the loss as a fitting"
            found_here = f"'{key.text}' of the pipe is a junction"
            reader.note(key.mark, "wrong-end", at, found_here, "an end at a reservoir", hint)
        else:
            stated = _read_end(reader, value, at)
            if stated is not None:
                found.append(_end(reader, f"{pipe}/{key.text}", key, stated, bore))
    return tuple(sorted(found, key=lambda record: record.id.endswith("/to")))


def _end(reader: Reader, name: str, key: Scalar, stated: Fields, bore: Stated | None) -> Record:
    entry, leaving = stated.pop("entry"), stated.pop("exit")
    forward, reverse = (entry, leaving) if key.text == "from" else (leaving, entry)
    stated |= {"K": forward, "K_reverse": reverse}
    _count_and_bore(reader, stated, bore)
    return Record(name, key.mark, stated)


OWN_END = Schema(
    "ends",
    "reservoir end",
    (
        Field("entry", COEFFICIENT, required=True, words="loss coefficient, flow out of the reservoir"),
        Field("exit", COEFFICIENT, words="loss coefficient, flow into the reservoir"),
        Field("note", Text(), words="note"),
    ),
)


def _read_end(reader: Reader, node: Node, path: str) -> Fields | None:
    """Return ``entry`` and ``exit`` of one end, with its shape as ``kind`` where it has one."""
    shapes = shipped.ends()
    if isinstance(node, Mapping):
        return _read_own_end(reader, node, path, node.mark)
    shape = reader.word(node, path, tuple(shapes), "unknown-kind", "shape")
    if shape is None:
        return None
    row = shapes[shape.text]
    return {"kind": shape, "title": row.title, "entry": row.forward, "exit": row.reverse}


def _read_own_end(reader: Reader, node: Mapping, path: str, mark: Mark) -> Fields | None:
    stated, _ = read_fields(reader, OWN_END, node, path, mark, extra=("source", "page", "grade"))
    basis = reader.basis(node, path)
    for name in ("entry", "exit"):
        if name in stated and any((basis.source, basis.page, basis.grade, basis.note)):
            stated[name] = replace(stated[name], basis=basis)
    if "entry" not in stated:
        return None
    if "exit" not in stated:
        if node.get("exit") is not None:
            return None
        stated["exit"] = reader.defaults["ends.*.exit"] = shipped.defaults()["ends.exit"]
    return stated

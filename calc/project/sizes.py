"""Dimensions of a pipe, from size, standard and class by the shipped tables or as stated, and the bore they leave."""

from __future__ import annotations

from calc.components import NO_BASIS, Stated
from calc.components.pipe import SCHEMA
from calc.marks import Mark
from calc.physics.dimensions import bore_within
from calc.project import shipped, standards
from calc.project.bounds import outside
from calc.project.reader import BASIS_KEYS, Reader, taken
from calc.project.records import Fields
from calc.project.standards import PipeClass, Size, Standard
from calc.project.wording import listed, quoted
from calc.yamlfile import Entry, Mapping, Scalar

NAMES = ("size", "standard", "class")
WITHIN = (*NAMES, "wall", "lining")
"""What may stand in a mapping under ``bore``."""


def unfolded(reader: Reader, pipe: Mapping, path: str) -> Mapping:
    """Return the fields of a pipe with ``bore: {size: …, standard: …, class: …}`` as fields of the pipe itself."""
    bore = pipe.get("bore")
    if not isinstance(bore, Mapping) or bore.get("value") is not None or not set(NAMES) & set(bore.keys()):
        return pipe
    entries: list[Entry] = []
    for entry in pipe.entries:
        if entry.value is bore:
            entries += _from_bore(reader, pipe, bore, path)
        else:
            entries.append(entry)
    return Mapping(tuple(entries), pipe.mark)


def _from_bore(reader: Reader, pipe: Mapping, bore: Mapping, path: str) -> list[Entry]:
    found: list[Entry] = []
    basis = tuple(entry for entry in bore.entries if entry.key.text in BASIS_KEYS)
    for key, value in bore.entries:
        at = f"{path}.bore.{key.text}"
        if key.text in BASIS_KEYS:
            continue
        if key.text not in WITHIN:
            reader.unknown(key, at, (*WITHIN, *BASIS_KEYS))
        elif pipe.get(key.text) is not None:
            said = f"'{key.text}' stands here and with the pipe"
            reader.note(key.mark, "excluded-pair", at, said, "one of the two")
        elif key.text == "size" and basis and isinstance(value, Scalar):
            held = Entry(Scalar("value", value.mark), value)
            found.append(Entry(key, Mapping((held, *basis), bore.mark)))
        else:
            found.append(Entry(key, value))
    return found


def read_dimensions(reader: Reader, stated: Fields, present: tuple[str, ...], path: str, mark: Mark) -> None:
    """Add to the fields of a pipe the dimensions that its size has, and the bore that they leave."""
    if "size" in present:
        _from_tables(reader, stated, present, path, mark)
    elif {"bore", "outside_diameter"} & set(present):
        for name in ("standard", "class"):
            if name in stated:
                found = f"'{name}' stands without 'size'"
                reader.note(stated[name].mark, "missing-key", f"{path}.{name}", found, "'size' too, or neither")
    if "outside_diameter" in present:
        _complete(reader, stated, present, path, mark)
    _add_bore(reader, stated, path)


def _from_tables(reader: Reader, stated: Fields, present: tuple[str, ...], path: str, mark: Mark) -> None:
    tables = standards.standards()
    standard = _found(reader, stated, present, "standard", list(tables.values()), path, mark)
    if not isinstance(standard, Standard):
        return
    size = _found(reader, stated, present, "size", list(standard.sizes.values()), path, mark)
    if not isinstance(size, Size):
        return
    one = _found(reader, stated, present, "class", standard.classes_of(size), path, mark, f" for {size.name}")
    if isinstance(one, PipeClass):
        _take(stated, standard, size, one)


def _take(stated: Fields, standard: Standard, size: Size, one: PipeClass) -> None:
    """Add what the tables have of a size; what is stated stands."""
    named = stated["size"]
    said = f"{size.name} to {standard.name}, class {one.name}, at {named.mark}"
    rating = size.pressure_ratings.get(one.name, one.pressure_rating)
    held = {"outside_diameter": size.outside_diameter, "wall": size.walls[one.wall], "lining": size.lining}
    for name, value in {**held, "pressure_rating": rating}.items():
        if value is not None and name not in stated:
            stated[name] = taken(value, said, named.basis)


def _found(  # noqa: PLR0917 - as a problem is told
    reader: Reader,
    stated: Fields,
    present: tuple[str, ...],
    name: str,
    rows: list[Standard] | list[Size] | list[PipeClass],
    path: str,
    mark: Mark,
    where: str = "",
) -> Standard | Size | PipeClass | None:
    """Return the row that a field names, or note what the choices are."""
    choices = [row.name for row in rows]
    wanted = f"one of {listed(choices)}"
    if name not in stated:
        if name not in present:
            at = stated["size"].mark if "size" in stated else mark
            reader.note(at, "missing-key", f"{path}.{name}", f"'{name}' is missing{where}", wanted)
        return None
    row = standards.matching(stated[name].text, rows)
    if row is None:
        found = f"the tables have no {name} {quoted(stated[name].text)}{where}"
        hint = reader.near(stated[name].text, choices)
        reader.note(stated[name].mark, "unknown-size", f"{path}.{name}", found, wanted, hint)
    return row


def _complete(reader: Reader, stated: Fields, present: tuple[str, ...], path: str, mark: Mark) -> None:
    """Note a stated outside diameter without its wall; a pipe whose lining is not stated has none."""
    if "wall" not in present:
        reader.note(mark, "missing-key", f"{path}.wall", "'wall' is missing", "'wall: 6 mm' beside 'outside_diameter'")
    if "lining" not in present:
        stated["lining"] = reader.defaults["pipes.*.lining"] = shipped.defaults()["pipes.lining"]


def _add_bore(reader: Reader, stated: Fields, path: str) -> None:
    if not all(name in stated for name in ("outside_diameter", "wall", "lining")):
        return
    outer, wall, lining = (stated[name] for name in ("outside_diameter", "wall", "lining"))
    value = float(bore_within.body(outside_diameter=outer.si, wall=wall.si, lining=lining.si))
    field = SCHEMA.field("bore")
    if field is not None and outside(field.form, value):  # type: ignore[arg-type]
        found = f"{outer.written} less twice {wall.written} and {lining.written} leaves no bore"
        mark = wall.mark if not wall.shipped else lining.mark if not lining.shipped else outer.mark
        reader.note(mark, "out-of-range", f"{path}.bore", found, "a wall and a lining that leave a bore")
        return
    named = stated.get("size", outer)
    stated["bore"] = Stated(value, named.written, named.mark, basis=NO_BASIS, follows=True)

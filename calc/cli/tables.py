"""``headtrace tables``: the shipped tables, with the source and place of every value."""

from __future__ import annotations

import argparse
import textwrap
from collections.abc import Callable, Iterable, Mapping, Sequence
from functools import partial

from calc.cli.call import WrongCall
from calc.cli.layout import columns
from calc.cli.outcome import Outcome
from calc.components import Stated
from calc.problems import nearest
from calc.project import materials, shipped, standards
from calc.project.shipped import FOLDER, Row
from calc.project.standards import PipeClass, Size, Standard

WIDTH = 118
RECALLED = "*"
"""Stands behind a value that was recalled and not read again, where others of its table were read."""


def run(asked: argparse.Namespace) -> Outcome:
    """Print one table, or the names of all."""
    tables = dict(TABLES)
    for name, one in _by_name().items():
        tables[name] = (one.title, partial(_standard, one))
    if asked.name is None:
        return Outcome(said="\n".join(columns([[name, words] for name, (words, _) in tables.items()], "<<", 0)))
    wanted = _plain(asked.name[:100])
    found = next((name for name in tables if _plain(name) == wanted), None)
    if found is None:
        hint = nearest(wanted, list(tables))
        raise WrongCall(f"there is no table '{asked.name}'", f"one of {', '.join(tables)}", hint)
    words, rows = tables[found]
    return Outcome(said="\n".join([*_wrapped(words), "", *rows()]))


def _plain(name: str) -> str:
    return "-".join(name.split()).casefold()


def _by_name() -> dict[str, Standard]:
    """Return the standards by the names of their tables: ``en-545`` for EN 545."""
    return {_plain(name): one for name, one in standards.standards().items()}


def _wrapped(text: str, indent: str = "") -> list[str]:
    return textwrap.wrap(text, WIDTH, subsequent_indent=indent)


def _place(stated: Stated) -> str:
    """Return line and column; the file is named once, under the table."""
    return f"{stated.mark.line}:{stated.mark.column}"


def _places(file: str) -> str:
    return f"Places are line and column of {FOLDER}/{file}."


def _sources(used: Iterable[str], sources: Mapping[str, str]) -> list[str]:
    """Return the sources that a table names, one a line and wrapped."""
    keys = list(dict.fromkeys(used))
    indent = " " * (max(map(len, keys)) + 2)
    return [line for key in keys for line in _wrapped(f"{key:{len(indent)}}{sources[key]}", indent)]


def _fittings() -> list[str]:
    rows = [["kind", "K", "range", "what it is", "source", "place"]]
    for name, row in shipped.fittings().items():
        rows.append([name, row.forward.written, row.span or "–", row.title.text, row.key, _place(row.forward)])
    return [*columns(rows, "<>><<<", 0), "", *_computed(), "", *_key(shipped.fittings())]


def _computed() -> list[str]:
    rows = [["computed", "takes", "what it is", "place"]]
    laws: list[str] = []
    for name, one in shipped.computed_fittings().items():
        rows.append([name, one.takes.text, one.title.text, _place(one.law)])
        laws += _wrapped(f"{name:7}{one.law.text}; {one.law.basis.source}", " " * 7)
    return [*columns(rows, "<<<<", 0), "", *laws]


def _ends() -> list[str]:
    rows = [["shape", "entry", "exit", "range of entry", "what it is", "source", "place"]]
    for name, row in shipped.ends().items():
        one, other = row.forward, row.reverse
        rows.append([name, one.written, other.written, row.span, row.title.text, row.key, _place(one)])
    said = _wrapped(f"exit      {shipped.sources('fittings.yaml')['exit']}", " " * 10)
    return [*columns(rows, "<>>><<<", 0), "", *said, *_key(shipped.ends())]


def _key(rows: Mapping[str, Row]) -> list[str]:
    return [
        *_sources((row.key for row in rows.values()), shipped.sources("fittings.yaml")),
        "",
        _places("fittings.yaml"),
    ]


def _defaults() -> list[str]:
    rows = [["path", "value", "place"]]
    said: list[str] = []
    held = shipped.defaults()
    for path, stated in held.items():
        rows.append([path, stated.written, _place(stated)])
        said += _wrapped(f"{path}: {stated.basis.source}", "  ")
    return [*columns(rows, "<<<", 0), "", "Sources", *said, "", _places("defaults.yaml")]


def _materials(table: str) -> list[str]:
    held = materials.tables()[table].values()
    rows = [[row.name, row.value.written, row.span, row.title.text, row.key, _place(row.value)] for row in held]
    return [
        *columns([["material", "value", "range", "what it is", "source", "place"], *rows], "<>><<<", 0),
        "",
        *_sources((row.key for row in held), shipped.sources(materials.FILE)),
        "",
        _places("materials.yaml"),
    ]


def _pipes() -> list[str]:
    rows = [["table", "standard", "size, class", "what it is"]]
    for name, one in _by_name().items():
        size = one.sizes[one.example]
        rows.append([name, one.name, f"{one.example}, {one.classes_of(size)[0].name}", one.title])
    return columns(rows, "<<<<", 0)


def _standard(one: Standard) -> list[str]:
    walls = list(dict.fromkeys(each.wall for each in one.classes.values()))
    sizes = list(one.sizes.values())
    rows = [["size", "outside", "lining", *walls, "line"], *(_size_row(size, walls) for size in sizes)]
    rated = [["class", "rated pressure", "also", "line"], *(_class_row(each, sizes) for each in one.classes.values())]
    marked = any(RECALLED in cell for row in (*rows, *rated) for cell in row)
    recalled = [f"{RECALLED} this value {standards.MEMORY}"] if marked else []
    sources = dict.fromkeys([one.source, one.wall_source, *(each.source for each in one.classes.values())])
    return [
        *_wrapped(f"Under the classes stands the {one.wall}. Dimensions are in {sizes[0].outside_diameter.unit}."),
        "",
        *columns(rows, "<" + ">" * (len(walls) + 3), 0),
        "",
        *columns(rated, "<><>", 0),
        "",
        *recalled,
        *(line for source in sources for line in _wrapped(f"Source: {source}", "  ")),
        f"Lines are those of {FOLDER}/sizes.yaml. Bore = outside − 2 (wall + lining).",
    ]


def _size_row(size: Size, walls: Sequence[str]) -> list[str]:
    outer = size.outside_diameter
    held = [_marked(stated, outer.unit) for stated in (outer, size.lining, *map(size.walls.get, walls))]
    return [", ".join((size.name, *size.also[:1])), *held, str(outer.mark.line)]


def _class_row(one: PipeClass, sizes: Sequence[Size]) -> list[str]:
    by_size = [size.pressure_ratings[one.name] for size in sizes if one.name in size.pressure_ratings]
    rated = _marked(one.pressure_rating)
    if by_size:
        rated = f"{max(by_size, key=_si).written} to {min(by_size, key=_si).written}, by size"
    return [one.name, rated, ", ".join(one.also), str(one.line)]


def _si(stated: Stated) -> float:
    return stated.si


def _marked(stated: Stated | None, unit: str = "") -> str:
    """Return a value as written, without a unit that is said for the whole table, with the mark of a recalled one."""
    if stated is None:
        return "–"
    text = stated.written.removesuffix(f" {unit}")
    return f"{text}{RECALLED}" if stated.basis.source.endswith(standards.MARK) else text


TABLES: dict[str, tuple[str, Callable[[], list[str]]]] = {
    "fittings": (
        "Kinds of fitting with their loss coefficients, both ways, on the velocity head in the fitting's bore",
        _fittings,
    ),
    "ends": ("Shapes of reservoir ends: the coefficient when water leaves the reservoir and when it enters", _ends),
    "defaults": ("Values in force where a project states none", _defaults),
    "roughness": ("Roughness heights: 'roughness: {material: cast-iron}'", partial(_materials, "roughness")),
    "hazen-williams": (
        "Hazen–Williams C: 'hazen_williams_c: {material: cast-iron-20-years}'",
        partial(_materials, "hazen-williams"),
    ),
    "manning": ("Manning n: 'manning_n: {material: concrete}'", partial(_materials, "manning")),
    "pipes": ("Standards of pipes: 'bore: {size: DN400, standard: EN 545, class: C40}'", _pipes),
}
"""By name: what a table holds, and its lines; the standards of pipes come on top."""

"""From a folder to a project: every part read, every problem noted, then one or the other."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path

from calc.components import Record, Stated
from calc.problems import ProblemsFound
from calc.project import header, later, materials, sections, settings
from calc.project.cases import read_cases
from calc.project.connection import check_connection
from calc.project.consequences import check_cases
from calc.project.judging import read_criteria
from calc.project.model import Case, Project
from calc.project.paths import follow
from calc.project.reader import Reader
from calc.project.section import SectionSchema
from calc.project.shipped import defaults
from calc.project.works import Works, read_works
from calc.yamlfile import Entry, SourceFile, Sources, read_folder
from calc.yamlfile.collector import without_collector

KEYS = (
    "project",
    "purpose",
    "people",
    "references",
    "assumptions",
    "revisions",
    "fluid",
    "site",
    "friction",
    "constants",
    "reservoirs",
    "junctions",
    "pipes",
    "cases",
    "criteria",
)
"""Top-level keys that this package reads; sections passed in come on top."""

_PARTIAL = frozenset(
    {"duplicate-key", "yaml-alias", "yaml-anchor", "yaml-tag", "merge-key", "complex-key", "empty-key"}
)
"""Problems of a file after which the rest of it is still read."""


def read_project(folder: Path, schemas: Sequence[SectionSchema]) -> Project:
    """Read a project folder.

    Parameters
    ----------
    folder : Path
        All ``*.yaml`` files directly in it are read, and the tables they name.
    schemas : sequence of SectionSchema
        The sections that layers above declare.

    Returns
    -------
    Project
        Complete and sound.

    Raises
    ------
    ProblemsFound
        With every problem at once, sorted, and the texts of the files.
    """
    sources = read_folder(folder)
    if any(problem.code not in _PARTIAL for problem in sources.problems):
        raise ProblemsFound(sources.problems, sources.texts)
    doubtful = {problem.path.partition(".")[0] for problem in sources.problems}
    reader = Reader(doubtful=doubtful, materials=materials.values)
    with without_collector():
        project, works = _read(reader, folder, sources, schemas)
        if project is not None:
            check_cases(reader, project)
    seen = {problem.mark for problem in sources.problems}
    problems = [*sources.problems, *(one for one in reader.problems if one.mark not in seen)]
    if problems or project is None:
        raise ProblemsFound(problems, {**sources.texts, **works.texts})
    return project


def _read(
    reader: Reader, folder: Path, sources: Sources, schemas: Sequence[SectionSchema]
) -> tuple[Project | None, Works]:
    """Read every part; the project is None where a part without which it cannot stand could not be read."""
    top = sources.top
    _check_keys(reader, top, [schema.name for schema in schemas])
    references = header.read_references(reader, top.get("references"))
    title_block, missing = header.read_header(reader, folder, top.get("project"))
    fluid = settings.read_fluid(reader, top.get("fluid"))
    friction = settings.read_friction(reader, top.get("friction"))
    works = read_works(reader, folder, top, friction)
    check_connection(reader, works)
    ids: dict[str, Mapping[str, Record]] = {
        "reservoirs": works.reservoirs,
        "junctions": works.junctions,
        "pipes": works.pipes,
    }
    assumptions, affects = header.read_assumptions(reader, top.get("assumptions"))
    for written, path in affects:
        follow(reader, written, path, ids, whole=True)
    cases = read_cases(reader, top.get("cases"), ids, fluid)
    constants = settings.read_constants(reader, top.get("constants"))
    files = _files(sources.files, works.tables)
    project = Project(
        folder=folder,
        files=files,
        texts={**sources.texts, **works.texts},
        digest=digest(files),
        header=title_block,
        missing=missing,
        purpose=header.read_purpose(reader, top.get("purpose")),
        people=header.read_people(reader, top.get("people")),
        references=references,
        assumptions=assumptions,
        revisions=header.read_revisions(reader, top.get("revisions")),
        fluid=fluid,
        site=settings.read_site(reader, top.get("site")),
        constants=_constants(reader, constants, works, cases),
        friction=friction or defaults()["friction"],
        reservoirs=works.reservoirs,
        junctions=works.junctions,
        pipes=works.pipes,
        criteria=read_criteria(reader, top.get("criteria"), ids, cases),
        cases=cases,
        sections={
            schema.name: sections.read_section(reader, schema, top.get(schema.name), works) for schema in schemas
        },
        defaults=_in_order(reader.defaults),
        spreads=dict(reader.spreads),
    )
    circular = any(problem.code == "case-cycle" for problem in reader.problems)
    broken = any(case.after and case.after not in cases for case in cases.values())
    return (None if circular or broken else project), works


def _constants(
    reader: Reader, constants: Mapping[str, Record], works: Works, cases: Mapping[str, Case]
) -> dict[str, Record]:
    """Return the constants that some case needs, or that the inputs state."""
    lines = [line for case in cases.values() for line in case.lines]
    laws = {pipe.text("law") for pipe in works.pipes.values()}
    laws |= {line.stated.text for line in lines if line.field == "law"}
    changed = {row for line in lines if line.group == "constants" for row in line.rows}
    return settings.in_force(reader, constants, laws, changed)


def _in_order(used: Mapping[str, Stated]) -> tuple[tuple[str, Stated], ...]:
    """Return the defaults in use in the order of the file that ships them."""
    return tuple(sorted(used.items(), key=lambda item: (item[1].mark.line, item[0])))


def _check_keys(reader: Reader, top: Mapping[str, Entry], declared: Iterable[str]) -> None:
    """Note top-level keys that nobody reads."""
    known = (*KEYS, *declared)
    for name, entry in top.items():
        if name in later.TOP and name not in known:
            reader.not_yet(entry.key.mark, name, name, later.TOP[name])
        elif name not in known:
            reader.unknown(entry.key, name[:60], known)


def _files(read: Iterable[SourceFile], tables: Iterable[SourceFile]) -> tuple[SourceFile, ...]:
    return tuple(sorted((*read, *tables), key=lambda file: file.name))


def digest(files: Iterable[SourceFile]) -> str:
    """Return ``sha256:…`` over names and bytes of files, in the order of their names.

    Each name and each content is preceded by its length, so that no two sets of files read alike.
    """
    total = hashlib.sha256()
    for file in sorted(files, key=lambda file: file.name):
        for part in (file.name.encode(), file.content):
            total.update(f"{len(part)}:".encode() + part)
    return f"sha256:{total.hexdigest()}"

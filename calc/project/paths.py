"""Paths: ``group.id.field``, where ``*`` stands for any id or any part of one."""

from __future__ import annotations

import fnmatch
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from calc.components import SCHEMAS, Field, Schema, Word
from calc.physics.friction import LAW_NAMES
from calc.problems import nearest
from calc.project.reader import Reader, listed, quoted
from calc.project.settings import FLUID, SITE, TRANSITION
from calc.yamlfile import Scalar

GROUPS: dict[str, Schema] = {schema.group: schema for schema in SCHEMAS}
"""Groups of components: their paths have three parts."""

SINGLE: dict[str, Schema] = {"fluid": FLUID, "site": SITE}
"""Groups with one record: their paths have two parts."""

FRICTION = Schema("friction", "friction", (Field("law", Word(LAW_NAMES)),))
_WORD = re.compile(r"[A-Za-z0-9_*-]{1,200}", re.ASCII)


@dataclass(frozen=True, slots=True)
class Target:
    """Where a path leads: a group, the ids it reaches, and a field; ``field`` is None for whole components."""

    group: str
    rows: tuple[str, ...]
    field: Field | None


def matching(pattern: str, ids: Iterable[str]) -> tuple[str, ...]:
    """Return the ids that a pattern reaches, in their order."""
    if pattern == "*":
        return tuple(ids)
    if "*" not in pattern:
        return (pattern,) if pattern in ids else ()
    wanted = re.compile(fnmatch.translate(pattern)).match  # never backtracks across a star
    return tuple(one for one in ids if wanted(one))


def follow(
    reader: Reader, written: Scalar, path: str, works: Mapping[str, Mapping[str, object]], *, whole: bool = False
) -> Target | None:
    """Return where a path leads, or note that it leads nowhere.

    Parameters
    ----------
    reader : Reader
        Takes the problems.
    written : Scalar
        The path as written.
    path : str
        Where it stands, for the problem.
    works : mapping of str to mapping
        The ids of each group of components.
    whole : bool
        Whether a path may end at a component, without a field.
    """
    parts = written.text.split(".")
    group = parts[0]
    if written.text == "friction":
        return Target("friction", ("",), FRICTION.fields[0])
    if group in SINGLE and len(parts) == 2:
        return _field(reader, written, path, SINGLE[group], group, ("",))
    if parts[:2] == ["constants", "transition"] and len(parts) == 3:
        return _field(reader, written, path, TRANSITION, "constants", ("transition",))
    if group not in GROUPS or len(parts) not in ((2, 3) if whole else (3,)) or not _WORD.fullmatch(parts[1]):
        known = [*GROUPS, *SINGLE, "constants", "friction"]
        hint = nearest(group, known) if group not in known else ""
        form = "group.id or group.id.field" if whole else "group.id.field"
        expected = f"{form} with group one of {listed(list(GROUPS))}; or fluid.field, site.field, friction"
        _nowhere(reader, written, path, expected, hint)
        return None
    ids = works[group]
    rows = matching(parts[1], ids)
    if not rows:
        what = "matches" if "*" in parts[1] else "has the id"
        hint = nearest(parts[1], list(ids)) if len(ids) <= 2000 else ""
        found = f"none of the {group} {what} {quoted(parts[1])}"
        reader.note(written.mark, "unknown-path", path, found, "an id, or * for any", hint)
        return None
    if len(parts) == 2:
        return Target(group, rows, None)
    return _field(reader, written, path, GROUPS[group], group, rows)


def _field(
    reader: Reader, written: Scalar, path: str, schema: Schema, group: str, rows: tuple[str, ...]
) -> Target | None:
    name = written.text.rpartition(".")[2]
    field = schema.field(name)
    if field is not None:
        return Target(group, rows, field)
    known = [one.name for one in schema.fields]
    found = f"{group} have no field {quoted(name)}" if group in GROUPS else f"there is no {quoted(written.text)}"
    reader.note(written.mark, "unknown-path", path, found, f"one of {listed(known)}", nearest(name, known))
    return None


def _nowhere(reader: Reader, written: Scalar, path: str, expected: str, hint: str) -> None:
    found = f"{quoted(written.text)} leads nowhere"
    reader.note(written.mark, "unknown-path", path, found, expected, hint)

"""Paths: ``group.id.field``, where ``*`` stands for any id or any part of one."""

from __future__ import annotations

import fnmatch
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from calc.components import SCHEMAS, Field, Schema, Word
from calc.physics.friction import LAW_NAMES
from calc.project import later
from calc.project.reader import Reader
from calc.project.settings import CONSTANTS, FLUID, SITE
from calc.project.wording import listed, quoted
from calc.yamlfile import Scalar

GROUPS: dict[str, Schema] = {schema.group: schema for schema in SCHEMAS}
"""Groups of components: their paths have three parts."""

SINGLE: dict[str, Schema] = {"fluid": FLUID, "site": SITE}
"""Groups with one record: their paths have two parts."""

FRICTION = Schema("friction", "friction", (Field("law", Word(LAW_NAMES)),))
PATTERN = "[A-Za-z0-9_*-]{1,200}"
"""An id, in which ``*`` stands for any part."""
_WORD = re.compile(PATTERN, re.ASCII)


@dataclass(frozen=True, slots=True)
class Target:
    """Where a path leads: a group, the ids it reaches, and a field, which is None for whole components."""

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
    reader: Reader,
    written: Scalar,
    path: str,
    works: Mapping[str, Mapping[str, object]],
    *,
    whole: bool = False,
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
    match written.text.split("."):
        case ["friction"]:
            return Target("friction", ("",), FRICTION.fields[0])
        case [group, _] if group in SINGLE:
            return _field(reader, written, path, SINGLE[group], Target(group, ("",), None))
        case ["constants", name, *field] if len(field) == 1 or (whole and not field):
            return _constants(reader, written, path, name)
        case [group, pattern] if whole and group in GROUPS and _WORD.fullmatch(pattern):
            return _rows(reader, written, path, works, group)
        case [group, pattern, _] if group in GROUPS and _WORD.fullmatch(pattern):
            target = _rows(reader, written, path, works, group)
            return target and _field(reader, written, path, GROUPS[group], target)
        case [group, *_] if group in later.TOP:
            reader.not_yet(written.mark, path, written.text, later.TOP[group])
        case parts:
            _nowhere(reader, written, path, parts[0], whole=whole)
    return None


def _rows(
    reader: Reader, written: Scalar, path: str, works: Mapping[str, Mapping[str, object]], group: str
) -> Target | None:
    """Return the components that a path reaches."""
    pattern = written.text.split(".")[1]
    ids = works[group]
    key = (group, pattern)
    if key not in reader.reached:
        reader.reached[key] = matching(pattern, ids)
    rows = reader.reached[key]
    if rows:
        return Target(group, rows, None)
    if group in reader.doubtful:
        return None
    what = "matches" if "*" in pattern else "has the id"
    hint = reader.near(pattern, ids)
    found = f"none of the {group} {what} {quoted(pattern)}"
    reader.note(written.mark, "unknown-path", path, found, "an id, or * for any", hint)
    return None


def _constants(reader: Reader, written: Scalar, path: str, name: str) -> Target | None:
    """Return the constants of a law, or the one of them at which a path ends."""
    if name not in CONSTANTS:
        found, known = f"there are no constants {quoted(name)}", tuple(CONSTANTS)
        reader.note(written.mark, "unknown-path", path, found, f"one of {listed(known)}", reader.near(name, known))
        return None
    target = Target("constants", (name,), None)
    whole = written.text.count(".") == 1
    return target if whole else _field(reader, written, path, CONSTANTS[name], target)


def _field(reader: Reader, written: Scalar, path: str, schema: Schema, target: Target) -> Target | None:
    """Return a target with the field that a path ends at."""
    name = written.text.rpartition(".")[2]
    field = schema.field(name)
    if field is not None:
        return Target(target.group, target.rows, field)
    known = [one.name for one in schema.fields]
    group = target.group if target.group in GROUPS else f"'{target.group}'"
    found = f"there is no field {quoted(name)} in {group}"
    reader.note(written.mark, "unknown-path", path, found, f"one of {listed(known)}", reader.near(name, known))
    return None


def _nowhere(reader: Reader, written: Scalar, path: str, group: str, *, whole: bool) -> None:
    known = [*GROUPS, *SINGLE, "constants", "friction"]
    form = "group.id or group.id.field" if whole else "group.id.field"
    single = "fluid.field, site.field, constants.law.field, friction"
    expected = f"{form} with group one of {listed(list(GROUPS))}; or {single}"
    hint = reader.near(group, known) if group not in known else ""
    found = f"{quoted(written.text)} leads nowhere"
    reader.note(written.mark, "unknown-path", path, found, expected, hint)

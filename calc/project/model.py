"""The immutable project: what a folder says, in SI, each value with its text and mark."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path
from typing import Literal

from calc.components import Record, Stated
from calc.marks import Mark
from calc.yamlfile import SourceFile

How = Literal["with", "times"]
BASE = "base"
"""The case that changes nothing and always exists."""


@dataclass(frozen=True, slots=True)
class Line:
    """One line of ``with`` or ``times``: a path, the rows it reaches, and what it sets or multiplies by.

    Attributes
    ----------
    path : str
        As written, such as ``junctions.*.withdrawal``.
    group, field : str
        Where it points; ``group`` is ``fluid``, ``site``, ``constants``, ``friction`` or a group of
        components.
    rows : tuple of str
        The ids it reaches, in the order of the files; ``("",)`` for ``fluid`` and ``site``.
    how : str
        ``with`` or ``times``.
    stated : Stated
        The value set, or the pure number multiplied by.
    mark : Mark
        Of the path.
    """

    path: str
    group: str
    rows: tuple[str, ...]
    field: str
    how: How
    stated: Stated
    mark: Mark


@dataclass(frozen=True, slots=True)
class Case:
    """An operating case; ``after`` is the case it changes further, or empty for the inputs as they are."""

    id: str
    mark: Mark
    title: Stated | None = None
    after: str = ""
    lines: tuple[Line, ...] = ()


@dataclass(frozen=True, slots=True)
class Change:
    """What one line of a case does to one value.

    Attributes
    ----------
    path : str
        As written, ``*`` included.
    group, row, field : str
        The value changed.
    how : str
        ``with`` sets it; ``times`` multiplies it.
    stated : Stated
        The value set or the factor.
    case : str
        The case whose line this is, which may be one that comes before.
    """

    path: str
    group: str
    row: str
    field: str
    how: How
    stated: Stated
    case: str


@dataclass(frozen=True, eq=False)
class Project:
    """A project folder, read.

    Attributes
    ----------
    folder : Path
        Where it was read.
    files : tuple of SourceFile
        Every file read, tables included, sorted by name.
    texts : mapping of str to str
        Text of each file, for showing lines.
    digest : str
        ``sha256:…`` over the names and bytes of ``files``.
    header : Record
        ``number``, ``title``, ``revision``, ``client``, ``site``, ``datum``. The first three are always
        there; one that was not stated is ``shipped``, and named in ``missing``.
    missing : tuple of str
        Paths of header fields that stand by default: ``project.number`` …
    purpose : tuple of Stated
        Sentences.
    people, references, assumptions : mapping of str to Record
        By role or id. An assumption's ``affects`` is one text, paths joined by ``, ``.
    revisions : tuple of Record
        In the order of the file.
    fluid, site : Record
        Defaults filled in. ``fluid`` has ``kind`` and either ``temperature``, or ``density`` and
        ``viscosity`` with ``viscosity_kind`` naming which viscosity it is, and perhaps ``vapour_pressure``.
    constants : mapping of str to Record
        ``transition``, and ``hazen_williams`` and ``manning`` where a pipe follows that law in some case or the
        inputs state them; defaults filled in.
    friction : Stated
        The default law.
    reservoirs, junctions, pipes : mapping of str to Record
        In the order of the files. Defaults filled in: a pipe's ``law`` may be ``friction`` itself; a pipe's
        ``parts`` hold ``ends`` and ``fittings``.
    criteria : mapping of str to Record
        ``limit``, its ``kind``, ``applies_to`` and ``cases`` (texts joined by ``, ``), and perhaps ``title``.
    cases : mapping of str to Case
        ``base`` first, then in the order of the file.
    sections : mapping of str to Record
        One for each schema passed in, empty where the folder has none.
    defaults : tuple of (str, Stated)
        Every default in use, by path; ``*`` stands for all ids.
    spreads : mapping of str to Record
        By path: ``low`` and ``high``, or ``deviation``, of inputs that are said to be uncertain.
    """

    folder: Path
    files: tuple[SourceFile, ...]
    texts: Mapping[str, str]
    digest: str
    header: Record
    missing: tuple[str, ...]
    purpose: tuple[Stated, ...]
    people: Mapping[str, Record]
    references: Mapping[str, Record]
    assumptions: Mapping[str, Record]
    revisions: tuple[Record, ...]
    fluid: Record
    site: Record
    constants: Mapping[str, Record]
    friction: Stated
    reservoirs: Mapping[str, Record]
    junctions: Mapping[str, Record]
    pipes: Mapping[str, Record]
    criteria: Mapping[str, Record]
    cases: Mapping[str, Case]
    sections: Mapping[str, Record]
    defaults: tuple[tuple[str, Stated], ...]
    spreads: Mapping[str, Record] = field(default_factory=dict)

    @cached_property
    def nodes(self) -> Mapping[str, int]:
        """The row of each node in arrays: reservoirs, then junctions, in the order of the files."""
        return {name: row for row, name in enumerate((*self.reservoirs, *self.junctions))}

    def group(self, name: str) -> Mapping[str, Record]:
        """Return the records of a group; ``fluid``, ``site`` and ``friction`` have the one id ''."""
        if name in ("reservoirs", "junctions", "pipes", "constants"):
            return getattr(self, name)  # type: ignore[no-any-return]
        if name == "friction":
            return {"": Record("", self.friction.mark, {"law": self.friction})}
        return {"": {"fluid": self.fluid, "site": self.site}[name]}

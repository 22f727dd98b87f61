"""Words of the format that this version does not serve: never unknown, always with a way out."""

from __future__ import annotations

from calc.project.section import Later

_PIPE_SERIES = "write one pipe for each length, joined by junctions"

TOP: dict[str, str] = {
    "outlets": "an outlet to a known level can stand as a reservoir of that level",
    "pumps": "a pump of known head can be left out and its delivery level stated as a reservoir",
    "valves": "a valve that is open or shut can stand as a fitting, or as a pipe with 'open: false'",
    "studies": "state each variant as a case",
}
"""Top-level keys."""

FIELDS: dict[str, dict[str, str]] = {
    "reservoirs": {
        "storage": "state the level, and other levels as cases",
        "elevation": "leave it out: pipe ends are submerged in this version",
        "discharge": "leave it out: pipe ends are submerged in this version",
    },
    "pipes": {
        "segments": _PIPE_SERIES,
        "profile": "leave it out",
    },
}
"""By group, fields of components."""

CRITERIA: dict[str, str] = {
    "pressure-static-max": "use pressure-max in a case without flow",
    "clearance-min": "use pressure-min",
    "vapour-margin-min": "use pressure-min",
    "npsh-margin-min": "leave it out: there are no pumps in this version",
}
"""Criteria."""


def hint_for(later: tuple[Later, ...], field: str, word: str = "") -> str | None:
    """Return the way out where a field, or a word in it, is for later; None where it is not."""
    return next((one.hint for one in later if one.field == field and one.word == word), None)

"""What may stand at a place of a call or behind an option."""

from __future__ import annotations

from calc.cli.call import Option, Place
from calc.cli.samples import samples
from calc.cli.tables import TABLES

HELP = "tells what a command takes"


def words_for(one: Place | Option) -> tuple[str, ...]:
    """Return the words among which to choose; none where anything may stand."""
    match one.holds:
        case "sample":
            return tuple(samples())
        case "table":
            return tuple(TABLES)
        case _:
            return one.among


def is_folder(one: Place | Option) -> bool:
    """Return whether a folder belongs here."""
    return one.holds == "folder"

"""The settings of every drawing, whatever this machine or the present folder asks of matplotlib."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from matplotlib import rc_context, rcParamsDefault

if TYPE_CHECKING:
    from contextlib import AbstractContextManager

HASH_SALT = "headtrace"
LEFT_ALONE = ("backend", "backend_fallback", "interactive", "toolbar", "timezone", "figure.max_open_warning")
OURS = {
    "path.simplify": False,
    "text.hinting": "none",
    "svg.fonttype": "none",
    "svg.hashsalt": HASH_SALT,
}
_THEIRS: dict[Any, Any] = dict(rcParamsDefault.items())
PLAIN = {name: value for name, value in _THEIRS.items() if name not in LEFT_ALONE} | OURS


def plain() -> AbstractContextManager[None]:
    """Return a context in which matplotlib has its own defaults but for ours; after it, all is as before."""
    return rc_context(PLAIN)

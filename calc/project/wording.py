"""How texts of the user stand in messages: in quotes, on one line, of bearable length."""

from __future__ import annotations

from collections.abc import Sequence

LONGEST_SHOWN = 60
_LONGEST_LIST = 24


def quoted(text: str) -> str:
    """Return a text in quotes, on one line and of bearable length."""
    shown = text if len(text) <= LONGEST_SHOWN else text[: LONGEST_SHOWN - 1] + "…"
    return "'" + "".join(letter if letter.isprintable() else "?" for letter in shown) + "'"


def listed(words: Sequence[str], last: str = "or") -> str:
    """Return ``a, b or c``; a long list is cut."""
    shown = [*words] if len(words) <= _LONGEST_LIST else [*words[:_LONGEST_LIST], "…"]
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} {last} {shown[-1]}"

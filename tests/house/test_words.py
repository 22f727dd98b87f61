"""Words that the repository keeps out of its texts."""

from __future__ import annotations

import re

# Registries are reached by their ordinary clients; a text that names one ties the project to it.
# Each is written apart here, so that this text names none either.
APART = (
    "py pi.org",
    "py pi.python.org",
    "python hosted.org",
    "npm js.org",
    "npm js.com",
    "deb .debian.org",
    "archive .ubuntu.com",
    "security .debian.org",
    "security .ubuntu.com",
    "crates .io",
    "proxy .golang.org",
)
HOSTS = tuple(host.replace(" ", "") for host in APART)
HOST = re.compile(rf"\b({'|'.join(map(re.escape, HOSTS))})\b")
# Three capitals of which the last is V: so a valve would be abbreviated. CSV is a file format.
LETTER_CODE = re.compile(r"\b(?!CSV\b)[A-Z]{2}V\b")


def found(pattern: re.Pattern[str], texts: dict[str, str]) -> list[str]:
    return [
        f"{path}:{number}: {match[0]}"
        for path, text in texts.items()
        for number, line in enumerate(text.splitlines(), 1)
        for match in pattern.finditer(line)
    ]


def test_patterns_find_what_they_are_for() -> None:
    planted = {"a": f"from https://files.{HOSTS[2]}/x", "b": "a " + "P" + "RV, set in a CSV"}
    assert found(HOST, planted) == [f"a:1: {HOSTS[2]}"]
    assert found(LETTER_CODE, planted) == ["b:1: P" + "RV"]


def test_no_text_names_a_registry_host(texts: dict[str, str]) -> None:
    assert found(HOST, texts) == []


def test_valves_are_named_in_full(texts: dict[str, str]) -> None:
    assert found(LETTER_CODE, texts) == []

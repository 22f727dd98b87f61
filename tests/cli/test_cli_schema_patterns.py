"""The patterns of the schema in ECMAScript, which JSON Schema names and editors run: they match as in Python."""

from __future__ import annotations

import re
import shutil
from collections.abc import Iterator
from typing import Any

import pytest
from playwright.sync_api import sync_playwright

from calc.cli.schema import schema
from calc.kinds import KINDS
from calc.units.words import AMBIGUOUS, WORDS

NAMES = ("chromium", "google-chrome", "google-chrome-stable", "chromium-browser")
TEXTS = [
    *(f"2.5 {name}{power}" for name in (*WORDS, *AMBIGUOUS) for power in ("", "²", "^3", "**-1", "⁻¹")),
    *(kind.example for kind in KINDS),
    *("", "5", "-0.0", "1e-3", "12 L/s", "5 us gal/min", "2 ft/1000 ft", "3 N s/m²", "μm", "2026-02-29", "2028-02-29"),
    *("A1", "a b", "DN400", "dn 400", "EN545", "pipes.*.bore", "../pipes.csv", "pipes.csv", "é", " "),
]


def patterns(rule: Any) -> Iterator[str]:  # noqa: ANN401 - a schema is of any shape
    if isinstance(rule, dict):
        if isinstance(rule.get("pattern"), str):
            yield rule["pattern"]
        yield from rule.get("patternProperties", ())
        for one in rule.values():
            yield from patterns(one)
    elif isinstance(rule, list):
        for one in rule:
            yield from patterns(one)


@pytest.mark.browser
def test_patterns_match_in_a_browser_as_in_python() -> None:
    program = next((found for name in NAMES if (found := shutil.which(name))), None)
    assert program, "a Chromium is needed for these tests"
    held = list(dict.fromkeys(patterns(schema())))
    assert len(held) > 50
    asked = (
        "([held, texts]) => held.map(one => { const at = new RegExp(one, 'u'); return texts.map(t => at.test(t)); })"
    )
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=program, args=["--no-sandbox"])
        found = browser.new_page().evaluate(asked, [held, TEXTS])
        browser.close()
    for pattern, matched in zip(held, found, strict=True):
        assert matched == [re.search(pattern, text) is not None for text in TEXTS], pattern[:80]

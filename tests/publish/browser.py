"""A real browser: the system's own Chromium, driven by Playwright, and what it complains of."""

from __future__ import annotations

import json
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from importlib import resources
from pathlib import Path
from typing import Any
from urllib.parse import quote

from playwright.sync_api import Browser, Page, sync_playwright

NAMES = ("chromium", "google-chrome", "google-chrome-stable", "chromium-browser")
LOCAL = ("file:", "data:", "about:")


@contextmanager
def chromium() -> Iterator[Browser]:
    program = next((found for name in NAMES if (found := shutil.which(name))), None)
    assert program, "a Chromium is needed for these tests"
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=program, args=["--no-sandbox"])
        yield browser
        browser.close()


@dataclass
class Watched:
    """A page that is open, and every error and every address beyond this machine's files that it asked for."""

    page: Page
    complaints: list[str] = field(default_factory=list)
    blocked: list[str] = field(default_factory=list)

    def do(self, expression: str, given: Any = None) -> Any:  # noqa: ANN401
        return self.page.evaluate(expression, given)

    def go(self, ref: str) -> None:
        """Go to an address within the page, and wait until it is shown."""
        self.do(
            "id => new Promise(done => { addEventListener('hashchange', () => setTimeout(done), {once: true}); "
            "location.hash = encodeURIComponent(id); })",
            ref,
        )

    @property
    def ref(self) -> str:
        """The id in the address."""
        return str(self.do("decodeURIComponent(location.hash.slice(1))"))

    def accounted(self, ref: str) -> None:
        """Wait until the account is that of a number."""
        self.page.wait_for_function(
            "id => (document.querySelector('#account .id')?.firstChild.textContent ?? '') === id", arg=ref
        )

    def press(self, *keys: str) -> None:
        for key in keys:
            self.page.keyboard.press(key)

    def audit(self) -> list[str]:
        """Return what axe-core finds, of any grade."""
        axe = resources.files("axe_playwright_python").joinpath("axe.min.js").read_text(encoding="utf-8")
        self.do(axe)
        found = self.do("axe.run(document, {resultTypes: ['violations']})")
        return [f"{v['impact']}: {v['id']}: {v['nodes'][0]['html'][:120]}" for v in found["violations"]]


def opened(browser: Browser, path: Path, ref: str = "", *, width: int = 1280, **how: Any) -> Watched:  # noqa: ANN401
    """Open a page of its own context; ``how`` is what Playwright makes a context from."""
    context = browser.new_context(viewport={"width": width, "height": 900}, **how)
    watched = Watched(context.new_page())
    page = watched.page
    page.on("pageerror", lambda error: watched.complaints.append(str(error)))
    page.on("console", lambda said: watched.complaints.append(said.text) if said.type == "error" else None)
    page.on("request", lambda asked: None if asked.url.startswith(LOCAL) else watched.complaints.append(asked.url))
    page.on("requestfailed", lambda asked: watched.blocked.append(asked.url) if asked.failure == "csp" else None)
    page.goto(path.as_uri() + (f"#{quote(ref)}" if ref else ""))
    if how.get("java_script_enabled", True):
        page.wait_for_function("() => document.documentElement.classList.contains('ready')")
        watched.do("document.fonts.ready.then(() => true)")
    return watched


def carried(path: Path) -> dict[str, Any]:
    """Return the ledger that a page carries."""
    text = path.read_text(encoding="utf-8")
    opening = '<script type="application/json" id="book">'
    return dict(json.loads(text[text.index(opening) + len(opening) :].partition("</script>")[0]))

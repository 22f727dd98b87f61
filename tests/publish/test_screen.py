"""The page in a real browser: a click walks a number down to the file, at every width, asking for nothing."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
import sample
from browser import Browser

from calc import kinds
from calc.ledger import Given, Ledger, exported
from calc.marks import Mark
from calc.publish import screen

pytestmark = pytest.mark.browser
PIPE = sample.PIPES[0]
LOSS = f"pipes.{PIPE}.friction_loss@base"
BORE = f"pipes.{PIPE}.bore@base"
GO = """const go = (id) => new Promise((done) => {
  addEventListener('hashchange', () => setTimeout(done), {once: true});
  location.hash = encodeURIComponent(id);
});
"""
BLOCKS = "h1, h2, p, figure, .hold, .listing, .toc, #walk"


@pytest.fixture(scope="module")
def browser(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Browser]:
    opened = Browser(tmp_path_factory.mktemp("profile"))
    yield opened
    opened.close()


@pytest.fixture(scope="module")
def place(a4: Any, tmp_path_factory: pytest.TempPathFactory) -> Path:  # noqa: ANN401
    path = tmp_path_factory.mktemp("screen") / "package.html"
    path.write_text(a4.screen, encoding="utf-8")
    return path


@pytest.fixture(autouse=True)
def quiet(browser: Browser) -> Iterator[None]:
    browser.events.clear()
    yield
    assert browser.complaints() == []


def panel(browser: Browser) -> str:
    return str(
        browser.do("document.getElementById('walk').hidden ? '' : document.getElementById('walk-said').innerText")
    )


def shows(browser: Browser, ref: str) -> None:
    browser.wait("!document.getElementById('walk').hidden")
    browser.wait(f"document.querySelector('#walk .id').textContent === {json.dumps(ref)}")


@pytest.mark.parametrize("width", [360, 480, 768, 1024, 1280, 1600])
@pytest.mark.parametrize("ref", ["", LOSS])
def test_nothing_is_wider_than_the_window(browser: Browser, place: Path, width: int, ref: str) -> None:
    browser.open(place, f"#{ref}" if ref else "", width)
    assert browser.do("document.documentElement.scrollWidth <= document.documentElement.clientWidth")
    outside = f"[...document.querySelectorAll('{BLOCKS}')].filter(e => e.getClientRects().length)"
    outside += ".filter(e => e.getBoundingClientRect().right > innerWidth + 1).length"
    assert browser.do(outside) == 0


def test_our_faces_are_used(browser: Browser, place: Path) -> None:
    browser.open(place)
    loaded = browser.do(
        "[...document.fonts].filter(f => f.status === 'loaded').map(f => f.family.replaceAll('\"', ''))"
    )
    assert {"Ledger Text", "Ledger Small", "Ledger Display", "Ledger Mono"} <= set(loaded)


def test_a_click_walks_down_to_the_file(browser: Browser, place: Path) -> None:
    browser.open(place)
    assert panel(browser) == ""
    browser.click(f"data.n[value='{LOSS}']")
    shows(browser, LOSS)
    said = panel(browser)
    assert "head lost to friction" in said
    assert "Darcy–Weisbach" in said
    assert "J. Weisbach, Lehrbuch" in said
    # 0.3844 m and 1850 m are the bore and the length written in the input file
    worked = browser.do("document.querySelector('#walk .worked').textContent")
    assert "1850\u202fm" in worked
    assert "0.3844\u202fm" in worked
    browser.click(f"#walk a[href='#{BORE.replace('@', '%40')}']")
    shows(browser, BORE)
    said = panel(browser)
    assert "384.4 mm" in said
    assert "at network.yaml:5:41" in said
    assert browser.do("document.querySelector('#walk a.linked[href^=\"#at-\"]').hash") == "#at-network.yaml%3A5"


def test_back_and_forward_walk_too(browser: Browser, place: Path) -> None:
    browser.open(place)
    browser.click(f"data.n[value='{LOSS}']")
    shows(browser, LOSS)
    browser.do(f"location.hash = encodeURIComponent({json.dumps(BORE)})")
    shows(browser, BORE)
    browser.do("history.back()")
    shows(browser, LOSS)
    browser.do("history.forward()")
    shows(browser, BORE)
    browser.do("history.go(-2)")
    browser.wait("document.getElementById('walk').hidden")


def test_the_address_opens_a_number(browser: Browser, place: Path) -> None:
    browser.open(place, f"#{LOSS}")
    shows(browser, LOSS)
    assert browser.do("document.querySelectorAll('data.n[aria-current]').length") >= 1


def test_the_keyboard_suffices(browser: Browser, place: Path) -> None:
    browser.open(place)
    browser.do(f"document.querySelector(\"data.n[value='{LOSS}']\").focus()")
    browser.key("Enter")
    shows(browser, LOSS)
    assert browser.do("document.getElementById('walk').contains(document.activeElement)")
    for _ in range(20):  # the first input is not far
        browser.key("Tab")
        if browser.do("document.activeElement.matches('#walk li a')"):
            break
    browser.key("Enter")
    shows(browser, f"pipes.{PIPE}.friction_factor@base")
    browser.key("Escape")
    browser.wait("document.getElementById('walk').hidden")
    assert browser.do("document.activeElement.value") == LOSS


def test_every_number_has_a_walk(browser: Browser, place: Path) -> None:
    browser.open(place)
    wrong = browser.do(
        GO
        + """(async () => {
          const wrong = [];
          for (const id of new Set([...document.querySelectorAll('data.n')].map(e => e.value))) {
            await go(id);
            const said = document.getElementById('walk-said'), odd = /undefined|NaN|\\?/.test(said.innerText);
            if (said.querySelector('.id')?.textContent !== id || !said.querySelector('h3') || odd) { wrong.push(id); }
          }
          return wrong; })()"""
    )
    assert wrong == []
    assert browser.do("document.querySelectorAll('data.n:not([tabindex])').length") == 0


def test_every_step_leads_to_the_files(browser: Browser, place: Path) -> None:
    browser.open(place)
    ends = browser.do(
        GO
        + f"""(async () => {{
          const seen = new Set(), ends = new Set(), left = [{json.dumps(LOSS)}];
          while (left.length) {{
            const id = left.pop();
            if (seen.has(id)) continue;
            seen.add(id);
            await go(id);
            const said = document.getElementById('walk-said');
            const next = [...said.querySelectorAll('li a')].map(a => decodeURIComponent(a.hash.slice(1)));
            left.push(...next);
            if (!next.length) ends.add(said.innerText.match(/at (\\S+:\\d+:\\d+)/)?.[1] ?? `none for ${{id}}`);
          }}
          return [...ends]; }})()"""
    )
    assert "network.yaml:5:41" in ends
    assert "defaults.yaml:3:12" in ends
    # what is found by iteration ends at its statement; everything else in a file
    assert [end for end in ends if end.startswith("none") and ".flow@" not in end] == []


def test_addresses_become_links(browser: Browser, place: Path) -> None:
    browser.open(place)
    assert browser.do("document.querySelectorAll('.ad a').length") > 50
    assert browser.do("[...document.querySelectorAll('.ad a')].every(a => document.getElementById(a.hash.slice(1)))")


def test_what_was_written_cannot_become_markup(browser: Browser, a4: Any, tmp_path: Path) -> None:  # noqa: ANN401
    hostile = "</script><script>window.bad = 1</script><img src=x onerror='window.bad = 1'>\u2028<!--"
    ledger: Ledger = sample.ledger()
    given = Given((Mark("network.yaml", 1, 1),), (hostile,), (hostile,))
    ledger.enter("pipes.remark", kinds.LENGTH, [hostile], [1.0], given, case="base")
    page = screen.page(a4.document, ledger, a4.pictures, exported(ledger))
    (tmp_path / "page.html").write_text(page, encoding="utf-8")
    browser.open(tmp_path / "page.html")
    browser.do(f"location.hash = encodeURIComponent('pipes.' + {json.dumps(hostile)} + '.remark@base')")
    browser.wait("!document.getElementById('walk').hidden")
    assert browser.do("document.querySelector('#walk .as-written').textContent") == hostile
    assert browser.do("window.bad === undefined && document.querySelectorAll('img').length === 0")


def test_only_our_own_script_may_run(browser: Browser, a4: Any, tmp_path: Path) -> None:  # noqa: ANN401
    planted = "<main><script>window.bad = 1</script><img src='https://example.org/x.png' onerror='window.bad = 2'>"
    (tmp_path / "page.html").write_text(a4.screen.replace("<main>", planted, 1), encoding="utf-8")
    browser.open(tmp_path / "page.html")
    assert browser.do("window.bad === undefined")
    said = browser.complaints()
    assert any("Content Security Policy" in line or "violates" in line for line in said)
    browser.events.clear()


def test_the_page_says_the_same_as_the_sheets(browser: Browser, place: Path, a4: Any) -> None:  # noqa: ANN401
    browser.open(place)
    numbers = browser.do("[...document.querySelectorAll('data.n')].map(e => e.textContent)")
    expected = [re.sub("<[^>]*>", "", m) for m in re.findall(r'<data class="n"[^>]*>(.*?)</data>', a4.sheet)]
    assert numbers == [text.replace("&lt;", "<") for text in expected]

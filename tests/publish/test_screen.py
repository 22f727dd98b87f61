"""The page in a real browser: a number is traced to its files by mouse and by keyboard, asking for nothing."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import sample
from browser import Watched, chromium, opened
from playwright.sync_api import Browser

from calc import kinds
from calc.ledger import Combined, Given, Ledger
from calc.ledger.column import View
from calc.marks import Mark
from calc.publish import screen

pytestmark = pytest.mark.browser
PIPE = sample.PIPES[0]
LOSS = f"pipes.{PIPE}.friction_loss@base"
BORE = f"pipes.{PIPE}.bore@base"
BOOK = "readBook(JSON.parse(document.getElementById('book').textContent))"
WIDTHS = (320, 360, 480, 768, 1024, 1280, 1600)
Open = Callable[..., Watched]


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    with chromium() as made:
        yield made


@pytest.fixture(scope="module")
def place(a4: Any, tmp_path_factory: pytest.TempPathFactory) -> Path:  # noqa: ANN401
    path = tmp_path_factory.mktemp("screen") / "package.html"
    path.write_text(a4.screen, encoding="utf-8")
    return path


@pytest.fixture
def show(browser: Browser, place: Path) -> Iterator[Open]:
    """Open the page; whatever it does in a test, it complains of nothing and asks for nothing."""
    held: list[Watched] = []

    def made(ref: str = "", **how: Any) -> Watched:  # noqa: ANN401
        held.append(opened(browser, place, ref, **how))
        return held[-1]

    yield made
    for watched in held:
        assert watched.complaints == []
        watched.page.context.close()


def key(at: Watched, ref: str) -> str:
    return f"main data[value^='{at.do(f'id => {BOOK}.find(id).toString(36)', ref)}.']"


def line_of(at: Watched, ref: str) -> str:
    return str(at.do(f"id => {{ const b = {BOOK}; return b.line(b.find(id)); }}", ref))


# --- how it stands


@pytest.mark.parametrize("width", WIDTHS)
def test_nothing_is_wider_than_the_window(show: Open, width: int) -> None:
    at = show("", width=width)
    for ref in ("", LOSS, "section-3"):
        at.go(ref) if ref else None
        assert at.do("document.documentElement.scrollWidth <= document.documentElement.clientWidth")


def test_our_faces_are_used(show: Open) -> None:
    loaded = show(LOSS).do(
        "[...document.fonts].filter(f => f.status === 'loaded').map(f => f.family.replaceAll('\"', ''))"
    )
    assert {"Ledger Text", "Ledger Small", "Ledger Display", "Ledger Mono"} <= set(loaded)


@pytest.mark.parametrize(("width", "scheme"), [(1600, "light"), (1600, "dark"), (900, "light"), (320, "light")])
def test_an_audit_of_access_finds_nothing(show: Open, width: int, scheme: str) -> None:
    at = show("", width=width, color_scheme=scheme)
    assert at.audit() == []
    at.go(LOSS)
    at.page.get_by_text("unfold to the inputs").click()
    at.page.click("[data-do=where]")
    assert at.audit() == []
    if scheme == "dark" or width == 900:
        return
    at.go("at-network.yaml:5")
    at.page.fill("#q", "loss")
    at.page.wait_for_selector("#hits:not([hidden])")
    assert at.audit() == []
    at.press("Escape")
    at.page.click("#list")
    assert at.audit() == []


def test_a_leaf_at_a_time_and_all_where_no_script_runs_or_on_paper(show: Open) -> None:
    seen = "[...document.querySelectorAll('main > section')].filter(s => s.getClientRects().length).map(s => s.id)"
    at = show()
    every = at.do("[...document.querySelectorAll('main > section')].map(s => s.id)")
    assert len(every) > 3
    assert at.do(seen) == every[:1]
    at.press("]")
    at.page.wait_for_function(f"() => {seen}[0] === '{every[1]}'")
    at.page.emulate_media(media="print")
    assert at.do(seen) == every
    assert at.do(
        "[...document.querySelectorAll('main > section *')].every(e => getComputedStyle(e).display !== 'none')"
    )
    quiet = show("", java_script_enabled=False)
    assert quiet.page.locator("main > section:visible").count() == len(every)
    assert not quiet.page.locator(".top").is_visible()


# --- by mouse


def test_a_click_walks_down_to_the_file(show: Open) -> None:
    at = show()
    at.go(f"line-{line_of(at, LOSS)}")
    at.page.click(key(at, LOSS))
    at.accounted(LOSS)
    account = at.page.locator("#account")
    said = account.inner_text()
    assert "Head lost to friction" in said
    assert "Darcy–Weisbach" in said
    assert "J. Weisbach, Lehrbuch" in said
    # 0.3844 m and 1850 m are the bore and the length written in the input file
    put = at.do("[...document.querySelectorAll('#account .sum .put')].map(e => e.textContent)")
    assert "1850\u202fm" in put
    assert "0.3844\u202fm" in put
    stood = at.do(f'document.querySelector("{key(at, LOSS)}").getBoundingClientRect().top')
    account.get_by_text("unfold to the inputs").click()
    assert "384.4 mm × 0.001 = 0.3844\u202fm" in account.inner_text()
    assert "network.yaml, line 5, column 41" in account.inner_text()
    assert "written 384.4 mm" in account.inner_text()
    # the listing stands in the account, its line marked, under the lines that it belongs to
    listed = at.do(
        "[...document.querySelectorAll('#account .yl')]"
        ".map(e => [...e.children].map(l => [l.className, l.textContent]))"
    )
    lines = sample.NETWORK.splitlines()
    assert all(
        [text.strip().partition(" ")[2].strip() in lines[int(text.split()[0]) - 1] for _, text in one] for one in listed
    )
    assert any(one[-1] == ["on", f"5 {lines[4]}\n"] for one in listed)
    # the ledger beside has not moved
    assert at.do(f'document.querySelector("{key(at, LOSS)}").getBoundingClientRect().top') == stood
    account.locator("a.linked", has_text="network.yaml, line 5").first.click()
    at.page.wait_for_function("() => document.activeElement.id === 'at-network.yaml:5'")


def test_a_number_met_twice_is_shown_once(show: Open) -> None:
    at = show(LOSS)
    at.page.get_by_text("unfold to the inputs").click()
    again = at.page.get_by_text("shown above")
    assert again.count()
    ids = at.do("[...document.querySelectorAll('#account .tree button.nd ~ a.ref')].map(a => a.hash)")
    assert len(ids) == len(set(ids))
    again.first.click()
    assert at.do("document.activeElement.matches('#account .nd, #account .yl')")


def test_back_and_forward_are_the_browsers(show: Open) -> None:
    at = show()
    for ref in (LOSS, BORE):
        at.go(ref)
        at.accounted(ref)
    at.page.click("#back")
    at.accounted(LOSS)
    at.page.click("#forward")
    at.accounted(BORE)
    at.page.go_back()
    at.accounted(LOSS)


def test_the_address_opens_a_number(show: Open) -> None:
    at = show(LOSS)
    at.accounted(LOSS)
    assert at.page.locator("data[aria-current]").is_visible()
    assert at.do("document.querySelector('data[aria-current]').closest('tr, li').id") == f"line-{line_of(at, LOSS)}"


def test_below_its_width_the_account_is_a_leaf_of_its_own(show: Open) -> None:
    at = show(LOSS, width=900)
    assert at.page.locator("#account").is_visible()
    assert not at.page.locator("main").is_visible()
    at.page.click("#return")
    assert at.page.locator("main").is_visible()
    assert not at.page.locator("#account").is_visible()
    assert at.do("document.activeElement.matches('data[aria-current]')")


def test_a_case_switched_keeps_the_number(show: Open) -> None:
    at = show(f"pipes.{PIPE}.flow@base")
    at.page.select_option("#case", "drawdown")
    at.accounted(f"pipes.{PIPE}.flow@drawdown")
    # what a case does not state is its parent's
    at.go(f"pipes.{PIPE}.length@base")
    at.page.select_option("#case", "drawdown")
    at.accounted(f"pipes.{PIPE}.length@base")
    rows = at.do("[...document.querySelectorAll('#account .cs tbody tr')].map(r => r.cells[0].textContent)")
    assert rows == ["base", "drawdown as in base"]


def test_where_a_number_goes_is_counted(show: Open, a4: Any) -> None:  # noqa: ANN401
    gravity = "site.gravity"
    users: dict[str, set[str]] = {}
    for column in a4.ledger.columns:
        for row in range(len(column.rows)):
            for ref in sample.inputs(column, row):
                users.setdefault(ref, set()).add(column.id(row))
    reached, left = set(), [gravity]
    while left:
        for ref in users.get(left.pop(), ()):
            if ref not in reached:
                reached.add(ref)
                left.append(ref)
    assert len(reached) > 10
    at = show(gravity)
    at.page.click("[data-do=where]")
    assert at.page.locator(".gone p").inner_text().startswith(f"{len(reached)} numbers depend on it, on ")
    lines = {a4.document.addresses[ref] for ref in reached if ref in a4.document.addresses}
    sections: dict[str, int] = {}
    for line in lines:
        sections[line.split(".")[0]] = sections.get(line.split(".")[0], 0) + 1
    entry = "[e.querySelector('a').textContent.split(' ')[0], parseInt(e.lastChild.textContent)]"
    said = at.do(f"[...document.querySelectorAll('.gone li')].map(e => {entry})")
    assert dict(said) == sections
    at.page.locator(".gone a").first.click()
    marked = at.do("[...document.querySelectorAll('.shown .mk')].map(e => e.id.slice(5))")
    assert set(marked) <= lines


# --- by keyboard


def test_the_keyboard_traces_to_the_file(show: Open) -> None:
    at = show()
    at.go(f"line-{line_of(at, LOSS)}")
    at.do("document.querySelector('.cur .lno').focus()")
    for _ in range(30):
        if at.do("e => document.activeElement.matches(e)", key(at, LOSS)):
            break
        at.press("Tab")
    at.press("Enter")
    at.accounted(LOSS)
    at.page.wait_for_function("() => document.activeElement.closest('#account') !== null")
    while not at.do("document.activeElement.matches('.tree button.nd')"):
        at.press("Tab")
    folded = at.do("document.querySelectorAll('#account .tree button.nd').length")
    at.press("ArrowRight")  # the friction factor unfolds
    assert at.do("document.activeElement.getAttribute('aria-expanded')") == "true"
    assert at.do("document.querySelectorAll('#account .tree button.nd').length") > folded
    at.press("ArrowRight")
    assert at.do("document.activeElement.closest('.in1') !== null")
    at.press("ArrowLeft")
    at.press("ArrowLeft") if at.do("document.activeElement.closest('.in1') !== null") else None
    assert at.do("document.activeElement.closest('.in1') === null")
    at.press("ArrowDown", "ArrowUp")
    at.press("Escape")
    assert at.do("document.activeElement.matches('data[aria-current]')")
    at.press("o")
    assert at.do("document.activeElement.matches('#account h2')")


def test_lines_and_leaves_by_keys(show: Open) -> None:
    at = show()
    at.go(f"line-{line_of(at, LOSS)}")
    at.do("document.querySelector('.cur .lno').focus()")
    first = at.do("document.querySelector('.cur').id")
    at.press("j")
    second = at.do("document.querySelector('.cur').id")
    assert second != first
    at.press("ArrowUp")
    assert at.do("document.querySelector('.cur').id") == first
    # only the numbers of the line in hand are tab stops
    stops = "(e.tabIndex === 0) === (e.closest('.cur') !== null)"
    assert at.do(f"[...document.querySelectorAll('main data, main .lno')].every(e => {stops})")
    at.press("k", "ArrowDown")
    leaf = at.page.input_value("#leaf")
    at.press("[")
    at.page.wait_for_function("leaf => document.getElementById('leaf').value !== leaf", arg=leaf)
    at.press("]")
    at.page.wait_for_function("leaf => document.getElementById('leaf').value === leaf", arg=leaf)
    at.press("/")
    assert at.do("document.activeElement.id") == "q"
    at.press("j")  # a letter, where letters are written
    assert at.page.input_value("#q") == "j"


def test_letters_can_be_put_off(show: Open) -> None:
    at = show(LOSS)
    at.do("document.querySelector('.cur .lno').focus()")
    at.press("?")
    assert at.do("document.getElementById('keys').open")
    at.page.uncheck("#letters")
    at.page.click("#shut")
    at.do("document.querySelector('.cur .lno').focus()")
    at.press("j", "/", "?")
    assert at.ref == LOSS
    assert not at.do("document.getElementById('keys').open")
    at.press("ArrowDown")
    assert at.ref != LOSS


def test_the_line_is_copied_as_text(show: Open) -> None:
    at = show(LOSS, permissions=["clipboard-read", "clipboard-write"])
    at.do("document.querySelector('#account h2').focus()")
    at.do("navigator.clipboard.writeText = async text => { window.copied = text; }")
    at.press("c")
    at.page.wait_for_function("() => window.copied")
    said = str(at.do("window.copied"))
    assert said.startswith(f"{line_of(at, LOSS)} Head lost to friction, {PIPE}, case base")
    assert said.endswith(f"[{LOSS}]")
    assert "1850 m" in said, said


# --- find


@pytest.mark.parametrize(
    ("asked", "expected"),
    [
        (LOSS, [LOSS]),
        (
            "head lost friction sedge",
            ["pipes.sedge-link.friction_loss@base", "pipes.sedge-link.friction_loss@drawdown"],
        ),
        ("9.80665", ["site.gravity"]),
        (
            "network.yaml:5",
            [
                f"pipes.{PIPE}.{name}@base"
                for name in ("bore", "coefficient", "count", "length", "parallel", "roughness")
            ],
        ),
    ],
)
def test_find(show: Open, asked: str, expected: list[str]) -> None:
    at = show()
    at.page.fill("#q", asked)
    at.page.wait_for_selector("#hits:not([hidden])")
    found = at.do("[...document.querySelectorAll('#hits a')].map(a => decodeURIComponent(a.hash.slice(1)))")
    assert set(expected) <= set(found)
    if asked in (LOSS, "9.80665"):
        assert found == expected
    at.press("Enter")
    at.page.wait_for_function("() => location.hash.length > 1")


def test_find_a_line_and_nothing(show: Open) -> None:
    at = show()
    line = line_of(at, LOSS)
    at.page.fill("#q", line)
    at.press("Enter")
    at.page.wait_for_function("line => decodeURIComponent(location.hash) === `#line-${line}`", arg=line)
    assert at.do("document.querySelector('.cur').id") == f"line-{line}"
    at.page.fill("#q", "no such thing")
    at.page.wait_for_function("() => /Nothing answers/.test(document.getElementById('hits').textContent)")


# --- all of it


def test_every_number_has_an_account(show: Open) -> None:
    at = show()
    wrong = at.do(
        f"""async () => {{
          const book = {BOOK}, wrong = [];
          for (let i = 0; i < book.count; i += 1) {{
            await new Promise(done => {{
              addEventListener('hashchange', () => setTimeout(done), {{once: true}});
              location.hash = encodeURIComponent(book.id(i));
            }});
            const said = document.getElementById('account'), odd = /undefined|NaN|\\[object|\\?$/.test(said.innerText);
            if (said.querySelector('.id')?.firstChild.textContent !== book.id(i) || odd) {{ wrong.push(book.id(i)); }}
          }}
          return wrong; }}"""
    )
    assert wrong == []


def test_every_step_leads_to_the_files(show: Open) -> None:
    ends = show().do(
        f"""() => {{
          const book = {BOOK}, seen = new Set(), ends = [], left = [book.find('{LOSS}')];
          while (left.length) {{
            const i = left.pop();
            if (seen.has(i)) {{ continue; }}
            seen.add(i);
            const next = book.from(i).map(got => got.i);
            left.push(...next);
            if (!next.length) {{ ends.push(book.place(i)?.join(':') ?? `none for ${{book.id(i)}}`); }}
          }}
          return ends; }}"""
    )
    assert "network.yaml:5:41" in ends
    assert "defaults.yaml:3:12" in ends
    # what is found by iteration ends at its statement; everything else in a file
    assert [end for end in ends if end.startswith("none") and ".flow@" not in end] == []


def test_twelve_terms_then_the_rest(browser: Browser, a4: Any, tmp_path: Path) -> None:  # noqa: ANN401
    ledger: Ledger = sample.ledger()
    rows = [f"path-{k}" for k in range(15)]
    given = Given((Mark("network.yaml", 1, 1),) * 15, ("1 m",) * 15, ("",) * 15)
    terms = ledger.enter("paths.loss", kinds.HEAD, rows, np.ones(15), given, case="base")
    whole = Combined("sum", View.whole(terms), np.zeros(15, dtype=np.int64), np.ones(15), "all paths")
    ledger.enter("paths.whole", kinds.HEAD, ["all"], [15.0], whole, case="base")
    (tmp_path / "page.html").write_text(screen.page(a4.document, ledger, a4.pictures), encoding="utf-8")
    at = opened(browser, tmp_path / "page.html", "paths.all.whole@base")
    assert at.page.locator("#account .tree button.nd").count() == 12
    at.page.get_by_text("and 3 more").click()
    assert at.page.locator("#account .tree button.nd").count() == 15
    assert at.do("document.activeElement.matches('.tree > li:nth-child(13) .nd')")


def test_addresses_become_links(show: Open) -> None:
    at = show(LOSS)
    links = "[...document.querySelectorAll('.shown .ad a')]"
    assert at.do(f"{links}.length") > 5
    assert at.do(f"{links}.every(a => document.getElementById(a.hash.slice(1)))")


def test_the_page_says_the_same_as_the_sheets(show: Open, a4: Any) -> None:  # noqa: ANN401
    numbers = show().do("[...document.querySelectorAll('main data')].map(e => e.textContent)")
    expected = [re.sub("<[^>]*>", "", m) for m in re.findall(r'<data class="n"[^>]*>(.*?)</data>', a4.sheet)]
    assert numbers == [text.replace("&lt;", "<") for text in expected]


# --- hostile input


def test_what_was_written_cannot_become_markup(browser: Browser, a4: Any, tmp_path: Path) -> None:  # noqa: ANN401
    hostile = "</script><script>window.bad = 1</script><img src=x onerror='window.bad = 1'>\u2028<!--"
    ledger: Ledger = sample.ledger()
    given = Given((Mark("network.yaml", 1, 1),), (hostile,), (hostile,))
    ledger.enter("pipes.remark", kinds.LENGTH, [hostile], [1.0], given, case="base")
    (tmp_path / "page.html").write_text(screen.page(a4.document, ledger, a4.pictures), encoding="utf-8")
    at = opened(browser, tmp_path / "page.html", f"pipes.{hostile}.remark@base")
    assert at.do("document.querySelector('#account .as-written').textContent") == hostile
    at.page.fill("#q", "window.bad")
    at.page.wait_for_selector("#hits:not([hidden])")
    assert at.do("window.bad === undefined && document.querySelectorAll('img').length === 0")
    assert at.complaints == []


def test_only_our_own_script_and_style_may_hold(browser: Browser, a4: Any, tmp_path: Path) -> None:  # noqa: ANN401
    planted = (
        "<main><script>window.bad = 1</script><img src='https://example.org/x.png' onerror='window.bad = 2'>"
        "<style>main { color: red }</style><p id=planted style='color: red'>planted</p>"
    )
    (tmp_path / "page.html").write_text(a4.screen.replace("<main>", planted, 1), encoding="utf-8")
    at = opened(browser, tmp_path / "page.html")
    assert at.do("window.bad === undefined")
    assert at.do("getComputedStyle(document.getElementById('planted')).color") != "rgb(255, 0, 0)"
    assert sum("Content Security Policy" in line for line in at.complaints) >= 4
    assert at.blocked == ["https://example.org/x.png"]
    assert " style=" not in a4.screen.partition("<main>")[2].partition("</main>")[0]

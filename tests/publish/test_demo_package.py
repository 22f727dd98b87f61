"""The packages of the demo projects, issued by the command itself: conformance, numbers, places, bytes, proof."""

from __future__ import annotations

import fcntl
import hashlib
import io
import json
import os
import random
import re
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

import page as validator
import pikepdf
import pypdfium2  # type: ignore[import-untyped]
import pytest
from browser import chromium, opened

from calc import pipeline
from calc.ledger import Ledger
from calc.problems import IntegrityError
from calc.publish import pdf
from calc.publish.pictures import all_drawn
from calc.publish.seal import printed, seal, seal_document
from calc.report.document import Document

pytestmark = pytest.mark.pdf
PROJECTS = Path(__file__).parents[2] / "projects"
INPUTS = ("cases.yaml", "criteria.yaml", "network.yaml", "project.yaml")
ANCHOR = re.compile(r'<data class="n" value="([^"]*)" data-as="([^"]*)">(.*?)</data>', re.DOTALL)
SAMPLED = 200


@dataclass(frozen=True)
class Demo:
    """A demo project: its folder, the name of its package, its cases, and words that stand on its first sheet."""

    folder: str
    package: str
    cases: tuple[str, ...]
    first: tuple[str, ...]

    @property
    def path(self) -> Path:
        """Where its inputs are."""
        return PROJECTS / self.folder


DEMOS = (
    Demo(
        "ostrel-transfer-main",
        "OTM-HY-014_P01_checking",
        ("base", "drawdown", "peak", "outage"),
        ("upper-main", "sedge-link", "vell-main"),
    ),
    Demo(
        "tessock-transfer-mains",
        "TTM-H-207_P01_checking",
        ("base", "night", "peak", "aged"),
        ("lake-main", "varn-main", "fork-main", "mill-main", "pell-main"),
    ),
)


@pytest.fixture(scope="session", params=DEMOS, ids=lambda demo: demo.folder)
def demo(request: pytest.FixtureRequest) -> Demo:
    return request.param  # type: ignore[no-any-return]


def issue(demo: Demo, out: Path, **surroundings: str) -> Path:
    """Issue a demo in a process of its own; a criterion is not met there, which is status 1."""
    command = [sys.executable, "-W", "error", "-m", "calc", "issue", str(demo.path), "--out", str(out)]
    done = subprocess.run(
        command, env={**os.environ, **surroundings}, cwd=out, capture_output=True, text=True, check=False
    )
    assert done.returncode == 1, done.stderr
    return out / demo.package


@pytest.fixture(scope="session")
def folder(demo: Demo, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the package, issued once for all workers."""
    base = tmp_path_factory.getbasetemp()
    shared = base.parent if "PYTEST_XDIST_WORKER" in os.environ else base
    out = shared / f"{demo.folder}-issued"
    with (shared / f"{demo.folder}-issued.lock").open("w", encoding="utf-8") as lock:
        fcntl.flock(lock, fcntl.LOCK_EX)
        out.mkdir(exist_ok=True)
        return out / demo.package if (out / demo.package).is_dir() else issue(demo, out)


@dataclass(frozen=True)
class Said:
    """The document of the demo with its ledger and its page."""

    document: Document = field(repr=False)
    ledger: Ledger = field(repr=False)
    page: str = field(repr=False)


@pytest.fixture(scope="session")
def said(demo: Demo) -> Said:
    account = pipeline.account(demo.path)
    document = pipeline.document(account, "checking")
    return Said(document, account.ledger, pdf.sheet_html(document, account.ledger, all_drawn(document)))


@pytest.fixture(scope="module")
def content(folder: Path) -> bytes:
    return (folder / "package.pdf").read_bytes()


@pytest.fixture(scope="module")
def file(content: bytes) -> Iterator[pikepdf.Pdf]:
    with pikepdf.open(io.BytesIO(content)) as opened:
        yield opened


@pytest.fixture(scope="module")
def pages(content: bytes) -> list[str]:
    opened = pypdfium2.PdfDocument(content)
    texts = [page.get_textpage().get_text_range() for page in opened]
    opened.close()
    return texts


def squeezed(text: str) -> str:
    return re.sub(r"[\s\u00a0\u2009\u202f\ufffe]", "", text)


def test_the_package_is_whole_and_nothing_else_is_left(demo: Demo, folder: Path) -> None:
    found = sorted(p.relative_to(folder).as_posix() for p in folder.rglob("*") if p.is_file())
    expected = ["ledger.json", "manifest.json", "package.html", "package.pdf", "results.json"]
    assert found == sorted([*expected, *(f"inputs/{name}" for name in INPUTS)])
    told = json.loads((folder / "manifest.json").read_text(encoding="utf-8"))
    for name, digest in told["files"].items():
        assert digest == "sha256:" + hashlib.sha256((folder / name).read_bytes()).hexdigest()
    assert [p.name for p in folder.parent.iterdir()] == [demo.package]
    assert all((folder / "inputs" / name).read_bytes() == (demo.path / name).read_bytes() for name in INPUTS)


@pytest.mark.parametrize("profile", ["3a", "ua1"])
def test_a_validator_finds_nothing(content: bytes, profile: str) -> None:
    report = validator.validate_pdf_bytes(content, profile=profile)
    assert [(failure.rule_id, failure.message) for failure in report.failures[:5]] == []
    assert report.is_compliant


def test_only_our_faces_are_embedded(file: pikepdf.Pdf) -> None:
    names = {
        str(item.FontName)
        for item in file.objects
        if isinstance(item, pikepdf.Dictionary) and item.get("/Type") == "/FontDescriptor"
    }
    assert len(names) >= 8
    assert [
        name for name in names if not re.fullmatch(r"/[A-Z]{6}\+Ledger-(Text|Small|Display|Mono)[\w-]*", name)
    ] == []


def test_inputs_and_results_are_inside(demo: Demo, file: pikepdf.Pdf, folder: Path) -> None:
    assert {str(item.UF) for item in file.Root.AF} == {*INPUTS, "results.json", "ledger.json"}
    for name in INPUTS:
        assert file.attachments[name].get_file().read_bytes() == (demo.path / name).read_bytes()
    for name in ("results.json", "ledger.json"):
        assert file.attachments[name].get_file().read_bytes() == (folder / name).read_bytes()


def test_the_outline_has_every_section_in_order(demo: Demo, file: pikepdf.Pdf, said: Said) -> None:
    with file.open_outline() as outline:
        titles = [str(item.title) for item in outline.root]
    sections = said.document.sections[1:]
    assert titles == [said.document.title, *(f"{section.number} {section.title}" for section in sections)]
    # the order of contents that a package is agreed to have
    order = ["decision", "contents", "basis", "inputs", "assumptions", "method", "judgement", "cautions", "references"]
    order += ["software", "record", "listing", "index"]
    keys = [section.key for section in said.document.sections if not section.key.startswith("case-")]
    assert keys == order
    cases = [section.key for section in said.document.sections if section.key.startswith("case-")]
    assert cases == [f"case-{name}" for name in demo.cases]


def test_each_sheet_has_its_number_and_the_digest(pages: list[str], said: Said) -> None:
    head = said.document.digest.removeprefix("sha256:")[:12]
    for number, text in enumerate(pages, 1):
        assert f"sheet {number} of {len(pages)}" in text
        assert head in squeezed(text)
        assert "preliminary, not for construction" in text.lower()


def test_what_decides_stands_on_the_first_sheet(demo: Demo, pages: list[str]) -> None:
    for word in ("not met", *demo.first, "A licensed engineer", "approver"):
        assert word in pages[0]
    assert "Contents and revisions" in pages[1]


def test_no_sheet_is_nearly_empty(content: bytes) -> None:
    """Of the height of its text area, each sheet but the last fills a quarter."""
    opened = pypdfium2.PdfDocument(content)
    for sheet in list(opened)[:-1]:
        text = sheet.get_textpage()
        boxes = [text.get_charbox(k) for k in range(text.count_chars())]
        low, high = 60.0, sheet.get_height() - 66.0  # running heads and feet left out, points
        inside = [box for box in boxes if low < box[1] and box[3] < high]
        assert min(box[1] for box in inside) < high - (high - low) / 4
    opened.close()


def test_the_register_of_checks_begins_on_the_sheet_of_its_heading(pages: list[str]) -> None:
    heading = squeezed("Checks made by the program")
    sheet = next(text for text in map(squeezed, pages) if heading in text)
    assert squeezed("Inputs without a source") in sheet.partition(heading)[2]


def test_every_number_reads_back_from_the_sheets(pages: list[str], said: Said) -> None:
    text = squeezed("".join(pages))
    numbers = list(printed(said.document))
    assert len(numbers) > 1000
    assert [number.ref for number in numbers if squeezed(number.text) not in text] == []


def test_every_id_of_the_ledger_on_a_line_is_in_the_index(said: Said) -> None:
    index = said.page[said.page.index('<ul class="index">') :]
    entries = re.findall(
        r'<li><span class="id"><span[^>]*>(.*?)</span></span> <span class="a">(.*?)</span></li>', index
    )
    told = {name: re.sub("<[^>]*>", "", rest) for name, rest in entries}
    for ref, address in said.document.addresses.items():
        stem, _, case = ref.partition("@")
        if "#" in case:
            assert re.search(rf"@{case.partition('#')[0]}#\d", told[stem])
        elif case:
            assert re.search(rf"@{case}(#\S+)? .*\b{re.escape(address)}\b", told[stem]), ref
        else:
            row, _, last = ref.rpartition(".")
            assert re.search(rf"\.{last}\b.* {re.escape(address)}$", told[row]), ref


def test_no_bound_follows_an_equals_sign(said: Said) -> None:
    assert "&lt; 1 × 10" in said.page
    plain = re.sub(r'<span class="h">.*?</span>|<[^>]*>', "", said.page)
    assert re.search(r"[=≈]\s*&lt;", plain) is None


def test_one_altered_digit_of_any_number_fails_the_seal(said: Said) -> None:
    assert seal_document(said.page, said.document, said.ledger) == len(list(printed(said.document)))
    found = list(ANCHOR.finditer(said.page))
    chosen = random.Random(214).sample(found, SAMPLED)  # noqa: S311 - seeded, not secret
    for anchor in chosen:
        outside = re.compile(r"\d(?![^<]*>)")  # a digit of the text, not of a tag
        for digit in outside.finditer(anchor[3]):
            altered = anchor[3][: digit.start()] + str((int(digit[0]) + 1) % 10) + anchor[3][digit.end() :]
            with pytest.raises(IntegrityError, match="is printed, the ledger says"):
                seal(anchor[0].replace(f">{anchor[3]}</data>", f">{altered}</data>"), said.ledger)


def test_one_altered_digit_fails_the_whole_page(said: Said) -> None:
    found = list(ANCHOR.finditer(said.page))
    for anchor in random.Random(61).sample(found, 3):  # noqa: S311 - seeded, not secret
        digit = re.search(r"\d", anchor[3])
        if digit is None:
            continue
        at = anchor.start(3) + digit.start()
        changed = said.page[:at] + str((int(said.page[at]) + 1) % 10) + said.page[at + 1 :]
        with pytest.raises(IntegrityError):
            seal_document(changed, said.document, said.ledger)


def test_an_altered_ledger_value_fails_the_seal(said: Said) -> None:
    numbers = {anchor[1]: anchor[0] for anchor in ANCHOR.finditer(said.page)}
    for ref in random.Random(15).sample(sorted(numbers), SAMPLED):  # noqa: S311 - seeded, not secret
        spot = said.ledger.spot(ref)
        kept = spot.column.values
        changed = kept.copy()
        changed[spot.row] = changed[spot.row] * 1.7 + 1.0
        object.__setattr__(spot.column, "values", changed)
        try:
            with pytest.raises(IntegrityError, match=re.escape(spot.id)):
                seal(numbers[ref], said.ledger)
        finally:
            object.__setattr__(spot.column, "values", kept)
    assert seal(said.page, said.ledger)


@pytest.mark.slow
def test_another_place_time_and_seed_give_the_same_bytes(demo: Demo, folder: Path, tmp_path: Path) -> None:
    home = tmp_path / "home"
    home.mkdir()
    again = issue(
        demo,
        home,
        PYTHONHASHSEED="77",
        TZ="Pacific/Kiritimati",
        LC_ALL="de_DE.UTF-8",
        LANG="C",
        HOME=str(home),
        TMPDIR=str(tmp_path),
        SOURCE_DATE_EPOCH="77",
    )
    for one in (p for p in folder.rglob("*") if p.is_file()):
        assert (again / one.relative_to(folder)).read_bytes() == one.read_bytes(), one.name


WALK = """async () => {
  const book = readBook(JSON.parse(document.getElementById('book').textContent)), wrong = [], sorts = new Map();
  for (let i = 0; i < book.count; i += 1) {
    sorts.set(`${book.name(i)} ${Boolean(book.trialOf(i))} ${book.origin(i)[0]}`, i);
  }
  for (const i of sorts.values()) {
    await new Promise((done) => {
      addEventListener('hashchange', () => setTimeout(done), {once: true});
      location.hash = encodeURIComponent(book.id(i));
    });
    const said = document.getElementById('account'), id = said.querySelector('.id').firstChild.textContent;
    const ends = book.from(i).length ? said.querySelector('.tree .nd') : said.querySelector('.sum .yn');
    if (id !== book.id(i) || /undefined|NaN|\\[object/.test(said.innerText) || !ends) { wrong.push(book.id(i)); }
  }
  return [sorts.size, wrong]; }"""
PUT_IN = """async () => {
  const book = readBook(JSON.parse(document.getElementById('book').textContent)), wrong = [];
  const figures = (e) => [...e.childNodes].filter(n => n.className !== 'u').map(n => n.textContent).join('');
  const done = new Set();
  let count = 0;
  for (const formula of document.querySelectorAll('main tr .eq')) {
    const all = [...formula.querySelectorAll('data')], key = (e) => parseInt(e.getAttribute('value'), 36);
    if (all.length < 2 || formula.closest('tr').querySelectorAll('.eq').length > 1) { continue; }
    const i = key(all.at(-1)), result = figures(all.at(-1));
    if (!book.law(i) || done.has(i)) { continue; }
    done.add(i);
    await new Promise((done) => {
      addEventListener('hashchange', () => setTimeout(done), {once: true});
      location.hash = encodeURIComponent(book.id(i));
    });
    const here = [...document.querySelectorAll('#account .sum .put')].map(e => figures(e.querySelector('.nw')));
    const said = figures(document.querySelector('#account .res .nw'));
    const there = all.filter(e => key(e) !== i).map(figures);
    count += 1;
    if (here.sort().join() !== there.sort().join() || said !== result) { wrong.push([book.id(i), here, there, said]); }
  }
  return [count, wrong]; }"""


@pytest.mark.browser
def test_numbers_of_every_sort_have_an_account(folder: Path) -> None:
    page = folder / "package.html"
    assert page.stat().st_size < 1_200_000
    with chromium() as browser:
        at = opened(browser, page)
        for width in (360, 768, 1440):
            at.page.set_viewport_size({"width": width, "height": 900})
            assert at.do("document.documentElement.scrollWidth <= document.documentElement.clientWidth")
        count, wrong = at.do(WALK)
        assert count > 50
        assert wrong == []
        count, wrong = at.do(PUT_IN)  # numbers put in, and results, with the figures of the worked lines
        assert count > 20
        assert wrong == []
        assert at.complaints == []

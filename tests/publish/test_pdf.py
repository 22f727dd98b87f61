"""The PDF: conformance by a validator from outside, our faces alone, text that reads back, nothing out of its place."""

from __future__ import annotations

import hashlib
import io
import logging
import os
import re
import subprocess
import sys
import zlib
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import page as validator
import pikepdf
import pypdfium2  # type: ignore[import-untyped]
import pytest
import sample
import weasyprint
from weasyprint.formatting_structure import boxes

from calc.problems import IntegrityError
from calc.publish import pdf
from calc.publish.faces import shown
from calc.publish.seal import printed, seal_document
from calc.publish.tagging import formulas_tagged
from calc.report.document import (
    Document,
    Heading,
    Listing,
    Masthead,
    Paragraph,
    Quoted,
    Row,
    Section,
    SignOff,
    Table,
    TableColumn,
)

pytestmark = pytest.mark.pdf
PAPERS = {"A4": (595.28, 841.89), "Letter": (612.0, 792.0)}
"""In points: ISO 216, and 8.5 by 11 in."""


@pytest.fixture(scope="module")
def content(package: dict[str, bytes]) -> bytes:
    return package["package.pdf"]


@pytest.fixture(scope="module")
def file(content: bytes) -> Iterator[pikepdf.Pdf]:
    with pikepdf.open(io.BytesIO(content)) as opened:
        yield opened


@pytest.mark.parametrize("profile", ["3a", "ua1"])
def test_a_validator_finds_nothing(content: bytes, profile: str) -> None:
    report = validator.validate_pdf_bytes(content, profile=profile)
    assert [(failure.rule_id, failure.message) for failure in report.failures[:5]] == []
    assert report.is_compliant


def test_the_validator_would_find_something(content: bytes) -> None:
    with pikepdf.open(io.BytesIO(content)) as broken:
        del broken.Root.OutputIntents
        for item in broken.objects:
            if isinstance(item, pikepdf.Dictionary) and item.get("/S") == "/Formula":
                del item.Alt
        spoilt = io.BytesIO()
        broken.save(spoilt)
    for profile in ("3a", "ua1"):
        assert not validator.validate_pdf_bytes(spoilt.getvalue(), profile=profile).is_compliant


def test_only_our_faces_are_embedded(file: pikepdf.Pdf) -> None:
    names = {
        str(item.FontName)
        for item in file.objects
        if isinstance(item, pikepdf.Dictionary) and item.get("/Type") == "/FontDescriptor"
    }
    assert len(names) >= 6
    assert [
        name for name in names if not re.fullmatch(r"/[A-Z]{6}\+Ledger-(Text|Small|Display|Mono)[\w-]*", name)
    ] == []


def test_formulas_are_tagged_with_their_words(file: pikepdf.Pdf) -> None:
    found = [
        str(item.Alt) for item in file.objects if isinstance(item, pikepdf.Dictionary) and item.get("/S") == "/Formula"
    ]
    assert "V = 4 Q_1/(π D^2)" in found
    assert len(found) >= 37


def test_figures_have_words(file: pikepdf.Pdf) -> None:
    found = [item for item in file.objects if isinstance(item, pikepdf.Dictionary) and item.get("/S") == "/Figure"]
    assert len(found) == 2
    assert all(len(str(item.Alt)) > 40 for item in found)


def test_inputs_and_results_are_inside_once(file: pikepdf.Pdf, package: dict[str, bytes]) -> None:
    relations = {str(item.UF): (str(item.AFRelationship), str(item.EF.F.Subtype)) for item in file.Root.AF}
    assert len(file.Root.AF) == len(relations)
    assert relations == {
        "network.yaml": ("/Source", "/application/yaml"),
        "cases.yaml": ("/Source", "/application/yaml"),
        "results.json": ("/Data", "/application/json"),
        "ledger.json": ("/Data", "/application/json"),
    }
    assert file.attachments["network.yaml"].get_file().read_bytes() == sample.FILES["network.yaml"]
    assert file.attachments["ledger.json"].get_file().read_bytes() == package["ledger.json"]


def test_dates_are_the_revisions(content: bytes, file: pikepdf.Pdf) -> None:
    assert str(file.docinfo.CreationDate).startswith("D:20261102")
    assert {str(item.EF.F.Params.ModDate) for item in file.Root.AF} == {"D:20261102000000Z"}
    assert b"calc:digest" in content
    assert b"sha256:6b5c6bf793c5aa10ff" in content


def test_outline_language_and_title(file: pikepdf.Pdf) -> None:
    with file.open_outline() as outline:
        titles = [item.title for item in outline.root]
    assert titles[:3] == ["Ostrel transfer main", "2 Contents and revisions", "3 Design basis, datum and conventions"]
    assert str(file.Root.Lang) == "en"
    assert str(file.docinfo.Title) == "Ostrel transfer main: OTM-HY-014, revision P01"


def text_of(content: bytes) -> list[str]:
    opened = pypdfium2.PdfDocument(content)
    pages = [page.get_textpage().get_text_range() for page in opened]
    opened.close()
    return pages


def squeezed(text: str) -> str:
    return re.sub(r"[\s\u00a0\u2009\u202f\ufffe]", "", text)


def test_every_number_reads_back_from_the_pages(content: bytes, a4: Any) -> None:  # noqa: ANN401
    text = squeezed("".join(text_of(content)))
    for number in printed(a4.document):
        assert squeezed(number.text) in text


def test_heads_and_feet(content: bytes) -> None:
    pages = text_of(content)
    for number, text in enumerate(pages, 1):
        assert f"sheet {number} of {len(pages)}" in text
        assert "digest 6b5c 6bf7 93c5" in text
        assert number == 1 or "OTM-HY-014, revision P01" in text


def test_contents_tell_the_sheets(content: bytes) -> None:
    pages = text_of(content)
    at = next(k for k, text in enumerate(pages, 1) if "Method" in text and k > 2)
    assert re.search(rf"Method\s+{at}\b", pages[1])


def test_listing_lines_are_numbered(content: bytes) -> None:
    pages = text_of(content)
    assert any(re.search(r"2\s+upper: \{level: 214.60 m\}", text) for text in pages)


@pytest.mark.parametrize("paper", sorted(PAPERS))
def test_paper(paper: str, request: pytest.FixtureRequest) -> None:
    made = request.getfixturevalue(paper.lower() if paper == "A4" else "letter")
    sizes = {(round(p.width * 0.75, 1), round(p.height * 0.75, 1)) for p in made.laid.pages}
    wide, high = PAPERS[paper]
    assert {tuple(sorted(size)) for size in sizes} == {(round(min(wide, high), 1), round(max(wide, high), 1))}
    assert len(sizes) == 2  # one section is turned


def walked(box: Any, cell: Any = None, above: Any = None) -> Iterator[tuple[Any, Any, Any]]:  # noqa: ANN401
    """Yield each box of a page with the cell and the list item it stands in, running heads left out."""
    box = getattr(box, "_box", box)
    if isinstance(box, boxes.MarginBox):
        return
    cell = box if isinstance(box, boxes.TableCellBox) else cell
    yield box, cell, above
    for child in getattr(box, "children", ()):
        yield from walked(child, cell, box)


def strays(laid: Any) -> list[tuple[int, str, str]]:  # noqa: ANN401
    found = []
    for sheet, laid_page in enumerate(laid.pages, 1):
        whole = laid_page._page_box
        left, right = whole.content_box_x(), whole.content_box_x() + whole.width
        foot = whole.content_box_y() + whole.height
        for box, cell, _ in walked(whole):
            if not isinstance(box, boxes.TextBox) or not box.text.strip():
                continue
            start, end = box.position_x, box.position_x + box.width
            if start < left - 0.5 or end > right + 0.5 or box.position_y + box.height > foot + 0.5:
                found.append((sheet, "page", box.text))
            if cell is not None and (
                start < cell.position_x - 0.5 or end > cell.position_x + cell.border_width() + 0.5
            ):
                found.append((sheet, "cell", box.text))
    return found


def test_no_text_leaves_its_page_or_cell(a4: Any, letter: Any) -> None:  # noqa: ANN401
    assert strays(a4.laid) == []
    assert strays(letter.laid) == []


def plain(*sections: Section, paper: str = "A4", title: str = "Works") -> Document:
    return Document(title, "N-1", "P01", "", "Issued", paper, "sha256:00", sections)


def laid_out(document: Document) -> Any:  # noqa: ANN401
    return pdf.laid_out(pdf.sheet_html(document, sample.ledger(), {}), {})


def test_long_words_stay_in_their_place() -> None:
    word = "W" * 300
    columns = (TableColumn((Quoted(word),), width=20), TableColumn((Quoted(word),)), TableColumn((), width=30))
    rows = (
        Row("1.1", ((Quoted(word),), (Quoted(word),), (Quoted("ok"),))),
        Row("1.2", ((Quoted(word),),), tone="group"),
    )
    blocks = (
        Heading((Quoted(word),)),
        Paragraph((Quoted(word),)),
        Table("t", columns, rows),
        Listing(word, (word,), "00"),
    )
    laid = laid_out(
        plain(
            Section("a", "1", word, (Quoted(word),), blocks),
            Section("b", "2", word, (Quoted(word),), blocks),
            title=word,
        )
    )
    assert strays(laid) == []
    for laid_page in laid.pages:  # running heads stay in the margin, on this paper 23 mm
        heads = [
            c for c in laid_page._page_box.children if isinstance(c, boxes.MarginBox) and c.at_keyword == "@top-left"
        ]
        lines = [line for head in heads for line in head.descendants() if isinstance(line, boxes.LineBox)]
        assert all(line.position_y + line.height < laid_page._page_box.content_box_y() for line in lines)


def last_texts(laid: Any) -> Iterator[Any]:  # noqa: ANN401
    """Yield the lowest text of each sheet and the block it stands in."""
    for laid_page in laid.pages:
        texts = [
            (box.position_y, above)
            for box, _, above in walked(laid_page._page_box)
            if isinstance(box, boxes.TextBox) and box.text.strip()
        ]
        yield max(texts, key=lambda found: found[0])[1]


def test_a_heading_is_never_last_on_its_sheet() -> None:
    columns = (TableColumn(("what",)), TableColumn(("value",), width=20))
    rows = (
        Row("", ((Quoted("group"),),), tone="group"),
        *(Row("", (("a",), ("b",))) for _ in range(3)),
        Row("", (("sum",), ("b",)), tone="sum"),
    )
    sections = []
    for count in range(36, 52):
        filler = tuple(Paragraph(("Filling.",)) for _ in range(count))
        sections.append(
            Section(
                "a", str(count), "Words", (), (*filler, Heading(("Heading of a table",)), Table("t", columns, rows))
            )
        )
    laid = laid_out(plain(*sections))
    assert len(laid.pages) > len(sections)
    for above in last_texts(laid):
        text = "".join(box.text for box in above.descendants() if isinstance(box, boxes.TextBox))
        assert text not in ("Heading of a table", "group", "what", "value", "line")


def test_a_sum_stands_with_a_row_of_its_own() -> None:
    columns = (TableColumn(("what",)),)
    rows = lambda count: (*(Row("", (("row",),)) for _ in range(count)), Row("", (("sum",),), tone="sum"))  # noqa: E731
    laid = laid_out(
        plain(*(Section("a", str(count), "Words", (), (Table("t", columns, rows(count)),)) for count in range(30, 46)))
    )
    split = 0
    for laid_page in laid.pages:
        texts = [box.text for box, _, _ in walked(laid_page._page_box) if isinstance(box, boxes.TextBox)]
        if "sum" in texts:
            assert "row" in texts
        split += "sum" in texts and "Words" not in texts
    assert split > 0  # some table did run on


def test_what_the_layout_library_logs_stops_the_build(a4: Any) -> None:  # noqa: ANN401
    broken = a4.sheet.replace("<style>", "<style>p { no-such-property: 1 }", 1)
    with pytest.raises(IntegrityError, match=r"could not be set as written: .*no-such-property"):
        pdf.write(a4.document, broken, a4.pictures, {})


@pytest.mark.parametrize("address", ["file:///etc/passwd", "https://example.org/a.png", "asset:other.png"])
def test_a_page_reaches_nothing_but_what_it_is_given(a4: Any, address: str) -> None:  # noqa: ANN401
    broken = a4.sheet.replace("<main>", f'<main><img src="{address}" alt="x">', 1)
    with pytest.raises(IntegrityError, match=r"which it may not have|Failed to load image"):
        pdf.write(a4.document, broken, a4.pictures, {})


def test_logging_is_left_as_found() -> None:
    logger = logging.getLogger("weasyprint")
    before = list(logger.handlers)
    with pytest.raises(IntegrityError), pdf.complaints():
        logger.warning("planted")
    assert logger.handlers == before


def test_tagging_refuses_another_release(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(weasyprint, "__version__", "71.0")
    with pytest.raises(IntegrityError, match=r"71\.0 is installed; this needs 70\.0"), formulas_tagged():
        pass


def test_signs_of_other_scripts_bring_no_other_face() -> None:
    laid = laid_out(plain(Section("a", "1", "水", (Quoted("水 \U0001f600 ⁻"),), (Listing("x.yaml", ("水",), "00"),))))
    text = "".join(box.text for p in laid.pages for box, _, _ in walked(p._page_box) if isinstance(box, boxes.TextBox))
    assert shown("水") in text
    assert "水" not in text


def test_names_in_other_scripts_can_be_published() -> None:
    word = "水道 \U0001f600"
    blocks = (Heading((Quoted(word),)), SignOff((("originator", word),), seal_area=False))
    sections = (
        Section("decision", "1", "Decision", (), (Masthead((Quoted(word),), (Quoted(word),), "Issued", ()), *blocks)),
        Section("a", "2", word, (Quoted(word),), blocks),
    )
    document = replace(plain(*sections, title=word), number=word, revision=word)
    ledger = sample.ledger()
    page = pdf.sheet_html(document, ledger, {})
    assert seal_document(page, document, ledger) == 0
    pages = text_of(pdf.write(document, page, {}, {}))
    assert "[U+6C34]" in squeezed(pages[0])


CODE = """
import sys, hashlib
sys.path.insert(0, sys.argv[1])
import sample
from calc.publish.package import publish
books = sample.ledger()
files = publish(sample.document("A4", books), books, sample.FILES, {"format": "headtrace-results/1", "cases": {}})
for name, content in files.items():
    print(name, hashlib.sha256(content).hexdigest())
"""


@pytest.mark.slow
def test_another_process_place_and_day_give_the_same_bytes(package: dict[str, bytes], tmp_path: Path) -> None:
    expected = {name: hashlib.sha256(content).hexdigest() for name, content in package.items()}
    for seed, zone, words in (("1", "Pacific/Kiritimati", "de_DE.UTF-8"), ("77", "America/Anchorage", "C")):
        home = tmp_path / seed
        home.mkdir()
        surroundings = {
            **os.environ,
            "PYTHONHASHSEED": seed,
            "TZ": zone,
            "LC_ALL": words,
            "LANG": words,
            "HOME": str(home),
            "TMPDIR": str(home),
            "SOURCE_DATE_EPOCH": seed,
        }
        command = [sys.executable, "-W", "error", "-c", CODE, str(Path(__file__).parent)]
        done = subprocess.run(command, env=surroundings, cwd=home, capture_output=True, text=True, check=False)
        assert done.returncode == 0, done.stderr
        assert dict(line.split() for line in done.stdout.splitlines()) == expected


def test_no_stream_of_a_sheet_ends_in_a_carriage_return() -> None:
    """The last byte of a deflated stream is the lowest of its Adler-32 sum (RFC 1950), so some content gives any."""
    drawn = (b"0 0 m %d 9 l S\n" % k * (1 + k % 50) for k in range(5000))
    marks = next(text for text in drawn if zlib.adler32(text) & 255 == ord("\r"))
    with pikepdf.new() as made:
        page = made.add_blank_page(page_size=(200, 200))
        page.Contents = made.make_stream(marks)
        made.attachments["kept.txt"] = pikepdf.AttachedFileSpec(made, marks, filename="kept.txt")
        target = io.BytesIO()
        made.save(target, deterministic_id=True)
    assert b"\r\nendstream" in target.getvalue()
    changed = pdf.ended(target.getvalue())
    assert changed == pdf.ended(target.getvalue())
    with pikepdf.open(io.BytesIO(changed)) as opened:
        assert not opened.pages[0].Contents.read_raw_bytes().endswith(b"\r")
        assert opened.pages[0].Contents.read_bytes().split() == marks.split()
        assert opened.attachments["kept.txt"].get_file().read_bytes() == marks
    assert pdf.ended(changed) == changed

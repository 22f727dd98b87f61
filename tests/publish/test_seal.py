"""The seal: every number is proved, and one altered value or digit does not pass."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest
import sample

from calc import kinds
from calc.ledger import Ledger, Program
from calc.problems import IntegrityError
from calc.publish import pdf
from calc.publish.seal import printed, proved, seal, seal_document
from calc.report.document import Document, Paragraph, Section

ANCHOR = re.compile(r'<data class="n" value="([^"]*)" data-as="([^"]*)">(.*?)</data>', re.DOTALL)
SHORT = re.compile(r"<data value=([\w.]+)>(.*?)</data>", re.DOTALL)
GRAVITY = '<data class="n" value="site.gravity" data-as="m/s²|d5||">9.80665</data>'
TAGS = re.compile(r"<[^>]*>")


def other(digit: str) -> str:
    return str((int(digit) + 1) % 10)


def anchors(page: str) -> list[re.Match[str]]:
    return list(ANCHOR.finditer(page))


def test_paper_and_screen_are_sealed_with_every_number(a4, letter) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    for made in (a4, letter):
        count = len(anchors(made.sheet))
        assert count > 600
        assert seal(made.sheet, made.ledger) == seal(made.screen, made.ledger) == count
        assert seal_document(made.sheet, made.document, made.ledger) == len(list(printed(made.document)))


def test_each_digit_of_each_number_counts(a4) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    tried = 0
    for found in {match[0]: match for match in anchors(a4.sheet)}.values():
        inner = found[3]
        # a digit of the text, not of a tag
        spans = [(tag.start(), tag.end()) for tag in TAGS.finditer(inner)]
        for place, character in enumerate(inner):
            if character.isdecimal() and not any(a <= place < b for a, b in spans):
                altered = inner[:place] + other(character) + inner[place + 1 :]
                page = found[0].replace(f">{inner}</data>", f">{altered}</data>")
                assert seal(found[0], a4.ledger) == 1
                with pytest.raises(IntegrityError, match="is printed, the ledger says"):
                    seal(page, a4.ledger)
                tried += 1
    assert tried > 400


def test_each_ledger_value_counts(a4) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    ledger = sample.ledger()
    refs = dict.fromkeys(proved(a4.sheet, ledger))
    fragments = {ref: [m[0] for m in anchors(a4.sheet) if m[1] == ref] for ref in refs}
    for ref, pieces in fragments.items():
        spot = ledger.spot(ref)
        kept = spot.column.values
        changed = kept.copy()
        changed[spot.row] = changed[spot.row] * 1.7 + 1.0
        object.__setattr__(spot.column, "values", changed)
        for piece in pieces:
            with pytest.raises(IntegrityError, match=re.escape(ref)):
                seal(piece, ledger)
        object.__setattr__(spot.column, "values", kept)
    assert seal(a4.sheet, ledger) == len(anchors(a4.sheet))


def test_one_digit_in_the_whole_page_fails_it(a4) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    for page, sort in ((a4.sheet, ANCHOR), (a4.screen, SHORT)):
        every = list(sort.finditer(page))
        found = every[len(every) // 2]
        inner = found[found.lastindex]
        place = found.start(found.lastindex) + next(k for k in range(len(inner)) if inner[k].isdecimal())
        altered = page[:place] + other(page[place]) + page[place + 1 :]
        with pytest.raises(IntegrityError):
            seal(altered, a4.ledger)


def test_the_screen_names_its_numbers_by_what_it_carries(a4) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    found = list(SHORT.finditer(a4.screen))
    assert len(found) == len(anchors(a4.sheet))
    first = found[0]
    number, form = first[1].split(".")
    for key in (f"{number}0.{form}", f"{number}.{form}0000", "zzzzz.0", f"-1.{form}", f"{number}.zz", "", "."):
        with pytest.raises(IntegrityError):
            seal(a4.screen.replace(first[0], f"<data value={key}>{first[2]}</data>", 1), a4.ledger)


def test_each_number_that_the_screen_carries_is_proved(a4) -> None:  # type: ignore[no-untyped-def]  # noqa: ANN001
    ledger = sample.ledger()
    for column in ledger.columns:
        kept = column.values
        changed = kept.copy()
        changed[-1] = changed[-1] * (1 + 3e-8) + (changed[-1] == 0) * 1e-9
        object.__setattr__(column, "values", changed)
        with pytest.raises(IntegrityError, match="the page carries"):
            seal(a4.screen, ledger)
        object.__setattr__(column, "values", kept)
    ledger.enter("site.more", kinds.LENGTH, [""], [1.0], Program("more"))
    with pytest.raises(IntegrityError, match="the page carries"):
        seal(a4.screen, ledger)
    with pytest.raises(IntegrityError, match="cannot be read"):
        seal(re.sub(r'"columns":\[\[', '"columns":[[999999,', a4.screen, count=1), a4.ledger)


@pytest.mark.parametrize(
    ("page", "said"),
    [
        ("<p>the flow is 83.1 L/s</p>", "has no line in the ledger"),
        ("<p>the flow is ٣</p>", "has no line in the ledger"),
        ("<p>x<sup>2</sup></p>", "has no line in the ledger"),
        ('<p><data class="n" value="pipes.nowhere.flow" data-as="L/s|d1||">1.0</data></p>', "no number has the id"),
        ('<p><data class="n" value="site.gravity" data-as="m/s²">9.81</data></p>', "is printed as"),
        ("<p><b>x</p>", "closes <p>"),
        ("<p>x", "ends inside <p>"),
        (
            f'<data class="n" value="site.gravity" data-as="m/s²|d5||">{GRAVITY}</data>',
            "inside another",
        ),
        (
            f'{GRAVITY}<span class="u">\u202fft/s²</span>',
            "after a number in",
        ),
    ],
)
def test_what_does_not_prove(page: str, said: str) -> None:
    with pytest.raises(IntegrityError, match=re.escape(said)):
        seal(page, sample.ledger())


@pytest.mark.parametrize("manner", ["own", "given", "lit"])
def test_references_and_words_of_the_user_are_free(manner: str) -> None:
    assert seal(f'<p><span class="{manner}">12 <b>3</b></span></p>', sample.ledger()) == 0
    assert seal('<table class="listing"><tr><td>12 mm</td></tr></table>', sample.ledger()) == 0


def short(ledger: Ledger, *refs: str) -> Document:
    scribe = sample.Scribe(ledger)
    parts = tuple(scribe.number(ref) for ref in refs)
    return Document("Works", "", "", "", "", "A4", "", (Section("a", "1", "Words", (), (Paragraph(parts),)),))


def test_a_number_left_out_moved_or_added_fails() -> None:
    ledger = sample.ledger()
    refs = ("site.gravity", "pipes.sedge-link.flow@base")
    document = short(ledger, *refs)
    page = pdf.sheet_html(document, ledger, {})
    assert seal_document(page, document, ledger) == 2
    for changed in (refs[:1], refs[::-1], (*refs, refs[0])):
        other_document = replace(short(ledger, *changed))
        with pytest.raises(IntegrityError, match="the page prints 2 numbers"):
            seal_document(page, other_document, ledger)

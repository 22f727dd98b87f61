"""The page: no number without its ledger id, no digit that is not marked, nothing of the user's taken for markup."""

from __future__ import annotations

from dataclasses import replace

import pytest
import sample
from jinja2 import TemplateSyntaxError, UndefinedError
from jinja2.exceptions import SecurityError, TemplateAssertionError

from calc.problems import Unresolved
from calc.publish import markup, pdf
from calc.publish.faces import shown
from calc.publish.html import environment
from calc.publish.parts import Writer
from calc.report.document import Cite, Document, Number, Own, Paragraph, Parts, Quoted, Row, Section, Table, TableColumn
from calc.report.numbers import Format

LEDGER = sample.ledger()


def page(*parts: object, title: str = "Words") -> str:
    section = Section("words", "1", title, (), (Paragraph(tuple(parts)),))  # type: ignore[arg-type]
    document = Document("Works", "N-1", "P01", "", "Issued", "A4", "sha256:00", (section, replace(section, number="2")))
    return pdf.sheet_html(document, LEDGER, {})


def body(text: str) -> str:
    return text.partition("<body>")[2]


@pytest.mark.parametrize(
    "source", ["{{ 1.07 }}", "{{ 3 }}", "{{ true }}", "{{ 2 * width }}", "{{ 2 * 3 }}", "{{ [1] }}", "{{ 'a 7' }}"]
)
def test_a_template_cannot_print_a_number(source: str) -> None:
    with pytest.raises(Unresolved, match="a template may not print"):
        environment().from_string(source).render(width=2.0)


@pytest.mark.parametrize(
    "source", ["{{ 2.0 | round }}", "{{ '%.2f' | format(2.0) }}", "{{ 'x' | safe }}", "{{ words | length }}"]
)
def test_filters_that_make_numbers_or_markup_are_gone(source: str) -> None:
    with pytest.raises((TemplateAssertionError, TemplateSyntaxError)):
        environment().from_string(source).render(words=["a"])


@pytest.mark.parametrize(
    "source", ["{{ ''.__class__ }}", "{{ said.__globals__ }}", "{{ said.__init__.__globals__['os'] }}"]
)
def test_templates_run_in_a_sandbox(source: str) -> None:
    with pytest.raises((SecurityError, UndefinedError)):
        environment().from_string(source).render(said=page)


def test_templates_reach_no_globals() -> None:
    with pytest.raises(UndefinedError):
        environment().from_string("{{ range(3) | join }}").render()


def test_plain_text_with_a_digit_is_refused() -> None:
    with pytest.raises(Unresolved, match="holds a number without a line in the ledger"):
        page("the flow is 83.1 L/s")


def test_digits_in_other_scripts_are_digits_too() -> None:
    with pytest.raises(Unresolved):
        page("the flow is ٣")


def test_an_unknown_sort_of_reference_is_refused() -> None:
    with pytest.raises(Unresolved, match="no sort of reference"):
        page(Own("12", "amount"))


def test_a_number_that_is_not_in_the_ledger_is_refused() -> None:
    with pytest.raises(Unresolved, match="no number has the id"):
        page(Number("pipes.nowhere.flow@base", Format("L/s", decimals=1), "83.1"))


def test_a_number_is_an_anchor_of_its_id() -> None:
    form = Format("L/s", decimals=1)
    said = body(page(Number("pipes.sedge-link.flow@base", form, "−20.4", with_unit=True)))
    assert '<data class="n" value="pipes.sedge-link.flow@base" data-as="L/s|d1||">−20.4</data>' in said
    assert '</data><span class="u">\u202fL/s</span>' in said


def test_a_number_of_another_case_names_the_case_that_states_it() -> None:
    said = body(page(Number("pipes.sedge-link.length@drawdown", Format("m", decimals=1), "920.5")))
    assert 'value="pipes.sedge-link.length@base"' in said


def test_a_power_of_ten_is_raised_and_copies_as_written() -> None:
    said = markup.raised("1.3 × 10^−6")
    assert said == '1.3 × 10<span class="h">^</span><sup>−6</sup>'
    assert markup.words("10⁻⁶ m²") == '10<span class="h">^</span><sup class="lit">−6</sup> m²'


def test_text_of_the_user_is_never_markup() -> None:
    hostile = '</span><script>alert("x")</script>{{ 7 * 7 }}<img src=x onerror=y>'
    said = body(page(Quoted(hostile), title=hostile))
    assert "<script" not in said
    assert "<img" not in said
    assert said.count("{{ 7 * 7 }}") > 1


def test_text_of_the_user_cannot_leave_the_style_sheet() -> None:
    section = Section("words", "1", "Words", (), ())
    title = '"} </style><script>alert(1)</script> @import "x"; \\'
    document = Document(title, title, "P01", "", title, "A4", "sha256:00", (section,))
    said = pdf.sheet_html(document, LEDGER, {})
    assert said.count("</style>") == 1
    assert "<script" not in said
    assert "@import" not in said.partition("<style>")[2].partition("</style>")[0]


def test_signs_that_our_faces_lack_are_named() -> None:
    assert shown("水 a\u202eb") == "[U+6C34] a[U+202E]b"
    assert shown("e\u0301") == "é"
    assert shown("\tx\x07", listing=True) == "    x[U+0007]"


def test_a_citation_is_collapsed_and_may_break_between_runs() -> None:
    document = replace(sample.document(made=LEDGER), addresses={"a": "5.1", "b": "5.2", "c": "5.3", "d": "6.2"})
    said = Writer(document, LEDGER).said((Cite(("a", "b", "c", "d")),))
    runs = '<span class="nw">5.1–5.3,</span> <span class="nw">6.2</span>'
    assert said == f'<span class="own ad" data-sort="address">{runs}</span>'


def table(row: Row, unit: str = "") -> str:
    columns = (TableColumn(("what",)), TableColumn(("value",), unit=unit, align="right", width=20))
    section = Section("words", "1", "Words", (), (Table("t", columns, (row,)),))
    return pdf.sheet_html(Document("Works", "", "", "", "", "A4", "", (section,)), LEDGER, {})


@pytest.mark.parametrize(
    ("row", "said"),
    [
        (Row("1.1", (("a",), ("b",), ("c",))), "3 cells, 2 columns"),
        (Row("1.1", (("a",), ("b",)), tone="red"), "no tone is called 'red'"),
    ],
)
def test_a_row_that_does_not_fit_its_table_is_refused(row: Row, said: str) -> None:
    with pytest.raises(Unresolved, match=said):
        table(row)


def test_a_number_in_another_unit_than_its_column_is_refused() -> None:
    number: Parts = (Number("pipes.sedge-link.flow@base", Format("L/s", decimals=1), "−20.4"),)
    assert "−20.4" in table(Row("1.1", (("a",), number)), "L/s")
    with pytest.raises(Unresolved, match="is printed in 'L/s' in a column of 'm³/s'"):
        table(Row("1.1", (("a",), number)), "m³/s")


def test_every_line_can_be_cited(a4: object) -> None:
    said = a4.sheet  # type: ignore[attr-defined]
    for address in set(a4.document.addresses.values()):  # type: ignore[attr-defined]
        assert said.count(f'id="line-{address}"') == 1

"""The screen's page made small: what is said stays, and drawings stay what they are."""

from __future__ import annotations

import re
from typing import Any

import pytest

from calc.publish.slim import restyled, slim, slim_drawing

TAGS = re.compile(r"<[^>]*>")
# a circle of radius 2.4 about (48.44, 26.03) in the eight curves by which it is drawn
CIRCLE = (
    "M 48.438481 28.429174 C 49.074969 28.429174 49.685473 28.176294 50.135538 27.72623 "
    "C 50.585602 27.276165 50.838481 26.665661 50.838481 26.029174 "
    "C 50.838481 25.392686 50.585602 24.782182 50.135538 24.332117 "
    "C 49.685473 23.882053 49.074969 23.629174 48.438481 23.629174 "
    "C 47.801994 23.629174 47.19149 23.882053 46.741425 24.332117 "
    "C 46.29136 24.782182 46.038481 25.392686 46.038481 26.029174 "
    "C 46.038481 26.665661 46.29136 27.276165 46.741425 27.72623 "
    "C 47.19149 28.176294 47.801994 28.429174 48.438481 28.429174 z"
)


def drawing(path: str) -> str:
    return slim_drawing(f'<svg width="9pt"><g><path d="{path}" style="fill: none"/></g></svg>')


def test_a_circle_stays_one() -> None:
    assert '<circle cx="48.44" cy="26.03" r="2.4" style="fill: none"/>' in drawing(CIRCLE)


@pytest.mark.parametrize(
    "bent", [("50.838481 26.029174", "52.838481 26.029174"), (" z", ""), ("C 49.07", "L 1.0 1.0 C 49.07")]
)
def test_what_is_no_circle_stays_a_path(bent: tuple[str, str]) -> None:
    assert "<circle" not in drawing(CIRCLE.replace(*bent))


def test_a_line_keeps_its_course() -> None:
    assert 'd="M0 281.8L467.72 -0.5"' in drawing("M 0.001 281.80315 \nL 467.716535 -0.5 \n")


def test_drawings_say_what_they_said(a4: Any) -> None:  # noqa: ANN401
    for picture in a4.pictures.values():
        slimmed = slim_drawing(picture.svg)
        said, kept = (re.findall(r"<text[^>]*>(.*?)</text>", svg, re.DOTALL) for svg in (picture.svg, slimmed))
        assert kept == said
        assert len(slimmed) < 0.7 * len(picture.svg)
        shapes = re.compile(r"<(?:path|circle)\b")
        assert len(shapes.findall(slimmed)) == len(shapes.findall(picture.svg))


def test_styles_become_classes_and_no_text_is_touched() -> None:
    text = "a=&#34;b&#34; style=&#34;x&#34;  \u202f<br>\u2028"
    page = f'<p style="color: #1d1a18" class="in">{text}</p><p style="color: #1d1a18">{text}</p>'
    said, rules = restyled(page)
    assert said == f'<p class="in s0">{text}</p><p class="s0">{text}</p>'
    assert rules == ".s0{color:var(--ink)}"
    assert TAGS.sub("", slim(page)[0]) == TAGS.sub("", page)


def test_an_attribute_is_bare_only_where_nothing_follows_it() -> None:
    said, _ = slim('<td class="no"><circle r="2.4"/><a href="a b">x="y"</a></td>')
    assert said == '<td class=no><circle r="2.4"/><a href="a b">x="y"</a></td>'

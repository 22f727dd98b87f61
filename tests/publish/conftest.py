"""The sample document, made once for all tests that look at its pages."""

from __future__ import annotations

import sys
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

sys.path.insert(0, str(Path(__file__).parent))

import sample

from calc.ledger import Ledger
from calc.publish import pdf, screen
from calc.publish.package import publish
from calc.publish.pictures import Picture, all_drawn
from calc.report.document import Document


@dataclass(frozen=True)
class Made:
    """A document with its pages."""

    ledger: Ledger
    document: Document
    pictures: dict[str, Picture]
    sheet: str
    screen: str
    laid: Any


def made(paper: str) -> Made:
    books = sample.ledger()
    document = sample.document(paper, books)
    pictures = all_drawn(document)
    sheet = pdf.sheet_html(document, books, pictures)
    page = screen.page(document, books, pictures)
    return Made(books, document, pictures, sheet, page, pdf.laid_out(sheet, pictures))


@pytest.fixture(scope="session")
def a4() -> Made:
    return made("A4")


@pytest.fixture(scope="session")
def letter() -> Made:
    return made("Letter")


@pytest.fixture(scope="session")
def package(a4: Made) -> dict[str, bytes]:
    return publish(a4.document, a4.ledger, sample.FILES, {"format": "headtrace-results/1", "cases": {}})

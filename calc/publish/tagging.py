"""Formulas in the structure of the PDF: each is one /Formula with the words by which it is read aloud."""

from __future__ import annotations

from collections.abc import Generator, Iterator
from contextlib import contextmanager
from typing import Any

import pydyf
import weasyprint
from weasyprint.pdf import tags

from calc.problems import IntegrityError

BUILT_FOR = "70.0"
"""The release whose inner function is wrapped here; the dependency is pinned to it."""
TURNED = ("/Div", "/Span", "/P")


@contextmanager
def formulas_tagged() -> Generator[None, None, None]:
    """Tag what has the role of mathematics as a formula, while a PDF is written.

    Raises
    ------
    IntegrityError
        If another release of the layout library is installed than this was built for.
    """
    if weasyprint.__version__ != BUILT_FOR:
        raise IntegrityError(f"weasyprint {weasyprint.__version__} is installed; this needs {BUILT_FOR}")
    found = tags._build_box_tree  # noqa: SLF001 - the only place that knows element and tag

    def build(box: Any, *rest: Any) -> Iterator[Any]:  # noqa: ANN401
        page_element = getattr(box, "element", None)
        for made in found(box, *rest):
            if page_element is not None and page_element.get("role") == "math" and made["S"] in TURNED:
                made["S"] = "/Formula"
                made["Alt"] = pydyf.String(page_element.get("aria-label"))
            yield made

    tags._build_box_tree = build  # noqa: SLF001
    try:
        yield
    finally:
        tags._build_box_tree = found  # noqa: SLF001

"""The PDF for the record: archival, tagged, with inputs and results inside, the same bytes whenever it is made."""

from __future__ import annotations

import gc
import hashlib
import io
import logging
import re
from collections.abc import Generator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import UTC, datetime
from importlib.resources import files
from pathlib import Path
from typing import Any

import pikepdf
import weasyprint
from markupsafe import Markup
from weasyprint.css import ColorProfile
from weasyprint.urls import URLFetcher, URLFetcherResponse

from calc.ledger import Ledger
from calc.problems import IntegrityError
from calc.publish import places
from calc.publish.faces import shown
from calc.publish.html import html, style
from calc.publish.metadata import CalculationMetadata
from calc.publish.pictures import Picture
from calc.publish.tagging import formulas_tagged
from calc.report.document import Document, Figure

VARIANT = "pdf/a-3a"
UNDATED = "2000-01-01"
"""The date of a document whose revision states none: no clock is read."""
SHOWN_DIGITS, GROUP = 12, 4
RUNNING, STATUS = 64, 90
"""Most characters of a running head, and of the status at the foot."""
SORTS = {".yaml": "application/yaml", ".json": "application/json", ".csv": "text/csv"}
OTHER = "application/octet-stream"
FACES = (
    ("Ledger Text", "LedgerText-Regular", "normal", "400"),
    ("Ledger Text", "LedgerText-Italic", "italic", "400"),
    ("Ledger Text", "LedgerText-SemiBold", "normal", "600"),
    ("Ledger Text", "LedgerText-SemiBoldItalic", "italic", "600"),
    ("Ledger Small", "LedgerSmall-Regular", "normal", "400"),
    ("Ledger Small", "LedgerSmall-Italic", "italic", "400"),
    ("Ledger Small", "LedgerSmall-SemiBold", "normal", "600"),
    ("Ledger Display", "LedgerDisplay-Regular", "normal", "400"),
    ("Ledger Mono", "LedgerMono-Regular", "normal", "400"),
)
"""Family, file, slant and weight of every face of the page."""


@dataclass(frozen=True, slots=True)
class Embedded:
    """A file inside the PDF: its bytes, its relation to the page (Source or Data) and its words."""

    content: bytes
    relation: str
    words: str


class Shelf(URLFetcher):  # type: ignore[misc]  # the library ships no types
    """Serves what the page asks for from memory; nothing else on this machine or beyond can be reached."""

    def __init__(self, held: Mapping[str, tuple[str, bytes]]) -> None:
        super().__init__(allowed_protocols={"data", "asset"}, allow_redirects=False)
        self._held = held

    def fetch(self, url: str, headers: Any = None) -> Any:  # noqa: ANN401
        """Return what is held under an ``asset:`` address, or the content of a ``data:`` one."""
        if url.startswith("data:"):
            return super().fetch(url, headers)
        name = url.removeprefix("asset:")
        if not url.startswith("asset:") or name not in self._held:
            raise ValueError(f"the page asks for '{url}', which it may not have")
        kind, content = self._held[name]
        return URLFetcherResponse(url, content, {"Content-Type": kind})


def sheet_html(document: Document, ledger: Ledger, pictures: Mapping[str, Picture]) -> str:
    """Return a document as the page from which the PDF is made."""

    def picture(figure: Figure) -> Markup:
        found = pictures[figure.number]
        return Markup('<img src="asset:figure-{}.svg" alt="{}">').format(_word(figure.number), found.words)

    date = document.date or UNDATED
    head = Markup('<meta name="dcterms.created" content="{}"><meta name="dcterms.modified" content="{}">').format(
        date, date
    ) + Markup("<style>{}</style>").format(Markup(_styles(document)))
    return html(document, ledger, picture, head=head)


def write(document: Document, page: str, pictures: Mapping[str, Picture], embedded: Mapping[str, Embedded]) -> bytes:
    """Return the PDF of a page.

    Parameters
    ----------
    document : Document
    page : str
        As given by `sheet_html`.
    pictures : mapping of str to Picture
        By number of figure.
    embedded : mapping of str to Embedded
        Files put inside, by name.

    Raises
    ------
    IntegrityError
        If anything of the page could not be set as written.
    """
    with quick(), complaints(), formulas_tagged():
        laid = laid_out(page, pictures)
        laid.metadata = CalculationMetadata.of(laid.metadata, _facts(document))
        laid.color_profiles["srgb"] = _inks()
        made = laid.write_pdf(
            pdf_variant=VARIANT,
            output_intent="srgb, held in memory",  # else the library opens the profile and leaves it open
            pdf_tags=True,
            pdf_identifier=hashlib.sha256(page.encode("utf-8")).digest()[:16],
            attachments=[_attachment(document, name, embedded[name]) for name in sorted(embedded)],
        )
    return finished(made, embedded)


def laid_out(page: str, pictures: Mapping[str, Picture]) -> Any:  # noqa: ANN401
    """Return the page laid out on sheets."""
    held = {f"{name}.ttf": ("font/ttf", (places.fonts() / f"{name}.ttf").read_bytes()) for _, name, _, _ in FACES}
    held |= {
        f"figure-{_word(number)}.svg": ("image/svg+xml", found.svg.encode("utf-8"))
        for number, found in pictures.items()
    }
    shelf = Shelf(held)
    return weasyprint.HTML(string=page, base_url="asset:", url_fetcher=shelf).render(pdf_variant=VARIANT)


def finished(made: bytes, embedded: Mapping[str, Embedded]) -> bytes:
    """Return a PDF in which each file inside is listed once, with its own relation, and whose id is its content's."""
    with pikepdf.open(io.BytesIO(made)) as file:
        if "/AF" in file.Root:
            once = {reference.objgen: reference for reference in file.Root.AF}
            for reference in once.values():
                name = str(reference.UF)
                reference.AFRelationship = pikepdf.Name(f"/{embedded[name].relation}")
                # not what the tables of this machine say
                reference.EF.F.Subtype = pikepdf.Name(f"/{SORTS.get(Path(name).suffix, OTHER)}")
            file.Root.AF = pikepdf.Array(list(once.values()))
        target = io.BytesIO()
        file.save(target, deterministic_id=True, linearize=False)
    return ended(target.getvalue())


def ended(made: bytes) -> bytes:
    """Return a PDF none of whose pages, drawings and faces ends in a carriage return when compressed.

    With the line feed that follows, a reader may take it for the end of the line before ``endstream`` and count one
    byte too few. Such a stream gets a line feed more, which none of these sorts minds; files inside stay as they are.
    """
    with pikepdf.open(io.BytesIO(made)) as file:
        ending = [one for one in file.objects if isinstance(one, pikepdf.Stream) and _ends_in_return(one)]
        if not ending:
            return made
        for stream in ending:
            content = stream.read_bytes() + b"\n"
            stream.write(content)
            if "/Length1" in stream:
                stream.Length1 = len(content)
        target = io.BytesIO()
        file.save(target, deterministic_id=True, linearize=False)
    return ended(target.getvalue())


def _ends_in_return(stream: pikepdf.Stream) -> bool:
    """Return whether a compressed stream that may grow by a line feed ends in a carriage return."""
    whole = stream.get("/Type") in ("/EmbeddedFile", "/Metadata", "/XRef", "/ObjStm") or "/N" in stream
    whole = whole or stream.get("/Subtype") == "/Image"
    return not whole and "/Filter" in stream and stream.read_raw_bytes().endswith(b"\r")


@contextmanager
def complaints() -> Generator[list[str], None, None]:
    """Turn anything that the layout library would only log into an error.

    Raises
    ------
    IntegrityError
        With what was logged.
    """
    heard: list[str] = []

    class _Listener(logging.Handler):
        def emit(self, record: logging.LogRecord) -> None:
            heard.append(record.getMessage())

    logger = logging.getLogger("weasyprint")
    before, level = logger.handlers, logger.level
    logger.handlers = [_Listener(logging.WARNING)]
    logger.setLevel(logging.WARNING)
    try:
        yield heard
    finally:
        logger.handlers = before
        logger.setLevel(level)
    if heard:
        raise IntegrityError(f"the page could not be set as written: {'; '.join(heard[:5])}")


@contextmanager
def quick() -> Generator[None, None, None]:
    """Collect garbage rarely: laying out makes millions of objects that stay."""
    before = gc.get_threshold()
    gc.set_threshold(200_000, 50, 100)
    try:
        yield
    finally:
        gc.set_threshold(*before)


def faces(address: str = "asset:{}.ttf") -> str:
    """Return the declarations of our faces; ``address`` gives the place of each from its name."""
    return "\n".join(
        f'@font-face {{ font-family: "{family}"; src: url("{address.format(name)}"); '
        f"font-style: {slant}; font-weight: {weight} }}"
        for family, name, slant, weight in FACES
    )


def running(text: str, most: int = RUNNING) -> str:
    """Return text as it fits the head of a page."""
    return text if len(text) <= most else text[: most - 1].rstrip() + "…"


def digest_head(document: Document) -> str:
    """Return the first digits of the digest in groups, as the foot of each page has them."""
    digits = document.digest.rpartition(":")[2][:SHOWN_DIGITS]
    return " ".join(digits[at : at + GROUP] for at in range(0, len(digits), GROUP))


def quoted(text: str) -> str:
    """Return text as a string of a style sheet, in which no character can end it."""
    return '"' + "".join(c if c.isalnum() and c.isascii() else f"\\{ord(c):06x}" for c in text) + '"'


def _inks() -> Any:  # noqa: ANN401
    """Return the colour profile that ships with the layout library."""
    content = (files("weasyprint.pdf") / "sRGB2014.icc").read_bytes()
    return ColorProfile(io.BytesIO(content), "sRGB2014.icc", "relative-colorimetric", (["r"], ["g"], ["b"]))


def _styles(document: Document) -> str:
    issued = ", revision ".join(word for word in (document.number, document.revision) if word)
    said = {
        "top-left": running(document.title),
        "top-right": running(issued),
        "bottom-left": f"digest {digest_head(document)}",
        "bottom-center": running(document.status, STATUS),
    }
    heads = " ".join(f"@{place} {{ content: {quoted(shown(text))} }}" for place, text in said.items())
    none = " ".join(f"@{place} {{ content: none }}" for place in ("top-left", "top-center", "top-right"))
    heads = f"@page {{ {heads} }}\n@page :first {{ {none} }}"
    return "\n".join(
        [faces(), style("page.css"), style("sheet.css"), heads, style(f"sheet-{document.paper.lower()}.css")]
    )


def _facts(document: Document) -> dict[str, str]:
    return {
        "number": document.number,
        "revision": document.revision,
        "status": document.status,
        "digest": document.digest,
    }


def _attachment(document: Document, name: str, file: Embedded) -> Any:  # noqa: ANN401
    day = datetime.strptime(document.date or UNDATED, "%Y-%m-%d").replace(tzinfo=UTC)
    return weasyprint.Attachment(
        file_obj=io.BytesIO(file.content),
        name=name,
        description=file.words,
        created=day,
        modified=day,
        relationship=file.relation,
    )


def _word(number: str) -> str:
    """Return a number of a figure as part of an address."""
    return re.sub(r"[^0-9A-Za-z]+", "-", number)

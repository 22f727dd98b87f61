"""The metadata of the PDF: archival and accessible at once, with words of our own about the calculation.

One file claims PDF/A (ISO 19005-3) and PDF/UA (ISO 14289-1). What is not in the schemas that PDF/A knows is declared
in an extension schema, as that standard asks.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar
from xml.etree import ElementTree as ET
from xml.sax.saxutils import escape

from weasyprint.document import DocumentMetadata

NAMESPACE = "urn:x-headtrace:calculation:1"
UA = "http://www.aiim.org/pdfua/ns/id/"
RDF = "http://www.w3.org/1999/02/22-rdf-syntax-ns#"
EXTENSION = "http://www.aiim.org/pdfa/ns/extension/"
SCHEMA = "http://www.aiim.org/pdfa/ns/schema#"
PROPERTY = "http://www.aiim.org/pdfa/ns/property#"
WORDS = {
    "number": "Number of the calculation",
    "revision": "Revision of the calculation",
    "status": "Purpose of issue",
    "digest": "Digest of inputs and solution",
}
"""What is said of a calculation, each with its meaning."""


class CalculationMetadata(DocumentMetadata):  # type: ignore[misc]  # the library ships no types
    """Metadata with the accessibility claim and ``facts`` about the calculation, by the names of `WORDS`."""

    facts: ClassVar[Mapping[str, str]] = {}

    @classmethod
    def of(cls, found: DocumentMetadata, facts: Mapping[str, str]) -> CalculationMetadata:
        """Return metadata as found in the page, with facts added."""
        made = cls()
        made.__dict__.update(found.__dict__)
        made.__dict__["facts"] = dict(facts)
        return made

    def include_in_pdf(self, pdf: Any, variant: str, version: int, conformance: str, compress: Any) -> None:  # noqa: ANN401
        """Add the metadata uncompressed, so that archives can read it without decoding."""
        del compress
        super().include_in_pdf(pdf, variant, version, conformance, compress=False)

    def generate_rdf_metadata(self, variant: str, version: int, conformance: str) -> bytes:
        """Return the metadata as RDF."""
        found = super().generate_rdf_metadata(variant, version, conformance).decode("utf-8")
        at = found.rindex("</rdf:RDF>")
        whole = f"{found[:at]}{_claim()}{_facts(self.facts)}{_schemas()}{found[at:]}"
        ET.fromstring(whole)  # noqa: S314 - made here; it must be well formed
        return whole.encode("utf-8")


def _claim() -> str:
    return (
        f'<rdf:Description xmlns:rdf="{RDF}" xmlns:pdfuaid="{UA}" rdf:about="">'
        "<pdfuaid:part>1</pdfuaid:part></rdf:Description>"
    )


def _facts(facts: Mapping[str, str]) -> str:
    said = "".join(f"<calc:{name}>{escape(facts[name])}</calc:{name}>" for name in WORDS if facts.get(name))
    return f'<rdf:Description xmlns:rdf="{RDF}" xmlns:calc="{NAMESPACE}" rdf:about="">{said}</rdf:Description>'


def _schemas() -> str:
    claim = _schema(
        "PDF/UA identification schema", UA, "pdfuaid", [_property("part", "Part of PDF/UA", "Integer", "internal")]
    )
    ours = _schema(
        "Calculation", NAMESPACE, "calc", [_property(name, said, "Text", "external") for name, said in WORDS.items()]
    )
    return (
        f'<rdf:Description xmlns:rdf="{RDF}" xmlns:pdfaExtension="{EXTENSION}" xmlns:pdfaSchema="{SCHEMA}" '
        f'xmlns:pdfaProperty="{PROPERTY}" rdf:about=""><pdfaExtension:schemas><rdf:Bag>{claim}{ours}</rdf:Bag>'
        "</pdfaExtension:schemas></rdf:Description>"
    )


def _schema(title: str, namespace: str, prefix: str, properties: list[str]) -> str:
    return (
        f'<rdf:li rdf:parseType="Resource"><pdfaSchema:schema>{title}</pdfaSchema:schema>'
        f"<pdfaSchema:namespaceURI>{namespace}</pdfaSchema:namespaceURI><pdfaSchema:prefix>{prefix}</pdfaSchema:prefix>"
        f"<pdfaSchema:property><rdf:Seq>{''.join(properties)}</rdf:Seq></pdfaSchema:property></rdf:li>"
    )


def _property(name: str, description: str, value: str, category: str) -> str:
    return (
        f'<rdf:li rdf:parseType="Resource"><pdfaProperty:name>{name}</pdfaProperty:name>'
        f"<pdfaProperty:valueType>{value}</pdfaProperty:valueType><pdfaProperty:category>{category}</pdfaProperty:category>"
        f"<pdfaProperty:description>{description}</pdfaProperty:description></rdf:li>"
    )

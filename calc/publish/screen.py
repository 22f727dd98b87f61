"""The page for the screen: one self-contained file in which a click on a number walks its derivation.

The ledger travels inside as data. What the page may do is stated in the page itself: no address is ever asked for, and
no script runs but the one whose digest it names.
"""

from __future__ import annotations

import base64
import hashlib
import json
from collections.abc import Mapping
from typing import Any

from markupsafe import Markup

from calc.equation import Implicit, Leaf
from calc.equation.law import takes
from calc.ledger import Derived, Ledger
from calc.problems import Unresolved
from calc.publish.faces import cut
from calc.publish.formula import formula, slots
from calc.publish.html import html, style
from calc.publish.pdf import FACES, digest_head, faces
from calc.publish.pictures import Picture
from calc.report.document import Document, Figure, Formula, Number

FACES_HERE = "/* faces */"
PLAIN = frozenset(range(0x20, 0x7F)) | frozenset(map(ord, "\u00a0\u2009\u202f−×·–—…‘’“”"))
"""Signs that the script may put together."""
PANEL = 30.0  # em, the width of a formula in the panel
ESCAPES = {"<": "\\u003c", ">": "\\u003e", "&": "\\u0026", "\u2028": "\\u2028", "\u2029": "\\u2029"}


def page(document: Document, ledger: Ledger, pictures: Mapping[str, Picture], books: Mapping[str, Any]) -> str:
    """Return the page.

    Parameters
    ----------
    document : Document
    ledger : Ledger
    pictures : mapping of str to Picture
        By number of figure.
    books : mapping
        The ledger as data, as `calc.ledger.exported` gives it.
    """

    def picture(figure: Figure) -> Markup:
        found = pictures[figure.number]
        root = Markup('<svg role="img" aria-label="{}" ').format(found.words)
        return root + Markup(found.svg.removeprefix("<svg "))

    script = style("walk.js")
    digest = base64.b64encode(hashlib.sha256(script.encode("utf-8")).digest()).decode("ascii")
    policy = (
        f"default-src 'none'; style-src 'unsafe-inline'; img-src data:; font-src data:; script-src 'sha256-{digest}'; "
        "base-uri 'none'; form-action 'none'"
    )
    head = Markup(
        '<meta http-equiv="Content-Security-Policy" content="{}"><meta name="viewport" '
        'content="width=device-width, initial-scale=1"><meta name="color-scheme" content="only light">'
    ).format(policy) + Markup("<style>{}</style>").format(Markup(FACES_HERE))
    carried = _carried("ledger", books) + _carried("names", _names(document, ledger))
    tail = _panel(document) + _templates(ledger) + carried
    said = html(document, ledger, picture, head=head, tail=tail + Markup("<script>{}</script>").format(Markup(script)))
    return said.replace(FACES_HERE, _styles(frozenset(map(ord, said))), 1)


def _styles(signs: frozenset[int]) -> str:
    """Return the styles of the page, with faces that hold the signs that stand in it, and those of plain writing."""
    declared = faces("{}")
    for _, name, _, _ in FACES:
        content = base64.b64encode(cut(name, signs | PLAIN)).decode("ascii")
        declared = declared.replace(f'url("{name}")', f'url("data:font/woff;base64,{content}")')
    return "\n".join([declared, style("page.css"), style("screen.css")])


def _panel(document: Document) -> Markup:
    """Return the place in which derivations are shown, and the foot that paper has on every sheet."""
    foot = Markup('<footer class="foot-line"><span class="own" data-sort="id">digest {}</span></footer>')
    return foot.format(digest_head(document)) + Markup(
        '<aside id="walk" aria-label="Derivation of a number" hidden>'
        '<button type="button" id="walk-close">close</button>'
        '<div id="walk-said" aria-live="polite"></div></aside>'
    )


def _templates(ledger: Ledger) -> Markup:
    """Return each law of the ledger, in symbols and with places for numbers, for the panel to copy and fill."""
    made = Markup()
    for name, leaf in _leaves(ledger).items():
        symbols = formula(Formula(leaf), PANEL, _nothing)
        made += Markup(
            '<template data-equation="{}"><div class="symbols">{}</div><div class="worked">{}</div></template>'
        ).format(name, symbols, slots(leaf, PANEL))
    return made


def _nothing(number: Number) -> Markup:
    raise Unresolved(f"'{number.ref}' stands in a formula in symbols")


def _leaves(ledger: Ledger) -> dict[str, Leaf]:
    """Return the laws of the ledger by the names of their equations."""
    found: dict[str, Leaf] = {}
    for column in ledger.columns:
        if isinstance(column.origin, Derived):
            found.setdefault(_equation(column.origin.leaf), column.origin.leaf)
    return found


def _equation(leaf: Leaf) -> str:
    return leaf.residual.name if isinstance(leaf, Implicit) else leaf.name


def _names(document: Document, ledger: Ledger) -> dict[str, Any]:
    """Return what numbers are called, by name of column, and where each is printed."""
    words: dict[str, str] = {}
    letters: dict[str, dict[str, str]] = {}
    for column in ledger.columns:
        if not isinstance(column.origin, Derived):
            continue
        leaf = column.origin.leaf
        words.setdefault(column.name, leaf.gives.words)
        for name, symbol in takes(leaf).items():
            letters.setdefault(_equation(leaf), {})[name] = symbol.text
            for source in column.origin.inputs[name].sources:
                words.setdefault(source.name, symbol.words)
    at = {ledger.spot(ref).id: address for ref, address in document.addresses.items()}
    return {"words": words, "letters": letters, "at": at, "parents": dict(ledger.parents)}


def _carried(name: str, told: Mapping[str, Any]) -> Markup:
    """Return plain data as it travels in a page: no text in it can end the element."""
    text = json.dumps(told, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    for sign, escaped in ESCAPES.items():
        text = text.replace(sign, escaped)
    return Markup('<script type="application/json" id="{}">{}</script>').format(name, Markup(text))

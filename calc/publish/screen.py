"""The page for the screen: one self-contained file in which a click on a number walks its derivation.

The ledger travels inside as data (`calc.publish.book`). What the page may do is stated in the page itself: no address
is ever asked for, and no script runs and no style holds but those whose digests it names.
"""

from __future__ import annotations

import base64
import hashlib
import json
import re
from collections.abc import Mapping

from markupsafe import Markup

from calc.equation import Leaf
from calc.ledger import Ledger
from calc.problems import Unresolved
from calc.publish.book import Book, Told
from calc.publish.faces import cut
from calc.publish.formula import formula, slots
from calc.publish.html import environment, html, style
from calc.publish.markup import named
from calc.publish.pdf import FACES, digest_head, faces
from calc.publish.pictures import Picture
from calc.publish.slim import slim, slim_drawing
from calc.report.document import Document, Figure, Formula, Number

SCRIPTS = ("book.js", "setting.js", "account.js", "leaves.js", "find.js", "walk.js")
"""In the order in which they run."""
EARLY = 'document.documentElement.className="js"'
"""Before anything is drawn: where scripts run, one leaf is shown at a time."""
HEAD, LAST = "<!--head-->", "<!--last-->"
"""Places kept; no text of a document can look like them, since it is escaped."""
PLAIN = frozenset(range(0x20, 0x7F)) | frozenset(map(ord, "\u00a0\u2009\u202f−×·–—…‘’“”\u2039\u203a←→↑↓"))
"""Signs that the script may put together."""
PANEL = 30.0  # em, the width of a formula in the panel
ESCAPES = {"<": "\\u003c", ">": "\\u003e", "&": "\\u0026", "\u2028": "\\u2028", "\u2029": "\\u2029"}
_COMMENT = re.compile(r"/\*.*?\*/\s*", re.DOTALL)


def page(document: Document, ledger: Ledger, pictures: Mapping[str, Picture]) -> str:
    """Return the page.

    Parameters
    ----------
    document : Document
    ledger : Ledger
    pictures : mapping of str to Picture
        By number of figure.
    """

    def picture(figure: Figure) -> Markup:
        found = pictures[figure.number]
        root = Markup('<svg role="img" aria-label="{}"').format(found.words)
        return root + Markup(slim_drawing(found.svg).removeprefix("<svg"))

    book = Book(document, ledger)
    top = Markup(environment().get_template("tools.html").render(document=document, named=named))
    tail = _foot(document) + Markup(style("account.html")) + _templates(book) + Markup(LAST)
    said = html(document, ledger, picture, head=Markup(HEAD), top=top, tail=tail, anchored=book.anchored)
    said, rules = slim(said)
    carried = _carried("book", book.told)
    styles = _styles(frozenset(map(ord, said + carried)), rules)
    script = "\n".join(style(name) for name in SCRIPTS)
    said = said.replace(LAST, f"{carried}<script>{script}</script>", 1)
    return said.replace(HEAD, f"{_policy(styles, script)}<style>{styles}</style><script>{EARLY}</script>", 1)


def _policy(styles: str, script: str) -> str:
    """Return what the page may do."""
    policy = (
        f"default-src 'none'; style-src {_digest(styles)}; font-src data:; "
        f"script-src {_digest(EARLY)} {_digest(script)}; "
        "base-uri 'none'; form-action 'none'"
    )
    return (
        f'<meta http-equiv="Content-Security-Policy" content="{policy}"><meta name="viewport" '
        'content="width=device-width, initial-scale=1"><meta name="color-scheme" content="light dark">'
        '<meta name="referrer" content="no-referrer">'
    )


def _digest(text: str) -> str:
    return f"'sha256-{base64.b64encode(hashlib.sha256(text.encode('utf-8')).digest()).decode('ascii')}'"


def _styles(signs: frozenset[int], rules: str) -> str:
    """Return the styles of the page, with faces that hold the signs that stand in it, and those of plain writing."""
    declared = faces("{}")
    for _, name, _, _ in FACES:
        content = base64.b64encode(cut(name, signs | PLAIN)).decode("ascii")
        declared = declared.replace(f'url("{name}")', f'url("data:font/woff2;base64,{content}")')
    sheets = "\n".join(_COMMENT.sub("", style(name)) for name in ("page.css", "screen.css"))
    return f"{declared}\n{sheets}\n{rules}"


def _foot(document: Document) -> Markup:
    """Return the foot that paper has on every sheet."""
    foot = Markup('<footer class="foot-line"><span class="own">digest {}</span></footer>')
    return foot.format(digest_head(document))


def _templates(book: Book) -> Markup:
    """Return each law of the ledger, in symbols and with places for numbers, for the panel to copy and fill."""
    made = Markup()
    for name, leaf in book.laws.items():
        made += Markup(
            '<template data-equation="{}"><div class="symbols">{}</div><div class="worked">{}</div></template>'
        ).format(name, _symbols(leaf), slots(leaf, PANEL))
    return made


def _symbols(leaf: Leaf) -> Markup:
    return formula(Formula(leaf), PANEL, _nothing)


def _nothing(number: Number) -> Markup:
    raise Unresolved(f"'{number.ref}' stands in a formula in symbols")


def _carried(name: str, told: Told) -> str:
    """Return plain data as it travels in a page: no text in it can end the element."""
    text = json.dumps(told, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    for sign, escaped in ESCAPES.items():
        text = text.replace(sign, escaped)
    return f'<script type="application/json" id="{name}">{text}</script>'

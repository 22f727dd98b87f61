"""References: the project's own, and the sources of the equations."""

from __future__ import annotations

from calc.equation import Implicit
from calc.report.composer import Composer, column
from calc.report.conversion import laws_of
from calc.report.document import Heading, Own, Paragraph, Quoted
from calc.report.sections.method import laws_in_use


def compose_references(composer: Composer) -> None:
    """Compose the references."""
    sheet = composer.begin("references", "References")
    sheet.add(Heading(("Of the project",)))
    columns = (
        column("id", 14),
        column("title", role="statement"),
        column("edition", 25, edge=True),
        column("kind", 29),
        column("date", 24),
    )
    rows = [
        sheet.row(
            (Quoted(one.id),),
            (Quoted(one.text("title")),),
            (Quoted(one.text("edition") or "–"),),
            (Quoted(one.text("kind") or "–"),),
            (Quoted(one.text("date") or "–"),),
        )
        for one in composer.account.project.references.values()
    ]
    if rows:
        sheet.table("references", columns, rows)
    else:
        sheet.add(Paragraph(("The project names no references.",)))
    sheet.add(Heading(("Of the equations",)))
    sources: dict[str, str] = {}
    for leaf in (*laws_in_use(composer), *laws_of(composer.display)):
        equation = leaf.residual if isinstance(leaf, Implicit) else leaf
        sources.setdefault(equation.source.key, equation.source.text)
    keyed = (column("key", 34), column("source", role="statement"))
    rows = [sheet.row((Own(key, "source"),), (Own(text, "source"),)) for key, text in sorted(sources.items())]
    sheet.table("sources", keyed, rows, tick=False)
    sheet.close()

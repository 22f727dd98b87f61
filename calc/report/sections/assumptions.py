"""Assumptions, stated and by default."""

from __future__ import annotations

from calc.report.composer import Composer, column, place
from calc.report.document import Heading, Paragraph, Parts, Quoted, Strong


def compose_assumptions(composer: Composer) -> None:
    """Compose the assumptions."""
    project = composer.account.project
    sheet = composer.begin("assumptions", "Assumptions", "What is taken for granted, and whether it has been verified.")
    columns = (
        column("id", 12),
        column("assumption", role="statement"),
        column("state", 18, edge=True),
        column("basis", 18),
        column("affects", 42),
    )
    rows = []
    for one in project.assumptions.values():
        is_open = one.text("state") != "verified"
        state: Parts = (Strong(("open",), bar=True),) if is_open else ("verified",)
        affects = (Quoted(one.text("affects") or "–"),)
        rows.append(
            sheet.row(
                (Quoted(one.id),),
                (Quoted(one.text("text")),),
                state,
                (Quoted(one.text("basis") or "–"),),
                affects,
            )
        )
    if rows:
        sheet.table("assumptions", columns, rows)
    else:
        sheet.add(Paragraph(("No assumptions are stated.",)))
    if project.defaults:
        sheet.add(Heading(("Taken by default, because the inputs are silent",)))
        taken = (
            column("value", role="statement"),
            column("taken as", 30, edge=True),
            column("source", 50),
            column("file and line", 34),
        )
        rows = [
            sheet.row(
                (Quoted(path),),
                (Quoted(stated.written),),
                (Quoted(stated.basis.source),),
                (place(stated.mark.place.removeprefix("calc/")),),
            )
            for path, stated in project.defaults
        ]
        sheet.table("defaults", taken, rows)
    sheet.close()

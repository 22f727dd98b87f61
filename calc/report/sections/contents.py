"""Contents, revisions, and how to read a line."""

from __future__ import annotations

from calc.report.composer import Composer, column
from calc.report.document import Contents, Heading, Own, Paragraph, Quoted


def compose_contents(composer: Composer) -> None:
    """Compose contents and revisions."""
    sheet = composer.begin("contents", "Contents and revisions")
    sheet.add(Contents())
    sheet.add(Heading(("Revisions",)))
    rows = [
        sheet.row((Quoted(r.text("revision")),), (Own(r.text("date"), "date"),), (Quoted(r.text("change")),))
        for r in composer.account.project.revisions
    ]
    columns = (column("revision", 24), column("date", 30), column("what changed", role="statement"))
    if rows:
        sheet.table("revisions", columns, rows, tick=False)
    else:
        sheet.add(Paragraph(("No revisions are stated.",)))
    sheet.add(Heading(("How to read a line",)))
    for text in READING:
        sheet.add(Paragraph((text,), "small"))
    sheet.close()


READING = (
    (
        "Line: section and line. It stands still within a revision; quote it in a comment. The box at the right is "
        "for the checker."
    ),
    (
        "From and into: the lines that a number was computed from, and the lines that use it next. A number with no "
        "line in front of it is an input; its file and line lead to the listing. A "
        "number between that has no line of its own is passed over: the lines that it rests on are named."
    ),
    "Rules: single above a sum, double below a balance that is proved. A bar with a word in semibold needs the reader.",
    (
        "Rounding: everything is computed in full and rounded for print alone. In worked lines the operands carry as "
        "many figures as it takes for the printed formula on the printed operands to give the printed result within "
        "one in its last figure. A residual smaller than its bound is printed as less than the bound."
    ),
)

"""What this calculation does not cover, and the cautions."""

from __future__ import annotations

from calc.report.composer import Composer, column
from calc.report.document import Heading

NOT_COVERED = (
    "Surge and water hammer, filling and draining, air, and any change with time.",
    "Partly full pipes, free-surface flow and flow of more than one liquid.",
    "Water quality, structural design, thrust, ground conditions, corrosion and cover.",
    "Pumps, control valves and outlets to atmosphere.",
    "Agreement of the inputs with the drawings and with the works as built.",
)

CAUTIONS = (
    (
        "This package supports judgement and does not replace it. A suitably licensed engineer must decide whether "
        "method, inputs and results suit the purpose, and must take responsibility for their use."
    ),
    (
        "Local law, codes, utility standards and the reviewing authority prevail over anything printed here. “Met” "
        "means that the project criterion is met as entered."
    ),
    (
        "Checks made by the program, the second opinion among them, are not the independent check. Blank boxes mean "
        "that no check is recorded."
    ),
    (
        "The flow is taken as steady, in full pipes, of one liquid. Where a pressure head is negative the assumption "
        "of full pipes may not hold."
    ),
    "Convergence shows that the equations were solved, not that they describe the works.",
    "Inputs are as supplied; open assumptions are listed. Coefficients hold within their stated ranges.",
    (
        "Preliminary issues are not for construction. A changed, partial or superseded copy must not be relied on: "
        "check it against the manifest."
    ),
    (
        "Failure of a transfer main can flood, deprive people of water or injure those at work on it. Isolate, drain "
        "and vent by the owner’s procedures; results here are no permit to work."
    ),
)


def compose_cautions(composer: Composer) -> None:
    """Compose what is not covered and the cautions."""
    sheet = composer.begin(
        "cautions",
        "Limits and cautions",
        "What lies outside this calculation, and what it must not be used for.",
    )
    sheet.add(Heading(("Not covered here",)))
    columns = (column("statement", role="statement"),)
    sheet.table("not-covered", columns, [sheet.row((text,)) for text in NOT_COVERED])
    sheet.add(Heading(("Cautions",)))
    sheet.table("cautions", columns, [sheet.row((text,)) for text in CAUTIONS])
    sheet.close()

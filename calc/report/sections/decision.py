"""The first page: what decides."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace

from calc.account import CaseAccount, CriterionVerdict
from calc.report.composer import Composer, Sheet, column, figure_column, name
from calc.report.display import BRIEF
from calc.report.document import (
    Cite,
    Masthead,
    Notes,
    Number,
    Own,
    Paragraph,
    Part,
    Parts,
    Quoted,
    Row,
    SignOff,
    Soft,
    Strong,
    TableColumn,
    named_unit,
)
from calc.report.numbers import THIN
from calc.report.sections.schedule import law_words, laws_of_pipes

STATUS = {
    "checking": "Issued for checking – preliminary, not for construction",
    "approval": "Issued for approval – preliminary, not for construction",
    "record": "Issued for record",
}
MOST_CASES, MOST_BESIDE = 4, 2
"""Cases whose flows stand on the first page; with parallel columns."""
MOST_PIPES = 8
COUNT_WORDS = ("none", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine")


def compose_decision(composer: Composer) -> None:
    """Compose the first page."""
    sheet = composer.begin("decision", "Decision")
    project = composer.account.project
    header = project.header
    revision = next((r for r in project.revisions if r.text("revision") == header.text("revision")), None)
    date = revision.text("date") if revision else ""
    subtitle = (Quoted(header.text("site")),) if header.text("site") else ("Calculation of steady flows and heads",)
    facts: list[tuple[str, Parts]] = [
        ("number", (Quoted(header.text("number")),)),
        ("revision", (Quoted(header.text("revision")), *((", ", Own(date, "date")) if date else ()))),
        ("client", (Quoted(header.text("client") or "not stated"),)),
        ("datum", (Quoted(header.text("datum") or "not stated"),)),
        ("friction law", (", ".join(_laws(composer)),)),
        ("digest", (Own(composer.account.digest.partition(":")[2][:16], "document"),)),
    ]
    sheet.add(Masthead((Quoted(header.text("title")),), subtitle, STATUS[composer.purpose], tuple(facts)))
    sheet.add(Paragraph(_sentence(composer)))
    _criteria(sheet)
    _flows(sheet)
    sheet.add(Notes(tuple(_notes(composer))))
    people = project.people
    roles = tuple(
        (role, people[role].text("name") if role in people else "") for role in ("originator", "checker", "approver")
    )
    sheet.add(SignOff(roles, seal_area=composer.purpose == "record"))
    sheet.close()


def _laws(composer: Composer) -> list[str]:
    """Return the friction laws of the pipes in words, that of most pipes first."""
    words = Counter(law for case in composer.account.cases.values() for law in laws_of_pipes(case))
    return [law_words(law) for law, _ in words.most_common()]


def _sentence(composer: Composer) -> Parts:
    """Say what is not met first, in one sentence."""
    return (*_unsolved(composer), *_judged(composer))


def _unsolved(composer: Composer) -> Parts:
    names: list[Part] = []
    for case in composer.account.cases.values():
        if not case.solution.converged:
            names += [", ", name(case.id)] if names else [name(case.id)]
    if not names:
        return ()
    said = Strong(("No solution in case ", *names, "."), bar=True)
    return (said, " Nothing but the history of the attempt is printed, and nothing may be concluded. ")


def _judged(composer: Composer) -> Parts:
    account = composer.account
    if not account.verdicts:
        return (Strong(("No criteria are set.",), bar=True), " This package shows flows and heads alone.")
    failing = [judged for judged in account.verdicts if not judged.met]
    without = [judged.criterion.title.lower() for judged in account.verdicts if judged.governing is None]
    unjudged: Parts = ()
    if without:
        unjudged = (" ", Strong((f"Not judged, for want of a subject: {', '.join(without)}.",), bar=True))
    if not failing:
        every = "Every criterion that was judged" if without else "Every criterion entered"
        return (f"{every} is met in every solved case it applies to.", *unjudged)
    parts: list[Part] = []
    for judged in failing:
        if judged.governing is not None:
            parts += [
                "; " if parts else "",
                judged.criterion.title.lower(),
                " at ",
                name(judged.governing.subject),
            ]
            parts += [" in case ", name(judged.governing.case)]
    count = COUNT_WORDS[len(failing)] if len(failing) < len(COUNT_WORDS) else "many"
    verb = "criterion is" if len(failing) == 1 else "criteria are"
    return (Strong((f"{count.capitalize()} {verb} not met: ", *parts, "."), bar=True), *unjudged)


def _criteria(sheet: Sheet) -> None:
    columns = (
        column("criterion", role="statement"),
        column("governed by", 33.5),
        figure_column("found", width=14, edge=True),
        figure_column("limit", width=16.5),
        figure_column("margin", width=15),
        column("", 11, role="unit"),
        column("verdict", 19.5),
        TableColumn(("from",), width=12.5, edge=True, role="from"),
    )
    judged = sorted(sheet.composer.account.verdicts, key=lambda j: (j.met, j.governing is not None))
    sheet.results("criteria", columns, [_criterion(sheet, one) for one in judged], without=("margin",))


def _criterion(sheet: Sheet, judged: CriterionVerdict) -> Row:
    composer, governing = sheet.composer, judged.governing
    if governing is None or judged.least_margin is None:
        blank: Parts = ("",)
        return sheet.row(
            (judged.criterion.title,),
            ("no subject",),
            blank,
            blank,
            blank,
            blank,
            (Strong(("not judged",), bar=True),),
            blank,
        )
    value = composer.number(governing.value)
    limit = composer.number(governing.limit, value.form)
    margin = composer.number(judged.least_margin, replace(value.form, sign="+"))
    sense = f"{'≤' if judged.criterion.sense == 'at most' else '≥'}{THIN}"
    verdict: Part = "met" if judged.met else Strong(("not met",), bar=True)

    def told(number: Number) -> Parts:
        return (number,) if judged.met else (Strong((number,)),)

    return sheet.row(
        (judged.criterion.title,) if judged.met else (Strong((judged.criterion.title,)),),
        (name(governing.subject), Soft((", ", name(governing.case)))),
        told(value),
        (sense, limit),
        told(margin),
        (named_unit(value.form.unit),),
        (verdict,),
        (Cite((governing.margin.id,)),),
        refs=(judged.least_margin.id,),
        tone="" if judged.met else "flag",
    )


def _flows(sheet: Sheet) -> None:
    """Directions and flows of the mains, or of the reservoirs where the mains are many."""
    composer = sheet.composer
    solved = [case for case in composer.account.cases.values() if case.columns is not None]
    cases = solved[: MOST_BESIDE if composer.display.beside else MOST_CASES]
    if not cases:
        return
    columns: list[TableColumn] = [TableColumn(("flow, ", _units(composer, "flow")), role="statement")]
    for case in cases:
        columns.append(TableColumn((name(case.id),), width=20.5, edge=True))
        columns.append(TableColumn(("",), align="right", width=12, role="value"))
    project = composer.account.project
    many = len(project.pipes) > MOST_PIPES
    rows = [_reservoir(sheet, cases, one) for one in project.reservoirs] if many else []
    rows = rows or [_pipe(sheet, cases, one) for one in project.pipes]
    rows += [_head(sheet, cases, one) for one in list(project.junctions)[:2]]
    sheet.results("flows", columns, rows)
    if len(solved) > len(cases):
        sheet.add(Paragraph(("Further cases stand in their own sections.",), "small"))


def _units(composer: Composer, field: str) -> str:
    """Return the unit of the numbers of a row, and that of the parallel columns where it is another."""
    return " and ".join(dict.fromkeys(one.unit(field) for one in (composer.display, *composer.display.beside)))


def _pipe(sheet: Sheet, cases: list[CaseAccount], pipe: str) -> Row:
    cells: list[Parts] = [(name(pipe),)]
    for case in cases:
        spot = sheet.composer.ledger.spot(f"pipes.{pipe}.flow@{case.id}")
        record = sheet.composer.account.project.pipes[pipe]
        if not case.network.open[case.network.pipes.rows.index(pipe)]:
            cells += [(Soft(("shut",)),), ("–",)]
            continue
        to = record.text("to") if spot.value > 0 else record.text("from")
        words: Parts = ("to ", name(to)) if spot.value else ("at rest",)
        form = sheet.composer.form("flow", BRIEF, "size")
        cells += [(Soft(words),), (sheet.composer.number(spot, form),)]
    return sheet.row(*cells)


def _reservoir(sheet: Sheet, cases: list[CaseAccount], reservoir: str) -> Row:
    cells: list[Parts] = [(name(reservoir),)]
    for case in cases:
        spot = sheet.composer.ledger.spot(f"reservoirs.{reservoir}.outflow@{case.id}")
        words = "gives" if spot.value > 0 else "takes" if spot.value < 0 else "at rest"
        form = sheet.composer.form("flow", BRIEF, "size")
        cells += [(Soft((words,)),), (sheet.composer.number(spot, form),)]
    return sheet.row(*cells)


def _head(sheet: Sheet, cases: list[CaseAccount], junction: str) -> Row:
    cells: list[Parts] = [("Head at ", name(junction), f", {_units(sheet.composer, 'head')}")]
    for case in cases:
        spot = sheet.composer.ledger.spot(f"junctions.{junction}.head@{case.id}")
        cells += [("",), (sheet.composer.number(spot, sheet.composer.form("head", BRIEF)),)]
    return sheet.row(*cells)


def _notes(composer: Composer) -> list[tuple[str, Parts]]:
    purpose: list[Part] = []
    for stated in composer.account.project.purpose:
        purpose += ["; " if purpose else "", Quoted(stated.text)]
    held = [("purpose", tuple(purpose))] if purpose else [("purpose", (Strong(("not stated",), bar=True),))]
    counts: Parts = (
        "open assumptions ",
        composer.number("record.open_assumptions"),
        ", components with unsourced inputs ",
        composer.number("record.unsourced"),
        ", findings ",
        composer.number("record.findings"),
        "; no query is recorded",
    )
    cautions = (
        (
            "Steady, full-pipe flow of one liquid only: surge, air, filling and draining are outside. “Met” means the "
            "project criterion as entered. A licensed engineer must take responsibility; local codes prevail."
        ),
    )
    return [*held, ("open points", counts), ("cautions", cautions)]

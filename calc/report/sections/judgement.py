"""Criteria and findings."""

from __future__ import annotations

from dataclasses import replace

from calc.account import CriterionVerdict, Verdict
from calc.report.composer import FROM, Composer, Sheet, column, figure_column, inputs_of, name
from calc.report.derivation import COLUMNS, displayed, lines
from calc.report.document import Cite, Heading, Paragraph, Parts, Soft, Strong, named_unit
from calc.report.sections.findings import compose_findings

MOST_VERDICTS = 40
"""Verdicts of one criterion that are printed, those with the least margin first."""


def compose_judgement(composer: Composer) -> None:
    """Compose criteria and findings."""
    lead = "Every criterion in every case, the one that governs worked, and what a reviewer would remark on."
    sheet = composer.begin("judgement", "Criteria and findings", lead)
    verdicts = composer.account.verdicts
    if not verdicts:
        sheet.add(Paragraph((Strong(("No criteria are set.",), bar=True), " State them in the inputs.")))
    for judged in verdicts:
        _criterion(sheet, judged)
    compose_findings(sheet)
    sheet.close()


def _criterion(sheet: Sheet, judged: CriterionVerdict) -> None:
    composer = sheet.composer
    not_met = sum(not verdict.met for verdict in judged.verdicts)
    verdict: Parts = ((": not met in some case",) if not_met else (": met",)) if judged.verdicts else (": not judged",)
    sheet.add(Heading((judged.criterion.title, *verdict)))
    if judged.governing is None or judged.least_margin is None:
        sheet.add(Paragraph(("No component that it applies to has a value in a solved case.",)))
        return
    governing = judged.governing
    said = (name(governing.subject), Soft((", ", name(governing.case))), ": ")
    derived = [*lines(sheet, governing.margin, *said), *displayed(sheet, [governing.margin], *said)]
    sheet.table(f"worked-{judged.id}", COLUMNS, derived)
    columns = (
        column("subject", role="statement"),
        column("case", 24, edge=True),
        figure_column("found", width=18, edge=True),
        figure_column("limit", width=18),
        column("", 10, role="unit"),
        figure_column("margin", width=18),
        column("verdict", 22),
        FROM,
    )
    rows = []
    for one in sorted(judged.verdicts, key=lambda v: v.margin.value)[:MOST_VERDICTS]:
        value = composer.number(one.value)
        limit = composer.number(one.limit, value.form)
        margin = composer.number(one.margin, replace(value.form, sign="+"))
        told: Parts = ("met",) if one.met else (Strong(("not met",), bar=True),)
        rows.append(
            sheet.row(
                (name(one.subject),),
                (name(one.case),),
                (value,),
                (limit,),
                (named_unit(value.form.unit),),
                (margin,),
                told,
                (_rests_on(sheet, one),),
                refs=(one.margin.id, one.value.id),
                tone="" if one.met else "flag",
            )
        )
    sheet.results(f"verdicts-{judged.id}", columns, rows)


def _rests_on(sheet: Sheet, verdict: Verdict) -> Cite:
    """Cite value and limit; a value that first stands on this very line by what it was computed from."""
    value = verdict.value
    here = value.id not in sheet.composer.addresses
    refs = inputs_of(sheet.composer.ledger, value) if here else [value.id]
    return Cite((*refs, verdict.limit.id))

"""Verdicts as lines: for each criterion the one that governs, and every one not met."""

from __future__ import annotations

from collections.abc import Iterator

from calc.account import Account, CriterionVerdict, Verdict
from calc.cli.amounts import display_of, with_unit
from calc.cli.layout import columns
from calc.report.display import Display

MOST = 40
"""Verdicts not met that are shown of one criterion; the rest are counted."""


def verdict_lines(account: Account) -> Iterator[str]:
    """Yield the criteria of a project as judged; nothing where it has none."""
    if not account.verdicts:
        return
    yield ""
    yield "Criteria"
    rows = [["", "", "subject", "case", "value", "limit", "margin"]]
    for judged in account.verdicts:
        rows += _rows(judged, display_of(account.project))
    yield from columns(rows, "<<<<>>>")
    unmet = sum(not verdict.met for judged in account.verdicts for verdict in judged.verdicts)
    total = sum(len(judged.verdicts) for judged in account.verdicts)
    yield f"  {total - unmet} of {total} verdicts met; shown: the governing one of each criterion, every one not met."


def _rows(judged: CriterionVerdict, display: Display) -> Iterator[list[str]]:
    governing = judged.governing
    if governing is None:
        yield [judged.id, "not judged", "no subject with a solution", "", "", "", ""]
        return
    yield _row(judged.id, governing, display)
    others = sorted(
        (verdict for verdict in judged.verdicts if not verdict.met and verdict is not governing),
        key=lambda verdict: verdict.margin.value,
    )
    for verdict in others[:MOST]:
        yield _row("", verdict, display)
    if len(others) > MOST:
        yield ["", "not met", f"and {len(others) - MOST} more", "", "", "", ""]


def _row(name: str, verdict: Verdict, display: Display) -> list[str]:
    kind = verdict.limit.column.kind
    limit = f"{verdict.criterion.sense} {with_unit(verdict.limit.value, kind, display)}"
    value = with_unit(verdict.value.value, kind, display)
    margin = with_unit(verdict.margin.value, kind, display).partition(" (")[0]
    return [name, "met" if verdict.met else "NOT MET", verdict.path, verdict.case, value, limit, margin]

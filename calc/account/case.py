"""One case accounted for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from calc.account.flows import CaseColumns
from calc.account.opinion import Agreement
from calc.account.paths import Path
from calc.components import Network
from calc.solve import Solution


@dataclass(frozen=True)
class CaseAccount:
    """One case accounted for; ``columns`` and ``agreement`` are None when it has no solution."""

    id: str
    title: str
    network: Network
    solution: Solution
    columns: CaseColumns | None
    paths: tuple[Path, ...]
    agreement: Agreement | None
    history: list[dict[str, Any]]

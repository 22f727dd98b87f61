"""The ledger: columns of numbers, each with the origin of the whole column.

Provenance belongs to columns, not to numbers: an entry says once how a quantity was obtained for every
component, and a printed number is a (column, row). Origins are a closed union. The `Accountant` is the second
of the two evaluators of a chain of laws: it applies each law to columns and enters the result. Everything
derived replays alone from its inputs, traces down to ``file:line:column`` and exports to a form that needs no
program to be read. A case holds only what differs: an input that it does not state is that of the case it
builds upon, while results are never inherited.
Knows equations and kinds; knows neither physics nor files nor reports.
"""

from calc.ledger.accountant import Accountant
from calc.ledger.column import Column, Origin, View
from calc.ledger.export import exported
from calc.ledger.ledger import Ledger, Spot
from calc.ledger.origin import (
    Combined,
    Converted,
    Derived,
    Given,
    Judged,
    Library,
    Program,
    Solved,
)
from calc.ledger.replay import Disagreement, replay
from calc.ledger.trace import number_of, proofs, stated_as, trace, traced

__all__ = [
    "Accountant",
    "Column",
    "Combined",
    "Converted",
    "Derived",
    "Disagreement",
    "Given",
    "Judged",
    "Ledger",
    "Library",
    "Origin",
    "Program",
    "Solved",
    "Spot",
    "View",
    "exported",
    "number_of",
    "proofs",
    "replay",
    "stated_as",
    "trace",
    "traced",
]

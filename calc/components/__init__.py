"""Components: what a reservoir, junction or pipe states, and the chain of laws that it follows.

A component is one file: its schema (the fields a user may write, from which reading, problems and input
tables follow) and its chain, written once against an `Evaluator`: the solver runs it on arrays and records
nothing; the accountant runs it on ledger columns. `Network` holds one case as arrays. Knows the laws of
`physics`; knows nothing of YAML, cases, solving or reports. A new component is a file here and a line in
``SCHEMAS``.
"""

from calc.components import junction, pipe, reservoir
from calc.components.fields import Count, Date, Ends, Field, Fittings, Flag, Name, Node, Quantity, Schema, Text, Word
from calc.components.network import Network
from calc.components.stated import NO_BASIS, Basis, Record, Stated

SCHEMAS: tuple[Schema, ...] = (reservoir.SCHEMA, junction.SCHEMA, pipe.SCHEMA)
"""Every group of components that a project may hold, in the order in which packages list them."""

__all__ = [
    "NO_BASIS",
    "SCHEMAS",
    "Basis",
    "Count",
    "Date",
    "Ends",
    "Field",
    "Fittings",
    "Flag",
    "Name",
    "Network",
    "Node",
    "Quantity",
    "Record",
    "Schema",
    "Stated",
    "Text",
    "Word",
]

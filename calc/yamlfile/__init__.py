"""Files become nodes with marks: YAML, and tables of comma-separated values that read like it.

For
    the first stage of every run, and for the constants and tables that ship with the program.
Takes
    a folder, or the bytes of one file; nothing in them is trusted.
Gives
    `Mapping`, `Sequence` and `Scalar` nodes, each with its file, line and column, and every problem found.
    Scalars stay text until a kind asks for them, so ``no``, ``12:30``, ``1e3`` and leading zeros survive.
Must not know
    units, fields, components: what a text means is decided by those who ask.
Why this way
    YAML is taken as a stream of events and composed here, in one pass and without recursion. So aliases,
    anchors, tags, merge keys, second documents, deep nesting and huge files are refused where they stand,
    before anything is built of them, and duplicate keys are seen. A value has one place: what stands on
    paper beside ``network.yaml:23`` is what was read. Nothing is constructed from a tag.
"""

from __future__ import annotations

from calc.yamlfile.node import Entry, Mapping, Node, Scalar, Sequence
from calc.yamlfile.reader import Sources, read_folder, read_text
from calc.yamlfile.source import SourceFile
from calc.yamlfile.table import Table, read_table

__all__ = [
    "Entry",
    "Mapping",
    "Node",
    "Scalar",
    "Sequence",
    "SourceFile",
    "Sources",
    "Table",
    "read_folder",
    "read_table",
    "read_text",
]

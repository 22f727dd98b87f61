"""The JSON Schema of the input files, made from the declarations that read them.

For
    editors, which complete, explain and check while someone types; and any tool that knows JSON Schema 2020-12.
Takes
    nothing but declarations: fields and forms, kinds and the names of units, bounds, defaults, shipped tables.
Gives
    `schema`, for each ``*.yaml`` file of a project folder.
Must not know
    a field by its name, but for the few shapes that code of their own reads (`works`, `header`, `cases`).
Why this way
    What the reader accepts the schema accepts, and what a schema of one file can express it refuses. Values keep
    keywords of texts, numbers and mappings side by side in one schema instead of alternatives, so that an editor
    names the fault that is there. What follows only from several values together, or from other files, is left to
    ``headtrace inspect``. Quantities differ by the dimension of their kind, in ``$defs``.
"""

from calc.cli.inputschema.whole import FORMAT, schema

__all__ = ["FORMAT", "schema"]

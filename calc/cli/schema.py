"""``headtrace schema``: a JSON Schema of the input files, for editors."""

from __future__ import annotations

import argparse
import json

from calc.cli.inputschema import schema
from calc.cli.outcome import Outcome


def run(asked: argparse.Namespace) -> Outcome:
    """Print the schema."""
    del asked
    return Outcome(said=written().rstrip("\n"))


def written() -> str:
    """Return the schema as the text of a file."""
    return f"{json.dumps(schema(), indent=1, ensure_ascii=False)}\n"

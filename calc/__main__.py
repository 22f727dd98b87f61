"""`python -m calc` is the command `headtrace`."""

from __future__ import annotations

import sys

from calc.cli import main

if __name__ == "__main__":
    sys.exit(main())

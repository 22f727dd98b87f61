"""Progress: one line on a terminal that is overwritten, nothing on a pipe."""

from __future__ import annotations

import sys

WIDEST = 72


class Progress:
    """A line on the terminal behind stderr, wiped when the work is over."""

    def __init__(self) -> None:
        self.shown = sys.stderr is not None and sys.stderr.isatty()

    def say(self, stage: str) -> None:
        """Show a stage in place of the one before."""
        if self.shown:
            sys.stderr.write(f"\r\x1b[K{''.join(c for c in stage if c.isprintable())[:WIDEST]} …")
            sys.stderr.flush()

    def wipe(self) -> None:
        """Leave the line empty."""
        if self.shown:
            sys.stderr.write("\r\x1b[K")
            sys.stderr.flush()

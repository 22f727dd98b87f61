"""Drawings: a frozen figure of plain values becomes a picture.

What for: the schematic to elevation, the balance of a junction and the convergence of a case, in the
page's look.
Takes: the data classes of ``calc.report.figures``. Gives: a matplotlib ``Figure``, its bytes as SVG, and
its words for a reader who cannot see it (``alt``).
Must not know: the solver, the ledger, units, or how a number is printed; printed values come as text.
Why this way: everything is placed in points on a sheet and measured with the faces that the page itself
uses, so that a drawing is the same on every machine and its labels can be proved to lie clear of each
other. No state is kept in matplotlib: no pyplot, no registered fonts, no settings that outlive a call.
"""

from __future__ import annotations

from calc.publish.draw import balance, convergence, schematic
from calc.publish.draw.writing import svg

__all__ = ["balance", "convergence", "schematic", "svg"]

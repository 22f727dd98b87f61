"""Units: text such as ``384.4 mm`` becomes an SI float, or a problem in plain words.

For
    reading every quantity of a project, and giving the factors by which results are displayed (with the zero of
    a temperature scale).
Takes
    text as written and the `calc.kinds.Kind` asked for.
Gives
    a `Quantity` (value in SI, number and unit as written, factor and offset), or raises `UnitTrouble`,
    whose four words are those of a `calc.problems.Problem` without its place.
Must not know
    files, marks, components. Only this package knows pint.
Why this way
    The text is hostile until read: a grammar of ours admits whitelisted names with whole powers, and pint
    is asked only for the worth of a name on the list, never to evaluate text. Its registry runs on
    fractions, so factors are exact and a value is rounded once: ``384.4 mm`` is the float nearest 0.3844.
    Its definitions are read at the first name asked for, once a run.
"""

from __future__ import annotations

from calc.units.quantity import Quantity, factor, measures, read, scale
from calc.units.trouble import UnitTrouble

__all__ = ["Quantity", "UnitTrouble", "factor", "measures", "read", "scale"]

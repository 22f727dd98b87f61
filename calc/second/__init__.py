"""The second opinion: a case solved again by another formulation, with code of its own.

For: a mistake in the solver, in a law or in how its inputs were put together shows when another way to
the same stated laws, constants and transition ends elsewhere.

Takes: a `Works`, plain arrays in SI. Gives: an `Opinion`, flows and heads with whether they converged;
or, by `evaluate`, how far a given answer is from the laws and from continuity.

Must not know: the solver, the equations, the components, units, files, the ledger. It imports numpy,
scipy and the standard library alone, so that no mistake can be shared.

Why this way: the solver asks for heads that balance the junctions. Here continuity holds from the first
trial on, and the energy of independent loops is balanced instead, as the least of a convex content: other
unknowns, other equations, other linear algebra, other stopping rules. Colebrook–White is solved by the
Wright ω function and not by iteration. Being convex, the content has one least, reached from any start
when the steps are shortened by the sign of its slope.
"""

from __future__ import annotations

from calc.second.evaluation import evaluate
from calc.second.opinion import form_opinion
from calc.second.works import Evaluation, Opinion, Works

__all__ = ["Evaluation", "Opinion", "Works", "evaluate", "form_opinion"]

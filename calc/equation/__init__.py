"""Equations: one body, four readings.

An equation is declared once, as a function over named inputs with symbols, kinds, a source and a range. The
same body is read as a *value* (float64 arrays), a *slope* (forward differentiation), a *dimension* (checked
when it is declared, so an unbalanced body cannot exist) and *prose* (an expression tree from which the
printed formula is set). The report therefore cannot show a formula other than the one that ran.

Besides `Equation` a law may be `Regimes` (ordered bounds on one input), `Choice` (a label picks the law) or
`Implicit` (a residual and its unknown); `select` resolves a law to its leaves row by row, and `evaluate`
runs them. This package knows arrays, kinds and problems; it knows neither ledger nor units nor files.
"""

from calc.equation.declaration import Equation, Reference, Symbol, equation
from calc.equation.evaluation import ARRAYS, Arrays, Evaluator, Value, evaluate, select
from calc.equation.expression import Amount, Expression, Literal, Operation, Term, Unit, linear
from calc.equation.law import Bound, Choice, Implicit, Labels, Law, Leaf, Regimes
from calc.equation.slope import Slope, value_of

__all__ = [
    "ARRAYS",
    "Amount",
    "Arrays",
    "Bound",
    "Choice",
    "Equation",
    "Evaluator",
    "Expression",
    "Implicit",
    "Labels",
    "Law",
    "Leaf",
    "Literal",
    "Operation",
    "Reference",
    "Regimes",
    "Slope",
    "Symbol",
    "Term",
    "Unit",
    "Value",
    "equation",
    "evaluate",
    "linear",
    "select",
    "value_of",
]

"""Method: how a case is solved, and every equation with its source and range."""

from __future__ import annotations

import re

from calc.components.pipe import LAW_INPUT
from calc.equation import Equation, Implicit, Leaf
from calc.ledger import Derived
from calc.report.composer import Composer, Sheet, column
from calc.report.conversion import empirical, laws_of
from calc.report.derivation import symbols_of
from calc.report.display import SI, Display
from calc.report.document import Formula, Heading, Letter, Own, Paragraph, Parts, Row, Soft
from calc.report.sections.schedule import laws_of_pipes
from calc.solve.rules import RULES

UNKNOWN = (
    "Unknown are the head at each junction and the flow in each branch. Every branch obeys the balance of energy "
    "between its ends, every junction the balance of volume."
)
METHODS = {
    "bracketing": (
        "Bracketing, where one head is unknown: a trial head is put at the junction, the flow of each branch that "
        "loses the head between its ends is found, and the flows toward the junction are summed less the withdrawal. "
        "The sum falls as the head rises, so a positive sum puts the head sought above the trial and a negative one "
        "below. The search begins at the levels of the reservoirs and widens where the head lies outside them; then "
        "the bracket is narrowed by the rules printed with each case. Every evaluation is a row of its table."
    ),
    "newton": (
        "Newton, for any number of junctions and loops: the gradient method of Todini and Pilati, in which heads and "
        "flows are corrected together until every imbalance and every closing error is within its limit. Every "
        "iteration is a row."
    ),
    "loop-correction": (
        "Loop correction, for small networks: the hand method of Hardy Cross. Flows that satisfy continuity are "
        "assumed, and each loop or path between reservoirs is corrected in turn, with the flows just corrected, by "
        "what its losses fail to close over the sum of their rises with the flow. The power to which a loss rises is "
        "{powers}; no correction is shortened. The sweeps end when neither corrections nor closing errors are left "
        "beyond their limits."
    ),
}
"""What is said of each method, where a case is solved by it."""
POWERS = {
    True: "taken as two where flow is turbulent and Darcy f is found from it",
    False: "that to which the laws raise the flow, friction and fittings weighted by their losses",
}
"""The power of loop correction, by whether some law finds Darcy f from the flow."""
OPINION = (
    "Second opinion: each case is solved again from the same inputs by separate code in another formulation, flows "
    "around loops that satisfy continuity from the first trial. The two must agree within the differences printed."
)
UNSOLVED = "A case that does not converge has no results."


def _statements(composer: Composer) -> list[str]:
    """Return what is said of the methods in use."""
    cases = composer.account.cases.values()
    rough = any(LAW_INPUT[law] == "roughness" for case in cases for law in laws_of_pipes(case))
    used = {case.solution.method for case in cases}
    methods = [said.replace("{powers}", POWERS[rough]) for method, said in METHODS.items() if method in used]
    return [UNKNOWN, *methods, OPINION, UNSOLVED]


def compose_method(composer: Composer) -> None:
    """Compose the method and the equations in use."""
    lead = "The relations used, where each comes from, and the range in which it may be trusted."
    sheet = composer.begin("method", "Method and equations", lead)
    sheet.table("method", (column("method", role="statement"),), [sheet.row((text,)) for text in _statements(composer)])
    _rules(sheet)
    rules = {rule.equation.name for rule in RULES.values()}
    leaves: dict[str, Leaf] = {}
    for leaf in laws_in_use(composer):
        if leaf.name not in rules:
            leaves.setdefault(leaf.name, leaf)
    estimates = {leaf.start.name for leaf in leaves.values() if isinstance(leaf, Implicit)} - _applied(composer)
    sheet.add(Heading(("Equations in use",)))
    columns = (column("equation", role="statement"), column("source", 34, edge=True), column("range", 44))
    conversions: list[Leaf] = [*laws_of(composer.display)]
    leaves |= {law.name: law for law in conversions}
    sheet.table("equations", columns, [_equation(sheet, leaf, estimates) for leaf in leaves.values()])
    sheet.add(Heading(("Symbols",)))
    _symbols(sheet, _gathered([*laws_in_use(composer), *conversions], composer.display))
    if any(empirical(leaf) for leaf in leaves.values()):
        said = "Empirical equations are worked in SI; their inputs are divided by the units shown first."
        sheet.add(Paragraph((said,), "small"))
    sheet.close()


def _rules(sheet: Sheet) -> None:
    """Add the rules by which the trials of this package were chosen."""
    used: dict[str, None] = {}
    for case in sheet.composer.account.cases.values():
        if case.solution.trials is not None:
            used |= dict.fromkeys(case.solution.trials.rule)
    columns = (column("rule", 34), column("trial head", role="statement"), column("source", 34, edge=True))
    rows = []
    for word in used:
        rule = RULES[word].equation
        rows.append(sheet.row((word,), (rule.title, Formula(rule)), (Own(rule.source.key, "source"),)))
    if rows:
        sheet.add(Heading(("Rules by which trial heads are chosen",)))
        sheet.table("rules", columns, rows)


def _gathered(leaves: list[Leaf], display: Display) -> list[tuple[Letter, str, str]]:
    """Return each symbol once; one that serves several kinds of quantity has the unit of the line it is used on.

    One that empirical laws share with others, and which they take in SI, has the unit of the others.
    """
    found: dict[tuple[str, str], list[str]] = {}
    for leaf in leaves:
        for letter, words, unit in symbols_of(leaf, display):
            units = found.setdefault((letter.text, words), [])
            if unit not in units:
                units.append(unit)
    for leaf in leaves if display.system != SI.system else ():
        for letter, words, unit in symbols_of(leaf, SI) if empirical(leaf) else ():
            units = found[letter.text, words]
            if len(units) > 1 and unit in units:
                units.remove(unit)
    return [(Letter(text), words, units[0] if len(units) == 1 else "as used") for (text, words), units in found.items()]


def _symbols(sheet: Sheet, symbols: list[tuple[Letter, str, str]]) -> None:
    """Add the symbols, two to a row."""
    half = (len(symbols) + 1) // 2
    head = (column("symbol", 16), column("stands for", role="statement"), column("unit", 16))
    rows = []
    for k in range(half):
        cells: list[Parts] = []
        for pair in (symbols[k], symbols[k + half] if k + half < len(symbols) else None):
            cells += [(pair[0],), lettered(pair[1]), (pair[2] or "–",)] if pair else [("",), ("",), ("",)]
        rows.append(sheet.row(*cells))
    sheet.table("symbols", (*head, *head), rows, tick=False)


def lettered(text: str) -> Parts:
    """Return a text about a range with its symbols set as letters."""
    return tuple(
        Letter(piece) if SYMBOL.fullmatch(piece) else Own(piece, "source") for piece in SYMBOL.split(text) if piece
    )


SYMBOL = re.compile(r"(\b[A-Za-zΔε]+_[A-Za-z]+\b)")
"""A letter with a subscript, as equations name their symbols."""


def laws_in_use(composer: Composer) -> list[Leaf]:
    """Return every equation that gave some number of this project, in the order of first use."""
    found: dict[str, Leaf] = {}
    for one in composer.ledger.columns:
        if isinstance(one.origin, Derived) and one.group != "verification":
            leaf = one.origin.leaf
            found.setdefault(leaf.name, leaf)
            if isinstance(leaf, Implicit):
                found.setdefault(leaf.start.name, leaf.start)
    return list(found.values())


def _applied(composer: Composer) -> set[str]:
    """Return the names of the equations that gave numbers themselves."""
    origins = [one.origin for one in composer.ledger.columns if one.group != "verification"]
    return {origin.leaf.name for origin in origins if isinstance(origin, Derived)}


def _equation(sheet: Sheet, leaf: Leaf, estimates: set[str]) -> Row:
    equation: Equation = leaf.residual if isinstance(leaf, Implicit) else leaf
    root = (Soft((" – ", Letter(leaf.gives.text), " is the root")),) if isinstance(leaf, Implicit) else ()
    if leaf.name in estimates:
        root = (Soft((" – first estimate of the root",)),)
    return sheet.row(
        (leaf.title, *root, Formula(leaf)),
        (Own(equation.source.key, "source"),),
        lettered(equation.valid),
    )

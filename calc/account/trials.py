"""The trials of bracketing as ledger columns: head, flows and imbalance of each, in the order of the search."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from calc.account.flows import joined, pipe_terms
from calc.components import Network
from calc.components.pipe import LAW_CONSTANTS, LAW_INPUT, PipeTerms
from calc.equation.law import takes
from calc.kinds import FLOW, HEAD, LENGTH
from calc.ledger import Accountant, Column, Derived, Ledger, Program, Solved, View
from calc.ledger.column import ABSENT
from calc.physics.friction import ROUGH_PIPE_LAWS
from calc.solve import Trials
from calc.solve.rules import RULES

MOST_BRANCHES = 12
"""Branches above which tables print norms and the worst node instead of every branch."""


def enter_trials(ledger: Ledger, network: Network, trials: Trials, case: str) -> None:
    """Enter every evaluation of the balance, each head by its rule on earlier rows."""
    table = _Table(ledger, network, trials, case)
    for t in range(len(trials.head)):
        table.enter(t)


class _Table:
    """The columns under way: heads and imbalances that later rules cite."""

    def __init__(self, ledger: Ledger, network: Network, trials: Trials, case: str) -> None:
        self.ledger, self.network, self.trials, self.case = ledger, network, trials, case
        self.junction = network.nodes[trials.junction]
        self.heads: list[Column] = []
        self.imbalances: list[Column] = []
        self.few = len(trials.branches) <= MOST_BRANCHES
        self.terms = pipe_terms(ledger, network, case, trials.branches) if self.few else None

    def enter(self, t: int) -> None:
        """Enter one row: its head, the flow of each branch, and what they leave."""
        head = self._head(t)
        self.heads.append(head)
        if self.terms is None:
            said = Program("sum of the flows toward the junction less its withdrawal, as evaluated at this trial head")
            self.imbalances.append(self._put("junctions.imbalance", self.junction, t, self.trials.imbalance[t], said))
            return
        flows = [self._flow(t, k, head, self.terms) for k in range(len(self.trials.branches))]
        self.imbalances.append(self._imbalance(t, flows))

    def _put(self, name: str, of: str, t: int, value: float, origin: Program | Solved) -> Column:
        return self.ledger.enter(name, FLOW, [str(t + 1)], [value], origin, case=self.case, of=of)

    def _head(self, t: int) -> Column:
        rule = RULES[self.trials.rule[t]]
        cited = {name: self._cited(t, column, place) for name, column, place in rule.places}
        inputs: Mapping[str, View] = {name: cited[name] for name in takes(rule.equation)}
        origin = Derived(rule.equation, rule.equation, self.trials.rule[t], inputs)
        head = [self.trials.head[t]]
        return self.ledger.enter("junctions.head", HEAD, [str(t + 1)], head, origin, case=self.case, of=self.junction)

    def _cited(self, t: int, column: str, place: int | None) -> View:
        if place is not None:
            at = self.trials.uses[t][place]
            return View.whole((self.heads if column == "head" else self.imbalances)[at])
        if column == "level":
            reservoir = self.network.nodes[int(self.trials.reservoir[t])]
            return self.ledger.view("reservoirs.level", self.case, [reservoir])
        if column == "start":
            return self.ledger.view("solver.start", "", [self.junction])
        said = Program("step of the search: the range of levels (at least 1 m), doubled when the head lies outside")
        step, of = [self.trials.step[t]], self.junction
        held = self.ledger.enter("junctions.step", LENGTH, [str(t + 1)], step, said, case=self.case, of=of)
        return View.whole(held)

    def _flow(self, t: int, k: int, head: Column, terms: PipeTerms[View]) -> Column:
        """Enter the flow of one branch at a trial head, with the heads and inputs of the pipe that it rests on."""
        pipe = int(self.trials.branches[k])
        name = self.network.pipes.rows[pipe]
        flow = self.trials.flows[t, k]
        if not self.network.open[pipe]:
            return self._put("pipes.flow_toward", name, t, flow, Program("shut in this case: nothing flows"))
        ends = (int(self.network.start[pipe]), int(self.network.end[pipe]))
        far = next(node for node in ends if node != self.trials.junction)
        heads = {
            "head at the far end": self.ledger.view("reservoirs.level", self.case, [self.network.nodes[far]]),
            "trial head": View.whole(head),
        }
        statement = "head at the far end less trial head = head lost at this flow, which is toward the junction"
        origin = Solved(statement, "branch by branch", len(self.trials.head), (), {**heads, **_resting(terms, k)})
        return self._put("pipes.flow_toward", name, t, flow, origin)

    def _imbalance(self, t: int, flows: list[Column]) -> Column:
        withdrawal = self.ledger.view("junctions.withdrawal", self.case, [self.junction])
        drawn = bool(withdrawal.which[0] != ABSENT)
        views = [*map(View.whole, flows), *([withdrawal] if drawn else [])]
        terms = views[0]
        for view in views[1:]:
            terms = joined(terms, view)
        return Accountant(self.ledger, self.case, self.junction).combine(
            "junctions.imbalance",
            "sum",
            terms,
            np.zeros(len(views), dtype=np.int64),
            [str(t + 1)],
            words="flow toward the junction less its withdrawal, at this trial head",
            signs=[1.0] * len(flows) + [-1.0] * drawn,
        )


def _resting(terms: PipeTerms[View], k: int) -> dict[str, View]:
    """Return the inputs of one pipe that the head it loses rests on."""
    at = np.array([k])
    law = terms.law.word(k)
    needed = LAW_INPUT[law]
    held = {
        "length": terms.length,
        "bore": terms.bore,
        needed.replace("_", " "): getattr(terms, needed),
        "parallel": terms.parallel,
        "gravity": terms.gravity,
    }
    if law in ROUGH_PIPE_LAWS:
        held["viscosity"] = terms.viscosity
    for name, view in vars(terms.constants).items():
        if law in LAW_CONSTANTS and name.startswith(LAW_CONSTANTS[law]):
            held[name.replace("_", " ")] = view
    found = {name: view.take(at) for name, view in held.items()}
    fittings = terms.fittings
    for row in np.flatnonzero(fittings.pipe == k).tolist():
        one = np.array([row])
        label = fittings.rows[row]
        found |= {
            f"{label} count": fittings.count.take(one),
            f"{label} K forward": fittings.coefficient_forward.take(one),
            f"{label} K in reverse": fittings.coefficient_reverse.take(one),
            f"{label} bore": fittings.bore.take(one),
        }
    return {name: view for name, view in found.items() if view.which[0] != ABSENT}

"""What a project uses, in the words in which the shipped cases say what they concern."""

from __future__ import annotations

from calc.account import Account
from calc.components.fitting import computed_kind
from calc.physics.friction import ROUGH_PIPE_LAWS

TITLES: dict[str, str] = {
    "colebrook-white": "Colebrook–White",
    "swamee-jain": "Swamee–Jain",
    "haaland": "Haaland",
    "fixed": "fixed Darcy f",
    "hazen-williams": "Hazen–Williams",
    "manning": "Manning",
    "laminar": "laminar flow",
    "water": "properties of water",
    "size": "bores by size",
    "fittings": "loss coefficients",
    "bend": "bends by angle and radius",
    "step": "sudden changes of bore",
    "taper": "gradual changes of bore",
    "Kv": "Kv",
    "Cv": "Cv",
    "bracketing": "bracketing",
    "newton": "Newton",
    "loop-correction": "loop correction",
}
"""What a case may concern, as printed; a case that concerns none of these is run for every issue."""


def in_use(account: Account) -> tuple[str, ...]:
    """Return what a project uses in any of its cases, in the order of `TITLES`.

    Parameters
    ----------
    account : Account
        Solved: a method is in use where a case was solved by it.
    """
    used: set[str] = set()
    for case in account.cases.values():
        law = case.network.pipes.law
        used |= {law.words[code] for code in law.codes}
        used.add(case.solution.method)
    if used & set(ROUGH_PIPE_LAWS):
        used.add("laminar")
    fitted = [part for pipe in account.project.pipes.values() for parts in pipe.parts.values() for part in parts]
    if fitted:
        used |= {"fittings", *(computed_kind(part.stated) for part in fitted)}
    if any("size" in pipe.stated for pipe in account.project.pipes.values()):
        used.add("size")
    if "temperature" in account.project.fluid.stated:
        used.add("water")
    return tuple(word for word in TITLES if word in used)

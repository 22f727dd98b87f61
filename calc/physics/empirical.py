"""Empirical laws of friction, which give the loss itself; they hold at every Reynolds number and know no Darcy f.

They are worked in SI with the units divided out, so their constants are pure numbers that a project may set.
"""

# ruff: noqa: ANN001, ANN201 - bodies are read with several types of operand
# mypy: disable-error-code="no-untyped-def"

import numpy as np

from calc.equation import Law, Reference, equation
from calc.physics import symbols as s

WILLIAMS_HAZEN_1905 = Reference(
    "Williams & Hazen 1905",
    "G. S. Williams, A. Hazen, Hydraulic Tables, Wiley, 1905, 3rd ed. 1920 (cited from memory); "
    "SI form with the constants of the project",
)
MANNING_1891 = Reference(
    "Manning 1891",
    "R. Manning, On the flow of water in open channels and pipes, Transactions of the Institution of Civil "
    "Engineers of Ireland 20, 1891 (cited from memory); SI form for a full round pipe",
)


@equation(
    gives=s.FRICTION_LOSS,
    source=WILLIAMS_HAZEN_1905,
    valid="water near 15 °C in turbulent flow, D above about 50 mm, V up to about 3 m/s (from memory)",
    hazen_williams_coefficient=s.HAZEN_WILLIAMS_COEFFICIENT,
    length=s.LENGTH,
    flow_each=s.FLOW_EACH,
    hazen_williams_flow_exponent=s.HAZEN_WILLIAMS_FLOW_EXPONENT,
    hazen_williams_c=s.HAZEN_WILLIAMS_C,
    bore=s.BORE,
    hazen_williams_bore_exponent=s.HAZEN_WILLIAMS_BORE_EXPONENT,
)
def hazen_williams(
    *,
    hazen_williams_coefficient,
    length,
    flow_each,
    hazen_williams_flow_exponent,
    hazen_williams_c,
    bore,
    hazen_williams_bore_exponent,
):
    """Friction loss, Hazen–Williams."""
    flow = flow_each / s.CUBIC_METRE_PER_SECOND
    driven = flow * np.abs(flow) ** (hazen_williams_flow_exponent - 1)
    passed = hazen_williams_c**hazen_williams_flow_exponent * (bore / s.METRE) ** hazen_williams_bore_exponent
    return hazen_williams_coefficient * length * driven / passed


@equation(
    gives=s.FRICTION_LOSS,
    source=MANNING_1891,
    valid="rough turbulent flow in a full round pipe (from memory)",
    manning_coefficient=s.MANNING_COEFFICIENT,
    manning_n=s.MANNING_N,
    length=s.LENGTH,
    flow_each=s.FLOW_EACH,
    bore=s.BORE,
    manning_bore_exponent=s.MANNING_BORE_EXPONENT,
)
def manning(*, manning_coefficient, manning_n, length, flow_each, bore, manning_bore_exponent):
    """Friction loss, Manning."""
    flow = flow_each / s.CUBIC_METRE_PER_SECOND
    return (
        manning_coefficient * manning_n**2 * length * (flow * np.abs(flow)) / (bore / s.METRE) ** manning_bore_exponent
    )


EMPIRICAL_LAWS: dict[str, Law] = {"hazen-williams": hazen_williams, "manning": manning}
"""Laws that give the loss without a Darcy f. A new one is a line here."""

"""The figures of a package as plain values: what is drawn, in display units, every printed number as text.

A figure carries floats to place marks by and texts to print. The drawing never formats a value of the
ledger; only the scale beside a drawing is formatted there, as it shows no result.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Reservoir:
    """A body of water with a level.

    Attributes
    ----------
    name : str
        As printed; unique among the reservoirs and junctions of a figure.
    level : float
        In display units, as in the axis title.
    level_text : str
        As printed, such as ``214.60 m``. Here and below a power of ten is written ``1 × 10⁻⁶``.
    """

    name: str
    level: float
    level_text: str


@dataclass(frozen=True, slots=True)
class Junction:
    """A place where pipes meet.

    Attributes
    ----------
    name : str
        As printed; unique among the reservoirs and junctions of a figure.
    head : float
        The solved head, in display units.
    head_text : str
        As printed, such as ``188.21 m``.
    elevation : float or None
        In display units; None where the project states none.
    elevation_text : str
        As printed; empty where there is none.
    withdrawal_text : str
        Water taken out (or let in) at the junction, as printed; empty for none.
    inflow : bool
        Whether that water comes in.
    """

    name: str
    head: float
    head_text: str
    elevation: float | None = None
    elevation_text: str = ""
    withdrawal_text: str = ""
    inflow: bool = False


@dataclass(frozen=True, slots=True)
class Pipe:
    """A pipe between two nodes.

    Attributes
    ----------
    name : str
        As printed.
    start, end : str
        Names of the nodes, as in the project's ``from`` and ``to``.
    flow : float
        Positive from start to end; its sign alone is drawn. Exactly 0 draws no arrowhead: give 0 where the
        printed flow is zero.
    flow_text : str
        The size of the flow as printed, without sign, such as ``83.1 L/s``; empty for none.
    length, bore : float
        In display units: distance across, and weight of the line.
    size_text : str
        Length and bore as printed, such as ``1850 m, 384.4 mm``.
    drive_text : str
        Difference of head between the ends as printed, such as ``falls 26.39 m``; empty for none.
    turns : tuple of str
        Titles of the cases in which the water runs the other way than in this one.
    governing : bool
        Whether the pipe is named where there are too many to name each.
    open : bool
        A shut pipe is drawn broken and carries no arrowhead.
    """

    name: str
    start: str
    end: str
    flow: float
    flow_text: str
    length: float
    bore: float
    size_text: str = ""
    drive_text: str = ""
    turns: tuple[str, ...] = ()
    governing: bool = False
    open: bool = True


@dataclass(frozen=True, slots=True)
class Schematic:
    """Schematic to elevation of the works in one case.

    Attributes
    ----------
    title : str
        Said in the alternative text; the caption of the page carries it, the sheet does not.
    reservoirs, junctions, pipes : tuple
        In the project's order.
    level_unit, length_unit : str
        Units of the two axes, such as ``m``.
    datum : str
        The project's datum, put into the axis title; empty where none is stated.
    """

    title: str
    reservoirs: tuple[Reservoir, ...]
    junctions: tuple[Junction, ...]
    pipes: tuple[Pipe, ...]
    level_unit: str = "m"
    length_unit: str = "m"
    datum: str = ""


@dataclass(frozen=True, slots=True)
class BalanceBranch:
    """Flow toward the junction in one branch against trial head.

    Attributes
    ----------
    name : str
        As printed.
    flows : tuple of float
        At the figure's ``heads``; toward the junction positive.
    accepted_flow : float
        At the accepted head; says which branches are named where there are many.
    """

    name: str
    flows: tuple[float, ...]
    accepted_flow: float


@dataclass(frozen=True, slots=True)
class Trial:
    """One evaluation of the balance.

    Attributes
    ----------
    number : int
        As in the trial table.
    head, imbalance : float
        The trial head, and flow toward the junction less withdrawal there.
    low, high : float or None
        Low end and high end of the bracket before this trial; None where there is no bracket yet.
    width_text : str
        Width of that bracket as printed; empty for none.
    """

    number: int
    head: float
    imbalance: float
    low: float | None = None
    high: float | None = None
    width_text: str = ""


@dataclass(frozen=True, slots=True)
class Balance:
    """The balance of a single junction: flow in each branch, and their sum less withdrawal, against head.

    Attributes
    ----------
    title : str
        Said in the alternative text.
    junction : str
        Its name.
    heads : tuple of float
        Rising; the curves are drawn through these. At least two.
    branches : tuple of BalanceBranch
        At least one.
    sums : tuple of float
        Sum over the branches less the withdrawal, at ``heads``.
    trials : tuple of Trial
        Every evaluation, in order.
    accepted_head : float
        Where the sum is taken to be zero.
    accepted_text : str
        The accepted head as printed, such as ``188.21 m``.
    flow_unit, level_unit, datum : str
        For the axis titles.
    """

    title: str
    junction: str
    heads: tuple[float, ...]
    branches: tuple[BalanceBranch, ...]
    sums: tuple[float, ...]
    trials: tuple[Trial, ...]
    accepted_head: float
    accepted_text: str
    flow_unit: str = "L/s"
    level_unit: str = "m"
    datum: str = ""


@dataclass(frozen=True, slots=True)
class Panel:
    """One measure of convergence, by trial or iteration.

    Attributes
    ----------
    name : str
        Such as ``imbalance``, ``width of bracket``, ``largest energy error``.
    unit : str
        For the axis title.
    values : tuple of (float or None)
        One for each step; the sign matters only where ``signed``. None where the step has none.
    texts : tuple of str
        The same values as printed.
    tolerance : float or None
        The largest size that is accepted; None where this measure stops nothing.
    tolerance_text : str
        As printed.
    signed : bool
        Filled and open circles tell the sign: positive is more toward the junction than away.
    """

    name: str
    unit: str
    values: tuple[float | None, ...]
    texts: tuple[str, ...]
    tolerance: float | None = None
    tolerance_text: str = ""
    signed: bool = False


@dataclass(frozen=True, slots=True)
class Convergence:
    """How a case came to its answer.

    Attributes
    ----------
    title : str
        Said in the alternative text.
    step : str
        What is counted: ``trial`` or ``iteration``.
    numbers : tuple of int
        Numbers of the steps, as in the table.
    panels : tuple of Panel
        From the top; one, two or three.
    """

    title: str
    step: str
    numbers: tuple[int, ...]
    panels: tuple[Panel, ...]

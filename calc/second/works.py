"""What the second opinion is asked about, and what it answers: plain arrays, SI."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Floats: TypeAlias = NDArray[np.float64]
Integers: TypeAlias = NDArray[np.int64]
Flags: TypeAlias = NDArray[np.bool_]

LAWS = ("colebrook-white", "swamee-jain", "haaland", "fixed", "hazen-williams", "manning")


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Works:
    """Reservoirs and junctions joined by full pipes, in one case. SI throughout.

    Attributes
    ----------
    node_count : int
        Number of nodes n.
    level : ndarray, shape (n,)
        Head a reservoir holds, in m; NaN where the node is a junction.
    withdrawal : ndarray, shape (n,)
        Flow that leaves at a junction, in m³/s (negative: enters); not read at a reservoir.
    start, end : ndarray of int, shape (m,)
        Nodes that each pipe joins; its flow is positive from start to end.
    open : ndarray of bool, shape (m,)
        False where the pipe is shut.
    parallel : ndarray, shape (m,)
        Number of identical pipes; the flow is their total.
    length, bore : ndarray, shape (m,)
        In m, both above zero.
    roughness : ndarray, shape (m,)
        In m; read where the law is one of Colebrook–White, Swamee–Jain and Haaland.
    factor : ndarray, shape (m,)
        Darcy f where the law is ``fixed``; not read elsewhere.
    hazen_williams_c, manning_n : ndarray, shape (m,)
        Of the pipe; each is read where the law is its own.
    law : tuple of str, length m
        One of `LAWS` for each pipe.
    loss_forward, loss_reverse : ndarray, shape (m,)
        Fittings and end losses of one of the parallel pipes, in s²/m⁵, for flow from start to end and
        back: the head lost is this times the square of the flow in that one pipe.
    gravity, viscosity : float
        In m/s² and m²/s (kinematic).
    laminar_below, turbulent_above : float
        Reynolds numbers that bound the transition.
    hazen_williams : tuple of float
        k, a and b of h = k L Q^a / (C^a D^b), in m and m³/s.
    manning : tuple of float
        k and b of h = k n² L Q² / D^b, in m and m³/s.

    Raises
    ------
    ValueError
        If the arrays differ in length, a law is unknown or a pipe ends at no node.
    """

    node_count: int
    level: Floats
    withdrawal: Floats
    start: Integers
    end: Integers
    open: Flags
    parallel: Floats
    length: Floats
    bore: Floats
    roughness: Floats
    factor: Floats
    hazen_williams_c: Floats
    manning_n: Floats
    law: tuple[str, ...]
    loss_forward: Floats
    loss_reverse: Floats
    gravity: float
    viscosity: float
    laminar_below: float = 2000.0
    turbulent_above: float = 4000.0
    hazen_williams: tuple[float, float, float] = (10.67, 1.852, 4.8704)
    manning: tuple[float, float] = (4.0 ** (10.0 / 3.0) / math.pi**2, 16.0 / 3.0)

    def __post_init__(self) -> None:
        """Refuse arrays that do not fit together."""
        count = len(self.start)
        names = ("end", "open", "parallel", "length", "bore", "law", "loss_forward", "loss_reverse")
        inputs = ("roughness", "factor", "hazen_williams_c", "manning_n")
        wrong = [n for n in (*names, *inputs) if len(getattr(self, n)) != count]
        wrong += [n for n in ("level", "withdrawal") if len(getattr(self, n)) != self.node_count]
        if wrong:
            raise ValueError(f"of another length than the pipes or the nodes: {', '.join(wrong)}")
        if unknown := sorted(set(self.law) - set(LAWS)):
            raise ValueError(f"no such friction law: {', '.join(unknown)}; expected one of {', '.join(LAWS)}")
        ends = np.concatenate([self.start, self.end])
        if np.any((ends < 0) | (ends >= self.node_count)):
            raise ValueError(f"a pipe ends at no node; nodes are numbered 0 to {self.node_count - 1}")


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Opinion:
    """The second opinion on one case.

    Attributes
    ----------
    flow : ndarray, shape (m,)
        Total flow of each pipe, in m³/s, positive from start to end; 0 where shut.
    head : ndarray, shape (n,)
        In m; NaN where no open path leads to a reservoir.
    converged : bool
        Whether flow and head satisfy the laws; where False neither is an answer.
    method : str
        What was done, in a few words.
    iterations : int
        Newton steps taken.
    reason : str
        Why it did not converge, or empty.
    """

    flow: Floats
    head: Floats
    converged: bool
    method: str
    iterations: int
    reason: str


@dataclass(frozen=True, slots=True, eq=False)
class Evaluation:
    """How far given flows and heads are from the laws.

    Attributes
    ----------
    largest_energy_error, largest_imbalance : float
        Largest magnitudes of the two arrays, in m and m³/s; NaN if one of them is.
    energy_error : ndarray, shape (m,)
        Head at start − head at end − loss by the laws, in m. For a shut pipe 0 at rest, else infinite.
    imbalance : ndarray, shape (n,)
        Flow toward the junction − withdrawal, in m³/s; 0 at a reservoir.
    """

    largest_energy_error: float
    largest_imbalance: float
    energy_error: Floats
    imbalance: Floats

"""Head loss of full pipes and its slope, from the flow.

Darcy f is read through the Reynolds number as a power law of its own local exponent, so that each law
gives two things: f and d ln f / d ln Re. Colebrook–White is solved exactly by the Wright ω function in
the form that does not cancel: with a = ε/3.7D, b = 2.51/Re, c = 2/ln 10 and s = a + b/√f, the law
1/√f = −c ln s becomes w + ln w = a/(bc) − ln(bc) for w = s/(bc), and d ln f / d ln Re = −2/(1 + w).
Hazen–Williams and Manning know no f: their loss is a power of the flow, worked in logarithms.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np
from scipy.special import wrightomega

from calc.second.works import Flags, Floats, Works

LOG_SCALE = 2.0 / math.log(10.0)


@dataclass(frozen=True, slots=True, eq=False)
class Pipes:
    """The pipes of a works prepared for their head loss; every array of shape (m,).

    Attributes
    ----------
    works : Works
        Where they come from.
    drag : ndarray
        Friction loss over f·q·|q| of one pipe, in s²/m⁵.
    laminar : ndarray
        Friction loss over q of one pipe in laminar flow, in s/m².
    reynolds : ndarray
        Reynolds number over |q| of one pipe, in s/m³.
    relative : ndarray
        Roughness over bore.
    knee : ndarray
        Exponent of Re in f through the transition.
    chosen : dict of str to ndarray of bool
        Which pipes follow each law.
    raised : ndarray of bool
        Which pipes lose a power of the flow, by Hazen–Williams or Manning.
    power : ndarray
        That power; 2 where the law is another.
    gain : ndarray
        Friction loss of one pipe at 1 m³/s by that power, in m; 0 where the law is another.
    """

    works: Works
    drag: Floats
    laminar: Floats
    reynolds: Floats
    relative: Floats
    knee: Floats
    chosen: dict[str, Flags]
    raised: Flags
    power: Floats
    gain: Floats


def colebrook_white(reynolds: Floats, relative: Floats) -> tuple[Floats, Floats]:
    """Return Darcy f and d ln f / d ln Re; 1/√f = −2 log₁₀(ε/3.7D + 2.51/(Re √f)) solved exactly."""
    viscous = LOG_SCALE * 2.51 / reynolds
    omega = np.asarray(wrightomega(relative / 3.7 / viscous - np.log(viscous)), dtype=np.float64)
    return (LOG_SCALE * np.log(viscous * omega)) ** -2.0, -2.0 / (1.0 + omega)


def swamee_jain(reynolds: Floats, relative: Floats) -> tuple[Floats, Floats]:
    """Return Darcy f and d ln f / d ln Re; f = 0.25/log₁₀(ε/3.7D + 5.74/Re^0.9)²."""
    viscous = 5.74 / reynolds**0.9
    inside = relative / 3.7 + viscous
    return 0.25 / np.log10(inside) ** 2, 1.8 * viscous / (inside * np.log(inside))


def haaland(reynolds: Floats, relative: Floats) -> tuple[Floats, Floats]:
    """Return Darcy f and d ln f / d ln Re; 1/√f = −1.8 log₁₀((ε/3.7D)^1.11 + 6.9/Re)."""
    viscous = 6.9 / reynolds
    inside = (relative / 3.7) ** 1.11 + viscous
    return (1.8 * np.log10(inside)) ** -2.0, 2.0 * viscous / (inside * np.log(inside))


TURBULENT = {"colebrook-white": colebrook_white, "swamee-jain": swamee_jain, "haaland": haaland}


def hazen_williams(works: Works, of_law: Flags) -> tuple[float, Floats]:
    """Return the power of the flow and the loss of each pipe at 1 m³/s; h = k L Q^a / (C^a D^b)."""
    coefficient, power, narrowing = works.hazen_williams
    length, bore, c = works.length[of_law], works.bore[of_law], works.hazen_williams_c[of_law]
    return power, coefficient * np.exp(np.log(length) - power * np.log(c) - narrowing * np.log(bore))


def manning(works: Works, of_law: Flags) -> tuple[float, Floats]:
    """Return the power of the flow and the loss of each pipe at 1 m³/s; h = k n² L Q² / D^b."""
    coefficient, narrowing = works.manning
    length, bore, n = works.length[of_law], works.bore[of_law], works.manning_n[of_law]
    return 2.0, coefficient * np.exp(np.log(length) + 2.0 * np.log(n) - narrowing * np.log(bore))


POWERS = {"hazen-williams": hazen_williams, "manning": manning}


def prepare(works: Works) -> Pipes:
    """Return the constants that the head losses of `works` need, for all its pipes, open or shut."""
    laws = np.asarray(works.law, dtype=object)
    chosen: dict[str, Flags] = {law: np.equal(laws, law) for law in (*TURBULENT, "fixed", *POWERS)}
    gravity, viscosity, bore = works.gravity, works.viscosity, works.bore
    low, high = works.laminar_below, works.turbulent_above
    relative = np.where(_follow(chosen, TURBULENT), works.roughness / bore, 0.0)
    knee = np.zeros(len(bore))
    for law, factor in TURBULENT.items():
        of_law = chosen[law]
        if high > low and np.any(of_law):
            turbulent = factor(np.full(np.count_nonzero(of_law), high), relative[of_law])[0]
            knee[of_law] = np.log(turbulent * low / 64.0) / math.log(high / low)
    power, gain = np.full(len(bore), 2.0), np.zeros(len(bore))
    for law, read in POWERS.items():
        if np.any(of_law := chosen[law]):
            power[of_law], gain[of_law] = read(works, of_law)
    return Pipes(
        works=works,
        drag=8.0 * works.length / (math.pi**2 * gravity * bore**5),
        laminar=128.0 * viscosity * works.length / (math.pi * gravity * bore**4),
        reynolds=4.0 / (math.pi * bore * viscosity),
        relative=relative,
        knee=knee,
        chosen=chosen,
        raised=_follow(chosen, POWERS),
        power=power,
        gain=gain,
    )


def factors(pipes: Pipes, reynolds: Floats) -> tuple[Floats, Floats]:
    """Return Darcy f and d ln f / d ln Re of every pipe, each of shape (m,).

    In laminar flow both are NaN: there the loss is stated in the flow itself, which holds at rest too. They
    are NaN also where the loss is a power of the flow.
    """
    works = pipes.works
    factor = np.where(pipes.chosen["fixed"], works.factor, np.nan)
    exponent = np.where(pipes.chosen["fixed"], 0.0, np.nan)
    turbulent = reynolds >= works.turbulent_above
    between = regimes(pipes) & ~turbulent & (reynolds >= works.laminar_below)
    for law, function in TURBULENT.items():
        here = pipes.chosen[law] & turbulent
        if np.any(here):
            factor[here], exponent[here] = function(reynolds[here], pipes.relative[here])
    ratio = reynolds[between] / works.laminar_below
    factor[between] = 64.0 / works.laminar_below * ratio ** pipes.knee[between]
    exponent[between] = pipes.knee[between]
    return factor, exponent


def regimes(pipes: Pipes) -> Flags:
    """Return which pipes follow a law that knows laminar and transitional flow."""
    return _follow(pipes.chosen, TURBULENT)


def _follow(chosen: Mapping[str, Flags], laws: Iterable[str]) -> Flags:
    """Return which pipes follow one of some laws."""
    return np.asarray(np.any([chosen[law] for law in laws], axis=0), dtype=np.bool_)


def head_loss(pipes: Pipes, flow: Floats) -> tuple[Floats, Floats]:
    """Return the head lost and its slope by the flow.

    Parameters
    ----------
    pipes : Pipes
        From `prepare`.
    flow : ndarray, shape (m,)
        Total flow of each set of parallel pipes, in m³/s, positive from start to end.

    Returns
    -------
    loss : ndarray, shape (m,)
        Friction and fittings, in m, with the sign of the flow.
    slope : ndarray, shape (m,)
        Its derivative by the total flow, in s/m²; at rest zero for a fixed f and for a power of the flow.
    """
    works = pipes.works
    single = flow / works.parallel
    speed = np.abs(single)
    factor, exponent = factors(pipes, pipes.reynolds * speed)
    laminar = regimes(pipes) & (pipes.reynolds * speed < works.laminar_below)
    friction = np.where(laminar, pipes.laminar, pipes.drag * factor * speed)
    friction = np.where(pipes.raised, pipes.gain * speed ** (pipes.power - 1.0), friction)
    exponent = np.where(pipes.raised, pipes.power - 2.0, exponent)
    fittings = np.where(single >= 0.0, works.loss_forward, works.loss_reverse) * speed
    slope = np.where(laminar, pipes.laminar, (2.0 + exponent) * friction) + 2.0 * fittings
    return (friction + fittings) * single, slope / works.parallel


def resistance(works: Works) -> Floats:
    """Return a rough quadratic resistance of each pipe, in s²/m⁵, to rank them by: Darcy f as 0.02."""
    friction = 0.16 * works.length / (math.pi**2 * works.gravity * works.bore**5)
    fittings = np.maximum(works.loss_forward, works.loss_reverse)
    return (friction + fittings) / works.parallel**2

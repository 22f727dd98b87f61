"""Networks for the tests, written as rows of plain numbers in SI; random ones by seed."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from calc.components.network import Network
from calc.components.pipe import LAW_INPUT, EmpiricalConstants, FittingTerms, PipeTerms
from calc.equation import Labels
from calc.physics.friction import LAW_NAMES

Array = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Pipe:
    """A pipe between two nodes; ``fittings`` are (count, K forward, K reverse) on its own bore."""

    start: str
    end: str
    length: float = 1000.0
    bore: float = 0.3
    roughness: float = np.nan
    factor: float = np.nan
    law: str = ""
    parallel: float = 1.0
    open: bool = True
    fittings: Sequence[tuple[float, float, float]] = ()
    hazen_williams_c: float = np.nan
    manning_n: float = np.nan

    @property
    def label(self) -> str:
        if self.law:
            return self.law
        stated = {"colebrook-white": self.roughness, "hazen-williams": self.hazen_williams_c, "manning": self.manning_n}
        return next((law for law, value in stated.items() if not np.isnan(value)), "fixed")


CONSTANTS = {
    "hazen_williams_coefficient": 10.67,
    "hazen_williams_flow_exponent": 1.852,
    "hazen_williams_bore_exponent": 4.8704,
    "manning_coefficient": 4 ** (10 / 3) / np.pi**2,
    "manning_bore_exponent": 16 / 3,
}


def network(
    levels: Mapping[str, float],
    withdrawals: Mapping[str, float],
    pipes: Sequence[Pipe],
    viscosity: float = 1.0e-6,
    gravity: float = 9.81,
    **constants: float,
) -> Network:
    """Return the case: reservoirs with their levels, junctions with their withdrawals, pipes; other constants."""
    nodes = (*levels, *withdrawals)
    at = {name: i for i, name in enumerate(nodes)}
    parts = [(i, *part) for i, pipe in enumerate(pipes) for part in pipe.fittings]
    column = lambda k: np.array([part[k] for part in parts], dtype=float)  # noqa: E731
    terms = PipeTerms(
        rows=tuple(f"p{i}" for i in range(len(pipes))),
        length=np.array([p.length for p in pipes]),
        bore=np.array([p.bore for p in pipes]),
        roughness=np.array([p.roughness for p in pipes]),
        friction_factor=np.array([p.factor for p in pipes]),
        hazen_williams_c=np.array([p.hazen_williams_c for p in pipes]),
        manning_n=np.array([p.manning_n for p in pipes]),
        parallel=np.array([p.parallel for p in pipes]),
        law=Labels(LAW_NAMES, np.array([LAW_NAMES.index(p.label) for p in pipes])),
        fittings=FittingTerms(
            rows=tuple(f"f{i}" for i in range(len(parts))),
            pipe=np.array([part[0] for part in parts], dtype=np.int64),
            count=column(1),
            coefficient_forward=column(2),
            coefficient_reverse=column(3),
            bore=np.array([pipes[part[0]].bore for part in parts], dtype=float),
        ),
        viscosity=np.array([viscosity]),
        gravity=np.array([gravity]),
        laminar_below=np.array([2000.0]),
        turbulent_above=np.array([4000.0]),
        constants=EmpiricalConstants(**{name: np.array([x]) for name, x in {**CONSTANTS, **constants}.items()}),
    )
    return Network(
        nodes=nodes,
        level=np.array([*levels.values(), *([np.nan] * len(withdrawals))], dtype=float),
        withdrawal=np.array([*([0.0] * len(levels)), *withdrawals.values()], dtype=float),
        start=np.array([at[p.start] for p in pipes]),
        end=np.array([at[p.end] for p in pipes]),
        open=np.array([p.open for p in pipes]),
        pipes=terms,
    )


FIXED_FACTOR = 0.02


def resisting(start: str, end: str, resistance: float, gravity: float = 9.81) -> Pipe:
    """Return a pipe of 0.3 m and fixed f that loses resistance · Q²: h = 8 f L Q² / (π² g D⁵)."""
    length = resistance * np.pi**2 * gravity * 0.3**5 / (8 * FIXED_FACTOR)
    return Pipe(start, end, length=length, bore=0.3, factor=FIXED_FACTOR)


def balances(case: Network, flow: Array) -> Array:
    """Return flow toward each junction less its withdrawal, summed pipe by pipe."""
    left = -case.withdrawal.copy()
    for start, end, q in zip(case.start, case.end, flow, strict=True):
        left[start] -= q
        left[end] += q
    return left[np.isnan(case.level)]


def random_pipe(rng: np.random.Generator, start: str, end: str, law: str = "") -> Pipe:
    """Return a pipe of 30 mm to 1.2 m, 20 m to 20 km, of a law drawn or named."""
    bore, length = np.exp(rng.uniform(np.log([0.03, 20.0]), np.log([1.2, 2e4])))
    word = law or str(rng.choice(LAW_NAMES))
    share = rng.random()
    stated = {
        "friction_factor": 0.01 + 0.04 * share,
        "hazen_williams_c": 60.0 + 90.0 * share,
        "manning_n": 0.009 + 0.011 * share,
        "roughness": rng.choice([0.0, 1e-5, 1.5e-4, 1e-3]),
    }
    fittings = [(float(rng.integers(1, 4)), *rng.uniform(0.0, 3.0, 2))] if rng.random() < 0.3 else []
    needed = LAW_INPUT[word]
    given = {needed.replace("friction_factor", "factor"): float(stated[needed])}
    parallel = float(rng.choice([1.0, 1.0, 2.0]))
    return Pipe(start, end, float(length), float(bore), law=word, parallel=parallel, fittings=fittings, **given)


def random_star(rng: np.random.Generator, law: str = "") -> Network:
    """Return one junction joined to one to five reservoirs, with withdrawal, inflow or neither."""
    count = int(rng.integers(1, 6))
    span = float(rng.choice([0.0, 5.0, 50.0, 300.0]))
    levels = {f"r{i}": float(100.0 + rng.uniform(0.0, span)) for i in range(count)}
    ends = [("j", name) if rng.random() < 0.5 else (name, "j") for name in levels]
    withdrawal = float(rng.choice([0.0, 0.0, 1e-4, 0.01]) * rng.normal())
    return network(levels, {"j": withdrawal}, [random_pipe(rng, *pair, law) for pair in ends])


def random_net(rng: np.random.Generator, law: str = "") -> tuple[dict[str, float], dict[str, float], list[Pipe]]:
    """Return levels, withdrawals and pipes of a connected network with loops."""
    levels = {f"r{i}": float(rng.uniform(100.0, 150.0)) for i in range(int(rng.integers(1, 4)))}
    withdrawals = {f"j{i}": float(rng.normal() * 0.002) for i in range(int(rng.integers(2, 15)))}
    names = [*levels, *withdrawals]
    later = range(len(levels), len(names))
    pipes = [random_pipe(rng, names[k], names[int(rng.integers(0, k))], law) for k in later]
    for _ in range(int(rng.integers(0, len(names)))):
        a, b = rng.choice(len(names), 2, replace=False)
        pipes.append(random_pipe(rng, names[a], names[b], law))
    return levels, withdrawals, pipes

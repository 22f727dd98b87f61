"""Invented works for the drawings: places, levels and flows of no real scheme.

The flows of the star follow h = k Q|Q| in plain numbers, so that the balance that is drawn is one.
"""

from __future__ import annotations

from dataclasses import replace
from math import copysign, sqrt

from calc.report.figures import (
    Balance,
    BalanceBranch,
    Convergence,
    Junction,
    Panel,
    Pipe,
    Reservoir,
    Schematic,
    Trial,
)

PLACES = (
    *("ostrel", "sedge", "vell", "marl", "harn", "tove", "quell", "dray", "luddon", "fenwick"),
    *("bracken", "corrie", "skell", "wharn", "dunmoor", "eller", "garth", "holm", "inver", "jarrow"),
    *("kelder", "lathe", "mire", "norr", "oxen", "pell", "ravel", "sorn", "thorl", "ulver"),
)
DATUM = "Ostrel works datum, levelled from bench mark 7 in 2026"


def scientific(value: float) -> str:
    """Return a value as the report prints small ones."""
    if value == 0 or abs(value) >= 1e-3:
        return f"{value:.3g}"
    lead, power = f"{value:.2e}".split("e")
    return f"{lead} × 10⁻{str(abs(int(power))).translate(str.maketrans('0123456789', '⁰¹²³⁴⁵⁶⁷⁸⁹'))}"


def _flow(fall: float, resistance: float) -> float:
    return copysign(sqrt(abs(fall) / resistance), fall)


def star(
    count: int = 3,
    *,
    withdrawal: float = 12.0,
    levels: tuple[float, ...] = (),
    elevation: float | None = 171.0,
) -> Schematic:
    """One junction and ``count`` reservoirs; the head is where inflow and outflow agree, by halving."""
    heights = levels or tuple(214.6 - 31.6 * i / max(1, count - 1) for i in range(count))
    lengths = tuple(1850.0 + 733.0 * ((3 * i) % count) for i in range(count))
    bores = tuple((384.4, 296.8, 249.4, 196.2)[i % 4] for i in range(count))
    resistances = tuple(
        0.00081 * length / 1000 * (384.4 / bore) ** 5 for length, bore in zip(lengths, bores, strict=True)
    )
    head = _solve(heights, resistances, withdrawal)
    pipes = tuple(
        Pipe(
            f"{PLACES[i]}-main",
            PLACES[i],
            "marl-cross",
            _flow(heights[i] - head, resistances[i]),
            f"{abs(_flow(heights[i] - head, resistances[i])):.1f} L/s",
            lengths[i],
            bores[i],
            f"{lengths[i]:.0f} m, {bores[i]:.1f} mm",
            f"falls {abs(heights[i] - head):.2f} m",
            ("Lowest operating levels",) if i == 1 else (),
        )
        for i in range(count)
    )
    return Schematic(
        "Ostrel transfer, normal operation",
        tuple(Reservoir(PLACES[i], heights[i], f"{heights[i]:.2f} m") for i in range(count)),
        (
            Junction(
                "marl-cross",
                head,
                f"{head:.2f} m",
                elevation,
                "" if elevation is None else f"{elevation:.2f} m",
                f"{withdrawal:.1f} L/s" if withdrawal else "",
            ),
        ),
        pipes,
        datum=DATUM,
    )


def _solve(heights: tuple[float, ...], resistances: tuple[float, ...], withdrawal: float) -> float:
    low, high = min(heights) - 500.0, max(heights) + 500.0
    for _ in range(200):
        middle = (low + high) / 2
        total = sum(_flow(h - middle, r) for h, r in zip(heights, resistances, strict=True)) - withdrawal
        low, high = (middle, high) if total > 0 else (low, middle)
    return low


def network(count: int, *, names: int = 0, level: float | None = None) -> Schematic:
    """``count`` pipes between nodes of given heads, falling as the water runs; ``names`` letters a name."""
    nodes = max(3, round(count * 0.66))
    reservoirs = max(2, nodes // 5)

    def named(i: int, what: str) -> str:
        place = f"{PLACES[i % len(PLACES)]}{'' if i < len(PLACES) else '-' + str(i // len(PLACES) + 1)}{what}"
        return place if len(place) >= names else (place + "-" + "valve-house-on-the-north-road")[:names].rstrip("-")

    heads = [
        level if level is not None else round(216.0 - 47.0 * i / nodes - 3.1 * ((7 * i) % 5), 2) for i in range(nodes)
    ]
    titles = [named(i, "") for i in range(nodes)]
    pairs = [(i, i + 1 + (i % 2 if i + 2 < nodes else 0)) for i in range(nodes - 1)]
    pairs += [((5 * k) % nodes, ((5 * k) % nodes + 2 + k % 3) % nodes) for k in range(count)]
    unique = list(dict.fromkeys(tuple(sorted(pair)) for pair in pairs if pair[0] != pair[1]))[:count]
    pipes = tuple(
        Pipe(
            named(k, "-main"),
            titles[a],
            titles[b],
            (heads[a] - heads[b]) * 1.7,
            f"{abs(heads[a] - heads[b]) * 1.7:.1f} L/s",
            311.0 + 97.0 * (k % 9),
            (147.3, 196.2, 249.4, 296.8)[k % 4],
            f"{311 + 97 * (k % 9)} m, {(147.3, 196.2, 249.4, 296.8)[k % 4]:.1f} mm",
            turns=("Peak withdrawal",) if k % 11 == 4 else (),
            governing=k % 13 == 2,
            open=k % 17 != 9,
        )
        for k, (a, b) in enumerate(unique)
    )
    spaced = [i * nodes // reservoirs for i in range(reservoirs)]
    return Schematic(
        f"Network of {count} pipes, base case",
        tuple(Reservoir(titles[i], heads[i], f"{heads[i]:.2f} m") for i in spaced),
        tuple(
            Junction(
                titles[i],
                heads[i],
                f"{heads[i]:.2f} m",
                heads[i] - 20,
                f"{heads[i] - 20:.2f} m",
                "4.2 L/s" if i % 3 == 1 else "",
            )
            for i in range(nodes)
            if i not in spaced
        ),
        pipes,
        datum=DATUM,
    )


def balance(count: int = 3, trials: int = 7, *, long: bool = False) -> Balance:
    """The star's balance, its head found by halving from the outermost levels."""
    works = star(count)
    heights = tuple(r.level for r in works.reservoirs)
    resistances = tuple(0.00081 * p.length / 1000 * (384.4 / p.bore) ** 5 for p in works.pipes)
    heads = tuple(min(heights) + (max(heights) - min(heights)) * k / 120 for k in range(121))

    def total(head: float) -> float:
        return sum(_flow(h - head, r) for h, r in zip(heights, resistances, strict=True)) - 12.0

    low, high = min(heights), max(heights)
    rows = []
    for number in range(1, trials + 1):
        head = (low + high) / 2
        rows.append(Trial(number, head, total(head), low, high, scientific(high - low) + " m"))
        low, high = (head, high) if total(head) > 0 else (low, head)
    name = "-through-the-old-valve-house" if long else ""
    return Balance(
        "Balance at marl-cross, normal operation",
        "marl-cross" + name,
        heads,
        tuple(
            BalanceBranch(p.name + name, tuple(_flow(heights[i] - h, resistances[i]) for h in heads), p.flow)
            for i, p in enumerate(works.pipes)
        ),
        tuple(total(h) for h in heads),
        tuple(rows),
        rows[-1].head,
        f"{rows[-1].head:.2f} m",
        datum=DATUM,
    )


def convergence(trials: int = 7, *, zeros: bool = False) -> Convergence:
    """The trials of the star's balance, with the width of the bracket beneath."""
    rows = balance(3, trials).trials
    values = [row.imbalance for row in rows]
    if zeros:
        values[-1] = 0.0
    return Convergence(
        "Closing the balance at marl-cross, normal operation",
        "trial",
        tuple(row.number for row in rows),
        (
            Panel(
                "imbalance",
                "L/s",
                tuple(values),
                tuple(scientific(abs(value)) for value in values),
                1e-6,
                "1 × 10⁻⁶ L/s",
                signed=True,
            ),
            Panel(
                "width of the bracket",
                "m",
                tuple(row.high - row.low for row in rows if row.high is not None and row.low is not None),
                tuple(row.width_text for row in rows),
            ),
        ),
    )


def newton(iterations: int = 6, *, zeros: bool = False) -> Convergence:
    """Invented iterations that close quadratically, as Newton's method does near an answer."""
    imbalances = [41.0 * 10.0 ** -(0.55 * k**1.7) for k in range(iterations)]
    energies = [13.0 * 10.0 ** -(0.5 * k**1.7) for k in range(iterations)]
    if zeros:
        imbalances[-1] = energies[-1] = 0.0
    return Convergence(
        "Iterations, base case",
        "iteration",
        tuple(range(iterations)),
        (
            Panel(
                "largest imbalance at a junction",
                "L/s",
                tuple(imbalances),
                tuple(map(scientific, imbalances)),
                1e-6,
                "1 × 10⁻⁶ L/s",
            ),
            Panel(
                "largest energy error",
                "m",
                tuple(energies),
                tuple(map(scientific, energies)),
                1e-7,
                "1 × 10⁻⁷ m",
            ),
        ),
    )


def hostile(words: str) -> Schematic:
    """Return the star of three with one wild text everywhere a project may put text."""
    works = star(3)
    names = {r.name: f"{r.name[:2]} {words}" for r in works.reservoirs} | {"marl-cross": f"mc {words}"}
    return replace(
        works,
        title=words,
        datum=words[:120],
        level_unit="m",
        reservoirs=tuple(replace(r, name=names[r.name]) for r in works.reservoirs),
        junctions=tuple(replace(j, name=names[j.name]) for j in works.junctions),
        pipes=tuple(
            replace(
                p,
                name=f"{p.name[:2]} {words}",
                start=names[p.start],
                end=names[p.end],
                turns=(words,) if p.turns else (),
            )
            for p in works.pipes
        ),
    )

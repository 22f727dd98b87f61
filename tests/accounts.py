"""Project folders written from text, accounted for; and random ones by seed."""

from __future__ import annotations

from pathlib import Path
from textwrap import dedent

import numpy as np

from calc import pipeline
from calc.account import Account
from calc.physics.friction import ROUGH_PIPE_LAWS

ROOT = Path(__file__).resolve().parents[1]
PROJECTS = sorted(path.parent for path in (ROOT / "projects").glob("*/project.yaml"))


def written(folder: Path, text: str, **files: str) -> Path:
    """Write ``network.yaml`` and other files into a folder."""
    folder.mkdir(parents=True, exist_ok=True)
    for name, content in {"network": text, **files}.items():
        (folder / f"{name}.yaml").write_text(dedent(content), encoding="utf-8")
    return folder


def accounted(folder: Path, text: str, **files: str) -> Account:
    """Return the account of a folder written from text."""
    return pipeline.account(written(folder, text, **files))


class Draft:
    """A random project: reservoirs, junctions on a tree, extra pipes, fittings, cases; all in mixed units."""

    def __init__(self, seed: int) -> None:
        self.random = np.random.default_rng(seed)
        random = self.random
        self.junctions = [f"cross-{k}" for k in range(int(random.integers(1, 6)))]
        self.reservoirs = [f"pond-{k}" for k in range(int(random.integers(2, 5)))]

    def text(self) -> str:
        """Return the project as one file."""
        return "\n".join(
            (
                f"fluid: {{temperature: {self.between(4, 30)} degC}}",
                f"site: {{altitude: {self.between(0, 3000)} ft, gravity: 9.81 m/s²}}",
                f"friction: {self.random.choice(list(ROUGH_PIPE_LAWS))}",
                *self.nodes(),
                *self.pipes(),
                *self.cases(),
            )
        )

    def between(self, low: float, high: float) -> str:
        return f"{self.random.uniform(low, high):.4g}"

    def nodes(self) -> list[str]:
        lines = ["reservoirs:"]
        lines += [f"  {name}: {{level: {self.between(60, 120)} m}}" for name in self.reservoirs]
        lines += ["junctions:"]
        for name in self.junctions:
            flow = self.random.choice([f"withdrawal: {self.between(0, 20)} L/s", f"inflow: {self.between(1, 90)} gpm"])
            elevation = self.random.choice([f"elevation: {self.between(20, 50)} m, ", ""])
            lines.append(f"  {name}: {{{elevation}{flow}}}")
        return lines

    def pipes(self) -> list[str]:
        random = self.random
        ends = [(name, str(random.choice(self.junctions[:k]))) for k, name in enumerate(self.junctions) if k]
        ends += [(name, str(random.choice(self.junctions))) for name in self.reservoirs]
        nodes = [*self.reservoirs, *self.junctions]
        ends += [tuple(map(str, random.choice(nodes, 2, replace=False))) for _ in range(int(random.integers(0, 4)))]
        return ["pipes:", *(self.pipe(k, *pair) for k, pair in enumerate(ends))]

    def pipe(self, number: int, start: str, end: str) -> str:
        random = self.random
        if random.random() < 0.5:
            start, end = end, start
        parts = [f"from: {start}, to: {end}, length: {self.between(100, 4000)} m", f"bore: {self.between(4, 20)} inch"]
        if random.random() < 0.4:
            laws = {
                "fixed": f"friction_factor: {self.between(0.012, 0.03)}",
                "hazen-williams": f"hazen_williams_c: {self.between(60, 150)}",
                "manning": f"manning_n: {self.between(0.009, 0.02)}",
            }
            law = str(random.choice(list(laws)))
            parts.append(f"law: {law}, {laws[law]}")
        else:
            parts.append(f"roughness: {self.between(0.01, 1.5)} mm")
        if random.random() < 0.5:
            own = f"{{K: {self.between(0.2, 6)}, K_reverse: {self.between(0.2, 9)}, bore: {self.between(90, 200)} mm}}"
            parts.append(f"fittings: [{{kind: bend-90, count: {int(random.integers(1, 5))}}}, {own}]")
        shapes = {side: "square" for side, node in (("from", start), ("to", end)) if node in self.reservoirs}
        if shapes and random.random() < 0.7:
            parts.append("ends: {" + ", ".join(f"{side}: {shape}" for side, shape in shapes.items()) + "}")
        if random.random() < 0.3:
            parts.append(f"parallel: {int(random.integers(2, 4))}")
        return f"  main-{number}: {{{', '.join(parts)}}}"

    def cases(self) -> list[str]:
        pond, factor = self.random.choice(self.reservoirs), self.between(0.3, 2)
        return [
            "cases:",
            f"  low: {{with: {{reservoirs.{pond}.level: {self.between(50, 100)} m}},",
            '        times: {"pipes.*.bore": 0.9, "pipes.*.hazen_williams_c": 0.8}}',
            "  peak:",
            "    after: low",
            "    with: {fluid.temperature: 25 degC}",
            f'    times: {{"junctions.*.withdrawal": {factor}}}',
        ]

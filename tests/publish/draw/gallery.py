"""Draw every sample into a folder, in colour and in grey: python tests/publish/draw/gallery.py FOLDER."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

from matplotlib.figure import Figure
from PIL import Image

sys.path.insert(0, str(Path(__file__).parent))

import audit
import samples

from calc.publish.draw import balance, convergence, schematic, svg
from calc.publish.draw.settings import plain


def sheets() -> Iterator[tuple[str, Callable[[], Figure]]]:
    """Name and draw each sample."""
    s = schematic.draw
    yield "star-2", lambda: s(samples.star(2))
    yield "star-3", lambda: s(samples.star(3))
    yield "star-3-below", lambda: s(samples.star(3, withdrawal=420.0, elevation=195.0))
    yield "star-3-unknown", lambda: s(samples.star(3, elevation=None))
    yield "star-3-equal", lambda: s(samples.star(3, levels=(200.0, 200.0, 200.0), withdrawal=0.0))
    yield "star-5", lambda: s(samples.star(5))
    for n in (2, 9, 12, 24, 40, 60, 200):
        yield f"net-{n}", lambda n=n: s(samples.network(n))
    yield "net-12-long", lambda: s(samples.network(12, names=30))
    yield "net-40-long", lambda: s(samples.network(40, names=30))
    yield "net-12-equal", lambda: s(samples.network(12, level=200.0))
    yield "balance-3", lambda: balance.draw(samples.balance(3))
    yield "balance-12", lambda: balance.draw(samples.balance(12))
    yield "balance-long", lambda: balance.draw(samples.balance(5, long=True))
    yield "balance-1", lambda: balance.draw(samples.balance(3, 1))
    yield "balance-30", lambda: balance.draw(samples.balance(3, 30))
    yield "conv-7", lambda: convergence.draw(samples.convergence(7))
    yield "conv-1", lambda: convergence.draw(samples.convergence(1))
    yield "conv-30", lambda: convergence.draw(samples.convergence(30, zeros=True))
    yield "conv-12-zero", lambda: convergence.draw(samples.convergence(12, zeros=True))
    yield "newton", lambda: convergence.draw(samples.newton())
    yield "newton-zero", lambda: convergence.draw(samples.newton(zeros=True))


if __name__ == "__main__":
    folder = Path(sys.argv[1])
    folder.mkdir(parents=True, exist_ok=True)
    for name, make in sheets():
        if len(sys.argv) > 2 and not name.startswith(tuple(sys.argv[2:])):
            continue
        begun = time.perf_counter()
        figure = make()
        took = time.perf_counter() - begun
        with plain():
            figure.savefig(folder / f"{name}.png", dpi=130)
        (folder / f"{name}.svg").write_bytes(svg(figure))
        Image.open(folder / f"{name}.png").convert("L").save(folder / f"{name}-grey.png")
        sys.stdout.write(f"{name:16} {took:6.2f} s {audit.faults(figure)}\n")

"""Every drawing at every size: nothing overlaps, nothing is clipped, the same bytes twice, no state kept."""

from __future__ import annotations

import os
import random
import re
import subprocess
import sys
from dataclasses import replace
from pathlib import Path
from xml.etree import ElementTree as ET

import matplotlib as mpl
import pytest
from fontTools.ttLib import TTFont

HERE = Path(__file__).parent
sys.path.insert(0, str(HERE))

import audit  # noqa: E402
import gallery  # noqa: E402
import samples  # noqa: E402

from calc.publish import places  # noqa: E402
from calc.publish.draw import convergence, schematic, svg  # noqa: E402
from calc.publish.draw.faces import voice  # noqa: E402
from calc.report.figures import Convergence, Panel  # noqa: E402

SHEETS = dict(gallery.sheets())
SAMPLES = ["star-3", "net-12", "balance-30", "conv-12-zero"]


@pytest.mark.parametrize("name", SHEETS)
def test_clean(name: str) -> None:
    figure = SHEETS[name]()
    assert audit.faults(figure) == []
    width, height = (side * 25.4 for side in figure.get_size_inches())
    assert width == pytest.approx(165.0)
    assert height <= 210


def test_the_audit_sees_a_fault() -> None:
    figure = SHEETS["star-3"]()
    first = audit.texts(figure)[0]
    first.set_position(audit.texts(figure)[5].get_position())
    assert ("text on text", first.get_text()) in {fault[:2] for fault in audit.faults(figure)}
    first.set_position((-20, 50))
    assert ("off the sheet", first.get_text(), "") in audit.faults(figure)


@pytest.mark.parametrize("name", SAMPLES)
def test_same_bytes(name: str) -> None:
    assert svg(SHEETS[name]()) == svg(SHEETS[name]())
    assert svg(SHEETS[name](), carried=True) == svg(SHEETS[name](), carried=True)


def test_same_bytes_from_another_process_elsewhere(tmp_path: Path) -> None:
    """Another hash seed, locale, home and time zone, and settings of matplotlib in the present folder."""
    (tmp_path / "matplotlibrc").write_text("lines.linewidth: 9\nsavefig.bbox: tight\naxes.facecolor: red\n")
    code = (
        f"import sys; sys.path[:0] = [{str(HERE)!r}, {str(HERE.parents[2])!r}]\n"
        "import gallery; from calc.publish.draw import svg\n"
        "sys.stdout.buffer.write(svg(dict(gallery.sheets())['net-12']()))"
    )
    elsewhere = {"PYTHONHASHSEED": "77", "LC_ALL": "C", "HOME": str(tmp_path), "TZ": "Asia/Tokyo"}
    found = subprocess.run(
        [sys.executable, "-c", code],
        cwd=tmp_path,
        env=os.environ | elsewhere,
        capture_output=True,
        check=True,
    )
    assert found.stdout == svg(SHEETS["net-12"]())


def test_no_state_is_left() -> None:
    before = mpl.rcParams.copy()
    svg(SHEETS["net-12"]())
    assert mpl.rcParams.copy() == before


def test_no_global_figures_are_kept() -> None:
    code = (
        f"import sys; sys.path[:0] = [{str(HERE)!r}, {str(HERE.parents[2])!r}]\n"
        "import gallery; from calc.publish.draw import svg\n"
        "svg(dict(gallery.sheets())['star-3']())\n"
        "sys.exit('matplotlib.pyplot' in sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


@pytest.mark.parametrize("name", SAMPLES)
def test_text_is_text_in_our_faces(name: str) -> None:
    written = svg(SHEETS[name]()).decode()
    families = set(re.findall(r"font-family: ([^;\"]+)", written))
    assert families == {"'Ledger Small'"}
    assert not re.search(r"\d{4}-\d\d-\d\d|matplotlib", written)
    assert " id=" not in written
    tree = ET.fromstring(written)  # noqa: S314 - our own
    said = {node.text for node in tree.iter("{http://www.w3.org/2000/svg}text")}
    assert said == {text.get_text() for text in audit.texts(SHEETS[name]())}


def test_widths_are_those_of_the_font() -> None:
    """The horizontal metrics table of the face, read by fontTools; digits here have no kerning."""
    font = TTFont(places.fonts() / "LedgerSmall-Regular.ttf")
    words = "1850 m 204.14"
    glyphs = [font.getBestCmap()[ord(letter)] for letter in words]
    expected = sum(font["hmtx"][glyph][0] for glyph in glyphs) * 8 / font["head"].unitsPerEm
    assert voice("#000000").width(words) == pytest.approx(expected, abs=0.1)


def test_a_picture_can_carry_its_letters() -> None:
    carried = svg(SHEETS["star-3"](), carried=True).decode()
    assert carried.count("@font-face") == 3
    assert len(carried) < 120_000


HOSTILE = "$x_1$ <b>&amp;\"'\u202e\u0000 \U0001f600 {0} %s \n \t " + "w" * 400


def test_hostile_words_are_drawn_as_they_are(recwarn: pytest.WarningsRecorder) -> None:
    figure = samples.hostile(HOSTILE)
    drawn = schematic.draw(figure)
    assert audit.faults(drawn) == []
    ET.fromstring(svg(drawn, carried=True))  # noqa: S314 - our own
    said = " ".join(text.get_text() for text in audit.texts(drawn))
    assert "$x_1$ <b>&amp;" in said
    assert not list(recwarn)


@pytest.mark.parametrize("seed", range(12))
def test_clean_for_any_star(seed: int) -> None:
    chance = random.Random(seed)  # noqa: S311 - seeded, not secret
    count = chance.randint(2, 9)
    spread = chance.choice([1e-3, 1.0, 50.0, 900.0])
    works = samples.star(
        count,
        withdrawal=chance.choice([0.0, 5.0, 600.0]),
        levels=tuple(round(chance.uniform(100, 100 + spread), 2) for _ in range(count)),
        elevation=chance.choice([None, 90.0, 250.0]),
    )
    pipes = tuple(replace(pipe, length=chance.choice([3.0, 1850.0, 90_000.0])) for pipe in works.pipes)
    assert audit.faults(schematic.draw(replace(works, pipes=pipes))) == []


@pytest.mark.parametrize("seed", range(8))
def test_clean_for_any_course(seed: int) -> None:
    """Sizes from 10⁻¹⁴ to 10⁶, zeros, and steps without a value."""
    chance = random.Random(seed)  # noqa: S311 - seeded, not secret
    count = chance.randint(1, 60)
    values = tuple(
        chance.choice([0.0, None, chance.choice([-1, 1]) * 10 ** chance.uniform(-14, 6)]) for _ in range(count)
    )
    panel = Panel(
        "imbalance",
        "L/s",
        values,
        tuple("" if value is None else samples.scientific(abs(value)) for value in values),
        chance.choice([None, 1e-6, 0.0]),
        "1 × 10⁻⁶ L/s",
        signed=True,
    )
    figure = Convergence("Course", "trial", tuple(range(1, count + 1)), (panel, replace(panel, name="width")))
    assert audit.faults(convergence.draw(figure)) == []

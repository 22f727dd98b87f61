"""Formulas as set: what is copied is arithmetic, what is read aloud is the same, and no line is too long."""

from __future__ import annotations

import math
import re
from html.parser import HTMLParser

import numpy as np
import pytest
import sample
from markupsafe import Markup

from calc.equation import Equation, Implicit
from calc.physics import energy, fitting, friction, velocity, water
from calc.problems import Unresolved
from calc.publish.formula import formula, occurrences, slots
from calc.publish.markup import anchored
from calc.report.document import Formula, Number
from calc.report.numbers import Format

LAWS: list[Equation | Implicit] = [
    found
    for module in (energy, fitting, friction, velocity, water)
    for found in vars(module).values()
    if isinstance(found, Equation | Implicit)
]
VALUES = (0.31, 2.7, 0.83, 1.9, 0.57, 3.3)
"""Invented; all different, so that no two inputs can change places."""


class _Words(HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.text = ""
        self.label = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.text += " " * (tag == "br")
        self.label = self.label or dict(attrs).get("aria-label") or ""

    def handle_data(self, data: str) -> None:
        self.text += data


def read(markup: str) -> _Words:
    words = _Words()
    words.feed(markup)
    words.text = re.sub("[ \n\u2009]+", " ", words.text).strip()
    return words


def anchor(number: Number) -> Markup:
    return anchored(number.ref, number)


def body(law: Equation | Implicit) -> Equation:
    return law.residual if isinstance(law, Implicit) else law


def operands(law: Equation | Implicit, values: tuple[float, ...] = VALUES, unit: str = "") -> dict[str, Number]:
    # the text is written here, not by the program
    return {
        name: Number(f"a.b.{name}", Format(unit, decimals=2), str(value).replace("-", "−"))
        for name, value in zip(body(law).takes, values, strict=False)
    }


def name(law: Equation | Implicit) -> str:
    return law.name


def computed(text: str) -> float:
    """Evaluate copied text with Python's own arithmetic: an evaluator outside the project."""
    code = re.sub("\u202f(?:K|Pa·s|Pa|m|kg/m³)(?![a-z])", "", text)
    code = code.replace("−", "-").replace("×", "*").replace("·", "*").replace("^", "**").replace("π", "math.pi")
    code = re.sub(r"\|([^|]*)\|", r"abs(\1)", code.replace("\u202f", ""))
    code = re.sub(r"√([\d.]+)", r"math.sqrt(\1)", code).replace("√(", "math.sqrt(")
    code = re.sub(r"\b(log10|exp)\(", r"math.\1(", code)
    code = re.sub(r"\bln\(", "math.log(", code)
    return float(eval(code, {"math": math, "abs": abs}))  # noqa: S307 - text of our own


@pytest.mark.parametrize("law", LAWS, ids=name)
@pytest.mark.parametrize("measure", [18.0, 30.0, 90.0])
def test_copied_text_is_what_is_read_aloud(law: Equation | Implicit, measure: float) -> None:
    words = read(formula(Formula(law, operands(law), Number("a.b.c", Format(decimals=2), "1.00")), measure, anchor))
    assert words.text == words.label


@pytest.mark.parametrize("law", LAWS, ids=name)
@pytest.mark.parametrize("measure", [18.0, 90.0])
@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_copied_numbers_evaluate_to_what_the_equation_gives(
    law: Equation | Implicit, measure: float, sign: float
) -> None:
    values = tuple(
        sign * value if name in ("velocity", "flow_each", "friction_loss", "head_from") else value
        for name, value in zip(body(law).takes, VALUES, strict=False)
    )
    said = read(formula(Formula(law, operands(law, values)), measure, anchor)).text
    right = re.split(r" = | ≈ ", said)[2]
    expected = body(law).body(**{n: np.array([v]) for n, v in zip(body(law).takes, values, strict=False)})
    assert computed(right) == pytest.approx(float(np.asarray(expected).reshape(-1)[0]), rel=1e-12)


def test_a_formula_reads_as_written_by_hand() -> None:
    said = read(formula(Formula(velocity.mean_velocity), 40, anchor)).text
    assert said == "V = 4 Q_1/(π D^2)"
    said = read(formula(Formula(friction.colebrook_white), 90, anchor)).text
    assert said == "0 = 1/√f + 2 · log10(ε/(3.7 D) + 2.51/(Re √f))"


def test_units_and_powers_of_ten_are_bracketed_when_raised() -> None:
    flow = Number("pipes.a.flow_each", Format("m³/s", decimals=4), "−0.0831")
    bore = Number("pipes.a.bore", Format("m", significant=2), "3.8 × 10^−1")
    said = read(formula(Formula(velocity.mean_velocity, {"flow_each": flow, "bore": bore}), 90, anchor)).text
    assert said.endswith("= 4 × (−0.0831\u202fm³/s)/(π × (3.8 × 10^−1\u202fm)^2)")


def test_bars_need_no_brackets() -> None:
    speed = Number("pipes.a.velocity", Format("m/s", decimals=2), "−0.29")
    said = read(formula(Formula(velocity.speed, {"velocity": speed}), 90, anchor)).text
    assert said == "|V| = |V| = |−0.29\u202fm/s|"


def test_an_operand_left_out_is_refused() -> None:
    with pytest.raises(Unresolved, match="no number is put in for 'bore'"):
        formula(
            Formula(velocity.mean_velocity, {"flow_each": operands(velocity.mean_velocity)["flow_each"]}), 40, anchor
        )


def test_the_unknown_of_an_implicit_law_is_its_result() -> None:
    known = operands(friction.colebrook_white)
    del known["factor"]
    part = Formula(friction.colebrook_white, known, Number("a.b.f", Format(decimals=4), "0.0181"))
    said = read(formula(part, 90, anchor)).text
    assert said.endswith("at f = 0.0181")
    assert [number.ref for number in occurrences(part)].count("a.b.f") == 3


@pytest.mark.parametrize("law", LAWS, ids=name)
def test_every_input_has_its_place_in_the_panel(law: Equation | Implicit) -> None:
    found = set(re.findall(r'data-name="(\w+)"', slots(law, 30.0)))
    assert found == set(body(law).takes)


def test_numbers_of_a_formula_are_counted_as_often_as_printed() -> None:
    scribe = sample.Scribe(sample.ledger())
    part = scribe.worked(
        friction.darcy_weisbach,
        sample.PIPES[0],
        "base",
        f"pipes.{sample.PIPES[0]}.friction_loss@base",
        {"gravity": "site.gravity", "factor": f"pipes.{sample.PIPES[0]}.friction_factor@base"},
    )
    assert formula(part, 60, anchor).count("<data") == len(list(occurrences(part))) == 7

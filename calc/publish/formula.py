"""Formulas: an equation in symbols, the same with numbers put in, and the result, as one line or several."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import replace

from markupsafe import Markup

from calc.equation import Expression, Implicit, Leaf, Literal, Operation, Term
from calc.problems import Unresolved
from calc.publish import mathematics
from calc.publish.faces import width
from calc.publish.markup import NARROW, unit
from calc.publish.mathematics import BLANK, NEGATIVE, Piece, Setter, Setting
from calc.report.document import Formula, Number

Anchor = Callable[[Number], Markup]
SLOT = 7.0  # em, kept for a number that the page puts in later
LEAST = 12.0  # em, the narrowest measure that a formula is broken to
MANY = 2  # lines
SLACK = 0.97  # kerning and rounding


def formula(part: Formula, measure: float, anchor: Anchor) -> Markup:
    """Return a formula as set.

    Parameters
    ----------
    part : Formula
        With its operands, if numbers are to be put in.
    measure : float
        The width of the column in em of its text.
    anchor : callable
        Sets a number as the anchor of its ledger id.

    Raises
    ------
    Unresolved
        If an operand is missing.
    """
    head = _head(part.law)
    return _set(head, head.width + BLANK, _lines(part, measure, anchor))


def _lines(part: Formula, measure: float, anchor: Anchor) -> list[tuple[str, Setting]]:
    """Return the right sides of a formula, each with the sign before it."""
    law = part.law
    equation = law.residual if isinstance(law, Implicit) else law
    room = max(LEAST, measure * SLACK - _head(law).width - BLANK - width("= "))
    symbols = Setter(lambda name: mathematics.symbol(equation.takes[name].text), room, worked=False)
    lines = [("=", _whole(symbols, equation.expression))]
    if part.operands is not None:
        numbers = _operands(part)
        worked = Setter(lambda name: operand(numbers, name, anchor), room, worked=True)
        lines.append(("≈" if isinstance(law, Implicit) else "=", _whole(worked, equation.expression)))
    if part.result is not None:
        result = _put(part.result, anchor)
        if isinstance(law, Implicit):
            lines.append(("at", _equal(mathematics.symbol(law.gives.text), result)))
        else:  # a result that is less than a bound says so itself
            lines.append(("" if part.result.text.startswith("<") else "=", result))
    return lines


def _whole(setter: Setter, expression: Expression) -> Setting:
    """Return a right side; one of many lines is set flat, as fractions would only lengthen it."""
    made = setter.set(expression)
    if len(made.pieces) == 1:
        return made
    flat = setter.set(expression, flat=True)
    return flat if len(flat.pieces) == 1 or len(made.pieces) > MANY else made


def occurrences(part: Formula) -> Iterator[Number]:
    """Yield each number that a formula prints, as often as it prints it."""
    equation = part.law.residual if isinstance(part.law, Implicit) else part.law
    if part.operands is not None:
        numbers = _operands(part)
        yield from (numbers[name] for name in _terms(equation.expression))
    if part.result is not None:
        yield part.result


def slots(law: Leaf, measure: float) -> Markup:
    """Return a law with an empty place for each number, which the page fills."""
    equation = law.residual if isinstance(law, Implicit) else law
    head = _head(law)
    indent = head.width + BLANK
    room = max(LEAST, measure * SLACK - indent - width("= "))
    return _set(head, indent, [("=", Setter(_slot, room, worked=True).set(equation.expression))])


def operand(numbers: Mapping[str, Number], name: str, anchor: Anchor) -> Setting:
    """Return a number put in for an input, with its unit."""
    if name not in numbers:
        raise Unresolved(f"no number is put in for '{name}'")
    return _put(numbers[name], anchor)


def _head(law: Leaf) -> Setting:
    """Return the left side: the result, or the zero that a residual comes to."""
    return mathematics.literal(Literal("0")) if isinstance(law, Implicit) else mathematics.symbol(law.gives.text)


def _operands(part: Formula) -> Mapping[str, Number]:
    """Return the numbers put in; the unknown of an implicit law is its result."""
    numbers = dict(part.operands or {})
    if isinstance(part.law, Implicit) and part.result is not None:
        numbers.setdefault(part.law.unknown, part.result)
    return numbers


def _put(number: Number, anchor: Anchor) -> Setting:
    markup = anchor(number) + unit(number.form.unit)
    tail = f"{NARROW}{number.form.unit}" if number.form.unit else ""
    text = number.text + tail
    made = mathematics.atom(markup, text, width(text), heavy=bool(tail) or "×" in text)
    return replace(made, rank=NEGATIVE) if made.minus else made


def _slot(name: str) -> Setting:
    """Return an empty place; it is bracketed where any number might have to be."""
    markup = Markup('<span class="slot" data-name="{}"></span>').format(name)
    return Setting((Piece(markup, SLOT),), name, heavy=True)


def _equal(left: Setting, right: Setting) -> Setting:
    wide = left.width + right.width + width(" = ")
    return Setting((Piece(left.line + Markup(" = ") + right.line, wide),), f"{left.text} = {right.text}")


def _terms(node: Expression) -> Iterator[str]:
    match node:
        case Term(name=name):
            yield name
        case Operation(args=args):
            for arg in args:
                yield from _terms(arg)
        case _:
            return


def _set(head: Setting, indent: float, lines: list[tuple[str, Setting]]) -> Markup:
    """Return lines that begin with a sign, one under the other where they do not fit side by side."""
    spoken = head.text + "".join(f" {sign} {line.text}" if sign else f" {line.text}" for sign, line in lines)
    # No width may hang on the last bit of a sum.
    style = Markup("padding-left:{}em;text-indent:-{}em").format(*[f"{indent:.2f}"] * 2)
    opening = Markup('<span class="eq" role="math" aria-label="{}" style="{}">').format(spoken, style)
    left = Markup('<span class="lhs" style="width:{}em">{}</span>').format(f"{head.width:.2f}", head.line)
    said = _segment(*lines[0], left)
    for sign, line in lines[1:]:
        said += Markup("<br>" if len(line.pieces) > 1 else " ") + _segment(sign, line)
    return opening + said + Markup("</span>")


def _segment(sign: str, line: Setting, left: Markup | None = None) -> Markup:
    first, *rest = line.pieces
    pieces = [
        Markup("{}{}{}").format(left + " " if left else "", f"{sign} " if sign else "", first.markup),
        *(piece.markup for piece in rest),
    ]
    return Markup(" ").join(Markup('<span class="nb">{}</span>').format(piece) for piece in pieces)

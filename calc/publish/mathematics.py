"""Mathematics: the expression tree of an equation becomes a formula on the page, in symbols or in numbers.

Fractions, roots and powers are built from spans, so that a formula is text in the page's own face on paper and on
screen. Hidden signs make copied text read as arithmetic. What fits the measure is never broken; what does
not is broken before an operator, and a fraction too wide for the measure is written as a division.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

from markupsafe import Markup, escape

from calc.equation import Expression, Literal, Operation, Term
from calc.problems import Unresolved
from calc.publish.faces import ITALIC, width
from calc.publish.markup import NARROW, hidden, letter, raised
from calc.report.numbers import GROUPED, MINUS, THIN

SUM, PRODUCT, NEGATIVE, POWER, ATOM = range(1, 6)
SMALL = 0.72  # of the size: subscripts and exponents
FRACTION_GAP = 0.75  # em at both sides of a fraction
BLANK = 0.25
THIN_BLANK = "\u2009"
DIVISION = " / "
GLUED = 0.6  # of the measure, what must be left after a factor for it to stay with the next
FUNCTIONS = {"log10": ("log", "10"), "ln": ("ln", ""), "exp": ("exp", ""), "sin": ("sin", "")}


@dataclass(frozen=True, slots=True)
class Piece:
    """What is never broken: its markup and its width in em."""

    markup: Markup
    width: float


@dataclass(frozen=True, slots=True)
class Setting:
    """A part of a formula as set.

    Attributes
    ----------
    pieces : tuple of Piece
        One, or several between which a line may break.
    text : str
        The same on one line, as it is read aloud or copied.
    rank : int
        How tightly it holds together: SUM … ATOM.
    tall : bool
        Taller than a line.
    minus : bool
        Begins with a minus sign.
    heavy : bool
        A number with a unit or a power of ten: bracketed when raised to a power.
    digit : bool
        Begins with a digit.
    """

    pieces: tuple[Piece, ...]
    text: str
    rank: int = ATOM
    tall: bool = False
    minus: bool = False
    heavy: bool = False
    digit: bool = False

    @property
    def width(self) -> float:
        """Width on one line, in em."""
        return sum(piece.width for piece in self.pieces) + BLANK * (len(self.pieces) - 1)

    @property
    def line(self) -> Markup:
        """The markup on one line."""
        return Markup(" ").join(piece.markup for piece in self.pieces)


def atom(markup: Markup, text: str, wide: float, *, heavy: bool = False) -> Setting:
    """Return something that holds together by itself: a symbol, or a number with its unit."""
    return Setting((Piece(markup, wide),), text, minus=text.startswith(MINUS), heavy=heavy, digit=text[:1].isdecimal())


def symbol(text: str) -> Setting:
    """Return a letter with its subscript."""
    stem, _, below = text.strip("|").partition("_")
    bars = 2 * width("|") if text.startswith("|") else 0.0
    return atom(letter(text), text.replace("-", MINUS), width(stem, ITALIC) + SMALL * width(below) + bars + 0.05)


def literal(node: Literal) -> Setting:
    """Return a number of the equation itself, which no ledger holds."""
    minus = MINUS if node.text.startswith("-") else ""
    mantissa, _, power = node.text.lstrip("-").partition("e")
    whole, point, rest = mantissa.partition(".")
    if len(whole) >= GROUPED:
        head = len(whole) % 3 or 3
        whole = THIN.join([whole[:head], *(whole[k : k + 3] for k in range(head, len(whole), 3))])
    text = minus + whole + point + rest
    if power:
        text += f" × 10^{str(int(power)).replace('-', MINUS)}"
    tail = f"{NARROW}{node.unit}" if node.unit else ""
    markup = Markup('<span class="lit">{}{}</span>').format(raised(text), tail)
    return atom(markup, text + tail, width(text + tail), heavy=bool(power or node.unit))


class Setter:
    """Sets expressions.

    Parameters
    ----------
    put : callable
        Gives the setting of an input from its name.
    measure : float
        The width that a line may take, in em.
    worked : bool
        Whether inputs are numbers: factors are then joined by a multiplication sign.
    """

    def __init__(self, put: Callable[[str], Setting], measure: float, *, worked: bool) -> None:
        self.put = put
        self.measure = measure
        self.worked = worked

    def set(self, node: Expression, *, flat: bool = False) -> Setting:  # noqa: C901, PLR0911 - one line for each operation
        """Return an expression as set; ``flat`` writes fractions as divisions on one line."""
        match node:
            case Term(name=name):
                return self.put(name)
            case Literal():
                return literal(node)
            case Operation(operation="add" | "subtract" as operation, args=(left, right)):
                return self._sum(operation, self.set(left, flat=flat), self.set(right, flat=flat))
            case Operation(operation="multiply", args=(left, right)):
                return self._factors(self.set(left, flat=flat), right, flat=flat)
            case Operation(operation="divide", args=(left, right)):
                return self._quotient(left, right, flat=flat)
            case Operation(operation="power", args=(base, exponent)):
                return self._power(self.set(base, flat=flat), self.set(exponent, flat=True))
            case Operation(operation="square", args=(base,)):
                return self._power(self.set(base, flat=flat), literal(Literal("2")))
            case Operation(operation="negative", args=(arg,)):
                return self._negative(self.set(arg, flat=flat))
            case Operation(operation="sqrt", args=(arg,)):
                return self._root(self.set(arg, flat=True))
            case Operation(operation="abs", args=(arg,)):
                return self._enclosed(self.set(arg, flat=flat), "|", "|")
            case Operation(operation=operation, args=(arg,)) if operation in FUNCTIONS:
                return self._function(operation, self.set(arg, flat=flat))
            case _:
                raise Unresolved(f"{node!r} cannot be set as a formula")

    def _joined(self, left: Setting, sign: str, right: Setting, rank: int, *, glued: bool = False) -> Setting:
        """Return two settings side by side, in one piece if that fits; ``glued``, no line breaks between them."""
        wide = width(sign.strip(" ")) + BLANK * sign.endswith(" ")
        *before, last = left.pieces
        first, *after = right.pieces
        if glued or sign == THIN_BLANK:
            seam = last.markup + Markup(escape(sign)) + first.markup
            pieces = (*before, Piece(seam, last.width + wide + BLANK + first.width), *after)
        elif sign == DIVISION:  # no line may begin with a solidus
            pieces = (*before, Piece(last.markup + Markup(" /"), last.width + wide), first, *after)
        else:
            led = Markup("{}{}").format(sign.lstrip(" "), first.markup)
            pieces = (*left.pieces, Piece(led, wide + first.width), *after)
        text = left.text + (" " if sign == THIN_BLANK else sign) + right.text
        made = Setting(pieces, text, rank, left.tall or right.tall, left.minus, left.heavy or right.heavy, left.digit)
        if len(pieces) > 1 and made.width <= self.measure:
            return replace(made, pieces=(Piece(made.line, made.width),))
        return made

    def _sum(self, operation: str, left: Setting, right: Setting) -> Setting:
        if right.minus or (operation == "subtract" and right.rank == SUM):
            right = self._bracket(right)
        sign = " + " if operation == "add" else f" {MINUS} "
        return self._joined(self._plain(left), sign, right, SUM)

    def _factors(self, left: Setting, node: Expression, *, flat: bool) -> Setting:
        """Return a product; a short factor that comes first stays with what follows, which is broken instead."""
        whole = self._product(left, self.set(node, flat=flat))
        room = self.measure - left.width - 2 * BLANK - width("×()")
        if len(whole.pieces) == 1 or len(left.pieces) > 1 or room < self.measure * GLUED:
            return whole
        right = Setter(self.put, room, worked=self.worked).set(node, flat=True)
        made = self._product(left, right, glued=True)
        return made if max(piece.width for piece in made.pieces) <= self.measure else whole

    def _product(self, left: Setting, right: Setting, *, glued: bool = False) -> Setting:
        left = self._plain(left if left.rank > SUM else self._bracket(left))
        right = self._bracket(right) if right.rank == SUM or right.minus else right
        if self.worked or right.digit:
            sign = " × "
        elif left.tall or right.tall or right.text.startswith(tuple(FUNCTIONS)):
            sign = " · "
        else:
            sign = THIN_BLANK
        return self._joined(left, sign, right, PRODUCT, glued=glued)

    def _quotient(self, above: Expression, below: Expression, *, flat: bool) -> Setting:
        if not flat:
            top, foot = self._floor(above), self._floor(below)
            if max(top.width, foot.width) + FRACTION_GAP <= self.measure:
                return self._fraction(top, foot)
        top, foot = self.set(above, flat=True), self.set(below, flat=True)
        top = self._bracket(top) if top.rank == SUM else top
        foot = self._bracket(foot) if foot.rank < POWER or foot.heavy else foot
        if top.width + foot.width + width("/") <= self.measure:
            return self._touching(top, foot)
        return self._joined(top, DIVISION, foot, PRODUCT)

    def _floor(self, node: Expression) -> Setting:
        """Return one floor of a fraction, in which no other fraction stands."""
        made = self.set(node)
        return self.set(node, flat=True) if made.tall else made

    def _touching(self, top: Setting, foot: Setting) -> Setting:
        markup = top.line + Markup("/") + foot.line
        wide = top.width + foot.width + width("/")
        text = f"{top.text}/{foot.text}"
        tall = top.tall or foot.tall
        return Setting((Piece(markup, wide),), text, PRODUCT, tall, top.minus, top.heavy, top.digit)

    def _fraction(self, top: Setting, foot: Setting) -> Setting:
        above = ("(", ")") if top.rank == SUM or (top.heavy and top.rank < ATOM) else ("", "")
        below = ("(", ")") if foot.rank < POWER or foot.heavy else ("", "")
        markup = Markup('<span class="f"><span class="a">{}{}{}{}</span><span class="b">{}{}{}</span></span>').format(
            *(_unseen(above[0]), top.line, _unseen(above[1]), hidden("/")),
            *(_unseen(below[0]), foot.line, _unseen(below[1])),
        )
        text = f"{above[0]}{top.text}{above[1]}/{below[0]}{foot.text}{below[1]}"
        wide = max(top.width, foot.width) + FRACTION_GAP
        return Setting((Piece(markup, wide),), text, PRODUCT, tall=True)

    def _power(self, base: Setting, exponent: Setting) -> Setting:
        if base.rank < ATOM or base.minus or base.heavy:
            base = self._bracket(base)
        *before, last = base.pieces
        marks = ("", "") if exponent.rank == ATOM and not exponent.heavy else ("(", ")")
        markup = (
            last.markup
            + hidden("^")
            + Markup("<sup>{}{}{}</sup>").format(_unseen(marks[0]), exponent.line, _unseen(marks[1]))
        )
        piece = Piece(markup, last.width + SMALL * exponent.width)
        text = f"{base.text}^{marks[0]}{exponent.text}{marks[1]}"
        return Setting((*before, piece), text, POWER, base.tall, digit=base.digit)

    def _negative(self, arg: Setting) -> Setting:
        arg = self._bracket(arg) if arg.rank < PRODUCT or arg.minus else arg
        first, *rest = arg.pieces
        piece = Piece(Markup(MINUS) + first.markup, first.width + width(MINUS))
        return Setting((piece, *rest), MINUS + arg.text, NEGATIVE, arg.tall, minus=True)

    def _root(self, arg: Setting) -> Setting:
        marks = ("", "") if arg.rank == ATOM and not arg.heavy else ("(", ")")
        if len(arg.pieces) > 1:
            enclosed = self._enclosed(arg, "(", ")")
            first, *rest = enclosed.pieces
            pieces = (Piece(Markup("√") + first.markup, first.width + width("√")), *rest)
            return Setting(pieces, f"√{enclosed.text}", POWER)
        markup = Markup('<span class="rt">√{}<span class="v">{}</span>{}</span>').format(
            _unseen(marks[0]), arg.line, _unseen(marks[1])
        )
        wide = arg.width + width("√") + 0.15
        return Setting((Piece(markup, wide),), f"√{marks[0]}{arg.text}{marks[1]}", POWER)

    def _function(self, operation: str, arg: Setting) -> Setting:
        name, below = FUNCTIONS[operation]
        lower = Markup('<sub class="lit">{}</sub>').format(below) if below else Markup()
        arg = self._bracket(arg)
        first, *rest = arg.pieces
        wide = width(name) + SMALL * width(below) + 0.1
        piece = Piece(Markup("{}{}").format(name, lower) + first.markup, wide + first.width)
        return Setting((piece, *rest), name + below + arg.text, POWER, arg.tall)

    def _bracket(self, arg: Setting) -> Setting:
        return self._enclosed(arg, "(", ")")

    def _plain(self, left: Setting) -> Setting:
        """Bracket a negative number that stands first: a sign belongs to its number."""
        return self._bracket(left) if self.worked and left.rank == NEGATIVE else left

    def _enclosed(self, arg: Setting, opening: str, closing: str) -> Setting:
        size = ' class="big"' if arg.tall else ""
        sign = Markup("<span{}>{{}}</span>").format(Markup(size)) if size else Markup("{}")
        pieces = list(arg.pieces)
        wide = width(opening) * (1.9 if arg.tall else 1.0)
        pieces[0] = Piece(sign.format(opening) + pieces[0].markup, pieces[0].width + wide)
        pieces[-1] = Piece(pieces[-1].markup + sign.format(closing), pieces[-1].width + wide)
        return Setting(tuple(pieces), f"{opening}{arg.text}{closing}", ATOM, arg.tall)


def _unseen(sign: str) -> Markup:
    return hidden(sign) if sign else Markup()

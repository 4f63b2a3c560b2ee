"""Conditions on a ring element, written the way people state them: k > m g l rather than k - m g l > 0."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from symplant.algebra.box import Sign
from symplant.algebra.expression import Node, integer
from symplant.algebra.factors import factors
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign, pattern_sign
from symplant.writing.element_trees import ElementTrees
from symplant.writing.squares import swapped

if TYPE_CHECKING:
    from symplant.writing.display import Formula
    from symplant.writing.formula import FormulaWriter

__all__ = ["Condition", "Statement", "condition", "statement"]

_LATEX = {">": ">", ">=": r"\ge", "<": "<", "<=": r"\le", "!=": r"\ne", "=": "="}
_FLIPPED = {">": "<", ">=": r"<=", "<": ">", "<=": ">=", "!=": "!=", "=": "="}


@dataclass(frozen=True)
class Statement:
    """`left` `relation` `right`, equivalent to a condition on an element over the parameter box.

    left - right equals `difference` (numerator, denominator) exactly.  Where `relation` is the one asked
    for, the element is a positive multiple of the difference (a nonzero multiple for != and =); where it
    is the flipped one, a negative multiple.
    """

    left: Node
    relation: str
    right: Node
    difference: tuple[Element, Element]


@dataclass(frozen=True)
class Condition:
    """A statement in LaTeX: its two sides, each on one line, and the whole in lines (`formula`)."""

    left: str
    relation: str
    right: str
    difference: tuple[Element, Element]
    formula: Formula

    @property
    def latex(self) -> str:
        """The condition on one line."""
        return f"{self.left} {_LATEX[self.relation]} {self.right}"


def condition(
    writer: FormulaWriter, element: Element, relation: str = ">", isolate: str | None = None
) -> Condition:
    r"""The condition `element relation 0` in LaTeX, in the form that reads best (see `statement`).

    >>> from symplant.writing.formula import FormulaWriter
    >>> from symplant.writing.spelling import Spelling
    >>> ring = Ring("s", ("k", "m"))
    >>> writer = FormulaWriter(ring, Spelling.of("s", {"k": "k", "m": "m"}))
    >>> condition(writer, 2 * ring.gen("k") - 15).latex
    'k > \\frac{15}{2}'
    >>> condition(writer, ring.gen("k") ** 2 - 3 * ring.gen("m")).latex
    'k^{2} > 3 m'
    """
    found = statement(writer.trees, element, relation, isolate)
    write = writer.writer.text
    from symplant.writing.display import two_sided  # LaTeX only: the terminal does without

    formula = two_sided(found.left, _LATEX[found.relation], found.right, writer.writer, writer.room)
    return Condition(write(found.left), found.relation, write(found.right), found.difference, formula)


def statement(
    trees: ElementTrees, element: Element, relation: str = ">", isolate: str | None = None
) -> Statement:
    """The condition `element relation 0` (relation: > >= < <= = !=), in the form that reads best.

    Factors that are positive over the box of the ring are left out.  A letter stands alone on the left
    if it is the only one, or the only one of unknown sign, or the one to `isolate`, provided that it is
    linear and its coefficient is of known sign.  A lone negative (or lone positive) term has a side to
    itself.
    """
    ring = trees.ring
    core, count = _without_signed_factors(ring, ring.reduce(element), relation)
    if count > 1:
        return Statement(trees.factored(core), relation, integer(0), (core, ring.one))
    core = _clearest(ring, core)
    letter = isolate or _letter_in_question(ring, core)
    if letter is not None:
        parts = ring.coefficients(core, letter)
        sign = factored_sign(ring, parts[1]) if len(parts) == 2 else Sign.REAL
        if sign in (Sign.POSITIVE, Sign.NEGATIVE):
            return _isolated(trees, letter, parts[0], parts[1], relation, sign is Sign.NEGATIVE)
    above, below = _by_sign(ring, core)
    if not above and core:
        return _compared(trees, -core, ring.zero, _FLIPPED[relation])
    if above and below and min(len(above), len(below)) == 1:
        content = _lone_number(above, below)
        if content > 1:
            return _divided(trees, above, below, content, relation)
        return _compared(trees, above, below, relation)
    return _compared(trees, core, ring.zero, relation)


def _without_signed_factors(ring: Ring, element: Element, relation: str) -> tuple[Element, int]:
    """The element over all its factors that are positive (nonzero for = and !=) over the box.

    With it, how many different factors are left.
    """
    if not element:
        return element, 0
    count = 0
    content, found = factors(element)
    kept = ring.constant(1 if content > 0 or relation in ("=", "!=") else -1)
    for factor, exponent in found:
        sign = pattern_sign(ring, factor) ** exponent
        if sign is Sign.NEGATIVE and relation not in ("=", "!="):
            kept = -kept
        elif not (sign is Sign.POSITIVE or (relation in ("=", "!=") and sign.is_nonzero)):
            kept, count = kept * factor**exponent, count + 1
    if kept.is_constant():  # true or false everywhere: what is said to be positive must still be seen
        return element // ring.constant(abs(content)), 0
    return kept, count


def _clearest(ring: Ring, element: Element) -> Element:
    """The element, or its value in other functions where that has fewer terms, or terms of one sign."""
    found = [element, *swapped(ring, element)]
    return min(found, key=lambda one: (len({int(c) > 0 for c in one.coeffs()}), len(one)))


def _letter_in_question(ring: Ring, element: Element) -> str | None:
    """The letter to solve for: the only generator, or the only one of open sign behind a monomial."""
    used = ring.used([element])
    if len(used) == 1:
        (only,) = used
        return only if only in ring.letters else None
    signs = dict(zip(ring.keys, ring.signs, strict=True))
    open_ones = [key for key in used if signs[key] is Sign.REAL]
    if len(open_ones) != 1 or open_ones[0] not in ring.letters:
        return None
    parts = ring.coefficients(element, open_ones[0])
    return open_ones[0] if len(parts) == 2 and len(parts[1]) == 1 else None


def _isolated(
    trees: ElementTrees, letter: str, rest: Element, factor: Element, relation: str, negative: bool
) -> Statement:
    """letter > -rest / factor."""
    ring = trees.ring
    shown = _FLIPPED[relation] if negative else relation
    top, bottom = -rest, factor
    common = top.gcd(bottom) if top else bottom
    top, bottom = top // common, bottom // common
    if int(bottom.leading_coefficient()) < 0:
        top, bottom = -top, -bottom
    right = trees.ratio(top, bottom)
    difference = (ring.gen(letter) * bottom - top, bottom)
    return Statement(trees.polynomial(ring.gen(letter)), shown, right, difference)


def _divided(trees: ElementTrees, above: Element, below: Element, content: int, relation: str) -> Statement:
    """A single term against a number: the term's own number goes over to the number."""
    ring = trees.ring
    whole = ring.constant(content)
    if above.is_constant():  # letters first: the statement is turned round
        above, below, relation = below, above, _FLIPPED[relation]
    left, right = trees.polynomial(above // whole), trees.ratio(below, whole)
    return Statement(left, relation, right, (above - below, whole))


def _lone_number(above: Element, below: Element) -> int:
    """The number in front of the only term on one side, if the other side is a number; else 1."""
    for term, number in ((above, below), (below, above)):
        if len(term) == 1 and number.is_constant() and not term.is_constant():
            return abs(int(term.leading_coefficient()))
    return 1


def _by_sign(ring: Ring, element: Element) -> tuple[Element, Element]:
    """The positive terms, and minus the negative ones."""
    above = ring.context.from_dict({e: c for e, c in element.to_dict().items() if int(c) > 0})
    return above, above - element


def _compared(trees: ElementTrees, left: Element, right: Element, relation: str) -> Statement:
    difference = trees.ring.reduce(left - right)
    return Statement(trees.shortest(left), relation, trees.shortest(right), (difference, trees.ring.one))

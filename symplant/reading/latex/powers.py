"""Powers in LaTeX: whole exponents, and halves as square roots; everything else is refused."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from symplant.algebra.expression import Node, Power, children, names_in, walk
from symplant.reading.exponents import MAX_EXPONENT, exponent_of
from symplant.reading.latex.engine import assembled
from symplant.reading.latex.groups import Item
from symplant.reading.latex.scope import Scope, refuse_zero
from symplant.reading.latex.tokens import Token, refusal

__all__ = ["powered", "read_exponent"]


def read_exponent(items: Sequence[Item], start: int, column: int, end: int, scope: Scope) -> Fraction:
    """The value of an exponent whose base stands from `start` to `column`, and which ends at `end`.

    Raises `InputError` if it is no whole number or half of one, or out of range.
    """
    only = items[0] if len(items) == 1 else None
    if isinstance(only, Token) and only.text.isdecimal() and len(only.text) == 1:
        return Fraction(int(only.text))
    base = scope.quote(start, column)
    node = scope.trial(items, end)
    if node is None:
        reason = f"the exponent {scope.quote(items[0].column, items[-1].end)} of {base} is not read"
        hint = "exponents are numbers; a name with a superscript is to be declared as such"
        if isinstance(only, Token) and only.text in ("+", "-"):
            hint = "put the whole exponent in braces"
        raise refusal(column, reason, hint)
    value, trouble, hint = exponent_of(node)
    if value is None:
        if names_in(node):
            hint = r"with letters it is written \exp(n \ln(x)), for positive x"
        raise refusal(column, f"{trouble}, at {base}", hint)
    return value


def powered(base: Node, value: Fraction, column: int) -> Node:
    """The base to an exponent that `read_exponent` gave; a half takes the square root first.

    Raises `InputError` if powers within powers go beyond the largest exponent, or for
    zero to the power zero or below.
    """
    if value <= 0:
        refuse_zero(base, column)
    together = _exponents_within(base) * abs(value)
    if together > MAX_EXPONENT:
        reason = f"powers within powers come to the exponent {together}"
        raise refusal(column, reason, f"at most {MAX_EXPONENT} is read")
    if value.denominator == 2:
        base = assembled(r"\sqrt{@}", [base], {}, column)
        if value.numerator == 1:
            return base
    return assembled("@^{@}", [base, value.numerator], {}, column)


def _exponents_within(node: Node) -> int:
    """The largest product of exponents that stand one above the other in a tree."""
    heights: list[int] = []
    for part in walk(node):
        first = len(heights) - len(children(part))
        highest = max(heights[first:], default=1)
        heights[first:] = [highest * max(abs(part.exponent), 1) if isinstance(part, Power) else highest]
    return heights[0]

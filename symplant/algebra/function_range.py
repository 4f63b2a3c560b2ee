"""What a function of letters can be, given the box: exp, sqrt, sin, cos and the like by monotone pieces.

Ends are rational; an end that had to be rounded is rounded outwards and is then never reached.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from fractions import Fraction
from math import isqrt
from typing import TypeAlias

from flint import arb

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.algebra.value_range import (
    ANY,
    ValueRange,
    range_inverse,
    range_negative,
    range_power,
    range_product,
    range_size,
    range_sum,
)

__all__ = ["tree_range"]

#: Binary digits that a rounded end keeps.
DIGITS = 30
#: Above this size an argument is not followed into a function that grows exponentially.
LARGEST_ARGUMENT = 200

Ball: TypeAlias = arb

End: TypeAlias = "tuple[Fraction | None, bool]"


def tree_range(node: Node, letters: Mapping[str, ValueRange]) -> ValueRange:
    """A range that holds every value of a tree where it is defined; letters not named may be anything.

    >>> from symplant.algebra.expression import integer
    >>> below = ValueRange(None, Fraction(0), False, False)
    >>> found = tree_range(Call("exp", Name("x")), {"x": below})
    >>> found.low, found.high, found.high_closed
    (Fraction(0, 1), Fraction(1, 1), False)
    """
    values: list[ValueRange] = []

    def take(count: int) -> Sequence[ValueRange]:
        taken = values[-count:]
        del values[-count:]
        return taken

    for part in walk(node):
        match part:
            case Number(value=value):
                values.append(ValueRange(value, value, True, True))
            case Name(name="pi") if "pi" not in letters:
                values.append(_rounded(arb.pi(), arb.pi()))
            case Name(name=name):
                values.append(letters.get(name, ANY))
            case Sum(terms=terms):
                total = ValueRange(Fraction(0), Fraction(0), True, True)
                for term in take(len(terms)):
                    total = range_sum(total, term)
                values.append(total)
            case Product(factors=factors):
                whole = ValueRange(Fraction(1), Fraction(1), True, True)
                for factor in take(len(factors)):
                    whole = range_product(whole, factor)
                values.append(whole)
            case Quotient():
                top, bottom = take(2)
                values.append(range_product(top, range_inverse(bottom)))
            case Power(exponent=exponent):
                values.append(range_power(values.pop(), exponent))
            case Call(function=function):
                values.append(_FUNCTIONS[function](values.pop()))
    return values.pop()


def _rounded(low: Ball | None, high: Ball | None) -> ValueRange:
    """Rational ends outside the balls; not reached, since the values there are irrational or rounded."""
    return ValueRange(None if low is None else _outward(low, -1), None if high is None else _outward(high, 1))


def _outward(ball: Ball, direction: int) -> Fraction:
    """A rational number strictly below (-1) or above (1) every value of the ball."""
    end = ball.upper() if direction > 0 else ball.lower()
    mantissa, exponent = (int(part) for part in end.man_exp())
    value = Fraction(mantissa) * Fraction(2) ** exponent
    scale = Fraction(2) ** (DIGITS - abs(mantissa).bit_length() - exponent)
    return (
        (value * scale).__floor__() / scale + 1 / scale
        if direction > 0
        else ((value * scale).__ceil__() - 1) / scale
    )


def _monotone(
    name: str, exact: Mapping[Fraction, Fraction], domain: ValueRange = ANY, image: ValueRange = ANY
) -> Callable[[ValueRange], ValueRange]:
    """The range of a rising function; `exact` are its rational values at rational places."""

    def applied(a: ValueRange) -> ValueRange:
        inside = a.meet(domain)
        if inside.is_empty:
            return ANY  # defined nowhere
        ends: list[End] = []
        for value, closed, direction in (
            (inside.low, inside.low_closed, -1),
            (inside.high, inside.high_closed, 1),
        ):
            if value is None or (name in ("exp", "sinh") and abs(value) > LARGEST_ARGUMENT):
                ends.append((None, False))
            elif value in exact:
                ends.append((exact[value], closed))
            else:
                ball = getattr(arb(value.numerator) / value.denominator, name)()
                ends.append((_outward(ball, direction), False) if ball.is_finite() else (None, False))
        return ValueRange(ends[0][0], ends[1][0], ends[0][1], ends[1][1]).meet(image)

    return applied


def _root(a: ValueRange) -> ValueRange:
    """The root: exact where the radicand at an end is a square."""
    plain = _monotone("sqrt", {Fraction(0): Fraction(0)}, NOT_NEGATIVE, NOT_NEGATIVE)
    exact = {e: r for e in (a.low, a.high) if e is not None and (r := _square_root(e)) is not None}
    return _monotone("sqrt", exact, NOT_NEGATIVE, NOT_NEGATIVE)(a) if exact else plain(a)


def _square_root(value: Fraction) -> Fraction | None:
    if value < 0:
        return None
    root = Fraction(isqrt(value.numerator), isqrt(value.denominator))
    return root if root * root == value else None


def _cosine(a: ValueRange) -> ValueRange:
    """By the values at the ends and the multiples of pi between them."""
    whole = ValueRange(Fraction(-1), Fraction(1), True, True)
    if a.low is None or a.high is None or a.high - a.low > 7 or abs(a.low) > 10**6:
        return whole
    turns = [(arb(x.numerator) / x.denominator / arb.pi()) for x in (a.low, a.high)]
    first, last = turns[0].lower().ceil().unique_fmpz(), turns[1].upper().floor().unique_fmpz()
    if first is None or last is None:
        return whole
    balls = [(arb(x.numerator) / x.denominator).cos() for x in (a.low, a.high)]
    found = ValueRange(min(_outward(b, -1) for b in balls), max(_outward(b, 1) for b in balls))
    inside = range(int(first), int(last) + 1)
    if any(k % 2 == 0 for k in inside):
        found = replace(found, high=Fraction(1), high_closed=True)
    if any(k % 2 for k in inside):
        found = replace(found, low=Fraction(-1), low_closed=True)
    return found.meet(whole)


def _sine(a: ValueRange) -> ValueRange:
    if a.low == a.high == 0:
        return a
    quarter = _rounded(arb.pi() / 2, arb.pi() / 2)
    found = _cosine(range_sum(a, range_negative(quarter)))
    half_turn = _rounded(arb.pi(), arb.pi()).low
    assert half_turn is not None
    # The rounding of pi/2 must not cost the sign of a sine that begins at zero.
    if a.low is not None and a.low >= 0 and a.high is not None and a.high <= half_turn:
        return found.meet(ValueRange(Fraction(0), None, a.low == 0 and a.low_closed, False))
    if a.high is not None and a.high <= 0 and a.low is not None and a.low >= -half_turn:
        return found.meet(ValueRange(None, Fraction(0), False, a.high == 0 and a.high_closed))
    return found


def _hyperbolic_cosine(a: ValueRange) -> ValueRange:
    above_one = ValueRange(Fraction(1), None, True, False)
    size = range_size(a)
    if any(end is not None and abs(end) > LARGEST_ARGUMENT for end in (size.low, size.high)):
        return above_one
    return _monotone("cosh", {Fraction(0): Fraction(1)}, NOT_NEGATIVE, above_one)(size)


def _tangent(a: ValueRange) -> ValueRange:
    return range_product(_sine(a), range_inverse(_cosine(a)))


NOT_NEGATIVE = ValueRange(Fraction(0), None, True, False)
_ZERO = {Fraction(0): Fraction(0)}
_QUARTER = Fraction(1570797, 10**6)  # above pi/2
_FUNCTIONS: Mapping[str, Callable[[ValueRange], ValueRange]] = {
    "exp": _monotone("exp", {Fraction(0): Fraction(1)}, ANY, ValueRange(Fraction(0))),
    "log": _monotone("log", {Fraction(1): Fraction(0)}, ValueRange(Fraction(0))),
    "sqrt": _root,
    "sin": _sine,
    "cos": _cosine,
    "tan": _tangent,
    "sinh": _monotone("sinh", _ZERO),
    "cosh": _hyperbolic_cosine,
    "tanh": _monotone("tanh", _ZERO, ANY, ValueRange(Fraction(-1), Fraction(1))),
    "atan": _monotone("atan", _ZERO, ANY, ValueRange(-_QUARTER, _QUARTER)),
}

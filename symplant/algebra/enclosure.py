"""Rigorous values of elements by ball arithmetic, for letters inside functions (sqrt, sin, ...)."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from fractions import Fraction
from typing import TYPE_CHECKING, TypeAlias

from flint import arb, ctx, fmpq

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.algebra.ring import Element, Ring

if TYPE_CHECKING:
    from flint import arb as _arb

__all__ = ["Ball", "ball_value", "certified_sign", "generator_balls", "working_precision"]

Ball: TypeAlias = "_arb"
#: Working precisions, in bits, that a sign is tried with before it is given up.
PRECISIONS = (64, 128, 256, 512, 1024)


@contextmanager
def working_precision(bits: int) -> Iterator[None]:
    """Set FLINT's working precision for a while."""
    before = ctx.prec
    ctx.prec = bits
    try:
        yield
    finally:
        ctx.prec = before


def ball(value: Fraction) -> Ball:
    """A rational number as a ball at the working precision."""
    return arb(fmpq(value.numerator, value.denominator))


def tree_ball(node: Node, letters: Mapping[str, Ball]) -> Ball:
    """The value of a tree; not finite where a function is not defined.

    >>> from symplant.algebra.expression import integer
    >>> bool(tree_ball(Call("sqrt", integer(4)), {}) == 2)
    True
    """
    values: list[Ball] = []
    for part in walk(node):
        match part:
            case Number(value=value):
                values.append(ball(value))
            case Name(name=name):
                values.append(arb.pi() if name == "pi" else letters[name])
            case Sum(terms=terms):
                values.append(sum(_take(values, len(terms)), arb(0)))
            case Product(factors=factors):
                product = arb(1)
                for factor in _take(values, len(factors)):
                    product = product * factor
                values.append(product)
            case Quotient():
                top, bottom = _take(values, 2)
                values.append(top / bottom)
            case Power(exponent=exponent):
                values.append(values.pop() ** exponent)
            case Call(function=function):
                values.append(getattr(values.pop(), function)())
    return values.pop()


def generator_balls(ring: Ring, point: Mapping[str, Fraction], used: set[str]) -> dict[str, Ball]:
    """Balls for the generators that are used, at a rational point of the letters.

    Errors: KeyError for a letter without value.
    """
    letters = {name: ball(value) for name, value in point.items()}
    result = {}
    for key in used:
        place = ring.position[key]
        result[key] = tree_ball(ring.meanings[place], letters)
    return result


def ball_value(ring: Ring, element: Element, balls: Mapping[str, Ball]) -> Ball:
    """The value of an element with the given balls for its generators."""
    places = [(ring.position[key], value) for key, value in balls.items()]
    total = arb(0)
    for exponents, coefficient in element.terms():
        term = arb(coefficient)
        for place, value in places:
            if exponents[place]:
                term = term * value ** int(exponents[place])
        total = total + term
    return total


def certified_sign(ring: Ring, element: Element, point: Mapping[str, Fraction]) -> int | None:
    """-1, 0 or 1: the sign at a rational point of the letters; None where it could not be certified.

    Exact where only letters occur; by ball arithmetic of growing precision where functions do.

    >>> from symplant.algebra.expression import Call
    >>> from symplant.algebra.ring import Generator
    >>> sine = Generator("_sin1", Call("sin", Name("a")))
    >>> ring = Ring("s", ("a",), functions=(sine,))
    >>> certified_sign(ring, ring.gen("a") - ring.gen("_sin1"), {"a": Fraction(1, 10)})
    1
    """
    element = ring.reduce(element)
    if not element:
        return 0
    # Only the sign matters, so the common denominator is left out.
    parts, _ = ring.parted(element, point)
    used = {ring.keys[place] for key in parts for place, _ in key}
    if not used:
        exact = parts.get((), 0)
        return (exact > 0) - (exact < 0)
    for bits in PRECISIONS:
        with working_precision(bits):
            balls = generator_balls(ring, point, used)
            value = arb(0)
            for key, number in parts.items():
                term = arb(number)
                for place, exponent in key:
                    term = term * balls[ring.keys[place]] ** exponent
                value = value + term
            if not value.is_finite():
                return None  # the function is not defined here
            if value > 0:
                return 1
            if value < 0:
                return -1
            if value.is_zero():  # exp(0) - 1: every ball in it was a number
                return 0
    return None


def _take(values: list[Ball], count: int) -> Sequence[Ball]:
    taken = values[-count:]
    del values[-count:]
    return taken

"""The sign of an element read off its terms: the cheapest rung of the sign ladder."""

from __future__ import annotations

from functools import reduce
from operator import mul

from symplant.algebra.box import Sign
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.ring import Element, Ring

__all__ = ["factored_sign", "pattern_sign"]


def pattern_sign(ring: Ring, element: Element) -> Sign:
    """The sign over the box, as far as the signs of the terms tell (REAL where they do not).

    >>> from symplant.algebra.box import Box, Interval
    >>> positive = Interval(declared=Sign.POSITIVE)
    >>> ring = Ring("s", ("k", "c"), Box({"k": positive, "c": Interval()}))
    >>> pattern_sign(ring, ring.gen("k") + ring.gen("c") ** 2).value
    'positive'
    """
    if not element:
        return Sign.ZERO
    total = Sign.ZERO
    # One term at a time: most long elements are settled by the first few.
    for number in range(len(element)):
        exponents, value = element.monomial(number), element.coefficient(number)
        sign = Sign.POSITIVE if int(value) > 0 else Sign.NEGATIVE
        for place, exponent in enumerate(exponents):
            if exponent:
                sign = sign * ring.signs[place] ** int(exponent)
        total = sign if total is Sign.ZERO else total + sign
        if total is Sign.REAL:
            # A single term of known nonzero sign is all that NONZERO can come from.
            return _lone_term(ring, element)
    return total


def factored_sign(ring: Ring, element: Element) -> Sign:
    """The sign from the signs of the irreducible factors, each by its own pattern.

    >>> from symplant.algebra.box import Box, Interval
    >>> ring = Ring("s", ("a",), Box({"a": Interval()}))
    >>> a = ring.gen("a")
    >>> factored_sign(ring, (a - 1) ** 2).value
    'nonnegative'
    """
    direct = pattern_sign(ring, element)
    if direct is not Sign.REAL or not element:
        return direct
    content, factors = irreducible(element)
    start = Sign.POSITIVE if int(content) > 0 else Sign.NEGATIVE
    return reduce(mul, (pattern_sign(ring, f) ** int(e) for f, e in factors), start)


def _lone_term(ring: Ring, element: Element) -> Sign:
    if len(element) > 1:
        return Sign.REAL
    ((exponents, value),) = element.terms()
    start = Sign.POSITIVE if int(value) > 0 else Sign.NEGATIVE
    return reduce(mul, (ring.signs[i] ** int(e) for i, e in enumerate(exponents) if e), start)

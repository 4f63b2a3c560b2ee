"""Square factors taken out of a radicand."""

from __future__ import annotations

from math import isqrt

from symplant.algebra.factors import factors as irreducible
from symplant.algebra.ring import Element, Ring

__all__ = ["square_part"]

#: Primes whose squares are looked for in an integer radicand.
_TRIAL = 1000


def square_part(ring: Ring, element: Element) -> tuple[Element, Element]:
    """(f, r) with element = f**2 * r and r free of square factors as far as they are found.

    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> square_part(ring, 12 * a**3 * (a + b) ** 2)
    (2*a^2 + 2*a*b, 3*a)
    """
    if not element:
        return ring.one, element
    content, factors = irreducible(element)
    outer, inner = _integer_square(abs(int(content)))
    front, rest = ring.constant(outer), ring.constant(inner if int(content) > 0 else -inner)
    for factor, exponent in factors:
        front = front * factor ** (int(exponent) // 2)
        if int(exponent) % 2:
            rest = rest * factor
    return front, rest


def _integer_square(value: int) -> tuple[int, int]:
    root = isqrt(value)
    if root * root == value:
        return root, 1
    outer = 1
    for p in range(2, _TRIAL):
        while value % (p * p) == 0:
            value //= p * p
            outer *= p
    root = isqrt(value)
    return (outer * root, 1) if root * root == value else (outer, value)

"""The other ways to write an element whose functions obey sin**2 + cos**2 = 1 or its like."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import product

from symplant.algebra.ring import Element, Ring

__all__ = ["swapped"]

#: Pairs of functions that are tried, each both ways.
MOST_PAIRS = 2


def swapped(ring: Ring, element: Element) -> Iterator[Element]:
    """Elements of the same value in which even powers of some cosines (cosh) are written by the sines (sinh).

    They are not in normal form: `Ring.reduce` gives the element back.

    >>> from symplant.algebra.expression import Call, Name
    >>> from symplant.algebra.functions import build_ring
    >>> ring = build_ring("s", ("a",), {"": Call("sin", Name("a"))}).ring
    >>> [str(variant) for variant in swapped(ring, 1 - ring.gen("_cos1") ** 2)]
    ['_sin1^2']
    """
    pairs = [function for function in ring.functions if function.kind in ("sin", "sinh")][:MOST_PAIRS]
    for chosen in product((False, True), repeat=len(pairs)):
        variant = element
        for function, wanted in zip(pairs, chosen, strict=True):
            if wanted and function.square is not None:
                (other,), terms = function.square
                square = (ring.gen(function.key) ** 2 - terms[(0,)]) * terms[(2,)]  # terms[(2,)] is 1 or -1
                variant = _by_square(ring, variant, other, square)
        if any(chosen) and variant != element:
            yield variant


def _by_square(ring: Ring, element: Element, key: str, square: Element) -> Element:
    """The element with the square of a generator replaced."""
    total = ring.zero
    for exponent, coefficient in enumerate(ring.coefficients(element, key)):
        odd = ring.gen(key) if exponent % 2 else ring.one
        total = total + coefficient * square ** (exponent // 2) * odd
    return total

"""The part of an element that its sign really depends on: factors of known sign dropped."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from symplant.algebra.box import Sign
from symplant.algebra.decide_bounds import has_bounds, positive_by_bounds
from symplant.algebra.decide_search import letters_in
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.points import points
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import pattern_sign

__all__ = ["Radical", "radical"]

#: Above this number of terms only letters and integers are split off.
LARGEST_FACTORED = 20_000
#: A factor of no more terms is also judged by the ranges, cut into a few parts.
LARGEST_BOUNDED, PARTS = 12, 7


@dataclass(frozen=True)
class Radical:
    """`element` is positive exactly where the element asked about is (within the box).

    It is the product of the `factors`, with exponent 1 or 2, times `sign` (1 or -1); integers and
    the factors that are known to be positive, negative or nonzero (to an even power) are `dropped`.
    """

    element: Element
    factors: tuple[tuple[Element, int], ...]
    sign: int
    dropped: tuple[Element, ...]
    by_ranges: bool = False  # whether the ranges of the letters, not their signs alone, were needed

    @property
    def is_settled(self) -> bool:
        """Whether the dropped factors alone give the sign."""
        return not self.factors


def radical(ring: Ring, element: Element, nonzero: Sequence[Element] = ()) -> Radical:
    """Split off what is known; `nonzero` lists irreducible elements that are assumed not to vanish.

    The element must not be zero (ValueError).

    >>> from symplant.algebra.box import Box, Interval
    >>> ring = Ring("s", ("m", "K"), Box({"m": Interval(declared=Sign.POSITIVE)}))
    >>> m, K = ring.gen("m"), ring.gen("K")
    >>> radical(ring, 4 * m * K**3 - 30 * m * K**2).element
    2*K^3 - 15*K^2
    """
    if not element:
        raise ValueError("zero has no radical")
    content, found = _factored(ring, element)
    sign = 1 if content > 0 else -1
    rest: list[tuple[Element, int]] = []
    dropped: list[Element] = []
    by_ranges = False
    for factor, exponent in found:
        known = pattern_sign(ring, factor)
        if known is Sign.REAL:
            known = _sign_by_ranges(ring, factor)
            by_ranges |= known.is_nonzero
        if known is Sign.POSITIVE or (exponent % 2 == 0 and (known.is_nonzero or _listed(factor, nonzero))):
            dropped.append(factor)
        elif known is Sign.NEGATIVE:
            dropped.append(factor)
            sign = -sign if exponent % 2 else sign
        else:
            rest.append((factor, 2 - exponent % 2))
    total = ring.constant(sign)
    for factor, exponent in rest:
        total = total * factor**exponent
    return Radical(total, tuple(rest), sign, tuple(dropped), by_ranges)


def _factored(ring: Ring, element: Element) -> tuple[int, list[tuple[Element, int]]]:
    if len(element) <= LARGEST_FACTORED:
        content, found = irreducible(element)
        return int(content), [(f, int(e)) for f, e in found]
    size: int = abs(int(element.primitive()[0]))
    monomial = element.term_content() // ring.constant(size)
    letters = [
        (ring.gen(ring.keys[place]), int(exponent))
        for place, exponent in enumerate(monomial.degrees())
        if exponent
    ]
    return size, [*letters, (element // (monomial * size), 1)]


def _sign_by_ranges(ring: Ring, factor: Element) -> Sign:
    if len(factor) > LARGEST_BOUNDED or not any(has_bounds(ring, key) for key in ring.used([factor])):
        return Sign.REAL
    # One value tells which sign is worth a proof.
    letters = letters_in(ring, [factor])
    direction = certified_sign(ring, factor, next(points(ring.box, letters, {}, 1)))
    if not direction or not positive_by_bounds(ring, direction * factor, PARTS):
        return Sign.REAL
    return Sign.POSITIVE if direction > 0 else Sign.NEGATIVE


def _listed(factor: Element, nonzero: Sequence[Element]) -> bool:
    return any(factor in (known, -known) for known in nonzero)

"""Polynomials in the variable with coefficients in the letters: degree, content, gcd, factors."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from random import Random

from symplant.algebra.factors import factors as irreducible
from symplant.algebra.modular_point import random_point
from symplant.algebra.ring import Element, Ring

__all__ = ["Polynomial"]

#: Points tried until one keeps the degrees; nearly every point does.
_POINTS = 8


@dataclass(frozen=True)
class Polynomial:
    """An element of the ring in normal form, seen as a polynomial in the variable.

    >>> ring = Ring("s", ("m", "k"))
    >>> p = Polynomial.of(ring, ring.gen("m") * ring.gen("s") ** 2 + ring.gen("k"))
    >>> p.degree, p.leading, p.coefficients
    (2, m, (k, 0, m))
    """

    ring: Ring
    element: Element

    @classmethod
    def of(cls, ring: Ring, element: Element) -> Polynomial:
        """Bring an element to normal form and wrap it."""
        return cls(ring, ring.reduce(element))

    @classmethod
    def constant(cls, ring: Ring, value: int) -> Polynomial:
        """A constant polynomial."""
        return cls(ring, ring.constant(value))

    @cached_property
    def coefficients(self) -> tuple[Element, ...]:
        """Ascending coefficients, free of the variable; empty for the zero polynomial."""
        return tuple(self.ring.coefficients(self.element))

    @property
    def degree(self) -> int:
        """Degree in the variable for generic letters; -1 for the zero polynomial."""
        return len(self.coefficients) - 1

    @property
    def leading(self) -> Element:
        """The coefficient of the highest power (zero for the zero polynomial)."""
        return self.coefficients[-1] if self.coefficients else self.ring.zero

    @property
    def is_zero(self) -> bool:
        """Whether the polynomial vanishes identically."""
        return not self.element

    def content(self) -> Element:
        """A greatest common divisor of the coefficients, first coefficient positive; 0 for zero."""
        return content(self.ring, self.coefficients)

    def primitive(self) -> Polynomial:
        """The polynomial without its content."""
        if self.is_zero:
            return self
        return Polynomial(self.ring, self.element // self.content())

    def gcd(self, other: Polynomial) -> Polynomial:
        """Greatest common divisor as polynomials in the variable (factors free of it left out).

        Generic in the letters: the result is the common factor for almost all values; where the
        degree of the gcd jumps, a resultant vanishes, and that is the business of the case book.

        >>> ring = Ring("s", ("a", "b"))
        >>> s, a, b = (ring.gen(x) for x in "sab")
        >>> Polynomial.of(ring, a * (s + a) * s).gcd(Polynomial.of(ring, b * (s + a))).element
        s + a
        """
        if self.is_zero:
            return other.primitive()._positive()
        if other.is_zero:
            return self.primitive()._positive()
        if self.ring.has_relations:
            return _quotient_gcd(self.primitive(), other.primitive())
        return Polynomial(self.ring, self.element.gcd(other.element)).primitive()._positive()

    def factors(self) -> tuple[int, list[tuple[Element, int]]]:
        """Integer content and irreducible factors with their exponents.

        In a ring with relations the factors multiply to the polynomial, but may factor further.
        """
        if self.is_zero:
            return 0, []
        content_, found = irreducible(self.element)
        return int(content_), [(factor, int(exponent)) for factor, exponent in found]

    def _positive(self) -> Polynomial:
        if self.ring.is_led_negative(self.element):
            return Polynomial(self.ring, -self.element)
        return self


def content(ring: Ring, elements: Sequence[Element]) -> Element:
    """A greatest common divisor of elements in the polynomial ring; 0 for none."""
    result = ring.zero
    for element in elements:
        result = result.gcd(element)
        if result.is_one():
            break
    return result


def _quotient_gcd(first: Polynomial, second: Polynomial) -> Polynomial:
    """Greatest common divisor of primitive polynomials in a ring with relations (a domain).

    The coefficients of a remainder sequence grow beyond all bounds there.  Nearly always it is not
    needed: the divisor that the polynomial ring knows is one, and modulo a prime there is no larger.
    """
    ring = first.ring
    bound = _degree_bound(first, second)
    if bound == 0:
        return Polynomial.constant(ring, 1)
    common = Polynomial(ring, first.element.gcd(second.element)).primitive()
    if common.degree < bound:
        parts = (Polynomial(ring, whole.element // common.element) for whole in (first, second))
        common = Polynomial.of(ring, common.element * _euclid(*parts).element).primitive()
    return _rationalised(common)._positive()


def _degree_bound(first: Polynomial, second: Polynomial) -> int:
    """A degree that the greatest common divisor cannot exceed: its degree at a point modulo a prime.

    A principal subresultant coefficient that is not zero at the point is not zero in the ring, and the
    first one that is not zero tells the degree (J. von zur Gathen, J. Gerhard, Modern Computer Algebra,
    2nd ed. 2003, ch. 6; from memory).
    """
    least = min(first.degree, second.degree)
    if least == 0:
        return 0
    # A fixed seed: the same input takes the same steps in every run.
    random = Random(0)
    for _ in range(_POINTS):
        try:
            point = random_point(first.ring, random)
        except ArithmeticError:
            break
        one, other = point.image(first.element), point.image(second.element)
        if one.degree() == first.degree and other.degree() == second.degree:
            return int(one.gcd(other).degree())
    return least


def _euclid(first: Polynomial, second: Polynomial) -> Polynomial:
    """Primitive remainder sequence in the quotient ring (a domain), every step in normal form."""
    ring = first.ring
    high, low = first.primitive(), second.primitive()
    if high.degree < low.degree:
        high, low = low, high
    while not low.is_zero:
        if low.degree == 0:
            return Polynomial.constant(ring, 1)
        high, low = low, _pseudo_remainder(high, low).primitive()
    return high


def _pseudo_remainder(high: Polynomial, low: Polynomial) -> Polynomial:
    ring, s = high.ring, high.ring.gen(high.ring.variable)
    rest = high
    while rest.degree >= low.degree:
        shift = s ** (rest.degree - low.degree)
        rest = Polynomial.of(ring, rest.element * low.leading - low.element * rest.leading * shift)
    return rest


def _rationalised(polynomial: Polynomial) -> Polynomial:
    """Multiply by conjugates until no generator with a relation is left in the first coefficient."""
    ring = polynomial.ring
    for function in reversed(ring.functions):
        if function.square is None:
            continue
        parts = ring.coefficients(polynomial.leading, function.key)
        if len(parts) == 2:
            conjugate = parts[0] - parts[1] * ring.gen(function.key)
            polynomial = Polynomial.of(ring, polynomial.element * conjugate).primitive()
    return polynomial

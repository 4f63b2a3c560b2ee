"""Quotients of ring elements, in lowest terms as far as the polynomial ring can tell."""

from __future__ import annotations

from dataclasses import dataclass

from symplant.algebra.ring import Element, Ring

__all__ = ["Ratio"]


@dataclass(frozen=True)
class Ratio:
    """numerator / denominator, both in `ring`; the denominator's normal form is not zero.

    Invariant: gcd(numerator, denominator) = 1 in the polynomial ring, and the first coefficient of
    the denominator is positive.

    >>> ring = Ring("s", ("k", "m"))
    >>> k, m = (Ratio.of(ring, ring.gen(x)) for x in "km")
    >>> (k / m + k / m).numerator, (k / m + k / m).denominator
    (2*k, m)
    """

    ring: Ring
    numerator: Element
    denominator: Element

    @classmethod
    def of(cls, ring: Ring, numerator: Element, denominator: Element | None = None) -> Ratio:
        """Reduce to normal form and lowest terms; ZeroDivisionError if the denominator is zero."""
        top = ring.reduce(numerator)
        if denominator is None:
            return cls(ring, top, ring.one)
        bottom = ring.reduce(denominator)
        if not bottom:
            raise ZeroDivisionError("division by an expression that is identically zero")
        if not top:
            return cls(ring, ring.zero, ring.one)
        common = top.gcd(bottom)
        if not common.is_one():
            top, bottom = top // common, bottom // common
        if int(bottom.leading_coefficient()) < 0:
            top, bottom = -top, -bottom
        return cls(ring, top, bottom)

    def __add__(self, other: Ratio) -> Ratio:
        return Ratio.of(
            self.ring,
            self.numerator * other.denominator + other.numerator * self.denominator,
            self.denominator * other.denominator,
        )

    def __mul__(self, other: Ratio) -> Ratio:
        return Ratio.of(self.ring, self.numerator * other.numerator, self.denominator * other.denominator)

    def __truediv__(self, other: Ratio) -> Ratio:
        return Ratio.of(self.ring, self.numerator * other.denominator, self.denominator * other.numerator)

    def __neg__(self) -> Ratio:
        return Ratio(self.ring, -self.numerator, self.denominator)

    def __pow__(self, exponent: int) -> Ratio:
        if exponent >= 0:
            return Ratio.of(self.ring, self.numerator**exponent, self.denominator**exponent)
        return Ratio.of(self.ring, self.denominator**-exponent, self.numerator**-exponent)

    def __bool__(self) -> bool:
        return bool(self.numerator)

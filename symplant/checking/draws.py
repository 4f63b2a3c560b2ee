"""Reproducible draws: numbers that look random and are fixed by a text, the same in every run and version."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from hashlib import sha256
from typing import TypeVar

from symplant.algebra.box import Interval

__all__ = ["Draws", "simplest_between"]

T = TypeVar("T")

_DENOMINATORS = (1, 1, 2, 3, 5, 7)
_LARGEST = 23
#: A bounded range is cut into this many pieces, one of which is drawn.
_PIECES = 24


class Draws:
    """A stream of numbers that is determined by a text.

    >>> Draws("a plant").below(1000) == Draws("a plant").below(1000)
    True
    """

    def __init__(self, text: str) -> None:
        self._key = sha256(text.encode("utf-8", "surrogatepass")).digest()
        self._count = 0

    def below(self, limit: int) -> int:
        """A whole number from 0 to limit - 1."""
        self._count += 1
        digest = sha256(self._key + self._count.to_bytes(8, "big")).digest()
        return int.from_bytes(digest, "big") % limit

    def one_of(self, choices: Sequence[T]) -> T:
        """One of several things."""
        return choices[self.below(len(choices))]

    def size(self) -> Fraction:
        """A small positive fraction."""
        return Fraction(1 + self.below(_LARGEST), self.one_of(_DENOMINATORS))

    def value(self, interval: Interval) -> Fraction:
        """A short fraction in an interval, not zero unless nothing else is left.

        >>> Draws("x").value(Interval(Fraction(2), Fraction(2)))
        Fraction(2, 1)
        """
        sign = interval.sign
        lower, upper = interval.lower, interval.upper
        if sign.is_nonnegative:
            lower = max(lower or Fraction(0), Fraction(0))
        if sign.is_nonpositive:
            upper = min(upper or Fraction(0), Fraction(0))
        if lower is not None and upper is not None:
            return self._within(lower, upper)
        if lower is not None:
            return lower + self.size() or lower + Fraction(1, 2)
        if upper is not None:
            return upper - self.size() or upper - Fraction(1, 2)
        return self.size() * self.one_of((1, -1))

    def _within(self, lower: Fraction, upper: Fraction) -> Fraction:
        width = (upper - lower) / _PIECES
        piece = self.below(_PIECES)
        value = simplest_between(lower + piece * width, lower + (piece + 1) * width)
        return value or lower + width * Fraction(1, 2) or upper - width


def simplest_between(lower: Fraction, upper: Fraction) -> Fraction:
    """The fraction of smallest denominator (then smallest size) in a closed interval.

    The descent by continued fractions (M. A. Stern 1858, A. Brocot 1861; from memory).

    >>> simplest_between(Fraction(31, 10), Fraction(32, 10))
    Fraction(16, 5)
    """
    if lower <= 0 <= upper:
        return Fraction(0)
    if upper < 0:
        return -simplest_between(-upper, -lower)
    whole = -(-lower.numerator // lower.denominator)
    if whole <= upper:
        return Fraction(whole)
    floor = whole - 1
    return floor + 1 / simplest_between(1 / (upper - floor), 1 / (lower - floor))

"""Intervals of real values with open or closed ends, and arithmetic with them."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import product
from typing import TypeAlias

from symplant.algebra.box import Interval, Sign

__all__ = [
    "ANY",
    "ValueRange",
    "interval_range",
    "range_inverse",
    "range_negative",
    "range_power",
    "range_product",
    "range_size",
    "range_sum",
]

#: An end of a range: its value (None: infinite) and whether it belongs to the range.
End: TypeAlias = "tuple[Fraction | None, bool]"


@dataclass(frozen=True)
class ValueRange:
    """An interval; an end that is None is infinite, a closed end belongs to it."""

    low: Fraction | None = None
    high: Fraction | None = None
    low_closed: bool = False
    high_closed: bool = False

    @property
    def sign(self) -> Sign:
        """What the range tells of the sign."""
        nonzero = self.low is not None and (self.low > 0 or (self.low == 0 and not self.low_closed))
        if self.low is not None and self.low >= 0:
            if self.high == 0:
                return Sign.ZERO
            return Sign.POSITIVE if nonzero else Sign.NONNEGATIVE
        if self.high is not None and self.high <= 0:
            return Sign.NEGATIVE if self.high < 0 or not self.high_closed else Sign.NONPOSITIVE
        return Sign.REAL

    @property
    def is_empty(self) -> bool:
        """Whether no value lies in it."""
        if self.low is None or self.high is None:
            return False
        return self.low > self.high or (self.low == self.high and not (self.low_closed and self.high_closed))

    def halves(self) -> tuple[ValueRange, ValueRange]:
        """The range cut in two at a simple place."""
        if self.low is not None and self.high is not None:
            middle = (self.low + self.high) / 2
        elif self.low is not None:
            middle = 2 * self.low if self.low > 0 else self.low + 1
        elif self.high is not None:
            middle = 2 * self.high if self.high < 0 else self.high - 1
        else:
            middle = Fraction(0)
        return (
            replace(self, high=middle, high_closed=True),
            replace(self, low=middle, low_closed=True),
        )

    def meet(self, other: ValueRange) -> ValueRange:
        """The values in both."""
        low = max(self._low(), other._low(), key=_low_rank)
        high = min(self._high(), other._high(), key=_high_rank)
        return ValueRange(low[0], high[0], low[1], high[1])

    def _low(self) -> End:
        return self.low, self.low_closed

    def _high(self) -> End:
        return self.high, self.high_closed


ANY = ValueRange()


def _low_rank(end: End) -> tuple[bool, Fraction, bool]:
    return end[0] is not None, end[0] or Fraction(0), not end[1]


def _high_rank(end: End) -> tuple[bool, Fraction, bool]:
    return end[0] is None, end[0] or Fraction(0), end[1]


def interval_range(interval: Interval) -> ValueRange:
    """The values of a letter, its declared sign included."""
    low, high, sign = interval.lower, interval.upper, interval.sign
    if sign.is_nonnegative and (low is None or low < 0):
        low = Fraction(0)
    if sign.is_nonpositive and (high is None or high > 0):
        high = Fraction(0)
    strict = sign in (Sign.POSITIVE, Sign.NEGATIVE)
    return ValueRange(
        low,
        high,
        low is not None and not (strict and low == 0),
        high is not None and not (strict and high == 0),
    )


def range_sum(a: ValueRange, b: ValueRange) -> ValueRange:
    """The sums of values of two ranges."""
    low = None if a.low is None or b.low is None else a.low + b.low
    high = None if a.high is None or b.high is None else a.high + b.high
    return ValueRange(low, high, a.low_closed and b.low_closed, a.high_closed and b.high_closed)


def range_product(a: ValueRange, b: ValueRange) -> ValueRange:
    """By the products of the ends; a zero end times an infinite one is zero."""
    found: list[tuple[float | Fraction, bool]] = []
    for (x, x_closed), (y, y_closed) in product(_ends(a), _ends(b)):
        if x == 0 or y == 0:
            found.append((Fraction(0), (x_closed and x == 0) or (y_closed and y == 0)))
        elif isinstance(x, float) or isinstance(y, float):
            found.append((float("inf") if (x > 0) == (y > 0) else float("-inf"), False))
        else:
            found.append((x * y, x_closed and y_closed))
    low = min(found, key=lambda end: (end[0], not end[1]))
    high = max(found, key=lambda end: (end[0], end[1]))
    return ValueRange(
        None if isinstance(low[0], float) else low[0],
        None if isinstance(high[0], float) else high[0],
        low[1],
        high[1],
    )


def _ends(a: ValueRange) -> tuple[tuple[float | Fraction, bool], ...]:
    low = float("-inf") if a.low is None else a.low
    high = float("inf") if a.high is None else a.high
    return (low, a.low_closed), (high, a.high_closed)


def range_inverse(a: ValueRange) -> ValueRange:
    """The inverses of the nonzero values."""
    if a.sign in (Sign.POSITIVE, Sign.NONNEGATIVE):
        low = Fraction(0) if a.high is None else 1 / a.high if a.high else None
        return ValueRange(low, 1 / a.low if a.low else None, a.high_closed, a.low_closed)
    if a.sign in (Sign.NEGATIVE, Sign.NONPOSITIVE):
        return range_negative(range_inverse(range_negative(a)))
    return ANY


def range_negative(a: ValueRange) -> ValueRange:
    """The values with the opposite sign."""
    return ValueRange(
        None if a.high is None else -a.high, None if a.low is None else -a.low, a.high_closed, a.low_closed
    )


def range_power(a: ValueRange, exponent: int) -> ValueRange:
    """The powers of the values; a negative exponent leaves zero out."""
    if exponent < 0:
        return range_inverse(range_power(a, -exponent))
    if exponent % 2 == 0:
        a = range_size(a)

    def at(end: Fraction | None) -> Fraction | None:
        return None if end is None else end**exponent

    return ValueRange(at(a.low), at(a.high), a.low_closed, a.high_closed)


def range_size(a: ValueRange) -> ValueRange:
    """The range of the absolute value."""
    if a.sign.is_nonnegative:
        return a
    if a.sign.is_nonpositive:
        return range_negative(a)
    if a.low is None or a.high is None:
        return ValueRange(Fraction(0), None, True, False)
    size, closed = max((-a.low, a.low_closed), (a.high, a.high_closed))
    return ValueRange(Fraction(0), size, True, closed)

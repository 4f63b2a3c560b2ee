"""The parameter box: the set of values that the signs and ranges of letters allow."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from enum import Enum
from fractions import Fraction

__all__ = ["Box", "Interval", "Sign"]


class Sign(Enum):
    """What is known of the sign of a real quantity; the values are the words of the plant file."""

    POSITIVE = "positive"
    NONNEGATIVE = "nonnegative"
    NEGATIVE = "negative"
    NONPOSITIVE = "nonpositive"
    NONZERO = "nonzero"
    ZERO = "zero"
    REAL = "real"

    @property
    def is_nonzero(self) -> bool:
        """Whether the sign rules the value zero out.

        >>> Sign.NEGATIVE.is_nonzero, Sign.NONNEGATIVE.is_nonzero
        (True, False)
        """
        return self in (Sign.POSITIVE, Sign.NEGATIVE, Sign.NONZERO)

    @property
    def is_nonnegative(self) -> bool:
        """Whether negative values are ruled out."""
        return self in (Sign.POSITIVE, Sign.NONNEGATIVE, Sign.ZERO)

    @property
    def is_nonpositive(self) -> bool:
        """Whether positive values are ruled out."""
        return self in (Sign.NEGATIVE, Sign.NONPOSITIVE, Sign.ZERO)

    def __neg__(self) -> Sign:
        return _OPPOSITE.get(self, self)

    def __mul__(self, other: Sign) -> Sign:
        """The sign of a product.

        >>> Sign.NEGATIVE * Sign.NONNEGATIVE
        <Sign.NONPOSITIVE: 'nonpositive'>
        """
        if Sign.ZERO in (self, other):
            return Sign.ZERO
        if Sign.REAL in (self, other):
            return Sign.REAL
        if Sign.NONZERO in (self, other):
            return Sign.NONZERO if self.is_nonzero and other.is_nonzero else Sign.REAL
        same = self.is_nonnegative == other.is_nonnegative
        strict = self.is_nonzero and other.is_nonzero
        return _COMBINED[same, strict]

    def __add__(self, other: Sign) -> Sign:
        """The sign of a sum, as far as the signs of its terms tell.

        >>> Sign.POSITIVE + Sign.NONNEGATIVE
        <Sign.POSITIVE: 'positive'>
        """
        if self is Sign.ZERO:
            return other
        if other is Sign.ZERO:
            return self
        strict = Sign.POSITIVE in (self, other) or Sign.NEGATIVE in (self, other)
        if self.is_nonnegative and other.is_nonnegative:
            return _COMBINED[True, strict]
        if self.is_nonpositive and other.is_nonpositive:
            return _COMBINED[False, strict]
        return Sign.REAL

    def __pow__(self, exponent: int) -> Sign:
        """The sign of a power with a nonnegative integer exponent."""
        if exponent == 0:
            return Sign.POSITIVE
        if exponent % 2:
            return self
        if self is Sign.ZERO:
            return Sign.ZERO
        return Sign.POSITIVE if self.is_nonzero else Sign.NONNEGATIVE


_OPPOSITE = {
    Sign.POSITIVE: Sign.NEGATIVE,
    Sign.NEGATIVE: Sign.POSITIVE,
    Sign.NONNEGATIVE: Sign.NONPOSITIVE,
    Sign.NONPOSITIVE: Sign.NONNEGATIVE,
}
_COMBINED = {
    (True, True): Sign.POSITIVE,
    (True, False): Sign.NONNEGATIVE,
    (False, True): Sign.NEGATIVE,
    (False, False): Sign.NONPOSITIVE,
}


@dataclass(frozen=True, slots=True)
class Interval:
    """Values that one letter may take: closed bounds (None: unbounded) and a sign.

    >>> Interval(Fraction(1), Fraction(4)).sign
    <Sign.POSITIVE: 'positive'>
    """

    lower: Fraction | None = None
    upper: Fraction | None = None
    declared: Sign = Sign.REAL

    @property
    def sign(self) -> Sign:
        """The sign implied by the bounds and the declared sign together."""
        nonnegative = self.declared.is_nonnegative or (self.lower is not None and self.lower >= 0)
        nonpositive = self.declared.is_nonpositive or (self.upper is not None and self.upper <= 0)
        nonzero = (
            self.declared.is_nonzero
            or (self.lower is not None and self.lower > 0)
            or (self.upper is not None and self.upper < 0)
        )
        if nonnegative and nonpositive:
            return Sign.ZERO
        if nonnegative:
            return Sign.POSITIVE if nonzero else Sign.NONNEGATIVE
        if nonpositive:
            return Sign.NEGATIVE if nonzero else Sign.NONPOSITIVE
        return Sign.NONZERO if nonzero else Sign.REAL

    def contains(self, value: Fraction) -> bool:
        """Whether a value obeys the bounds and the declared sign."""
        if self.lower is not None and value < self.lower:
            return False
        if self.upper is not None and value > self.upper:
            return False
        match self.declared:
            case Sign.REAL:
                return True
            case Sign.NONZERO:
                return value != 0
            case Sign.ZERO:
                return value == 0
            case Sign.POSITIVE:
                return value > 0
            case Sign.NEGATIVE:
                return value < 0
            case Sign.NONNEGATIVE:
                return value >= 0
            case Sign.NONPOSITIVE:
                return value <= 0


@dataclass(frozen=True)
class Box:
    """The parameter box: an `Interval` for every letter, in the declared order.

    >>> box = Box({"m": Interval(declared=Sign.POSITIVE)})
    >>> box.sign("m").value, box.contains({"m": Fraction(0)})
    ('positive', False)
    """

    intervals: Mapping[str, Interval] = field(default_factory=dict)

    def __iter__(self) -> Iterator[str]:
        return iter(self.intervals)

    def sign(self, letter: str) -> Sign:
        """What is known of the sign of a letter (a letter not in the box is real)."""
        interval = self.intervals.get(letter)
        return Sign.REAL if interval is None else interval.sign

    def contains(self, point: Mapping[str, Fraction]) -> bool:
        """Whether a point (a value for each letter of the box) lies in the box."""
        return all(interval.contains(point[letter]) for letter, interval in self.intervals.items())

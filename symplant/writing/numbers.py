"""How an exact rational number is written: as an integer, a decimal, a power of ten or a fraction."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

__all__ = ["Digits", "digits_of", "grouped", "number_text"]

#: A decimal with more significant digits than these is written as a fraction.
MOST_DIGITS = 12
#: An integer with more significant digits than these is written out, not with a power of ten.
MOST_FIGURES = 6
#: Integers with more digits than these are written with a power of ten, or grouped by thousands.
LONGEST_PLAIN = 6
#: Decimals with more zeros than these after the point are written with a power of ten.
MOST_ZEROS = 3


@dataclass(frozen=True, slots=True)
class Digits:
    """A nonnegative number as digits: `mantissa` times ten to `power`, or `mantissa` over `below`.

    `mantissa` is "" for a bare power of ten.  `below` is "" for all but fractions.
    """

    mantissa: str
    power: int = 0
    below: str = ""


def digits_of(value: Fraction) -> Digits:
    """The digits in which a nonnegative number is written; they stand for exactly this number.

    >>> digits_of(Fraction(15, 2)), digits_of(Fraction(1, 3))
    (Digits(mantissa='7.5', power=0, below=''), Digits(mantissa='1', power=0, below='3'))
    >>> digits_of(Fraction(210_000_000_000)), digits_of(Fraction(1, 10**6))
    (Digits(mantissa='2.1', power=11, below=''), Digits(mantissa='', power=-6, below=''))
    """
    if value.denominator == 1:
        text = str(value.numerator)
        figures = text.rstrip("0")
        if len(text) <= LONGEST_PLAIN or len(figures) > MOST_FIGURES:
            return Digits(text)
        return Digits(_pointed(figures, 1), len(text) - 1)
    places = _decimal_places(value.denominator)
    if places is not None:
        figures = str(value.numerator * 10**places // value.denominator)
        if len(figures) <= MOST_DIGITS:
            zeros = places - len(figures)
            if zeros <= MOST_ZEROS:
                return Digits(_pointed(figures, len(figures) - places))
            return Digits(_pointed(figures, 1), -zeros - 1)
    return Digits(str(value.numerator), 0, str(value.denominator))


def grouped(digits: str, gap: str) -> str:
    r"""Digits of a long integer in groups of three; short ones and decimals stay as they are.

    >>> grouped("1234567", r"\,"), grouped("12345", r"\,")
    ('1\\,234\\,567', '12345')
    """
    if len(digits) <= LONGEST_PLAIN or "." in digits:
        return digits
    first = len(digits) % 3
    groups = [digits[:first]] if first else []
    return gap.join(groups + [digits[i : i + 3] for i in range(first, len(digits), 3)])


def _decimal_places(denominator: int) -> int | None:
    """Digits after the point of a decimal with this denominator in lowest terms; None if it never ends."""
    twos = (denominator & -denominator).bit_length() - 1
    rest, fives = denominator >> twos, 0
    while rest % 5 == 0:
        rest //= 5
        fives += 1
    return max(twos, fives) if rest == 1 else None


def _pointed(figures: str, before: int) -> str:
    """Figures with a decimal point after the first `before` of them; a lone 1 at power zero is dropped."""
    if before <= 0:
        return "0." + "0" * -before + figures
    if before == 1 and figures == "1":
        return ""
    return figures if len(figures) <= before else f"{figures[:before]}.{figures[before:]}"


def number_text(value: Fraction) -> str:
    """An exact number as plain text.

    >>> number_text(Fraction(3, 10**12)), number_text(Fraction(-1, 3)), number_text(Fraction(17, 20))
    ('3e-12', '-1/3', '0.85')
    """
    digits = digits_of(abs(value))
    sign = "-" if value < 0 else ""
    if digits.below:
        return f"{sign}{digits.mantissa}/{digits.below}"
    if digits.power:
        return f"{sign}{digits.mantissa or '1'}e{digits.power}"
    return sign + digits.mantissa

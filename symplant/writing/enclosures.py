"""Numbers that are known between two bounds: as data, and as digits that are certain."""

from __future__ import annotations

from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Context, Decimal
from fractions import Fraction
from typing import TYPE_CHECKING, Any, TypeAlias

from symplant.writing.answer import decimal_text
from symplant.writing.numbers import number_text

if TYPE_CHECKING:
    from flint import acb, arb

__all__ = ["Bounds", "ball_bounds", "complex_answer", "complex_text", "enclosure_answer", "enclosure_text"]

#: Lower and upper bound, equal where the number is exact.
Bounds: TypeAlias = "tuple[Fraction, Fraction]"
#: Significant digits of the bounds in data, and of numbers that people read.
DIGITS, SHOWN = 20, 6
#: An exact number whose text is longer than this is given by its first digits.
LONGEST = 24


def enclosure_answer(bounds: Bounds) -> str | dict[str, str]:
    """An exact number as text, any other by two decimals that enclose it.

    >>> enclosure_answer((Fraction(15, 2), Fraction(15, 2)))
    '7.5'
    >>> enclosure_answer((Fraction(1, 3), Fraction(1, 3) + Fraction(1, 10**30)))["upper"]
    '0.33333333333333333334'
    """
    lower, upper = bounds
    if lower == upper and len(text := decimal_text(lower)) <= LONGEST:
        return text
    return {"lower": _rounded(lower, DIGITS, ROUND_FLOOR), "upper": _rounded(upper, DIGITS, ROUND_CEILING)}


def enclosure_text(bounds: Bounds, unicode: bool = True) -> str:
    """An exact number, or the number to a few digits, each of them certain, behind a sign of rounding.

    >>> enclosure_text((Fraction(15, 2), Fraction(15, 2)))
    '= 7.5'
    >>> enclosure_text((Fraction(14142135, 10**7), Fraction(14142136, 10**7)))
    '≈ 1.41421'
    """
    lower, upper = bounds
    about = "≈" if unicode else "~"
    if lower == upper and len(text := number_text(lower)) <= 2 * SHOWN:
        return (
            f"= {text}" if "/" not in text else f"= {text} {about} {_rounded(lower, SHOWN, ROUND_HALF_EVEN)}"
        )
    for digits in range(SHOWN, 0, -1):
        low, high = (_rounded(end, digits, ROUND_HALF_EVEN) for end in bounds)
        if low == high:
            return f"{about} {low}"
    if lower <= 0 <= upper and upper - lower < Fraction(1, 10**30):
        return f"{about} 0"
    return f"between {_rounded(lower, SHOWN, ROUND_FLOOR)} and {_rounded(upper, SHOWN, ROUND_CEILING)}"


def ball_bounds(ball: arb) -> Bounds:
    """The ends of a real ball."""
    middle, radius = _dyadic(ball.mid()), _dyadic(ball.rad())
    return middle - radius, middle + radius


def complex_answer(value: acb, real: bool) -> dict[str, Any]:
    """A complex ball by its two parts; one that is known to be `real` has the imaginary part 0."""
    return {
        "real": enclosure_answer(ball_bounds(value.real)),
        "imaginary": "0" if real else enclosure_answer(ball_bounds(value.imag)),
    }


def complex_text(value: acb, real: bool, unicode: bool = True) -> str:
    """A complex ball to a few certain digits: "≈ -0.5 + 2.1j"."""
    first = enclosure_text(_without_dust(ball_bounds(value.real), ball_bounds(value.imag)), unicode)
    second = enclosure_text(_without_dust(ball_bounds(value.imag), ball_bounds(value.real)), unicode)
    if real or second == "= 0":
        return first
    sign, size = ("-", second[3:]) if second[2:].startswith("-") else ("+", second[2:])
    about = first[:2] if first[0] != "=" or second[0] == "=" else second[:2]
    if first[2:] == "0":
        return f"{second[:2]}{'-' if sign == '-' else ''}{size} j"
    return f"{about}{first[2:]} {sign} {size} j"


def _without_dust(bounds: Bounds, beside: Bounds) -> Bounds:
    """A part that may be zero and is far smaller than the other is shown as zero."""
    lower, upper = bounds
    if lower <= 0 <= upper and upper - lower < abs(beside[0] + beside[1]) / 10**30:
        return Fraction(0), Fraction(0)
    return bounds


def _rounded(value: Fraction, digits: int, rounding: str) -> str:
    context = Context(prec=digits, rounding=rounding)
    decimal: Decimal = context.divide(Decimal(value.numerator), Decimal(value.denominator))
    if not decimal:
        return "0"
    plain = f"{decimal:f}" if -5 <= decimal.adjusted() < digits + 2 else f"{decimal:e}".replace("e+", "e")
    mantissa, mark, power = plain.partition("e")
    return (mantissa.rstrip("0").rstrip(".") if "." in mantissa else mantissa) + mark + power


def _dyadic(ball: arb) -> Fraction:
    mantissa, exponent = ball.man_exp()
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)

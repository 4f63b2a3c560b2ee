"""Numbers as they were spelled, exactly: values of parameters and numeric entries of matrices."""

from __future__ import annotations

import numbers
from decimal import Decimal, localcontext
from fractions import Fraction

from symplant.algebra.expression import Power, walk
from symplant.errors import InputError
from symplant.reading.arithmetic import read_arithmetic
from symplant.reading.exponents import MAX_PARTS, exact_value
from symplant.reading.suggestions import quoted
from symplant.reading.tables import kind_of
from symplant.reading.tokens import MAX_DECIMAL_EXPONENT, MAX_DIGITS

__all__ = ["NumberError", "exact_number", "number_text", "rational_text"]

_AS_NUMBER = "write a number or a fraction such as 1/3"


class NumberError(ValueError):
    """A value that is no exact number; the message is the reason, `suggestion` what would mend it."""

    def __init__(self, reason: str, suggestion: str = "") -> None:
        super().__init__(reason)
        self.suggestion = suggestion


def exact_number(value: object) -> Fraction:
    """The exact number that a value spells.

    Whole numbers, fractions and decimals are themselves.  A binary floating-point number is the
    shortest decimal that stands for it, the one that Python prints: 0.1 is one tenth.

    Raises NumberError for everything else, infinities and true or false among it.

    >>> exact_number(Decimal("9.6e4")), exact_number(0.1)
    (Fraction(96000, 1), Fraction(1, 10))
    """
    if isinstance(value, bool):
        raise NumberError("true or false where a number is expected")
    if isinstance(value, numbers.Rational):
        numerator, denominator = int(value.numerator), int(value.denominator)
        if max(abs(numerator), denominator) >= 10**MAX_DIGITS:
            raise NumberError(f"number of more than {MAX_DIGITS} digits")
        return Fraction(numerator, denominator)
    if isinstance(value, Decimal):
        return _of_decimal(value)
    if isinstance(value, numbers.Real):
        return _of_decimal(Decimal(str(value)))
    raise NumberError(f"{kind_of(value)} where a number is expected")


def rational_text(text: str) -> Fraction:
    """The number that a text such as "1/3" or "-2.5e3" spells; raises NumberError.

    >>> rational_text("-1/3")
    Fraction(-1, 3)
    """
    try:
        tree = read_arithmetic(text, ())
    except InputError as error:
        reason = error.faults[0].reason
        raise NumberError(f"{quoted(text)} is no exact number: {reason}", _AS_NUMBER) from None
    parts = list(walk(tree))
    value = None
    try:
        # Long texts and powers could spell numbers of millions of digits.
        if len(parts) <= MAX_PARTS and not any(isinstance(part, Power) for part in parts):
            value = exact_value(tree)
    except ZeroDivisionError:
        raise NumberError(f"{quoted(text)} divides by zero") from None
    if value is None:
        raise NumberError(f"{quoted(text)} is no exact number", _AS_NUMBER)
    return value


def number_text(value: Fraction) -> str:
    """A number as it is written in a plant file; one that no decimal spells is a quoted fraction.

    >>> number_text(Fraction(1, 20)), number_text(Fraction(-1, 3))
    ('0.05', '"-1/3"')
    """
    with localcontext() as context:
        context.prec = 2 * (MAX_DIGITS + MAX_DECIMAL_EXPONENT)
        decimal = Decimal(value.numerator) / value.denominator
        exact = Fraction(decimal) == value
        text = str(decimal.normalize()) if abs(decimal.adjusted()) > 12 else f"{decimal:f}"
    if not exact:
        text = f'"{value}"'
    return text if len(text) <= 40 else f"{text[:37]}..."


def _of_decimal(value: Decimal) -> Fraction:
    if not value.is_finite():
        raise NumberError("not a finite number")
    if value and abs(value.adjusted()) > MAX_DECIMAL_EXPONENT:
        limit = f"the power of ten may be at most {MAX_DECIMAL_EXPONENT} either way"
        raise NumberError("number out of range", limit)
    if len(value.as_tuple().digits) > MAX_DIGITS:
        raise NumberError(f"number of more than {MAX_DIGITS} digits")
    return Fraction(value)

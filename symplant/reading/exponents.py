"""Constants and powers: which exponents are read, and what tree they become."""

from __future__ import annotations

from fractions import Fraction

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.reading.suggestions import quoted

__all__ = ["MAX_EXPONENT", "MAX_PARTS", "exact_value", "exponent_of", "exponent_trouble", "raised"]

#: Largest exponent, either way, of one power and of powers within powers taken together.
MAX_EXPONENT = 60
#: Largest number of parts of a tree that is evaluated while it is read: sums of long fractions are slow.
MAX_PARTS = 50


def exact_value(node: Node) -> Fraction | None:
    """The value of a tree of numbers; None if a letter, a function or pi occurs in it.

    Raises ZeroDivisionError if the tree divides by zero.

    >>> exact_value(Quotient(Number(Fraction(1)), Number(Fraction(3))))
    Fraction(1, 3)
    """
    if any(isinstance(part, Name | Call) for part in walk(node)):
        return None
    return _value(node)


def exponent_trouble(exponent: Fraction) -> str:
    """Why a power with this exponent is not read; nothing if it is.

    >>> exponent_trouble(Fraction(-3, 2)), exponent_trouble(Fraction(1, 3))
    ('', 'exponent 1/3 is neither whole nor half of a whole number')
    """
    # An exponent may be as long as its literal; its digits are of no use in a message.
    shown = f" {exponent}" if max(abs(exponent.numerator), exponent.denominator) < 10**12 else ""
    if exponent.denominator > 2:
        return f"exponent{shown} is neither whole nor half of a whole number"
    if abs(exponent.numerator) > MAX_EXPONENT:
        limit = f"{MAX_EXPONENT}" if exponent.denominator == 1 else f"{MAX_EXPONENT - 1}/2"
        return f"exponent{shown} is beyond {limit}"
    return ""


def exponent_of(node: Node) -> tuple[Fraction | None, str, str]:
    """The value of an exponent; or None, with the reason why it is not read and a suggestion.

    >>> exponent_of(Name("n"))[1]
    "exponent contains 'n', which is no number"
    """
    parts = list(walk(node))
    if len(parts) > MAX_PARTS:
        return None, "exponent of very many parts", "write the exponent as one number"
    for part in parts:
        if isinstance(part, Power):
            return None, "power within an exponent", "write the exponent as one number"
        if isinstance(part, Name | Call):
            culprit = part.name if isinstance(part, Name) else part.function
            hint = "x**n with letters is written exp(n*log(x)), for positive x"
            return None, f"exponent contains {quoted(culprit)}, which is no number", hint
    try:
        value = _value(node)
    except ZeroDivisionError:
        return None, "exponent divides by zero", ""
    trouble = exponent_trouble(value)
    return (None, trouble, "") if trouble else (value, "", "")


def raised(base: Node, exponent: Fraction, column: int = 0) -> Node:
    """The tree of a power whose exponent is whole or half of a whole number.

    >>> raised(Name("k"), Fraction(-3, 2))
    Power(base=Call(function='sqrt', argument=Name(name='k', column=0), column=0), exponent=-3, column=0)
    """
    if exponent.denominator == 1:
        return Power(base, int(exponent), column)
    root = Call("sqrt", base, column)
    return root if exponent.numerator == 1 else Power(root, exponent.numerator, column)


def _value(node: Node) -> Fraction:
    match node:
        case Number(value=value):
            return value
        case Sum(terms=terms):
            return sum(map(_value, terms), Fraction(0))
        case Product(factors=factors):
            product = Fraction(1)
            for factor in factors:
                product *= _value(factor)
            return product
        case Quotient(numerator=top, denominator=bottom):
            return _value(top) / _value(bottom)
        case Power(base=base, exponent=exponent):
            return _value(base) ** exponent
        case _:
            raise TypeError(f"{type(node).__name__} has no rational value")

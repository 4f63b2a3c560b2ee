"""Values of expression trees at a point, by code of its own: plain fractions, or balls where roots intervene.

Nothing here goes through the ring or its conversion of trees, so that an error there cannot hide here.
Balls are F. Johansson's (Arb, IEEE Transactions on Computers 66 (2017) 1281-1292; from memory): a
midpoint and a radius within which the true value is certain to lie.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from fractions import Fraction
from functools import reduce
from math import isqrt
from operator import add, mul
from typing import Any, Protocol, TypeAlias

from flint import arb, ctx, fmpq

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk

__all__ = [
    "BALLS",
    "EXACT",
    "PRECISION",
    "Arithmetic",
    "IrrationalValueError",
    "Scalar",
    "UndefinedValueError",
    "ball",
    "ball_precision",
    "evaluate",
    "rational_root",
    "value_text",
]

#: A value: exact, or a ball that holds it.
Scalar: TypeAlias = "Fraction | arb"
#: Bits of the midpoints of balls (about 100 decimal digits).
PRECISION = 333
_DIGITS_SHOWN = 50


class IrrationalValueError(ValueError):
    """A value is irrational, so that it cannot be had as a fraction."""


class UndefinedValueError(ValueError):
    """An expression has no real value at a point: a divisor vanishes, or a root or logarithm is undefined."""


class Arithmetic(Protocol):
    """What evaluation needs to know of a kind of number."""

    def number(self, value: Fraction) -> Any:
        """A rational number of this kind."""

    def pi(self) -> Any:
        """The constant pi."""

    def inverse(self, value: Any) -> Any:
        """One over a value; UndefinedValueError where that may be a division by zero."""

    def function(self, name: str, argument: Any) -> Any:
        """A function of `FUNCTIONS`; UndefinedValueError outside its domain."""


class ExactArithmetic:
    """Fractions; functions only where their value is rational, else IrrationalValueError.

    >>> EXACT.function("sqrt", Fraction(9, 4))
    Fraction(3, 2)
    """

    def number(self, value: Fraction) -> Fraction:
        """The fraction itself."""
        return value

    def pi(self) -> Fraction:
        """Never: pi is irrational."""
        raise IrrationalValueError("pi is irrational")

    def inverse(self, value: Fraction) -> Fraction:
        """One over a fraction."""
        if not value:
            raise UndefinedValueError("division by zero")
        return 1 / value

    def function(self, name: str, argument: Fraction) -> Fraction:
        """Roots of squares, and the one rational argument at which each other function is rational."""
        if name == "sqrt":
            if argument < 0:
                raise UndefinedValueError("square root of a negative number")
            root = rational_root(argument)
            if root is None:
                raise IrrationalValueError("square root of a number that is no square")
            return root
        if name == "log":
            if argument <= 0:
                raise UndefinedValueError("logarithm of a number that is not positive")
            if argument == 1:
                return Fraction(0)
        elif argument == 0:
            return Fraction(int(name in ("cos", "exp", "cosh")))
        raise IrrationalValueError(f"{name} is irrational there")


class BallArithmetic:
    """Balls of the precision in force; see `ball_precision`.

    >>> with ball_precision():
    ...     root = BALLS.function("sqrt", BALLS.number(Fraction(2)))
    >>> root.overlaps(root), bool(root.rad() < 1e-99)
    (True, True)
    """

    def number(self, value: Fraction) -> arb:
        """The ball around a fraction."""
        return ball(value)

    def pi(self) -> arb:
        """The ball around pi."""
        return arb.pi()

    def inverse(self, value: arb) -> arb:
        """One over a ball that does not hold zero."""
        if value.contains(0):
            raise UndefinedValueError("division by what may be zero")
        return 1 / value

    def function(self, name: str, argument: arb) -> arb:
        """The ball around the values of a function over a ball."""
        value: arb = getattr(argument, name)()
        if not value.is_finite():
            raise UndefinedValueError(f"{name} is not defined there")
        return value


EXACT = ExactArithmetic()
BALLS = BallArithmetic()


@contextmanager
def ball_precision(bits: int = PRECISION) -> Iterator[None]:
    """Set the precision of balls for a stretch of work; every operation on balls belongs inside."""
    with ctx.workprec(bits):
        yield


def ball(value: Scalar) -> arb:
    """A value as a ball."""
    if isinstance(value, Fraction):
        return arb(fmpq(value.numerator, value.denominator))
    return value


def rational_root(value: Fraction) -> Fraction | None:
    """The root of a square, None for any other number.

    >>> rational_root(Fraction(4, 9)), rational_root(Fraction(2)), rational_root(Fraction(-1))
    (Fraction(2, 3), None, None)
    """
    if value < 0:
        return None
    top, bottom = isqrt(value.numerator), isqrt(value.denominator)
    if top * top != value.numerator or bottom * bottom != value.denominator:
        return None
    return Fraction(top, bottom)


def evaluate(node: Node, at: Mapping[str, Any], arithmetic: Arithmetic = EXACT) -> Any:
    """The value of a tree at a point, in the kind of number that `at` holds and `arithmetic` works in.

    Errors: UndefinedValueError where a divisor vanishes or a function is undefined, KeyError for a name
    without value, IrrationalValueError in exact arithmetic.

    >>> tree = Quotient(Name("k"), Sum((Name("m"), Number(Fraction(1)))))
    >>> evaluate(tree, {"k": Fraction(3), "m": Fraction(1, 2)})
    Fraction(2, 1)
    """
    values: list[Any] = []
    for part in walk(node):
        match part:
            case Name(name=name):
                values.append(arithmetic.pi() if name == "pi" and name not in at else at[name])
            case Number(value=value):
                values.append(arithmetic.number(value))
            case Power(exponent=exponent):
                base = values.pop()
                values.append(base**exponent if exponent >= 0 else arithmetic.inverse(base) ** -exponent)
            case Product(factors=factors):
                values.append(reduce(mul, _taken(values, len(factors))))
            case Sum(terms=terms):
                values.append(reduce(add, _taken(values, len(terms))))
            case Quotient():
                divisor = values.pop()
                values[-1] = values[-1] * arithmetic.inverse(divisor)
            case Call(function=function):
                values[-1] = arithmetic.function(function, values[-1])
    (value,) = values
    return value


def _taken(values: list[Any], count: int) -> list[Any]:
    taken = values[-count:]
    del values[-count:]
    return taken


def value_text(value: Scalar) -> str:
    """A value in words: a fraction in full as long as it is short, else its size; a ball with its radius.

    >>> value_text(Fraction(7, 3)), value_text(Fraction(10**80 + 1, 3))
    ('7/3', '3.333333333333333333e79 (exactly a fraction of 82 digits)')
    """
    if not isinstance(value, Fraction):
        return str(value.str(20))
    digits = _digits(value.numerator) + (0 if value.denominator == 1 else _digits(value.denominator))
    if digits <= _DIGITS_SHOWN:
        return str(value)
    kind = "an integer" if value.denominator == 1 else "a fraction"
    return f"{_scientific(value)} (exactly {kind} of {digits} digits)"


def _digits(value: int) -> int:
    """Number of decimal digits, without the text, whose length Python limits."""
    estimate = int(abs(value).bit_length() * 0.30103)
    return estimate + 1 if abs(value) >= 10**estimate else max(estimate, 1)


def _scientific(value: Fraction, digits: int = 19) -> str:
    """Leading digits and power of ten of a fraction of any size, cut off, not rounded."""
    sign, size = ("-" if value < 0 else ""), abs(value)
    power = _digits(size.numerator) - _digits(size.denominator)
    if size < Fraction(10) ** power:
        power -= 1
    lead = str(int(size / Fraction(10) ** (power - digits + 1)))
    return f"{sign}{lead[0]}.{lead[1:]}e{power}"

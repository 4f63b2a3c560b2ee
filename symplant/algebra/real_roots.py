"""Real roots of an integer polynomial in one letter: exact where rational, else rigorously enclosed."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from fractions import Fraction
from itertools import pairwise
from typing import Any

from flint import arb, ctx, fmpz_poly

from symplant.algebra.ball_roots import only_constants_beside, real_enclosures
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.factors import factors
from symplant.algebra.ring import Element, Ring

__all__ = ["RealRoot", "between", "letter_coefficients", "real_roots"]

#: Working precisions, in bits, for the enclosures; the first suffices for ordinary polynomials.
PRECISIONS = (128, 256, 512, 1024, 2048, 4096)


@dataclass(frozen=True)
class RealRoot:
    """One real root: `lower` <= root <= `upper`, equal when the root is rational.

    `factor` holds the ascending coefficients of the irreducible factor that it belongs to, or its text
    where functions of numbers stand in it, and
    `multiplicity` is its multiplicity in the polynomial that was asked about.  An irrational root is
    the only root of `factor` in its enclosure, which is proved by a change of sign at the ends.
    """

    factor: tuple[int, ...] | str
    lower: Fraction
    upper: Fraction
    multiplicity: int = 1

    @property
    def exact(self) -> Fraction | None:
        """The root if it is rational."""
        return self.lower if self.lower == self.upper else None

    def decimals(self, digits: int = 20) -> tuple[str, str]:
        """Decimal strings below and above the root, to `digits` significant digits.

        >>> ring = Ring("s", ("K",))
        >>> root = real_roots(ring, [ring.gen("K") ** 2 - 2], "K")[1]
        >>> root.decimals(15)
        ('1.41421356237309', '1.41421356237310')
        """
        return _decimal(self.lower, digits, ROUND_FLOOR), _decimal(self.upper, digits, ROUND_CEILING)

    def __float__(self) -> float:
        return float((self.lower + self.upper) / 2)


def letter_coefficients(ring: Ring, element: Element, letter: str) -> list[int]:
    """Ascending integer coefficients of an element that contains no other generator (else ValueError)."""
    result = []
    for coefficient in ring.coefficients(element, letter):
        if not coefficient.is_constant():
            raise ValueError(f"not a polynomial in {letter} alone")
        result.append(int(coefficient.leading_coefficient()) if coefficient else 0)
    return result


def real_roots(ring: Ring, elements: Iterable[Element], letter: str) -> list[RealRoot]:
    """The distinct real roots of the product of nonzero elements in one letter, ascending and disjoint.

    Functions of numbers may stand in the coefficients. Errors: ValueError for other generators and for
    zero; ArithmeticError where the roots cannot be told apart.

    >>> ring = Ring("s", ("K",))
    >>> K = ring.gen("K")
    >>> [(root.exact, root.multiplicity) for root in real_roots(ring, [(2 * K - 15) ** 2 * K], "K")]
    [(Fraction(0, 1), 1), (Fraction(15, 2), 2)]
    """
    found: dict[tuple[int, ...], int] = {}
    constants: dict[str, tuple[Element, int]] = {}
    for element in elements:
        if not element:
            raise ValueError("every number is a root of the zero polynomial")
        if ring.used([element]) <= {letter}:
            _count(found, letter_coefficients(ring, element, letter))
            continue
        if not only_constants_beside(ring, element, letter):
            raise ValueError(f"not a polynomial in {letter} alone")
        for factor, exponent in factors(element)[1]:
            if ring.used([factor]) <= {letter}:
                _count(found, letter_coefficients(ring, factor, letter), exponent)
            elif letter in ring.used([factor]):
                before = constants.get(str(factor), (factor, 0))[1]
                constants[str(factor)] = factor, before + exponent
            elif not certified_sign(ring, factor, {}):
                raise ArithmeticError("a factor made of functions of numbers may be zero")
    for precision in PRECISIONS:
        roots = _isolated(ring, letter, found, constants, precision)
        if roots is not None:
            return roots
    raise ArithmeticError("real roots too close to be told apart at the highest precision")


def _count(found: dict[tuple[int, ...], int], coefficients: list[int], times: int = 1) -> None:
    for factor, exponent in fmpz_poly(coefficients).factor()[1]:
        key = tuple(int(c) for c in factor.coeffs())
        found[key] = found.get(key, 0) + times * int(exponent)


def between(left: Fraction | None, right: Fraction | None) -> Fraction:
    """The simplest rational strictly between two bounds (None: unbounded): smallest denominator.

    >>> between(Fraction(14, 9), Fraction(7, 3)), between(None, Fraction(-1, 2)), between(Fraction(3), None)
    (Fraction(2, 1), Fraction(-1, 1), Fraction(4, 1))
    """
    if left is None and right is None:
        return Fraction(0)
    if right is None:
        assert left is not None
        return Fraction(max(left.__floor__() + 1, 0)) if left >= 0 else Fraction(0)
    if left is None:
        return -between(-right, None)
    if left < 0 < right:
        return Fraction(0)
    if right <= 0:
        return -between(-right, -left)
    return _simplest(left, right)


def _simplest(left: Fraction, right: Fraction) -> Fraction:
    """The fraction of least denominator in the open interval, 0 <= left < right (Stern-Brocot)."""
    whole = left.__floor__()
    if whole + 1 < right:
        return Fraction(whole + 1)
    # Both ends share the integer part, or right is the next integer itself.
    upper = None if left == whole else 1 / (left - whole)
    lower = 1 / (right - whole)
    inner = Fraction(lower.__floor__() + 1) if upper is None else _simplest(lower, upper)
    return whole + 1 / inner


def _isolated(
    ring: Ring,
    letter: str,
    found: dict[tuple[int, ...], int],
    constants: dict[str, tuple[Element, int]],
    precision: int,
) -> list[RealRoot] | None:
    """All roots with disjoint enclosures, or None if the precision does not suffice."""
    roots: list[RealRoot] = []
    for text, (element, multiplicity) in constants.items():
        enclosures = real_enclosures(ring, element, letter, precision)
        if enclosures is None:
            return None
        roots += [RealRoot(text, lower, upper, multiplicity) for lower, upper in enclosures]
    for key, multiplicity in found.items():
        if len(key) == 2:
            value = Fraction(-key[0], key[1])
            roots.append(RealRoot(key, value, value, multiplicity))
            continue
        for lower, upper in _enclosures(key, precision):
            if _value(key, lower) * _value(key, upper) >= 0:
                return None
            roots.append(RealRoot(key, lower, upper, multiplicity))
    roots.sort(key=lambda root: (root.lower, root.upper))
    if any(a.upper >= b.lower for a, b in pairwise(roots)):
        return None
    # 100 bits of each root are enough for any decimals asked for.
    exact = [r for r in roots if not isinstance(r.factor, str)]
    if any(r.upper - r.lower > max(abs(r.lower), abs(r.upper)) / (1 << 90) for r in exact):
        return None
    return roots


def _enclosures(key: Sequence[int], precision: int) -> list[tuple[Fraction, Fraction]]:
    """Enclosures of the real roots of an irreducible polynomial.

    FLINT certifies that a root is real by giving it an imaginary part that is exactly zero.
    """
    before = ctx.prec
    ctx.prec = precision
    try:
        found: list[Any] = fmpz_poly(list(key)).complex_roots()  # (root, multiplicity) pairs
        reals = [root.real for root, _ in found if root.imag.is_zero()]
        ends = [(_dyadic(ball.mid()), _dyadic(ball.rad())) for ball in reals]
    finally:
        ctx.prec = before
    # Twice the radius keeps the ends off the root itself, where the sign would not change.
    return [(middle - 2 * radius, middle + 2 * radius) for middle, radius in ends]


def _dyadic(ball: arb) -> Fraction:
    mantissa, exponent = ball.man_exp()
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def _value(coefficients: Sequence[int], at: Fraction) -> Fraction:
    total = Fraction(0)
    for coefficient in reversed(coefficients):
        total = total * at + coefficient
    return total


def _decimal(value: Fraction, digits: int, rounding: str) -> str:
    context = Context(prec=digits, rounding=rounding)
    quotient: Decimal = context.divide(Decimal(value.numerator), Decimal(value.denominator))
    return f"{quotient:f}"

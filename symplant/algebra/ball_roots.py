"""Real roots of a polynomial in one letter whose coefficients are real constants such as exp(-1/4).

The coefficients are balls.  FLINT isolates the complex roots; a root is real where the polynomial changes
sign, certified, between the ends of an interval that meets no other root (the coefficients being
real, a root that is alone near the axis is its own conjugate).  The precision is raised until
the enclosures are narrow; a multiple root, or a leading coefficient that may be zero, is never certified.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

from flint import acb_poly, arb, fmpq

from symplant.algebra.enclosure import Ball, ball_value, generator_balls, tree_ball, working_precision
from symplant.algebra.expression import names_in
from symplant.algebra.ring import Element, Ring

if TYPE_CHECKING:
    from symplant.algebra.real_roots import RealRoot

__all__ = ["may_vanish", "only_constants_beside", "real_enclosures"]

#: An enclosure is narrow enough when its width is this part of the root.
NARROW = Fraction(1, 1 << 60)


def only_constants_beside(ring: Ring, element: Element, letter: str) -> bool:
    """Whether the other generators in an element are functions of numbers (or pi)."""
    others = ring.used([element]) - {letter}
    return all(
        key not in ring.letters
        and key != ring.variable
        and names_in(ring.meanings[ring.position[key]]) <= {"pi"}
        for key in others
    )


def may_vanish(ring: Ring, element: Element, letter: str, root: RealRoot) -> bool:
    """Whether an element of one letter cannot be told from zero at a root of something else."""
    with working_precision(256):
        middle, radius = (root.lower + root.upper) / 2, (root.upper - root.lower) / 2
        at = arb(fmpq(middle.numerator, middle.denominator), arb(fmpq(radius.numerator, radius.denominator)))
        balls = {
            key: tree_ball(ring.meanings[ring.position[key]], {letter: at}) for key in ring.used([element])
        }
        value = ball_value(ring, element, balls)
    return not value.is_finite() or bool(value.contains(0))


def real_enclosures(
    ring: Ring, element: Element, letter: str, precision: int
) -> list[tuple[Fraction, Fraction]] | None:
    """Enclosures of the real roots, none of them zero wide; None if the precision does not certify them.

    >>> from symplant.algebra.expression import Call, integer
    >>> from symplant.algebra.ring import Generator
    >>> ring = Ring("s", ("K",), functions=(Generator("_exp1", Call("exp", integer(1))),))
    >>> ((low, high),) = real_enclosures(ring, ring.gen("K") - ring.gen("_exp1"), "K", 128)
    >>> float(low), high - low < Fraction(1, 10**15)
    (2.718281828459045, True)
    """
    with working_precision(precision):
        coefficients = _coefficients(ring, element, letter)
        if coefficients[-1].contains(0):
            return None
        if len(coefficients) == 2:
            found = [-coefficients[0] / coefficients[1]]
        else:
            try:
                roots = acb_poly(coefficients).roots(arb(2) ** (20 - precision // 2))
            except (ValueError, ArithmeticError):
                return None
            found = [root.real for root in roots if root.imag.contains(0)]
        result = []
        for root in found:
            low, high = _ends(root)
            if high - low > NARROW * max(abs(low), abs(high)):
                return None
            if not _changes_sign(coefficients, low, high):
                return None
            result.append((low, high))
        result.sort()
        if any(before[1] >= after[0] for before, after in pairwise(result)):
            return None
        return result


def _coefficients(ring: Ring, element: Element, letter: str) -> list[Ball]:
    parts = ring.coefficients(element, letter)
    balls: Mapping[str, Ball] = generator_balls(ring, {}, ring.used(parts))
    return [ball_value(ring, part, balls) if part else arb(0) for part in parts]


def _ends(root: Ball) -> tuple[Fraction, Fraction]:
    """Ends well outside the ball, so that the sign there is certain."""
    middle, radius = (_dyadic(part) for part in (root.mid(), root.rad()))
    radius = 4 * radius if radius else abs(middle) / (1 << 80)
    return middle - radius, middle + radius


def _dyadic(ball: Ball) -> Fraction:
    mantissa, exponent = ball.man_exp()
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def _changes_sign(coefficients: Sequence[Ball], low: Fraction, high: Fraction) -> bool:
    signs = []
    for end in (low, high):
        value, at = arb(0), arb(fmpq(end.numerator, end.denominator))
        for coefficient in reversed(coefficients):
            value = value * at + coefficient
        signs.append(1 if value > 0 else -1 if value < 0 else 0)
    return signs[0] * signs[1] < 0

"""Leading behaviour of the roots as one letter goes to zero or to infinity (Newton's polygon).

A polynomial in s whose coefficients are polynomials in p has the roots s = g p**a (1 + o(1)), one edge
of the lower hull of its exponents for each a as p goes to 0, of the upper hull as p goes to infinity
(I. Newton, letter of 1676; R. J. Walker, Algebraic Curves, 1950, ch. IV).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element

__all__ = ["Branch", "branches"]


@dataclass(frozen=True)
class Branch:
    """Roots s ~ g * p**exponent: g runs through the roots of `edge`, a polynomial in the variable.

    As many roots as the degree of `edge`; its coefficients are free of p.
    """

    exponent: Fraction
    edge: Polynomial


def branches(polynomial: Polynomial, letter: str, at_infinity: bool) -> list[Branch]:
    """The branches of the nonzero roots, slowest first; roots that are identically 0 are left out.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("p", "k"))
    >>> s, p, k = (ring.gen(x) for x in "spk")
    >>> found = branches(Polynomial.of(ring, p * s**2 + s + k), "p", False)
    >>> [(str(b.exponent), b.edge.element) for b in found]
    [('0', s + k), ('-1', s + 1)]
    """
    ring = polynomial.ring
    side = -1 if at_infinity else 0
    points: list[tuple[int, int, Element]] = []
    for power, coefficient in enumerate(polynomial.coefficients):
        parts = ring.coefficients(coefficient, letter)
        orders = [order for order, part in enumerate(parts) if part]
        if orders:
            points.append((power, orders[side], parts[orders[side]]))
    hull = _hull([(x, -y if at_infinity else y) for x, y, _ in points])
    result = []
    for first, last in pairwise(hull):
        (x1, y1, _), (x2, y2, _) = points[first], points[last]
        exponent = Fraction(y1 - y2, x2 - x1)
        coefficients = [ring.zero] * (x2 - x1 + 1)
        for x, y, part in points:
            if x1 <= x <= x2 and (y1 - y) == exponent * (x - x1):
                coefficients[x - x1] = part
        edge = Polynomial.of(ring, ring.from_coefficients(coefficients))
        result.append(Branch(exponent, edge))
    return result


def _hull(points: Sequence[tuple[int, int]]) -> list[int]:
    """Positions of the corners of the lower hull of points with ascending first coordinates."""
    corners: list[int] = []
    for index, (x, y) in enumerate(points):
        while len(corners) >= 2:
            (xa, ya), (xb, yb) = points[corners[-2]], points[corners[-1]]
            if (yb - ya) * (x - xa) >= (y - ya) * (xb - xa):
                corners.pop()
            else:
                break
        corners.append(index)
    return corners

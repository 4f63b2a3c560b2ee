"""Jury's table: whether all roots lie inside the unit circle, without the bilinear map.

Each step maps a polynomial a_0 + ... + a_n z^n to the one of degree n - 1 with the coefficients
a_n a_(k+1) - a_0 a_(n-k-1); all roots lie inside exactly when |a_0| < |a_n| at every step (E. I. Jury,
Theory and Application of the z-Transform Method, 1964; from memory).  The reduction is that of I.
Schur, J. reine angew. Math. 147 (1917) 205-232.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, TypeAlias

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring

__all__ = ["critical_minor", "inside_circle"]

#: A number with an order that may be uncertain: a fraction, or a ball.
Number: TypeAlias = Any


def inside_circle(coefficients: Sequence[Number]) -> bool | None:
    """Whether all roots of ascending coefficients lie inside the unit circle; None if uncertain.

    The last coefficient must not be zero.

    >>> from fractions import Fraction
    >>> inside_circle([Fraction(1, 2), Fraction(0), Fraction(1)]), inside_circle([Fraction(1), Fraction(1)])
    (True, False)
    """
    row = list(coefficients)
    while len(row) > 1:
        first, last = row[0], row[-1]
        gap = last * last - first * first
        if not gap > 0:
            return False if gap <= 0 else None
        # Divided by the last coefficient so that numbers do not grow doubly.
        ratio = first / last
        row = [row[k + 1] - ratio * row[len(row) - 2 - k] for k in range(len(row) - 1)]
    return True


def critical_minor(polynomial: Polynomial) -> Element:
    """The determinant that vanishes where a complex pair lies on the circle: X - Y of order n - 1.

    X is upper triangular with a_n, a_(n-1), ... in its rows and Y has a_0, a_1, ... along its
    rising diagonals (E. I. Jury, Inners and Stability of Dynamic Systems, 1974; from memory).

    >>> ring = Ring("z", ("a", "b"))
    >>> z, a, b = (ring.gen(x) for x in "zab")
    >>> critical_minor(Polynomial.of(ring, z**2 + a * z + b))
    -b + 1
    """
    from symplant.algebra.determinant import determinant

    ring: Ring = polynomial.ring
    a, n = polynomial.coefficients, polynomial.degree
    size = n - 1
    rows = [
        [
            (a[n - (j - i)] if j >= i else ring.zero)
            - (a[i + j - size + 1] if i + j >= size - 1 else ring.zero)
            for j in range(size)
        ]
        for i in range(size)
    ]
    return ring.reduce(determinant(rows, ring.one))

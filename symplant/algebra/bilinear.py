"""The bilinear map z = (1 + w)/(1 - w): the unit disc of z becomes the left half plane of w."""

from __future__ import annotations

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element

__all__ = ["bilinear"]


def bilinear(polynomial: Polynomial) -> Polynomial:
    """P(w) = (1 - w)^n p((1 + w)/(1 - w)) for p of degree n, written in the same variable.

    Roots inside, on and outside the unit circle go to the open left half plane, the imaginary axis
    and the open right half plane.  z = 1 goes to w = 0; z = -1 goes to infinity: the coefficient of
    w^n is (-1)^n p(-1), and for a root of multiplicity m at z = -1 the degree of P is n - m.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("z", ("a",))
    >>> z, a = ring.gen("z"), ring.gen("a")
    >>> bilinear(Polynomial.of(ring, z - a)).coefficients
    (-a + 1, a + 1)
    >>> bilinear(Polynomial.of(ring, (z + 1) * (z - a))).degree
    1
    """
    ring, n = polynomial.ring, polynomial.degree
    images: list[Element] = [ring.zero] * (n + 1)
    for power, coefficient in enumerate(polynomial.coefficients):
        if coefficient:
            for i, value in enumerate(_expanded(power, n - power)):
                images[i] = images[i] + value * coefficient
    return Polynomial.of(ring, ring.from_coefficients(images))


def _expanded(plus: int, minus: int) -> list[int]:
    """Ascending coefficients of (1 + w)^plus (1 - w)^minus."""
    result = [1]
    for sign in [1] * plus + [-1] * minus:
        result = [a + sign * b for a, b in zip([*result, 0], [0, *result], strict=True)]
    return result

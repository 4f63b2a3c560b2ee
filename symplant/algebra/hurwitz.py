"""Leading Hurwitz minors of a polynomial over the ring, fraction-free.

For p = a_n s^n + ... + a_0 the Hurwitz matrix has the entry a_{n-2j+i} in row i, column j (from 1).
The k-th leading minor H_k is positive for every k, given a_n > 0, exactly when all roots lie in the
open left half plane (A. Hurwitz, Math. Ann. 46 (1895) 273-284).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TypeAlias

from symplant.algebra.determinant import determinant
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring

__all__ = ["HurwitzTable", "hurwitz_matrix", "hurwitz_minor", "hurwitz_minors", "hurwitz_table"]

#: Rows of minors: `rows[k][0]` is the k-th Hurwitz minor, `rows[0]` the row of the leading coefficient.
HurwitzTable: TypeAlias = "list[list[Element]]"
#: Up to this degree the minors are expanded, above it they come from the array.
EXPANSION_DEGREE = 8


def hurwitz_matrix(ring: Ring, coefficients: Sequence[Element]) -> list[list[Element]]:
    """The Hurwitz matrix (n x n) of ascending coefficients a_0 ... a_n.

    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> hurwitz_matrix(ring, [b, a, ring.one])
    [[a, 0], [1, b]]
    """
    n = len(coefficients) - 1

    def entry(power: int) -> Element:
        return coefficients[power] if 0 <= power <= n else ring.zero

    return [[entry(n - 2 * j + i) for j in range(1, n + 1)] for i in range(1, n + 1)]


def hurwitz_minors(polynomial: Polynomial) -> tuple[Element, ...]:
    """The minors H_1 ... H_n in normal form; () for a constant.

    >>> ring = Ring("s", ("a", "b", "c"))
    >>> s, a, b, c = (ring.gen(x) for x in "sabc")
    >>> hurwitz_minors(Polynomial.of(ring, s**3 + a * s**2 + b * s + c))
    (a, a*b - c, a*b*c - c^2)
    """
    ring, coefficients = polynomial.ring, polynomial.coefficients
    n = len(coefficients) - 1
    # Measured: with many letters expansion without any division is ten times faster; with few letters
    # or a high degree the array is, because its entries stay small.
    if n > EXPANSION_DEGREE or len(ring.used(coefficients)) < 3:
        table = hurwitz_table(ring, coefficients)
        if table is not None:
            return tuple(ring.reduce(row[0]) for row in table[1:])
    return tuple(hurwitz_minor(ring, coefficients, k) for k in range(1, n + 1))


def hurwitz_minor(ring: Ring, coefficients: Sequence[Element], k: int) -> Element:
    """The k-th leading minor alone, in normal form (1 for k = 0)."""
    matrix = hurwitz_matrix(ring, coefficients)
    return ring.reduce(determinant([row[:k] for row in matrix[:k]], ring.one))


def hurwitz_table(ring: Ring, coefficients: Sequence[Element]) -> HurwitzTable | None:
    """Routh's array with every row multiplied by the Hurwitz minor above it; None where a minor vanishes.

    Row k holds minors of the Hurwitz matrix, so every division below is exact, and row k divided by
    `rows[k-1][0]` is Routh's row (E. H. Bareiss, Math. Comp. 22 (1968) 565-578, applied to the
    Hurwitz matrix).  The arithmetic is that of the polynomial ring: relations between generators are
    not applied, because division is exact only there; entries are not in normal form.
    """
    top = list(coefficients[::-1])
    rows = [top[0::2], top[1::2]]
    if len(coefficients) < 2:
        return rows[:1]
    for k in range(2, len(coefficients)):
        above, pivot_row = rows[k - 2], rows[k - 1]
        if not pivot_row or not pivot_row[0]:
            return None
        divisor = ring.one if k < 4 else rows[k - 3][0]
        row = []
        for j in range(len(above) - 1):
            value = pivot_row[0] * above[j + 1]
            if j + 1 < len(pivot_row):
                value = value - above[0] * pivot_row[j + 1]
            row.append(value // divisor if k > 2 else value)
        rows.append(row)
    return rows if rows[-1] and rows[-1][0] else None

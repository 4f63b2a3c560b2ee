"""Determinants and solutions of systems of numbers, by code of its own."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm, prod
from typing import Any

from symplant.checking.evaluation import Scalar

__all__ = ["Rows", "adjugate_times", "determinant"]

#: Rows of a matrix, all entries fractions or all entries balls.
Rows = Sequence[Sequence[Any]]


def determinant(rows: Rows) -> Scalar:
    """The determinant of a square matrix: by elimination over fractions, without division over balls.

    >>> determinant([[Fraction(1), Fraction(2)], [Fraction(3), Fraction(4)]])
    Fraction(-2, 1)
    """
    if not rows:
        return Fraction(1)
    if not isinstance(rows[0][0], Fraction):
        return _berkowitz(rows)
    determinant_, _ = _eliminated(rows)
    return determinant_


def adjugate_times(rows: Rows, right: Rows) -> tuple[Fraction, list[list[Fraction]] | None]:
    """det(M) and adj(M) R for fractions; None in place of the product where det(M) is zero.

    Shapes: M is n x n, R is n x m, and so is the product.

    >>> m = [[Fraction(1), Fraction(2)], [Fraction(3), Fraction(4)]]
    >>> adjugate_times(m, [[Fraction(1)], [Fraction(0)]])
    (Fraction(-2, 1), [[Fraction(4, 1)], [Fraction(-3, 1)]])
    """
    return _eliminated([[*row, *extra] for row, extra in zip(rows, right, strict=True)])


def _eliminated(rows: Rows) -> tuple[Fraction, list[list[Fraction]] | None]:
    """det(M) and adj(M) R from the rows of [M | R], by elimination over the integers.

    Each row is multiplied by its common denominator; the divisions by the previous pivot are exact
    (E. H. Bareiss, Mathematics of Computation 22 (1968) 565-578; from memory), and clearing above the
    diagonal as well leaves det(M) on it and adj(M) R at its right.
    """
    size = len(rows)
    scales = [lcm(*(entry.denominator for entry in row)) for row in rows]
    work = [
        [entry.numerator * (scale // entry.denominator) for entry in row]
        for row, scale in zip(rows, scales, strict=True)
    ]
    before, sign = 1, 1
    for k in range(size):
        chosen = next((i for i in range(k, size) if work[i][k]), None)
        if chosen is None:
            return Fraction(0), None
        if chosen != k:
            work[k], work[chosen], sign = work[chosen], work[k], -sign
        row, pivot = work[k], work[k][k]
        for i in range(size):
            if i == k:
                continue
            factor = work[i][k]
            if factor:
                work[i] = [(pivot * x - factor * y) // before for x, y in zip(work[i], row, strict=True)]
            elif pivot != before:
                work[i] = [pivot * x // before for x in work[i]]
        before = pivot
    scale = sign * prod(scales)
    return Fraction(before, scale), [[Fraction(x, scale) for x in line[size:]] for line in work]


def _berkowitz(rows: Rows) -> Scalar:
    """The determinant without any division, so that no ball need be told from zero.

    S. J. Berkowitz, Information Processing Letters 18 (1984) 147-150; from memory.  The coefficients of
    the characteristic polynomial of each leading block come from those of the block before it.
    """
    size = len(rows)
    coefficients: list[Any] = [rows[0][0] * 0 + 1]
    for k in range(size):
        block = [row[:k] for row in rows[:k]]
        left, corner = rows[k][:k], rows[k][k]
        column = [row[k] for row in rows[:k]]
        toeplitz = [coefficients[0] * 0 + 1, -corner]
        for _ in range(k):
            toeplitz.append(-_dot(left, column))
            column = [_dot(line, column) for line in block]
        # The next coefficients are a lower triangular Toeplitz matrix times these.
        coefficients = [
            _dot([toeplitz[i - j] for j in range(min(i, k) + 1)], coefficients[: i + 1]) for i in range(k + 2)
        ]
    value: Scalar = coefficients[size]
    return value if size % 2 == 0 else -value


def _dot(left: Sequence[Any], right: Sequence[Any]) -> Any:
    total = left[0] * right[0]
    for x, y in zip(left[1:], right[1:], strict=True):
        total = total + x * y
    return total

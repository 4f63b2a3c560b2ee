"""Routh's array, exact, with both special cases, and exact counts of roots by half plane.

A row that begins with p zeros but is not zero (a zero pivot) is replaced by itself plus (-1)^p times
itself shifted left by p places (M. Benidir and B. Picinbono, IEEE Trans. Automatic Control 35
(1990) 218-222; from memory).  In terms of the polynomial g of the row this is multiplication by
1 + (-1)^p s^(2p), which is 1 + w^(2p) > 0 on the axis s = jw: the sign of g there, hence the
Cauchy index and every count, stays as it is, and the row gets a pivot.

A zero row is replaced by the derivative of the auxiliary polynomial that the row above spells (E. J.
Routh, A Treatise on the Stability of a Given State of Motion, 1877).  The auxiliary polynomial is
even or odd; its roots lie symmetric to the axis, so the sign changes from its row on count its roots
in the right half plane, as many lie in the left one, and the rest lie on the axis.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise
from math import gcd, lcm

from symplant.algebra.hurwitz import HurwitzTable, hurwitz_table
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Ring

__all__ = ["RootCounts", "RouthArray", "RouthRow", "root_counts", "routh_array"]


@dataclass(frozen=True, slots=True)
class RootCounts:
    """Numbers of roots, multiplicities counted, right of, on, and left of the imaginary axis."""

    right: int
    axis: int
    left: int


@dataclass(frozen=True)
class RouthRow:
    """One row: the power it belongs to, its entries, and how it came about.

    `kind` is "given", "computed", "zero pivot" (replaced, see the module) or "zero row" (replaced by
    the derivative of the auxiliary polynomial); `replaced` holds the entries that stood there before.
    """

    power: int
    entries: tuple[Ratio, ...]
    kind: str = "given"
    replaced: tuple[Ratio, ...] = ()


@dataclass(frozen=True)
class RouthArray:
    """The array of a polynomial over the ring, for letters in general position."""

    rows: tuple[RouthRow, ...]

    @property
    def first_column(self) -> tuple[Ratio, ...]:
        """The pivots from the highest power down."""
        return tuple(row.entries[0] for row in self.rows)

    @property
    def auxiliary(self) -> RouthRow | None:
        """The row above the first zero row: it spells the factor with roots symmetric to the axis."""
        for above, row in pairwise(self.rows):
            if row.kind == "zero row":
                return above
        return None


def routh_array(polynomial: Polynomial) -> RouthArray:
    """The array over the field of fractions; special rows where a pivot or a row vanishes identically.

    The polynomial must not be zero (ValueError).

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("K",))
    >>> s, K = ring.gen("s"), ring.gen("K")
    >>> array = routh_array(Polynomial.of(ring, s**3 + 5 * s**2 + (K - 6) * s + K))
    >>> [(str(x.numerator), str(x.denominator)) for x in array.first_column]
    [('1', '1'), ('5', '1'), ('4*K - 30', '5'), ('K', '1')]
    """
    ring, n = polynomial.ring, polynomial.degree
    if n < 0:
        raise ValueError("the zero polynomial has no Routh array")
    table = None if ring.has_relations else hurwitz_table(ring, polynomial.coefficients)
    if table is not None:
        return RouthArray(tuple(_regular_row(ring, n, k, table) for k in range(n + 1)))
    top = [Ratio.of(ring, c) for c in reversed(polynomial.coefficients)]
    rows = [RouthRow(n, tuple(top[0::2]))]
    for power in range(n - 1, -1, -1):
        if power == n - 1:
            entries, kind = list(top[1::2]), "given"
        else:
            entries, kind = _next_row(rows[-2].entries, rows[-1].entries), "computed"
        entries = entries[: power // 2 + 1]
        rows.append(_treated(power, entries, kind, rows[-1]))
    return RouthArray(tuple(rows))


def _regular_row(ring: Ring, degree: int, k: int, table: HurwitzTable) -> RouthRow:
    if k < 2:
        return RouthRow(degree - k, tuple(Ratio.of(ring, entry) for entry in table[k]))
    entries = tuple(Ratio.of(ring, entry, table[k - 1][0]) for entry in table[k])
    return RouthRow(degree - k, entries, "computed")


def _next_row(above: Sequence[Ratio], pivot_row: Sequence[Ratio]) -> list[Ratio]:
    factor = above[0] / pivot_row[0]
    return [
        above[j + 1] + -(factor * pivot_row[j + 1]) if j + 1 < len(pivot_row) else above[j + 1]
        for j in range(len(above) - 1)
    ]


def _treated(power: int, entries: list[Ratio], kind: str, above: RouthRow) -> RouthRow:
    ring = above.entries[0].ring
    if not any(entries):
        derived = [
            entry * Ratio.of(ring, ring.constant(above.power - 2 * j))
            for j, entry in enumerate(above.entries)
            if above.power > 2 * j
        ]
        return RouthRow(power, tuple(derived), "zero row", tuple(entries))
    zeros = next(i for i, entry in enumerate(entries) if entry)
    if not zeros:
        return RouthRow(power, tuple(entries), kind)
    shifted = entries[zeros:] + entries[:zeros]  # the zeros in front come back at the end
    mended = [a + (b if zeros % 2 == 0 else -b) for a, b in zip(entries, shifted, strict=True)]
    return RouthRow(power, tuple(mended), "zero pivot", tuple(entries))


def root_counts(coefficients: Sequence[Fraction | int]) -> RootCounts:
    """Exact counts for ascending rational coefficients (last one nonzero, else ValueError).

    >>> root_counts([-50, -25, 48, 24, 2, 1])
    RootCounts(right=1, axis=2, left=2)
    """
    if not coefficients or not coefficients[-1]:
        raise ValueError("the leading coefficient must not be zero")
    n = len(coefficients) - 1
    scale = lcm(*(Fraction(c).denominator for c in coefficients))
    top = [int(c * scale) for c in reversed(coefficients)]
    above, row = top[0::2], top[1::2]
    pivots, axis_from = [above[0]], None
    for power in range(n - 1, -1, -1):
        row = row[: power // 2 + 1]
        if not any(row):
            if axis_from is None:
                axis_from = n - power - 1
            row = [value * (power + 1 - 2 * j) for j, value in enumerate(above) if power + 1 > 2 * j]
        zeros = next(i for i, value in enumerate(row) if value)
        if zeros:
            sign = -1 if zeros % 2 else 1
            row = [a + sign * b for a, b in zip(row, row[zeros:] + row[:zeros], strict=True)]
        common = gcd(*row)  # a positive factor of a row changes no sign below
        row = [value // common for value in row]
        pivots.append(row[0])
        above, row = row, _next_integers(above, row)
    right = _changes(pivots)
    axis = 0 if axis_from is None else n - axis_from - 2 * _changes(pivots[axis_from:])
    return RootCounts(right, axis, n - right - axis)


def _next_integers(above: Sequence[int], row: Sequence[int]) -> list[int]:
    """Routh's next row times the size of the pivot, which is positive."""
    size, sign = abs(row[0]), 1 if row[0] > 0 else -1
    return [
        size * above[j + 1] - (sign * above[0] * row[j + 1] if j + 1 < len(row) else 0)
        for j in range(len(above) - 1)
    ]


def _changes(values: Sequence[int]) -> int:
    return sum((a > 0) != (b > 0) for a, b in pairwise(values))

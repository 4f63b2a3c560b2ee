"""Exact decisions for one letter: the real roots cut its interval into cells, one sample for each."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.box import Interval, Sign
from symplant.algebra.real_roots import RealRoot, between, real_roots
from symplant.algebra.ring import Element, Ring

__all__ = ["Cell", "cells", "interior_roots"]


@dataclass(frozen=True)
class Cell:
    """An open interval of one letter between neighbouring roots or ends, and a rational inside.

    `left` and `right` are None where the interval is unbounded.
    """

    left: RealRoot | None
    right: RealRoot | None
    sample: Fraction


def cells(
    ring: Ring, elements: Iterable[Element], letter: str, interval: Interval
) -> tuple[list[Cell], list[RealRoot]]:
    """The cells of an interval in which no element changes sign, and the roots that lie in it.

    The elements are nonzero and contain no other letter.  Roots at an end of the interval that
    belongs to it are listed too.  A single-valued interval has no cells.

    >>> ring = Ring("s", ("K",))
    >>> K = ring.gen("K")
    >>> found, roots = cells(ring, [K * (2 * K - 15)], "K", Interval(lower=Fraction(1)))
    >>> [cell.sample for cell in found], [root.exact for root in roots]
    ([Fraction(2, 1), Fraction(8, 1)], [Fraction(15, 2)])
    """
    elements = list(elements)
    low, high = _ends(interval)
    x = ring.gen(letter)
    # The ends are roots like any other, so that isolation keeps them apart from the true roots.
    marks = [end.denominator * x - end.numerator for end in (low, high) if end is not None]
    if interval.declared is Sign.NONZERO and not interval.contains(Fraction(0)):
        marks.append(x)
    isolated = real_roots(ring, [*elements, *marks], letter)
    start = next((i for i, r in enumerate(isolated) if r.exact == low), -1) if low is not None else -1
    stop = next((i for i, r in enumerate(isolated) if r.exact == high), 0) if high is not None else 0
    last = stop if high is not None else len(isolated)
    found: list[Cell] = []
    for i in range(start, last):
        left = isolated[i] if i >= 0 else None
        right = isolated[i + 1] if i + 1 < len(isolated) else None
        sample = between(left.upper if left else None, right.lower if right else None)
        found.append(Cell(left, right, sample))
    inside = isolated[max(start, 0) : last + 1]
    true_roots = {root.factor for root in real_roots(ring, elements, letter)} if elements else set()
    inside = [r for r in inside if r.exact is None or interval.contains(r.exact)]
    return found, [root for root in inside if root.factor in true_roots]


def interior_roots(found: Sequence[Cell]) -> list[RealRoot]:
    """The roots between neighbouring cells."""
    return [cell.right for cell in found[:-1] if cell.right is not None]


def _ends(interval: Interval) -> tuple[Fraction | None, Fraction | None]:
    """The infimum and supremum that bounds and declared sign give together."""
    low, high = interval.lower, interval.upper
    if interval.declared.is_nonnegative:
        low = max(low, Fraction(0)) if low is not None else Fraction(0)
    if interval.declared.is_nonpositive:
        high = min(high, Fraction(0)) if high is not None else Fraction(0)
    return low, high

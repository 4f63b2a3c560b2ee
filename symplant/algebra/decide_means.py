"""Positivity by the inequality of arithmetic and geometric means, found by a linear programme.

A negative term -d x^b is outweighed by two positive terms whose exponents have the mean b:
w (r x^a + x^c / r) >= 2 w x^b for every w, r > 0.  Which terms pay for which is a linear programme
(in floats); its answer is rounded to rationals and the remaining coefficients are verified exactly.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.box import Sign
from symplant.algebra.ring import Element, Ring

__all__ = ["positive_by_means"]

#: Most terms and most pairs that are handed to the linear programme.
LARGEST_TERMS, LARGEST_PAIRS = 3000, 40_000
RATIOS = (Fraction(1), Fraction(2), Fraction(1, 2), Fraction(4), Fraction(1, 4))

Exponents = tuple[int, ...]


@dataclass(frozen=True)
class _Pair:
    first: int
    second: int
    target: int
    ratio: Fraction


def positive_by_means(ring: Ring, element: Element, most: int = LARGEST_PAIRS) -> str:
    """Why the element is positive in the box, or "" if no certificate was found.

    >>> from symplant.algebra.box import Box, Interval
    >>> box = Box({x: Interval(declared=Sign.POSITIVE) for x in "ab"})
    >>> ring = Ring("s", ("a", "b"), box)
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> positive_by_means(ring, a**4 - a**2 * b**2 + b**4)
    'each negative term is outweighed by two positive ones (arithmetic and geometric mean)'
    """
    positive, negative, strict = _sorted_terms(ring, element)
    if not negative or not positive or len(positive) + len(negative) > LARGEST_TERMS:
        return ""
    pairs = _pairs(positive, negative, most)
    if not pairs or {pair.target for pair in pairs} != set(range(len(negative))):
        return ""
    weights = _weights(pairs, list(positive.values()), list(negative.values()))
    if weights is None or not _verified(pairs, weights, positive, negative, strict):
        return ""
    return "each negative term is outweighed by two positive ones (arithmetic and geometric mean)"


def _sorted_terms(
    ring: Ring, element: Element
) -> tuple[dict[Exponents, int], dict[Exponents, int], set[Exponents]]:
    """Terms that are never negative, terms that may be (sizes), and the never-zero ones of the former."""
    positive: dict[Exponents, int] = {}
    negative: dict[Exponents, int] = {}
    strict: set[Exponents] = set()
    for monomial, value in element.terms():
        exponents, size = tuple(map(int, monomial)), int(value)
        sign = Sign.POSITIVE if size > 0 else Sign.NEGATIVE
        for place, exponent in enumerate(exponents):
            if exponent:
                sign = sign * ring.signs[place] ** exponent
        if sign.is_nonnegative:
            positive[exponents] = abs(size)
            if sign is Sign.POSITIVE:
                strict.add(exponents)
        else:
            negative[exponents] = abs(size)
    return positive, negative, strict


def _pairs(positive: dict[Exponents, int], negative: dict[Exponents, int], most: int) -> list[_Pair]:
    index = {exponents: i for i, exponents in enumerate(positive)}
    pairs: list[_Pair] = []
    for target, middle in enumerate(negative):
        for exponents, i in index.items():
            other = index.get(tuple(2 * m - e for m, e in zip(middle, exponents, strict=True)))
            if other is not None and other > i:
                pairs += [_Pair(i, other, target, ratio) for ratio in RATIOS]
        if len(pairs) > most:
            return []
    return pairs


def _weights(pairs: list[_Pair], supply: list[int], demand: list[int]) -> list[Fraction] | None:
    import numpy as np
    from scipy.optimize import linprog
    from scipy.sparse import coo_matrix

    rows, columns, values = list[int](), list[int](), list[float]()
    for column, pair in enumerate(pairs):
        for row, value in (
            (pair.first, float(pair.ratio)),
            (pair.second, float(1 / pair.ratio)),
            (len(supply) + pair.target, -2.0),
        ):
            rows.append(row)
            columns.append(column)
            values.append(value)
    matrix = coo_matrix((values, (rows, columns)), shape=(len(supply) + len(demand), len(pairs)))
    bounds = np.array([*supply, *(-d for d in demand)], dtype=float)
    # The least total weight leaves the most slack on the whole.
    answer = linprog(np.ones(len(pairs)), A_ub=matrix.tocsr(), b_ub=bounds, method="highs")
    if not answer.success:
        return None
    return [Fraction(float(x)).limit_denominator(1 << 10) if x > 1e-12 else Fraction(0) for x in answer.x]


def _verified(
    pairs: list[_Pair],
    weights: list[Fraction],
    positive: dict[Exponents, int],
    negative: dict[Exponents, int],
    strict: set[Exponents],
) -> bool:
    """Exact: every demand met, no term spent twice, and something that is never zero left over."""
    paid: defaultdict[int, Fraction] = defaultdict(Fraction)
    spent: defaultdict[int, Fraction] = defaultdict(Fraction)
    for pair, weight in zip(pairs, weights, strict=True):
        if weight < 0:
            return False
        paid[pair.target] += 2 * weight
        spent[pair.first] += weight * pair.ratio
        spent[pair.second] += weight / pair.ratio
    if any(paid[i] < size for i, size in enumerate(negative.values())):
        return False
    left = [size - spent[i] for i, size in enumerate(positive.values())]
    return min(left) >= 0 and any(
        slack > 0 and exponents in strict for slack, exponents in zip(left, positive, strict=True)
    )

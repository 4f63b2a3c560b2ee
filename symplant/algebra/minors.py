"""The greatest common divisor of all minors of largest size, without computing them all.

Bound: at a point modulo a prime where the leading coefficient of one minor survives, the common
factor keeps its degree (its roots are integral over the local ring there), so a gcd of degree 0
there proves that there is no common factor.

Candidate: the gcd of the minors that differ from one nonzero minor in a single row or column.  It
is a multiple of the gcd asked for.

Exact multiplicity, for each factor f of the candidate: take a minor N of size q that is coprime to f,
as large as f allows.  Over the local ring at f the matrix is equivalent to diag(1, ..., 1, S) with S
the Schur complement of N, and N S is the matrix T of the minors that border N.  Hence the part of
f in the gcd of the minors of size k is its part in the gcd of the minors of size k - q of the small
matrix T (Smith normal form over a local ring; see M. Newman, Integral Matrices, 1972, ch. II).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations
from math import comb
from random import Random

from symplant.algebra.determinant import determinant
from symplant.algebra.division import coprime_basis, divide, factors_in_variable, normalised, product
from symplant.algebra.modular_point import ModularPoint, elimination_pivots, field_roots, random_point
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.rank import Rank, bordered_minors, exact_rank, minor
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Verdict

__all__ = ["MinorsGcd", "gcd_of_minors"]

SEED = 90125
#: Most minors of the small matrix T that are looked at.
MINOR_LIMIT = 20_000
#: Draws of a point at which a factor has a root.
ROOT_ATTEMPTS = 400

Rows = Sequence[Sequence[Element]]


@dataclass(frozen=True)
class MinorsGcd:
    """The gcd over the field of the letters, primitive in the variable, with its proof.

    With the verdict `undecided` the polynomial is a multiple of the gcd.
    """

    polynomial: Polynomial
    rank: Rank
    verdict: Verdict
    reason: str


def gcd_of_minors(ring: Ring, rows: Rows, rank: Rank | None = None) -> MinorsGcd:
    """The gcd of the minors of size rank(rows), as polynomials in the variable; shape r x c.

    >>> ring = Ring("s", ("a", "b"))
    >>> s, a, b = (ring.gen(x) for x in "sab")
    >>> gcd_of_minors(ring, [[s + a, ring.zero, b], [ring.zero, s + a, a]]).polynomial.element
    s + a
    """
    rank = rank or exact_rank(ring, rows)
    one = Polynomial.constant(ring, 1)
    candidate = normalised(Polynomial.of(ring, rank.minor))
    variable = ring.variable
    if candidate.degree <= 0:
        return MinorsGcd(one, rank, Verdict.PROVED, f"a minor of size {rank.value} is free of {variable}")
    if rank.value == len(rows) == len(rows[0]):
        return MinorsGcd(candidate, rank, Verdict.PROVED, "the matrix is square: its determinant")
    bound = _degree_bound(ring, rows, rank)
    if bound == 0:
        return MinorsGcd(
            one,
            rank,
            Verdict.PROVED,
            f"at a point modulo a prime the minors of size {rank.value} have no common factor and one of "
            "them keeps its degree",
        )
    for chosen, columns in _neighbours(rows, rank):
        if candidate.degree == bound:
            break
        candidate = candidate.gcd(Polynomial(ring, minor(ring, rows, chosen, columns)))
        if candidate.degree == 0:
            return MinorsGcd(one, rank, Verdict.PROVED, f"minors of size {rank.value} have no common factor")
    result, failed = one, ""
    for factor in coprime_basis([factor for factor, _ in factors_in_variable(candidate)]):
        part, why = _part(ring, rows, rank.value, factor)
        if part is None:
            failed = why
            part = _factor_part(candidate, factor)
        result = product(result, part)
    if failed:
        return MinorsGcd(normalised(result), rank, Verdict.UNDECIDED, failed)
    reason = f"the multiplicity of each factor in the minors of size {rank.value} from its local Smith form"
    return MinorsGcd(normalised(result), rank, Verdict.PROVED, reason)


def _neighbours(rows: Rows, rank: Rank) -> Iterator[tuple[list[int], list[int]]]:
    """The choices that differ from the known minor in one row or one column."""
    for column in range(len(rows[0])):
        if column not in rank.columns:
            for old in rank.columns:
                yield list(rank.rows), sorted({*rank.columns, column} - {old})
    for row in range(len(rows)):
        if row not in rank.rows:
            for old in rank.rows:
                yield sorted({*rank.rows, row} - {old}), list(rank.columns)


def _degree_bound(ring: Ring, rows: Rows, rank: Rank) -> int:
    """A proved upper bound of the degree of the gcd."""
    known = Polynomial.of(ring, rank.minor)
    random = Random(SEED)
    while True:
        point = random_point(ring, random)
        common = point.image(known.element)
        if common.degree() == known.degree:
            break
    images = [[point.image(entry) for entry in row] for row in rows]
    one = point.image(ring.one)
    for chosen, columns in _neighbours(rows, rank):
        if common.degree() == 0:
            return 0
        common = common.gcd(determinant([[images[i][j] for j in columns] for i in chosen], one))
    return int(common.degree())


def _part(ring: Ring, rows: Rows, size: int, factor: Polynomial) -> tuple[Polynomial | None, str]:
    """The part of the factor in the gcd of the minors of this size, or None and what failed."""
    found = _minor_coprime_to(ring, rows, factor)
    if found is None:
        return None, f"no point was found at which a factor of degree {factor.degree} has a root"
    chosen, columns, common = found
    if common.degree > 0:
        parts = []
        for piece in (common, divide(factor, common)):
            part, why = _part(ring, rows, size, piece)
            if part is None:
                return None, why
            parts.append(part)
        return product(*parts), ""
    table = bordered_minors(ring, rows, chosen, columns)
    order = size - len(chosen)
    height, width = len(table), len(table[0]) if table else 0
    if comb(height, order) * comb(width, order) > MINOR_LIMIT:
        return None, f"more than {MINOR_LIMIT} minors of the Schur complement"
    total = Polynomial.constant(ring, 0)
    for some_rows in combinations(range(height), order):
        for some_columns in combinations(range(width), order):
            total = total.gcd(Polynomial(ring, minor(ring, table, some_rows, some_columns)))
            if total.gcd(factor).degree == 0:
                return Polynomial.constant(ring, 1), ""
    return _factor_part(total, factor), ""


def _factor_part(polynomial: Polynomial, factor: Polynomial) -> Polynomial:
    """The part of a nonzero polynomial whose roots are roots of the factor."""
    result, rest = Polynomial.constant(polynomial.ring, 1), polynomial
    common = rest.gcd(factor)
    while common.degree > 0:
        result, rest = product(result, common), divide(rest, common)
        common = rest.gcd(common)
    return result


def _minor_coprime_to(
    ring: Ring, rows: Rows, factor: Polynomial
) -> tuple[list[int], list[int], Polynomial] | None:
    """Rows and columns of a minor that is not zero at some root of the factor, and its gcd with it.

    Of a few points the one with the largest rank is taken: a larger minor makes a smaller T.
    """
    random = Random(SEED + factor.degree)
    best: tuple[list[int], list[int]] | None = None
    seen = 0
    for _ in range(ROOT_ATTEMPTS):
        point = random_point(ring, random)
        root = _root(point, factor)
        if root is None:
            continue
        values = [[point.value(entry, root) for entry in row] for row in rows]
        found = elimination_pivots(values, point.prime)
        if best is None or len(found[0]) > len(best[0]):
            best = found
        seen += 1
        if seen == 2:
            break
    if best is None:
        return None
    common = Polynomial(ring, minor(ring, rows, *best)).gcd(factor)
    return (*best, common)


def _root(point: ModularPoint, factor: Polynomial) -> int | None:
    image = point.image(factor.element)
    if image.degree() != factor.degree:
        return None
    return min(field_roots(image), default=None)

"""Scalings of the letters and of the variable that leave the roots of polynomials in place or scale them.

Multiply each letter p_i by t**a_i and the variable by t**b.  A polynomial only gains a factor exactly
when a.e + b*j is the same for all its terms p**e s**j: linear equations with integer coefficients.  The
monomials that no such scaling changes form a lattice, orthogonal to the scalings: through them alone
the roots depend on the letters (E. Buckingham, Phys. Rev. 4 (1914) 345-376, with exponents read off the
polynomials instead of units).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from flint import fmpz_mat

from symplant.algebra.ring import Element, Ring

__all__ = ["Monomial", "Scaling", "find_scaling"]

#: Letters with their exponents, in the declared order; letters with exponent 0 are left out.
Monomial = tuple[tuple[str, int], ...]


@dataclass(frozen=True)
class Scaling:
    """Through which monomials the roots depend on the letters.

    `groups`: the roots are functions of these monomials alone.  Where `frequency` is not (), the roots
    are its `root`-th root times a function of the monomials `ratios` alone (there are fewer of them).
    `frozen` are letters that occur inside functions and therefore may not be scaled: the roots may
    depend on them in any way.
    """

    groups: tuple[Monomial, ...]
    ratios: tuple[Monomial, ...]
    frequency: Monomial
    root: int
    frozen: tuple[str, ...]


def find_scaling(ring: Ring, elements: Sequence[Element], frozen: Sequence[str] = ()) -> Scaling:
    """The groups of nonzero polynomials, all letters taken nonzero.

    >>> ring = Ring("s", ("m", "c", "k"))
    >>> s, m, c, k = (ring.gen(x) for x in "smck")
    >>> scaling = find_scaling(ring, [m * s**2 + c * s + k])
    >>> scaling.groups
    ((('m', -1), ('c', 1)), (('m', -1), ('k', 1)))
    >>> scaling.frequency, scaling.root, scaling.ratios
    ((('m', -1), ('c', 1)), 1, ((('m', 1), ('c', -2), ('k', 1)),))
    """
    letters = [letter for letter in ring.letters if letter not in frozen]
    used = ring.used([e for e in elements if e])
    letters = [letter for letter in letters if letter in used]
    places = [ring.position[letter] for letter in letters]
    power = ring.position[ring.variable]
    rows: list[list[int]] = []
    for element in elements:
        terms = [[*(int(e[p]) for p in places), int(e[power])] for e in element.monoms()] if element else []
        rows += [[a - b for a, b in zip(term, terms[0], strict=True)] for term in terms[1:]]
    width = len(letters)
    growth = _growth(rows, width)
    groups = _saturated([row[:width] for row in rows], width)
    whole = _saturated(rows, width + 1)
    ratios = _saturated(_with_zero_last(whole), width + 1)
    frequency, root = _frequency(whole, ratios, width)
    root = root if any(frequency) else 0
    return Scaling(
        tuple(_monomial(letters, _oriented(v, growth)) for v in groups),
        tuple(_monomial(letters, _oriented(v[:width], growth)) for v in ratios) if root else (),
        _monomial(letters, frequency) if root else (),
        root,
        tuple(letter for letter in frozen),
    )


def _null_basis(rows: Sequence[Sequence[int]], width: int) -> list[list[int]]:
    """A basis over the rationals, in integers, of the vectors orthogonal to all rows."""
    if not rows:
        return [[int(i == j) for j in range(width)] for i in range(width)]
    matrix, rank = fmpz_mat([list(row) for row in rows]).nullspace()
    table = matrix.table()
    return [[int(table[i][j]) for i in range(width)] for j in range(int(rank))]


def _saturated(rows: Sequence[Sequence[int]], width: int) -> list[list[int]]:
    """A short basis of all integer vectors in the space that the rows span."""
    if not any(any(row) for row in rows):
        return []
    null = _null_basis(rows, width)
    basis = _null_basis(null, width) if null else [[int(i == j) for j in range(width)] for i in range(width)]
    integral = _all_integer(basis)
    return [[int(x) for x in row] for row in fmpz_mat(integral).lll().table()]


def _all_integer(basis: list[list[int]]) -> list[list[int]]:
    """From a basis over the rationals to one of all integer vectors of its span.

    With the column operations that bring the basis to Hermite form [H 0], the span is that of the first
    rows of the inverse of these operations, and those rows are part of a basis of all integer vectors.
    """
    rank, width = len(basis), len(basis[0])
    stacked = [
        [*(basis[i][j] for i in range(rank)), *(int(j == k) for k in range(width))] for j in range(width)
    ]
    table = fmpz_mat(stacked).hnf().table()
    operations = fmpz_mat([[int(x) for x in row[rank:]] for row in table])
    inverse = operations.transpose().inv()
    rows = inverse.table()
    return [[int(Fraction(int(x.p), int(x.q))) for x in rows[i]] for i in range(rank)]


def _with_zero_last(basis: Sequence[Sequence[int]]) -> list[list[int]]:
    """The vectors of the span whose last entry is 0."""
    lead = next((row for row in basis if row[-1]), None)
    if lead is None:
        return [list(row) for row in basis]
    return [
        [lead[-1] * x - row[-1] * y for x, y in zip(row, lead, strict=True)]
        for row in basis
        if row is not lead
    ]


def _frequency(
    whole: Sequence[Sequence[int]], ratios: Sequence[Sequence[int]], width: int
) -> tuple[list[int], int]:
    """The shortest monomial that scales like a power of the variable, and the power (0: there is none)."""
    # Integer combinations of the last entries reach their gcd; Euclid's algorithm on the vectors finds it.
    vectors = [list(row) for row in whole if row[-1]]
    if not vectors:
        return [], 0
    while len(vectors) > 1:
        vectors.sort(key=lambda v: abs(v[-1]))
        low, high = vectors[0], vectors[1]
        factor = high[-1] // low[-1]
        high = [x - factor * y for x, y in zip(high, low, strict=True)]
        vectors = [low, *([high] if high[-1] else []), *vectors[2:]]
    best = vectors[0] if vectors[0][-1] < 0 else [-x for x in vectors[0]]
    improved = True
    while improved:
        improved = False
        for ratio in ratios:
            for sign in (1, -1):
                other = [x + sign * y for x, y in zip(best, ratio, strict=True)]
                if sum(map(abs, other)) < sum(map(abs, best)):
                    best, improved = other, True
    return best[:width], -best[-1]


def _growth(rows: Sequence[Sequence[int]], width: int) -> list[int] | None:
    """A scaling that makes the variable grow, as exponents of the letters; None if there is none."""
    for vector in _null_basis(rows, width + 1):
        if vector[-1]:
            return [x if vector[-1] > 0 else -x for x in vector[:width]]
    return None


def _oriented(vector: Sequence[int], growth: Sequence[int] | None) -> list[int]:
    """The direction in which a monomial grows with the variable, else with its first letter."""
    weight = sum(a * b for a, b in zip(vector, growth, strict=True)) if growth else 0
    first = next((x for x in vector if x), 0)
    return [-x for x in vector] if weight < 0 or (weight == 0 and first < 0) else list(vector)


def _monomial(letters: Sequence[str], exponents: Sequence[int]) -> Monomial:
    return tuple((letter, exponent) for letter, exponent in zip(letters, exponents, strict=True) if exponent)

"""Equations in the letters under which a mode may become uncontrollable.

Give the input the direction t and, if need be, the feedback F: what is uncontrollable stays so with
the single input (A + B F, B t) (M. Heymann, IEEE Trans. Automatic Control 13 (1968) 748-749).  The pencil
[A + B F - sE, B t] has n + 1 minors of full size: the determinant and its n replacements N_i(s).  A common
root s of the N_i makes the vector (1, s, s^2, ...) a null vector of the matrix W of their
coefficients.  So every equation asked for is a factor of the maximal minors of W; with E = 1 the
determinant of W is that of the controllability matrix, up to the sign and the row multipliers.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from random import Random

from symplant.algebra.determinant import determinant
from symplant.algebra.division import quotient
from symplant.algebra.minor_factors import maximal_minor_factors
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.zeros.blocks import Blocks
from symplant.errors import UndecidedError

__all__ = ["Candidates", "candidate_conditions"]

SEED = 4711
#: Single inputs that are tried before the search is given up.
ATTEMPTS = 60
#: Single inputs with equations that are too large before the search is given up.
FAILURES = 3


@dataclass(frozen=True)
class Candidates:
    """Irreducible equations: wherever a further mode is uncontrollable, one of them holds.

    Each is to be checked.  Those in `alone` may make a case on their own; those in `together` do not,
    but with further equations they may.  `found` is False if no single input was found for which the
    equations do not vanish identically.
    """

    alone: tuple[Element, ...]
    together: tuple[Element, ...]
    found: bool


def candidate_conditions(blocks: Blocks, generic: Polynomial, enough: int = 2) -> Candidates:
    """Candidates for the input side; `generic` is the input-decoupling polynomial for general letters.

    Single inputs are tried until `enough` of them gave equations: the more, the fewer are `alone`.
    Errors: UndecidedError where the equations of every single input grow too large.
    """
    ring, (_, m, _) = blocks.ring, blocks.size
    found: list[list[Element]] = []
    failures = 0
    for count, (feedback, direction) in enumerate(_inputs(blocks)):
        try:
            factors = _single_input(blocks, feedback, direction, generic)
        except UndecidedError:
            failures += 1
            if failures == FAILURES and not found:
                raise
            if failures == FAILURES:
                break
            continue
        if factors is not None:
            found.append(factors)
        if count + 1 >= m and len(found) >= min(m, enough):
            break
    if not found and failures:
        raise UndecidedError("the conditions", "single inputs, whose equations grew too large")
    if not found:
        return Candidates((), (), False)
    sorted_out = sorted((irreducible_factors(ring, factors) for factors in found), key=_weight)
    alone: list[Element] = []
    together: list[Element] = []
    for condition in sorted_out[0]:
        # A single equation that makes a case divides what every single input gives.
        lasting = all(any(not f % condition for f in factors) for factors in found)
        (alone if lasting else together).append(condition)
    return Candidates(tuple(alone), tuple(together) if len(ring.letters) > 1 else (), True)


def _weight(conditions: Sequence[Element]) -> int:
    return sum(len(condition) for condition in conditions)


def _inputs(blocks: Blocks) -> Iterator[tuple[list[list[int]] | None, list[int]]]:
    """Feedback (m x n, None for none) and direction (m).

    The inputs one by one, then with one state fed back to one input, then mixtures.
    """
    n, m, _ = blocks.size
    units = [[int(i == j) for i in range(m)] for j in range(m)]
    for unit in units:
        yield None, unit
    if m < 2:
        return
    random = Random(SEED)
    yield None, [random.choice((-2, -1, 1, 2, 3)) for _ in range(m)]
    single = [(unit, j, k) for unit in units for j in range(m) for k in range(n)]
    random.shuffle(single)
    for unit, j, k in single[:ATTEMPTS]:
        yield [[int((i, x) == (j, k)) for x in range(n)] for i in range(m)], unit
    for _ in range(ATTEMPTS):
        direction = [random.choice((-2, -1, 1, 2, 3)) for _ in range(m)]
        yield [[random.randint(-2, 2) for _ in range(n)] for _ in range(m)], direction


def _single_input(
    blocks: Blocks, feedback: list[list[int]] | None, direction: Sequence[int], generic: Polynomial
) -> list[Element] | None:
    """Elements whose product vanishes wherever a further mode is uncontrollable; None if it is zero."""
    ring, (n, m, _) = blocks.ring, blocks.size
    column = [_weighted(ring, row, direction) for row in blocks.drive]
    dynamics = [list(row) for row in blocks.dynamics]
    if feedback is not None:
        for i, row in enumerate(blocks.drive):
            for k in range(n):
                dynamics[i][k] = dynamics[i][k] + _weighted(ring, row, [feedback[j][k] for j in range(m)])
    if not any(column):
        return None
    replacements = []
    for k in range(n):
        rows = [[*row[:k], entry, *row[k + 1 :]] for row, entry in zip(dynamics, column, strict=True)]
        replacements.append(Polynomial.of(ring, determinant(rows, ring.one)))
    reduced = [quotient(p, generic) for p in replacements if not p.is_zero]
    factors = _coefficient_factors(ring, reduced)
    if factors is not None:
        return factors
    characteristic = quotient(Polynomial.of(ring, determinant(dynamics, ring.one)), generic)
    if characteristic.degree + generic.degree == n:
        return None  # W is deficient because a mode is uncontrollable from this input
    # With a singular E it may also be deficient though no finite mode is hidden.
    return _resultant_factors(ring, characteristic, reduced)


def _weighted(ring: Ring, row: Sequence[Element], weights: Sequence[int]) -> Element:
    total = ring.zero
    for entry, weight in zip(row, weights, strict=True):
        if entry and weight:
            total = total + weight * entry
    return total


def _coefficient_factors(ring: Ring, polynomials: Sequence[Polynomial]) -> list[Element] | None:
    """Factors of a maximal minor of the coefficient matrix; None if all these minors vanish."""
    if not polynomials:
        return None
    width = max(p.degree for p in polynomials) + 1
    rows = [[*p.coefficients, *([ring.zero] * (width - 1 - p.degree))] for p in polynomials]
    return maximal_minor_factors(ring, rows)


def _resultant_factors(
    ring: Ring, characteristic: Polynomial, polynomials: Sequence[Polynomial]
) -> list[Element] | None:
    common = characteristic
    for polynomial in polynomials:
        common = common.gcd(polynomial)
    if common.degree > 0:
        return None
    random = Random(SEED)
    mixed = ring.zero
    for polynomial in polynomials:
        mixed = mixed + random.choice((-2, -1, 1, 2, 3)) * polynomial.element
    if characteristic.degree <= 0 or not mixed:
        return None
    found = ring.reduce(characteristic.element.resultant(ring.reduce(mixed), ring.variable))
    return [found] if found else None

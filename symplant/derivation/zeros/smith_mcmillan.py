"""Poles and zeros of the transfer matrix (Smith-McMillan form), counted with multiplicity.

With d = det(sE - A), the minor of the transfer matrix for outputs I and inputs J is N_IJ / d, where
N_IJ is the determinant of the pencil bordered by these outputs and inputs.  The pole polynomial is the
least common denominator of the minors of all orders, that is d / c with c the gcd of d and all N_IJ;
the zero polynomial is the gcd of the N_IJ of the order of the normal rank, divided by c (A. G. J.
MacFarlane and N. Karcanias, Int. J. Control 24 (1976) 33-74).  What c takes away are the hidden
modes: c is the input- and output-decoupling zeros together, those that are both counted once (H. H.
Rosenbrock, State-Space and Multivariable Theory, 1970).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import combinations
from math import comb

from symplant.algebra.division import divide, divides, normalised, product
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.rank import Rank
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.blocks import Blocks

__all__ = ["SmithMcMillan", "hidden_part", "infinite_orders", "smith_mcmillan"]

#: Most minors of the transfer matrix that are looked at.
MINOR_LIMIT = 4_000
#: Most minors looked at for the structure at infinity, which needs every one.
INFINITE_LIMIT = 250


@dataclass(frozen=True)
class SmithMcMillan:
    """`hidden` is c, `poles` d/c, `system_zeros` the gcd of the N_IJ of full order, `zeros` that over c."""

    hidden: Polynomial
    poles: Polynomial
    system_zeros: Polynomial
    zeros: Polynomial
    verdict: Verdict
    reason: str


def smith_mcmillan(blocks: Blocks, rank: Rank, decoupling: tuple[Polynomial, Polynomial]) -> SmithMcMillan:
    """Poles and zeros of the transfer matrix; `rank` is that of the pencil, `decoupling` its id and od."""
    characteristic = normalised(blocks.characteristic)
    hidden, why, settled = hidden_part(blocks, characteristic, decoupling)
    zeros, complete = _zeros_of_full_order(blocks, rank)
    zeros = zeros if divides(hidden, zeros) else product(zeros, hidden)
    verdict = Verdict.PROVED if settled and complete else Verdict.UNDECIDED
    if not complete:
        why = f"the transfer matrix has more than {MINOR_LIMIT} minors of full order"
    return SmithMcMillan(
        hidden, divide(characteristic, hidden), normalised(zeros), divide(zeros, hidden), verdict, why
    )


def hidden_part(
    blocks: Blocks, characteristic: Polynomial, decoupling: tuple[Polynomial, Polynomial]
) -> tuple[Polynomial, str, bool]:
    """c, from above by gcds of minors, from below by the decoupling zeros, which divide it."""
    first, second = decoupling
    below = divide(product(first, second), first.gcd(second))
    above = characteristic
    for count, (outputs, inputs) in enumerate(_choices(blocks)):
        if above.degree == below.degree:
            return (
                above,
                "the minors of the transfer matrix leave only the decoupling zeros uncancelled",
                True,
            )
        if count >= MINOR_LIMIT:
            return above, f"the transfer matrix has more than {MINOR_LIMIT} minors", False
        above = above.gcd(blocks.bordered(outputs, inputs))
    return above, "all minors of the transfer matrix", True


def _choices(blocks: Blocks) -> Iterator[tuple[tuple[int, ...], tuple[int, ...]]]:
    _, m, p = blocks.size
    for order in range(1, min(m, p) + 1):
        for outputs in combinations(range(p), order):
            for inputs in combinations(range(m), order):
                yield outputs, inputs


def _zeros_of_full_order(blocks: Blocks, rank: Rank) -> tuple[Polynomial, bool]:
    """The gcd of all N_IJ of the order r of the normal rank, and whether all could be looked at.

    A matrix of rank r has N_IJ N_KL = N_IL N_KJ for its minors of order r, so the gcd over all
    choices is the gcd over I times the gcd over J, divided by the one minor that both contain.
    """
    n, m, p = blocks.size
    outputs = tuple(i - n for i in rank.rows[n:])
    inputs = tuple(j - n for j in rank.columns[n:])
    order = len(outputs)
    if comb(p, order) + comb(m, order) > MINOR_LIMIT:
        return normalised(Polynomial(blocks.ring, rank.minor)), False
    known = Polynomial(blocks.ring, rank.minor)
    over_rows = over_columns = known
    for rows in combinations(range(p), order):
        if over_rows.degree and rows != outputs:
            over_rows = over_rows.gcd(blocks.bordered(rows, inputs))
    for columns in combinations(range(m), order):
        if over_columns.degree and columns != inputs:
            over_columns = over_columns.gcd(blocks.bordered(outputs, columns))
    return divide(product(over_rows, over_columns), known), True


def infinite_orders(blocks: Blocks, rank: Rank) -> tuple[tuple[int, ...] | None, str]:
    """Orders of the zeros (positive) and poles (negative) at infinity, smallest first.

    The sum of the first k is the least relative degree of the minors of order k (T. Kailath, Linear
    Systems, 1980, sec. 6.5).  None with a reason where there are too many minors.
    """
    n, m, p = blocks.size
    order = rank.value - n
    if sum(comb(p, k) * comb(m, k) for k in range(1, order + 1)) > INFINITE_LIMIT:
        return None, f"the transfer matrix has more than {INFINITE_LIMIT} minors"
    degree = blocks.characteristic.degree
    least: dict[int, int] = {0: 0}
    for outputs, inputs in _choices(blocks):
        if len(outputs) > order:
            break
        found = blocks.bordered(outputs, inputs)
        if not found.is_zero:
            k = len(outputs)
            least[k] = min(least.get(k, degree - found.degree), degree - found.degree)
    return tuple(least[k] - least[k - 1] for k in range(1, order + 1)), ""

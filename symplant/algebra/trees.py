"""Ring elements as expression trees, in the order in which people write them."""

from __future__ import annotations

from fractions import Fraction

from symplant.algebra.expression import Node, Number, Power, Product, Quotient, Sum, integer
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring, Term

__all__ = ["ratio_tree", "tree_of"]


def tree_of(ring: Ring, element: Element) -> Node:
    """The tree of an element, expanded, terms in printing order.

    >>> ring = Ring("s", ("k", "m"))
    >>> tree_of(ring, 2 * ring.gen("k")).factors[0].value
    Fraction(2, 1)
    """
    terms = [_term(ring, term) for term in ring.terms(element)]
    if not terms:
        return integer(0)
    return terms[0] if len(terms) == 1 else Sum(tuple(terms))


def ratio_tree(ratio: Ratio) -> Node:
    """The tree of a ratio; a denominator 1 is left out."""
    top = tree_of(ratio.ring, ratio.numerator)
    if ratio.denominator.is_one():
        return top
    return Quotient(top, tree_of(ratio.ring, ratio.denominator))


def _term(ring: Ring, term: Term) -> Node:
    value, powers = term
    factors: list[Node] = [
        ring.meanings[place] if exponent == 1 else Power(ring.meanings[place], exponent)
        for place, exponent in powers
    ]
    if value != 1 or not factors:
        factors.insert(0, Number(Fraction(value)))
    return factors[0] if len(factors) == 1 else Product(tuple(factors))

"""Elements and ratios as expression trees that keep their factors."""

from __future__ import annotations

from fractions import Fraction

from symplant.algebra.expression import Node, Number, Power, Product, Quotient, negated
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.text import FACTOR_LIMIT
from symplant.algebra.trees import tree_of

__all__ = ["factored_ratio_tree", "factored_tree"]


def factored_tree(ring: Ring, element: Element) -> Node:
    """The tree of an element as a product of its irreducible factors, sign in front.

    >>> from symplant.algebra.text import node_text
    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> node_text(factored_tree(ring, -2 * a * (a + b) ** 2))
    '-2*a*(a + b)**2'
    """
    if not element or len(element) > FACTOR_LIMIT:
        return tree_of(ring, element)
    content, found = irreducible(element)
    value, factors = int(content), []
    for factor, exponent in found:
        if ring.is_led_negative(factor):
            factor, value = -factor, value * (-1) ** int(exponent)
        factors.append((factor, int(exponent)))
    if len(factors) == 1 and factors[0][1] == 1:
        return tree_of(ring, element)
    factors.sort(key=lambda item: (len(item[0]), [-e for e in _first_powers(ring, item[0])]))
    parts: list[Node] = []
    for factor, exponent in factors:
        tree = tree_of(ring, factor)
        parts.append(tree if exponent == 1 else Power(tree, exponent))
    if abs(value) != 1 or not parts:
        parts.insert(0, Number(Fraction(abs(value))))
    whole = parts[0] if len(parts) == 1 else Product(tuple(parts))
    return negated(whole) if value < 0 else whole


def factored_ratio_tree(ratio: Ratio) -> Node:
    """The tree of a ratio, both parts factored, a minus sign in front; a denominator 1 is left out.

    >>> from symplant.algebra.text import node_text
    >>> ring = Ring("s", ("k", "m"))
    >>> node_text(factored_ratio_tree(Ratio.of(ring, -ring.gen("k"), ring.gen("m"))))
    '-k/m'
    """
    ring = ratio.ring
    if ratio.denominator.is_one():
        return factored_tree(ring, ratio.numerator)
    bottom = factored_tree(ring, ratio.denominator)
    if len(ratio.numerator) == 1 and ring.is_led_negative(ratio.numerator):
        return negated(Quotient(factored_tree(ring, -ratio.numerator), bottom))
    return Quotient(factored_tree(ring, ratio.numerator), bottom)


def _first_powers(ring: Ring, element: Element) -> list[int]:
    powers = dict(ring.terms(element)[0][1])
    return [powers.get(place, 0) for place in ring.print_order]

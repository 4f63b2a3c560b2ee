"""Roots of a polynomial in closed form, where they are short enough to be read."""

from __future__ import annotations

from dataclasses import dataclass
from math import gcd

from symplant.algebra.division import factors_in_variable
from symplant.algebra.expression import Call, Node, Product, Quotient, Sum, negated
from symplant.algebra.factored_tree import factored_ratio_tree, factored_tree
from symplant.algebra.polynomial import Polynomial, content
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.square_part import square_part
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.zeros.vanishing import Surroundings

__all__ = ["ClosedForm", "ClosedZero", "closed_forms", "quadratic_trees", "root_of_linear"]


@dataclass(frozen=True)
class ClosedZero:
    """One root: its tree, and its value as a ratio where no root sign is needed."""

    tree: Node
    ratio: Ratio | None = None


@dataclass(frozen=True)
class ClosedForm:
    """The roots of one irreducible factor.

    `zeros` is empty where the factor has too high a degree: then the factor itself is the answer.
    Where `when` vanishes (None: it cannot) a root goes to infinity and the forms do not hold.
    """

    factor: Polynomial
    multiplicity: int
    zeros: tuple[ClosedZero, ...]
    when: Element | None


def closed_forms(polynomial: Polynomial, around: Surroundings | None = None) -> tuple[ClosedForm, ...]:
    """Closed forms of the roots, factor by factor, simplest first; () for a polynomial without roots.

    A factor has closed forms if its degree is at most 2, or at most 4 and even (s**2 put in), or if it
    is a binomial of degree 4.  Letters are taken in general position inside the box.

    >>> from symplant.algebra.text import node_text
    >>> ring = Ring("s", ("m", "k"))
    >>> (form,) = closed_forms(Polynomial.of(ring, ring.gen("m") * ring.gen("s") ** 2 + ring.gen("k")))
    >>> [node_text(zero.tree) for zero in form.zeros]
    ['sqrt(-k/m)', '-sqrt(-k/m)']
    """
    if polynomial.is_zero:
        raise ValueError("every number is a root of the zero polynomial")
    ring = polynomial.ring
    return tuple(
        ClosedForm(factor, multiplicity, _zeros(factor), _may_vanish(ring, factor.leading, around))
        for factor, multiplicity in factors_in_variable(polynomial)
    )


def _zeros(factor: Polynomial) -> tuple[ClosedZero, ...]:
    ring, coefficients = factor.ring, factor.coefficients
    step = gcd(*(power for power, c in enumerate(coefficients) if c and power))
    inner = coefficients[::step]
    if len(inner) == 2 and step == 1:
        return (ClosedZero(*root_of_linear(ring, inner[0], inner[1])),)
    if len(inner) == 2 and step in (2, 4):
        square = _root_tree(Ratio.of(ring, -inner[0], inner[1]))
        roots = [square, negated(square)]
        return tuple(ClosedZero(tree) for tree in (roots if step == 2 else _square_roots(roots)))
    if len(inner) == 3 and step in (1, 2):
        roots = quadratic_trees(ring, *inner)
        return tuple(ClosedZero(tree) for tree in (roots if step == 1 else _square_roots(roots)))
    return ()


def _square_roots(trees: list[Node]) -> list[Node]:
    roots = [Call("sqrt", tree) for tree in trees]
    return [signed for root in roots for signed in (root, negated(root))]


def _root_tree(square: Ratio) -> Node:
    """A square root of a ratio, square factors in front; its sign is left open."""
    ring = square.ring
    top, inner_top = square_part(ring, square.numerator)
    bottom, inner_bottom = square_part(ring, square.denominator)
    front, inside = Ratio.of(ring, top, bottom), Ratio.of(ring, inner_top, inner_bottom)
    if inside.numerator.is_one() and inside.denominator.is_one():
        return factored_ratio_tree(front)
    root = Call("sqrt", factored_ratio_tree(inside))
    if front.numerator.is_one() and front.denominator.is_one():
        return root
    if front.numerator.is_one():
        return Quotient(root, factored_tree(ring, front.denominator))
    return Product((factored_ratio_tree(front), root))


def root_of_linear(ring: Ring, b: Element, a: Element) -> tuple[Node, Ratio]:
    """The root of a*w + b, as a tree and as a ratio."""
    value = Ratio.of(ring, -b, a)
    return factored_ratio_tree(value), value


def quadratic_trees(ring: Ring, c: Element, b: Element, a: Element) -> list[Node]:
    """The two roots of a*w**2 + b*w + c, common factors of numerator and denominator taken out."""
    if not b:
        square = _root_tree(Ratio.of(ring, -c, a))
        return [square, negated(square)]
    front, inside = square_part(ring, ring.reduce(b * b - 4 * a * c))
    bottom = 2 * a
    common = content(ring, [b, front, bottom])
    if int(bottom.leading_coefficient()) < 0:
        common = -common
    b, front, bottom = b // common, front // common, bottom // common
    if ring.is_led_negative(front):
        front = -front
    tree = factored_tree(ring, inside)
    root: Node = tree if inside.is_one() else Call("sqrt", tree)
    swing = root if front.is_one() else Product((factored_tree(ring, front), root))
    tops = [Sum((factored_tree(ring, -b), term)) for term in (swing, negated(swing))]
    if bottom.is_one():
        return list(tops)
    return [Quotient(top, factored_tree(ring, bottom)) for top in tops]


def _may_vanish(ring: Ring, leading: Element, around: Surroundings | None) -> Element | None:
    """The factors of a leading coefficient that the signs do not keep from vanishing; None if none."""
    known = {str(element) for element in around.nonzero} if around else set()
    total = ring.one
    for factor in irreducible_factors(ring, [leading]):
        if str(factor) not in known and not factored_sign(ring, factor).is_nonzero:
            total = total * factor
    return None if total.is_one() else total

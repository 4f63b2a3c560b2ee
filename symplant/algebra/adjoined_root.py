"""A root of a polynomial as an exact value: in the ring itself, or in the ring with square roots adjoined."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from symplant.algebra.box import Sign
from symplant.algebra.expression import Call, negated
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Generator, Ring
from symplant.algebra.square_part import square_part
from symplant.algebra.trees import tree_of

__all__ = ["AdjoinedRoot", "adjoined_roots", "ring_with_root"]


@dataclass(frozen=True)
class AdjoinedRoot:
    """`value` is a root in `ring`; `root` is the key of the last square root in it, "" if there is none.

    With `root` replaced by its negative the value is another root of the same polynomial.
    """

    ring: Ring
    value: Ratio
    root: str = ""


def ring_with_root(ring: Ring, square: Element, negative: bool = False) -> tuple[Ring, str]:
    """The ring with one more generator, a square root of an element; its key.

    The generator means the positive root of the element, or the negative one; it has no known sign,
    since the element may be negative.  A root that the ring already has is used again.

    >>> ring, key = ring_with_root(Ring("s", ("a",)), Ring("s", ("a",)).gen("a"))
    >>> ring.reduce(ring.gen(key) ** 3)
    _root1*a
    """
    if not negative:
        for function in ring.functions:
            if function.square and ring.reduce(ring.gen(function.key) ** 2) == square:
                return ring, function.key
    key = f"_root{sum(f.key.startswith('_root') for f in ring.functions) + 1}"
    terms = {tuple(int(e) for e in exponents): int(value) for exponents, value in square.terms()}
    tree = Call("sqrt", tree_of(ring, square))
    root = Generator(key, negated(tree) if negative else tree, Sign.REAL, (ring.keys, terms), "sqrt", tree)
    functions = (*ring.functions, root)
    return Ring(ring.variable, ring.letters, ring.box, functions, ring.undecidable), key


def adjoined_roots(factor: Polynomial) -> Iterator[AdjoinedRoot]:
    """Roots of an irreducible factor that together with their conjugates are all of them.

    For degree 1, 2, and for even polynomials of degree 4; nothing for others.

    >>> ring = Ring("s", ("k",))
    >>> (root,) = adjoined_roots(Polynomial.of(ring, ring.gen("s") ** 2 - 4 * ring.gen("k")))
    >>> root.value.numerator, root.value.denominator
    (2*_root1, 1)
    """
    ring, coefficients = factor.ring, factor.coefficients
    if factor.degree == 1:
        yield AdjoinedRoot(ring, Ratio.of(ring, -coefficients[0], coefficients[1]))
    elif factor.degree == 2:
        yield _of_quadratic(ring, coefficients)
    elif factor.degree == 4 and not coefficients[1] and not coefficients[3]:
        for negative in (False, True):
            inner = _of_quadratic(ring, coefficients[::2], negative)
            top, bottom = inner.value.numerator, inner.value.denominator
            target, key = ring_with_root(inner.ring, inner.ring.reduce(top * bottom))
            yield AdjoinedRoot(
                target, Ratio.of(target, target.gen(key), target.adopt(bottom, inner.ring)), key
            )


def _of_quadratic(ring: Ring, coefficients: Sequence[Element], negative: bool = False) -> AdjoinedRoot:
    c, b, a = coefficients
    front, inside = square_part(ring, ring.reduce(b * b - 4 * a * c))
    target, key = ring_with_root(ring, inside, negative)
    top = target.adopt(-b, ring) + target.adopt(front, ring) * target.gen(key)
    return AdjoinedRoot(target, Ratio.of(target, top, target.adopt(2 * a, ring)), key)

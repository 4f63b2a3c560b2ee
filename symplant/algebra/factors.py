"""Irreducible factors of an element, also where the coefficients are long."""

from __future__ import annotations

from flint import Ordering, fmpq, fmpq_mpoly_ctx

from symplant.algebra.ring import Element

__all__ = ["factors"]


def factors(element: Element) -> tuple[int, list[tuple[Element, int]]]:
    """The integer content and the irreducible factors with their exponents, in no particular order.

    Raises ValueError for zero, which has no factors.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> content, found = factors(-6 * a * b * (2**40 * b + 1) ** 2)
    >>> content, sorted((str(factor), exponent) for factor, exponent in found)
    (-6, [('1099511627776*b + 1', 2), ('a', 1), ('b', 1)])
    """
    if not element:
        raise ValueError("zero has no factors")
    try:
        content, found = element.factor()
    except OverflowError:
        return _by_rationals(element)
    return int(content), [(factor, int(exponent)) for factor, exponent in found]


def _by_rationals(element: Element) -> tuple[int, list[tuple[Element, int]]]:
    """The same over the rationals, where factors come out primitive with integer coefficients.

    python-flint (0.8 and 0.9) sorts the factors of integer polynomials by coefficients that it takes
    for 32-bit numbers, and fails with OverflowError where they are longer; of rational ones it does not.
    """
    context = element.context()
    rational = fmpq_mpoly_ctx.get(context.names(), Ordering.lex)
    content, found = rational.from_dict({e: fmpq(c) for e, c in element.to_dict().items()}).factor()
    whole = [
        (context.from_dict({e: int(c) for e, c in factor.to_dict().items()}), int(exponent))
        for factor, exponent in found
    ]
    return int(content), whole

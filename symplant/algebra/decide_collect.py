"""Signs by collecting in one letter: coefficients of one sign, or a quadratic without real roots."""

from __future__ import annotations

from symplant.algebra.box import Sign
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign

__all__ = ["collected_sign"]


def collected_sign(ring: Ring, element: Element, depth: int = 2) -> tuple[Sign, str]:
    """What collecting tells of the sign over the box, and why; (REAL, "") if nothing.

    Each coefficient is judged by its factors, and, `depth` times, by collecting again.

    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> collected_sign(ring, a**2 + a * b + b**2 + 1)[1]
    'as a quadratic in a it has a negative discriminant'
    """
    for key in sorted(ring.used([element]), key=lambda key: ring.position[key]):
        sign = _coefficientwise(ring, element, key, depth)
        if sign is not Sign.REAL:
            return sign, f"collected in {_shown(ring, key)}, every coefficient has the same sign"
    for key in sorted(ring.used([element]), key=lambda key: ring.position[key]):
        sign = _quadratic(ring, element, key, depth)
        if sign is not Sign.REAL:
            return sign, f"as a quadratic in {_shown(ring, key)} it has a negative discriminant"
    return Sign.REAL, ""


def _sign(ring: Ring, element: Element, depth: int) -> Sign:
    sign = factored_sign(ring, element)
    if sign is Sign.REAL and depth > 0 and len(element) < 200:
        return collected_sign(ring, element, depth - 1)[0]
    return sign


def _coefficientwise(ring: Ring, element: Element, key: str, depth: int) -> Sign:
    base = ring.signs[ring.position[key]]
    total = Sign.ZERO
    coefficients = ring.coefficients(element, key)
    if len(coefficients) < 2:
        return Sign.REAL
    for power, coefficient in enumerate(coefficients):
        if not coefficient:
            continue
        part = base**power
        if part is Sign.REAL:
            return Sign.REAL
        part = part * _sign(ring, coefficient, depth - 1)
        if part in (Sign.REAL, Sign.NONZERO):
            return Sign.REAL
        total = total + part
        if total is Sign.REAL:
            return Sign.REAL
    return total


def _quadratic(ring: Ring, element: Element, key: str, depth: int) -> Sign:
    coefficients = ring.coefficients(element, key)
    if len(coefficients) != 3:
        return Sign.REAL
    c, b, a = coefficients
    lead = _sign(ring, a, depth - 1)
    if lead not in (Sign.POSITIVE, Sign.NEGATIVE):
        return Sign.REAL
    gap = ring.reduce(4 * a * c - b * b)
    if not gap:
        return Sign.NONNEGATIVE if lead is Sign.POSITIVE else Sign.NONPOSITIVE
    below = _sign(ring, gap, depth - 1)
    if below is Sign.POSITIVE:
        return lead
    if below is Sign.NONNEGATIVE:
        return Sign.NONNEGATIVE if lead is Sign.POSITIVE else Sign.NONPOSITIVE
    return Sign.REAL


def _shown(ring: Ring, key: str) -> str:
    from symplant.algebra.text import node_text

    return node_text(ring.meanings[ring.position[key]])

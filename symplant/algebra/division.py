"""Exact division of polynomials in the variable over the field of the letters."""

from __future__ import annotations

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element

__all__ = ["coprime_basis", "divide", "divides", "factors_in_variable", "normalised", "product", "quotient"]


def divide(high: Polynomial, low: Polynomial) -> Polynomial:
    """The primitive part of high / low; ValueError if `low` does not divide `high`.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("a",))
    >>> s, a = ring.gen("s"), ring.gen("a")
    >>> divide(Polynomial.of(ring, a * s**2 - a**3), Polynomial.of(ring, s - a)).element
    s + a
    """
    return normalised(quotient(high, low))


def quotient(high: Polynomial, low: Polynomial) -> Polynomial:
    """high / low with its content: exact where `low` is primitive and the ring has no relations.

    In a ring with relations it is multiplied by a power of the leading coefficient of `low`.
    ValueError if `low` does not divide `high`.
    """
    result, rest = _pseudo_divide(high, low)
    if not rest.is_zero:
        raise ValueError("not divisible")
    return result


def divides(low: Polynomial, high: Polynomial) -> bool:
    """Whether `low` divides `high` over the field of the letters (everything divides zero)."""
    return _pseudo_divide(high, low)[1].is_zero


def normalised(polynomial: Polynomial) -> Polynomial:
    """The primitive part with a positive first coefficient: the same for all multiples by letters.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("a",))
    >>> normalised(Polynomial.of(ring, -2 * ring.gen("a") * ring.gen("s"))).element
    s
    """
    part = polynomial.primitive()
    return Polynomial(part.ring, -part.element) if part.ring.is_led_negative(part.element) else part


def product(first: Polynomial, *others: Polynomial) -> Polynomial:
    """The product in normal form."""
    total = first.element
    for other in others:
        total = first.ring.reduce(total * other.element)
    return Polynomial.of(first.ring, total)


def factors_in_variable(polynomial: Polynomial) -> list[tuple[Polynomial, int]]:
    """The irreducible factors that contain the variable, with their multiplicities, simplest first.

    In a ring with relations they are pairwise coprime, but may factor further.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("a",))
    >>> s, a = ring.gen("s"), ring.gen("a")
    >>> [(f.element, e) for f, e in factors_in_variable(Polynomial.of(ring, a * s**2 * (s + a)))]
    [(s, 2), (s + a, 1)]
    """
    ring = polynomial.ring
    found = [
        (normalised(Polynomial.of(ring, factor)), exponent)
        for factor, exponent in polynomial.factors()[1]
        if factor.degrees()[ring.position[ring.variable]]
    ]
    found.sort(key=lambda item: (item[0].degree, len(item[0].element), str(item[0].element)))
    if not ring.has_relations:
        return found
    rest, result = polynomial.primitive(), []
    for factor in coprime_basis([factor for factor, _ in found]):
        exponent = 0
        while divides(factor, rest):
            rest, exponent = divide(rest, factor), exponent + 1
        # A factor that is itself a power of another in the quotient ring leaves a smaller one over.
        if exponent:
            result.append((factor, exponent))
    if rest.degree > 0:
        result.append((rest, 1))
    return result


def coprime_basis(polynomials: list[Polynomial]) -> list[Polynomial]:
    """Pairwise coprime polynomials whose products have the same roots as the given ones together."""
    basis: list[Polynomial] = []
    pending = [p for p in polynomials if p.degree > 0]
    while pending:
        current = pending.pop(0)
        for index, known in enumerate(basis):
            common = current.gcd(known)
            if common.degree > 0:
                del basis[index]
                parts = [common, divide(current, common), divide(known, common)]
                pending = [p for p in parts if p.degree > 0] + pending
                break
        else:
            basis.append(current)
    return basis


def _pseudo_divide(high: Polynomial, low: Polynomial) -> tuple[Polynomial, Polynomial]:
    ring = high.ring
    if low.is_zero:
        raise ZeroDivisionError("division by the zero polynomial")
    if not ring.has_relations and not high.is_zero:
        # In a polynomial ring the primitive parts divide each other exactly when the polynomials do.
        small = low.primitive().element
        whole, left = divmod(high.element, small)
        if not left:
            return Polynomial(ring, whole), Polynomial(ring, ring.zero)
    s = ring.gen(ring.variable)
    result: Element = ring.zero
    rest = high
    while not rest.is_zero and rest.degree >= low.degree:
        shift = s ** (rest.degree - low.degree) * rest.leading
        result = ring.reduce(result * low.leading + shift)
        rest = Polynomial.of(ring, rest.element * low.leading - low.element * shift)
    return Polynomial(ring, result), rest

"""Rational values put in for some letters of ring elements, the result kept in integers."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from symplant.algebra.ring import Element, Ring

__all__ = ["substituted"]


def substituted(ring: Ring, elements: Sequence[Element], values: Mapping[str, Fraction]) -> list[Element]:
    """The elements with letters replaced, all multiplied by one common positive integer.

    Only generators are replaced: a letter inside a function stays there, so the caller must see to
    it that no function of the replaced letters is left.

    >>> ring = Ring("s", ("k", "m"))
    >>> substituted(ring, [ring.gen("k") + ring.gen("m")], {"k": Fraction(1, 2)})
    [2*m + 1]
    """
    degrees = [element.degrees() for element in elements if element]
    powers: list[tuple[int, list[int]]] = []
    for key, value in values.items():
        place = ring.position[key]
        degree = max((int(d[place]) for d in degrees), default=0)
        if degree:
            # value**e times denominator**degree is an integer for every e up to the degree.
            p, q = value.numerator, value.denominator
            powers.append((place, [p**e * q ** (degree - e) for e in range(degree + 1)]))
    if not powers:
        return list(elements)
    places = {place for place, _ in powers}
    results = []
    for element in elements:
        terms: dict[tuple[int, ...], int] = {}
        for exponents, coefficient in element.terms():
            number = int(coefficient)
            for place, table in powers:
                number *= table[int(exponents[place])]
            kept = tuple(0 if i in places else int(e) for i, e in enumerate(exponents))
            terms[kept] = terms.get(kept, 0) + number
        results.append(ring.context.from_dict(terms))
    return results

"""Relative degree of each channel, and the special values at which it changes."""

from __future__ import annotations

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.derivation.derive import Channel
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.zeros.findings import DegreeChange, RelativeDegree
from symplant.derivation.zeros.vanishing import Surroundings, vanishing

__all__ = ["relative_degree"]


def relative_degree(channel: Channel, around: Surroundings) -> RelativeDegree:
    """The relative degree for general letters, and every irreducible condition that changes it.

    A factor that both leading coefficients share belongs to the common multiplier of numerator and
    denominator and is judged like any other: by the degrees that are left where it vanishes.
    """
    ring = channel.numerator.ring
    conditions = irreducible_factors(ring, [channel.numerator.leading, channel.denominator.leading])
    known = [str(element) for element in around.nonzero]
    changes = []
    for condition in conditions:
        if str(condition) in known:
            continue
        below = _degree_where(ring, channel.denominator, condition)
        if below is None:
            continue  # the plant is singular there: no transfer function
        above = _degree_where(ring, channel.numerator, condition)
        becomes = None if above is None else below - above
        if becomes != channel.relative_degree:
            changes.append(DegreeChange(condition, becomes, vanishing(ring, condition, around)))
    return RelativeDegree(channel.name, channel.relative_degree, channel.numerator.leading, tuple(changes))


def _degree_where(ring: Ring, polynomial: Polynomial, condition: Element) -> int | None:
    """The degree where an irreducible condition vanishes, other letters general; None if all vanishes."""
    for power in range(polynomial.degree, -1, -1):
        coefficient = polynomial.coefficients[power]
        if coefficient and ring.reduce(coefficient % condition):
            return power
    return None

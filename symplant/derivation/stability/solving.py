"""Conditions as they are shown, also solved for a letter in which they are linear."""

from __future__ import annotations

from symplant.algebra.decide_search import letters_in
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.derivation.stability.finding import Bound, Condition
from symplant.derivation.stability.settling import Settled

__all__ = ["condition_of", "solved"]

#: Conditions of no more terms are also solved for a letter.
LARGEST_SOLVED = 60


def condition_of(ring: Ring, settled: Settled) -> Condition:
    """The condition as it is answered."""
    bounds = solved(ring, settled.element) if settled.open else ()
    return Condition(settled.element, settled.status, settled.because, settled.name, bounds)


def solved(ring: Ring, element: Element) -> tuple[Bound, ...]:
    """The condition solved for each letter in which it is linear with a coefficient of known sign."""
    if len(element) > LARGEST_SOLVED:
        return ()
    bounds = []
    for letter in ring.letters:
        parts = ring.coefficients(element, letter)
        if len(parts) != 2:
            continue
        inside = ring.used(parts) - set(ring.letters)
        if any(letter in letters_in(ring, [ring.gen(key)]) for key in inside):
            continue
        sign = factored_sign(ring, parts[1])
        if sign.is_nonzero and (sign.is_nonnegative or sign.is_nonpositive):
            value = Ratio.of(ring, -parts[0], parts[1])
            bounds.append(Bound(letter, ">" if sign.is_nonnegative else "<", value))
    return tuple(bounds)

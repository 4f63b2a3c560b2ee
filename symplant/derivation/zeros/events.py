"""What happens to the roots of a polynomial along one letter, as factored equations.

A root crosses the origin where the last coefficient vanishes, an imaginary pair crosses where the last
Hurwitz determinant but one does (L. Orlando, Math. Ann. 71 (1911) 233-245), a root goes to infinity
where the leading coefficient vanishes, two meet where a discriminant or a resultant does, and one
cancels a pole where its resultant with the characteristic polynomial does.  In discrete time the
boundary is the unit circle, which the bilinear map takes to the imaginary axis.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations
from math import log10
from typing import Literal, TypeAlias

from symplant.algebra.bilinear import bilinear
from symplant.algebra.box import Sign
from symplant.algebra.decide_search import letters_in
from symplant.algebra.division import factors_in_variable
from symplant.algebra.hurwitz import hurwitz_minor
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.stability.crossings import frequency_squared
from symplant.derivation.zeros.vanishing import Surroundings

__all__ = ["EventEquation", "EventEquations", "EventKind", "event_equations"]

#: Decimal logarithm of the number of terms above which an equation is not worked out.
SIZE_LIMIT = 9.0
EventKind: TypeAlias = Literal[
    "crosses at origin",
    "crosses on imaginary axis",
    "crosses at z = 1",
    "crosses at z = -1",
    "crosses on unit circle",
    "goes to infinity",
    "zeros meet",
    "cancels a pole",
]


@dataclass(frozen=True)
class EventEquation:
    """One irreducible equation: `equation` is zero where the event happens.

    `frequency_squared` holds for a crossing of an imaginary pair (of the bilinear image in discrete
    time): where it is negative the equation describes two real roots of opposite sign instead, and
    nothing crosses.  None where it is not needed or not known.
    """

    event: EventKind
    equation: Element
    frequency_squared: Ratio | None = None


@dataclass(frozen=True)
class EventEquations:
    """The equations found, notes, and the kinds of event whose equation would have been too large."""

    equations: tuple[EventEquation, ...]
    notes: tuple[str, ...]
    too_large: frozenset[EventKind]


def event_equations(
    zeros: Polynomial, poles: Polynomial | None, letter: str, around: Surroundings, discrete: bool
) -> EventEquations:
    """The equations that contain the letter and can hold inside the box as far as signs tell."""
    ring = zeros.ring
    factors = [factor for factor, _ in factors_in_variable(zeros)]
    raw: list[tuple[EventKind, Element, Ratio | None]] = []
    notes: list[str] = []
    large: set[EventKind] = set()
    for factor in factors:
        found, said, much = _boundary(factor, discrete)
        raw += found
        notes += said
        large |= much
        raw.append(("goes to infinity", factor.leading, None))
        if factor.degree > 1:
            slope = Polynomial(ring, factor.element.derivative(ring.variable))
            if _is_too_large(factor, slope):
                large.add("zeros meet")
            else:
                raw.append(("zeros meet", factor.element.discriminant(ring.variable), None))
    for first, second in combinations(factors, 2):
        if _is_too_large(first, second):
            large.add("zeros meet")
        else:
            raw.append(("zeros meet", _resultant(first, second), None))
    if poles is not None:
        found, said, much = _cancellations(factors, poles)
        raw += found
        notes += said
        large |= much
    equations = tuple(_sifted(ring, raw, letter, around))
    return EventEquations(equations, tuple(dict.fromkeys(notes)), frozenset(large))


#: Equations with their frequency, notes, and kinds of event that were left out as too large.
_Raw: TypeAlias = "tuple[list[tuple[EventKind, Element, Ratio | None]], list[str], set[EventKind]]"


def _boundary(factor: Polynomial, discrete: bool) -> _Raw:
    found: list[tuple[EventKind, Element, Ratio | None]] = []
    notes: list[str] = []
    kind: EventKind = "crosses on unit circle" if discrete else "crosses on imaginary axis"
    image = bilinear(factor) if discrete else factor
    edge = "on the unit circle" if discrete else "on the imaginary axis"
    if image.is_zero or image.degree < factor.degree:
        notes.append("a zero lies at z = -1 for all values")
    elif discrete:
        found.append(("crosses at z = -1", image.leading, None))
    if image.degree < 1:
        return found, notes, set()
    if not image.coefficients[0]:
        notes.append(
            "a zero lies at z = 1 for all values" if discrete else "a zero lies at the origin for all values"
        )
    else:
        found.append(("crosses at z = 1" if discrete else "crosses at origin", image.coefficients[0], None))
    if image.degree > 1:
        order = image.degree - 1
        if _is_too_large(image, image, order):
            return found, notes, {kind}
        pair = image.ring.reduce(hurwitz_minor(image.ring, image.coefficients, order))
        if pair:
            found.append((kind, pair, frequency_squared(image)))
        else:
            notes.append(
                f"some zeros lie symmetric to the boundary for all values: none of them crosses {edge}"
            )
    return found, notes, set()


def _cancellations(factors: Sequence[Polynomial], poles: Polynomial) -> _Raw:
    found: list[tuple[EventKind, Element, Ratio | None]] = []
    notes: list[str] = []
    large: set[EventKind] = set()
    for pole, _ in factors_in_variable(poles):
        for factor in factors:
            if _is_too_large(factor, pole):
                large.add("cancels a pole")
                continue
            resultant = _resultant(factor, pole)
            if resultant:
                found.append(("cancels a pole", resultant, None))
            else:
                notes.append("a zero cancels a pole for all values")
    return found, notes, large


def _is_too_large(first: Polynomial, second: Polynomial, order: int | None = None) -> bool:
    """Whether a resultant, or a determinant of `order` rows, is likely to have too many terms.

    The estimate is the number of products in one term of the determinant of Sylvester's matrix, each
    factor with the mean number of terms of a coefficient.
    """
    sizes = [log10(max(1.0, len(p.element) / (p.degree + 1))) for p in (first, second)]
    products = second.degree * sizes[0] + first.degree * sizes[1] if order is None else order * sizes[0]
    # Relations are applied after the resultant only, which makes it larger on the way.
    return products > (SIZE_LIMIT * 2 / 3 if first.ring.has_relations else SIZE_LIMIT)


def _resultant(first: Polynomial, second: Polynomial) -> Element:
    ring = first.ring
    return ring.reduce(first.element.resultant(second.element, ring.variable))


def _sifted(
    ring: Ring,
    raw: Sequence[tuple[EventKind, Element, Ratio | None]],
    letter: str,
    around: Surroundings,
) -> Iterator[EventEquation]:
    seen: set[tuple[str, str]] = set()
    excluded = {str(element) for element in around.nonzero}
    for event, element, frequency in raw:
        for equation in irreducible_factors(ring, [ring.reduce(element)]):
            key = (event, str(equation))
            if key in seen or key[1] in excluded or letter not in letters_in(ring, [equation]):
                continue
            seen.add(key)
            if frequency is not None and _is_negative(ring, frequency):
                continue  # two real roots of opposite sign: nothing crosses
            if not factored_sign(ring, equation).is_nonzero:
                yield EventEquation(event, equation, frequency)


def _is_negative(ring: Ring, ratio: Ratio) -> bool:
    return factored_sign(ring, ratio.numerator) * factored_sign(ring, ratio.denominator) is Sign.NEGATIVE

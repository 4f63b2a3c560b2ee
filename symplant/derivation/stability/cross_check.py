"""The reduced conditions against a second criterion: Routh's array, in discrete time Jury's table."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from symplant.algebra.decide_search import letters_in, respects
from symplant.algebra.enclosure import Ball, ball_value, certified_sign, generator_balls, working_precision
from symplant.algebra.hurwitz import hurwitz_minor
from symplant.algebra.jury import critical_minor, inside_circle
from symplant.algebra.points import points
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.routh import root_counts
from symplant.algebra.verdict import Check, Verdict
from symplant.derivation.stability.settling import Settled
from symplant.derivation.stability.subject import Subject

__all__ = ["cross_checks"]

#: Points of the box, binary digits of balls, and most terms of a polynomial.
POINTS, BITS, LARGEST = 24, 333, 5000
#: Up to this degree and number of terms the critical determinants are compared as polynomials.
DEGREE, TERMS = 5, 60


def cross_checks(subject: Subject, settled: Sequence[Settled]) -> tuple[Check, ...]:
    """Checks of the reduced conditions; () where no second criterion applies."""
    if any(part.symmetric for part in subject.parts) or not subject.parts:
        return ()
    if len(subject.polynomial.element) > LARGEST:
        return ()
    found = [_at_points(subject, settled)]
    if subject.discrete:
        found += [_critical(part.polynomial, part.image) for part in subject.parts]
    return tuple(check for check in found if check is not None)


def _critical(polynomial: Polynomial, image: Polynomial) -> Check | None:
    """The last Hurwitz determinant but one of the image is 2^(n(n-1)/2) times the critical minor."""
    n = polynomial.degree
    if not 2 <= n <= DEGREE or len(polynomial.element) > TERMS or image.degree < n:
        return None
    ring = polynomial.ring
    ours = hurwitz_minor(ring, image.coefficients, n - 1)
    theirs = ring.reduce(2 ** (n * (n - 1) // 2) * critical_minor(polynomial))
    return Check(
        f"Hurwitz determinant {n - 1}",
        "after the bilinear map, against Jury's determinant of order "
        f"{n - 1} from the polynomial in {ring.variable}",
        Verdict.PROVED if ours == theirs else Verdict.REFUTED,
    )


def _at_points(subject: Subject, settled: Sequence[Settled]) -> Check | None:
    ring = subject.ring
    letters = letters_in(ring, [subject.polynomial.element, *subject.nonzero, subject.content])
    elements = [c.element for c in settled if c.open]
    never = any(c.status == "never" for c in settled)
    size = max(sum(len(element) for element in elements), 1)
    most = min(POINTS if letters else 1, max(1, subject.effort.exact_terms // (4 * size)))
    met = 0
    for point in points(ring.box, letters, subject.nominal or {}, most):
        if not respects(ring, [*subject.nonzero, subject.content], point):
            continue
        second = _second_opinion(subject, point)
        signs = [certified_sign(ring, element, point) for element in elements]
        if second is None or None in signs:
            continue
        met += 1
        ours = not never and all(sign == 1 for sign in signs)
        if ours != second:
            where = ", ".join(f"{name} = {value}" for name, value in point.items())
            return Check("stability conditions", _method(subject, met), Verdict.REFUTED, where)
    if not met:
        return None
    verdict = Verdict.AGREES if subject.functions else Verdict.PROVED
    return Check("stability conditions", _method(subject, met), verdict)


def _method(subject: Subject, met: int) -> str:
    criterion = "Jury's table" if subject.discrete else "Routh's array in numbers"
    arithmetic = f"balls of {BITS} bits" if subject.functions else "exact arithmetic"
    return (
        f"{criterion} at {met} point{'s' * (met != 1)} of the box, in {arithmetic}, on the whole polynomial"
    )


def _second_opinion(subject: Subject, point: Mapping[str, Fraction]) -> bool | None:
    """Whether all roots are inside at a point, by the other criterion; None where it cannot tell."""
    ring, coefficients = subject.ring, subject.polynomial.coefficients
    if subject.functions:
        return _by_balls(subject, point) if subject.discrete else None
    values = [ring.value(c, point) for c in coefficients]
    if not values[-1]:
        return None
    if subject.discrete:
        return inside_circle(values)
    counts = root_counts(values)
    return counts.left == len(values) - 1


def _by_balls(subject: Subject, point: Mapping[str, Fraction]) -> bool | None:
    ring, coefficients = subject.ring, subject.polynomial.coefficients
    with working_precision(BITS):
        balls = generator_balls(ring, point, ring.used(coefficients))
        values: list[Ball] = [ball_value(ring, c, balls) for c in coefficients]
        if not all(value.is_finite() for value in values) or values[-1].contains(0):
            return None
        return inside_circle(values)

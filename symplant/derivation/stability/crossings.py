"""Where stability can be lost, and how: through the origin, as an oscillation, through infinity."""

from __future__ import annotations

from collections.abc import Sequence

from symplant.algebra.determinant import determinant
from symplant.algebra.hurwitz import hurwitz_matrix, hurwitz_minor
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.derivation.stability.candidates import leading
from symplant.derivation.stability.finding import Crossing
from symplant.derivation.stability.settling import Settled
from symplant.derivation.stability.subject import Subject

__all__ = ["crossings", "frequency_squared"]


def crossings(subject: Subject, settled: Sequence[Settled]) -> tuple[Crossing, ...]:
    """The crossings that the conditions left open allow, and the leading coefficients that can vanish.

    A root reaches the boundary only where the last coefficient or the last Hurwitz determinant but one
    vanishes, or comes from infinity where the leading coefficient does (L. Orlando, Math. Ann. 71
    (1911) 233-245, for the determinant); the other conditions cannot be the first to fail.
    """
    found: list[Crossing] = []
    for condition in settled:
        if not condition.open:
            continue
        for member in condition.members:
            image = subject.parts[member.part].image
            if member.event == "origin":
                at, detail = ("unit circle", "z = 1") if subject.discrete else ("origin", "")
                found.append(Crossing(condition.element, at, None, detail))  # type: ignore[arg-type]
            elif member.event == "minus one":
                found.append(Crossing(condition.element, "unit circle", None, "z = -1"))
            elif member.event == "pair" and subject.discrete:
                found.append(Crossing(condition.element, "unit circle", None, "complex pair"))
            elif member.event == "pair":
                found.append(Crossing(condition.element, "imaginary pair", frequency_squared(image)))
    for part in subject.parts:
        vanishing = leading(subject, part.polynomial).vanishing
        if vanishing is not None:
            found.append(Crossing(vanishing, "infinity"))
    unique: dict[tuple[str, str, str], Crossing] = {}
    for crossing in found:
        unique.setdefault((str(crossing.element), crossing.at, crossing.detail), crossing)
    return tuple(unique.values())


def frequency_squared(polynomial: Polynomial) -> Ratio | None:
    """The square of the frequency of an imaginary pair, where the last determinant but one vanishes.

    For degree 2 it is a_0/a_2.  Above that, the auxiliary polynomial s^2 + omega^2 divides the row of
    s^3 in Routh's array, which is odd: its two entries have the ratio omega^2.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("a", "b", "c"))
    >>> s, a, b, c = (ring.gen(x) for x in "sabc")
    >>> frequency_squared(Polynomial.of(ring, s**3 + a * s**2 + b * s + c)).numerator
    b
    """
    ring, a, n = polynomial.ring, polynomial.coefficients, polynomial.degree
    if n < 2:
        return None
    if n == 2:
        return Ratio.of(ring, a[0], a[2])
    if n == 3:
        return Ratio.of(ring, a[1], a[3])
    order = n - 3
    below = hurwitz_minor(ring, a, order)
    if not below:
        return None
    # The second entry of that row is the minor with its last column moved on by one.
    columns = [*range(order - 1), order]
    rows = [[row[j] for j in columns] for row in hurwitz_matrix(ring, a)[:order]]
    return Ratio.of(ring, determinant(rows, ring.one), below)

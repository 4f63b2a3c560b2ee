"""Two letters: an exact and complete decision by cells of the plane, one rational sample in each.

The zeros of the leading and last coefficients and of the last Hurwitz determinants but one cut the plane
into cells in which the number of roots beyond the boundary is constant.  The first letter's axis is cut at
the roots of leading coefficients, discriminants and resultants with respect to the second one (G. E.
Collins, Lecture Notes in Computer Science 33 (1975) 134-183); above a sample of each piece the
second letter's axis is cut by the curves themselves.  Only open cells are looked at: the set of
stable points is open, so if no open cell is stable no point is.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from fractions import Fraction
from itertools import combinations

from symplant.algebra.box import Interval
from symplant.algebra.decide_search import letters_in
from symplant.algebra.decide_single import cells
from symplant.algebra.ring import Element, Ring
from symplant.algebra.substitution import substituted
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.stability.boundary import simple_image
from symplant.derivation.stability.subject import Subject
from symplant.derivation.stability.witnesses import classify, edges_of

__all__ = ["open_cells", "stable_cell"]

#: Largest number of curves, their largest degree, and most samples.
CURVES, DEGREE, SAMPLES = 10, 14, 3000


def open_cells(subject: Subject) -> Iterator[dict[str, Fraction]] | None:
    """One point of every open cell of the box; None if the letters are not two or it would take too long."""
    ring = subject.ring
    if len(subject.letters) != 2:
        return None
    used = ring.used([part.polynomial.element for part in subject.parts]) - {ring.variable, *ring.letters}
    if letters_in(ring, [ring.gen(key) for key in used]):
        return None  # a function of the letters: the curves are not algebraic
    if any(not cells(ring, [], x, ring.box.intervals.get(x, Interval()))[0] for x in subject.letters):
        return None  # a letter with a single value leaves the box without open cells
    elements: list[Element] = [e for e in subject.nonzero if ring.used([e]) & set(subject.letters)]
    for part in subject.parts:
        image = simple_image(part.image) if part.symmetric else part.image
        elements += [part.polynomial.leading, *edges_of(image)]
    curves = irreducible_factors(ring, [e for e in elements if e])
    if len(curves) > CURVES or any(max(map(int, c.degrees())) > DEGREE for c in curves):
        return None
    across, along = sorted(
        subject.letters, key=lambda x: -max((_degree(ring, c, x) for c in curves), default=0)
    )
    return _walk(ring, curves, across, along)


def stable_cell(subject: Subject) -> tuple[dict[str, Fraction] | None, bool]:
    """A stable point found in a cell, and whether every cell was looked at."""
    samples = open_cells(subject)
    if samples is None:
        return None, False
    try:
        for point in samples:
            verdict = classify(subject, point)
            if verdict == "stable":
                return point, True
            if verdict is None:
                return None, False
    except ArithmeticError:
        return None, False
    return None, True


def _walk(ring: Ring, curves: Sequence[Element], across: str, along: str) -> Iterator[dict[str, Fraction]]:
    low, high = (ring.box.intervals.get(x, Interval()) for x in (across, along))
    count = 0
    for piece in cells(ring, _projection(ring, curves, along, high), across, low)[0]:
        above = [e for e in substituted(ring, curves, {across: piece.sample}) if e]
        for cell in cells(ring, above, along, high)[0]:
            count += 1
            if count > SAMPLES:
                raise ArithmeticError("too many cells")
            yield {across: piece.sample, along: cell.sample}


def _projection(ring: Ring, curves: Sequence[Element], along: str, interval: Interval) -> list[Element]:
    """Elements without `along` at whose zeros the order of the curves above may change."""
    found: list[Element] = []
    steep = [c for c in curves if _degree(ring, c, along)]
    found += [c for c in curves if not _degree(ring, c, along)]
    place = ring.position[along]
    for curve in steep:
        found.append(ring.coefficients(curve, along)[-1])
        if _degree(ring, curve, along) > 1:
            found.append(curve.discriminant(place))
    found += [first.resultant(second, place) for first, second in combinations(steep, 2)]
    ends = {end for end in (interval.lower, interval.upper) if end is not None}
    ends.add(Fraction(0))  # a declared sign ends there; elsewhere the cut does no harm
    for end in ends:
        found += substituted(ring, steep, {along: end})
    return irreducible_factors(ring, [e for e in found if e])


def _degree(ring: Ring, element: Element, letter: str) -> int:
    return int(element.degrees()[ring.position[letter]])

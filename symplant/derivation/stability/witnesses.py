"""Points of the box at which the plant is certainly stable, or certainly not."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from fractions import Fraction
from itertools import islice, product
from math import comb
from typing import Literal, TypeAlias

from symplant.algebra.box import Interval
from symplant.algebra.decide_search import SignTable, letters_in, respects
from symplant.algebra.decide_single import cells
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.hurwitz import hurwitz_minors
from symplant.algebra.points import centre, points, simplified
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.routh import RootCounts, root_counts
from symplant.algebra.substitution import substituted
from symplant.derivation.stability.subject import Subject

__all__ = ["PointVerdict", "classify", "counts_at", "edges_of", "find_point"]

#: "axis": no root beyond the boundary, but some on it.
PointVerdict: TypeAlias = Literal["stable", "unstable", "axis"]
#: Points that lines are drawn through.
LINES = 16
#: A condition with more terms does not steer the search: judging a point exactly is faster then.
LONGEST = 5000


def counts_at(subject: Subject, point: Mapping[str, Fraction]) -> RootCounts | None:
    """Exact numbers of roots outside, on and inside the boundary; None for functions of letters.

    A degree that drops at the point is the degree there: roots at infinity are not counted.
    """
    if subject.functions:
        return None
    ring = subject.ring
    right = axis = left = 0
    for part in subject.parts:
        values = [ring.value(c, point) for c in part.polynomial.coefficients]
        while values and not values[-1]:
            values.pop()
        if not values:
            return None
        degree = len(values) - 1
        if subject.discrete:
            values = _bilinear(values)
            while not values[-1]:
                values.pop()
        counts = root_counts(values)
        # Degrees that the map lost are roots at z = -1.
        lost = degree - (len(values) - 1)
        right += part.multiplicity * counts.right
        axis += part.multiplicity * (counts.axis + lost)
        left += part.multiplicity * counts.left
    return RootCounts(right, axis, left)


def _bilinear(values: Sequence[Fraction]) -> list[Fraction]:
    n = len(values) - 1
    result = [Fraction(0)] * (n + 1)
    for power, value in enumerate(values):
        for i in range(power + 1):
            for j in range(n - power + 1):
                result[i + j] += value * comb(power, i) * comb(n - power, j) * (-1) ** j
    return result


def classify(subject: Subject, point: Mapping[str, Fraction]) -> PointVerdict | None:
    """What holds at a point, None where it could not be certified (or something is not defined)."""
    # Where the content vanishes there is no polynomial to judge.
    if not respects(subject.ring, [*subject.nonzero, subject.content], point):
        return None
    if subject.functions:
        return _by_balls(subject, point)
    counts = counts_at(subject, point)
    if counts is None:
        return None
    return "unstable" if counts.right else "axis" if counts.axis else "stable"


def _by_balls(subject: Subject, point: Mapping[str, Fraction]) -> PointVerdict | None:
    """By certified signs of coefficients and Hurwitz determinants."""
    ring, stable = subject.ring, True
    for part in subject.parts:
        lead = certified_sign(ring, part.polynomial.leading, point)
        if not lead:
            return None
        # With values for the letters only functions are left, and the determinants stay short.
        (element,) = substituted(ring, [part.image.element], point)
        image = Polynomial.of(ring, element)
        if image.degree < part.image.degree:
            return None
        elements = [*image.coefficients]
        if not subject.discrete:
            elements.pop()
        signs = [certified_sign(ring, c, point) for c in elements]
        if any(sign == -lead for sign in signs):
            return "unstable"
        minors = hurwitz_minors(image)[:-1]
        found = [certified_sign(ring, h, point) for h in minors]
        if any(sign is not None and sign * lead ** (k + 1) < 0 for k, sign in enumerate(found)):
            return "unstable"
        # A certified zero, or an uncertain sign, leaves the point open.
        stable = stable and all(signs) and all(found) and None not in (*signs, *found)
    return "stable" if stable else None


def find_point(
    subject: Subject, conditions: Sequence[Element], wanted: Iterable[PointVerdict]
) -> dict[str, Fraction] | None:
    """A point of the box with one of the wanted verdicts, as near to the middle as was found."""
    goal = set(wanted)
    short = [e for e in conditions if len(e) <= LONGEST]
    tries = max(64, subject.effort.exact_terms // max(len(subject.polynomial.element), 1))
    suggested = islice(_suggested(subject, short, "stable" in goal), tries)
    point = next((p for p in suggested if classify(subject, p) in goal), None)
    if point is None:
        return None
    middle = _middle(subject, list(point))
    inside = subject.ring.box
    return simplified(
        point,
        middle,
        lambda p: (
            classify(subject, p) in goal
            and all(interval.contains(p[name]) for name, interval in inside.intervals.items() if name in p)
        ),
    )


def _letters(subject: Subject) -> list[str]:
    return letters_in(subject.ring, [subject.polynomial.element, *subject.nonzero])


def _middle(subject: Subject, letters: Sequence[str]) -> dict[str, Fraction]:
    box, nominal = subject.ring.box, subject.nominal or {}
    return {name: centre(box.intervals.get(name, Interval()), nominal.get(name)) for name in letters}


def _suggested(
    subject: Subject, conditions: Sequence[Element], stable: bool
) -> Iterator[dict[str, Fraction]]:
    """Points where floating point says that the conditions hold (or that one fails), then line searches."""
    letters = _letters(subject)
    box, nominal = subject.ring.box, subject.nominal or {}
    effort, size = subject.effort, sum(len(e) for e in conditions)
    sample = list(points(box, letters, nominal, effort.sample(size, effort.points) if letters else 1))
    table = SignTable(subject.ring, list(conditions))
    for start in (0, 64):
        part = sample[start : 64 if start == 0 else None]
        if not part:
            continue
        signs = table.signs(part)
        for point, row in zip(part, signs, strict=True):
            if not len(row) or ((row > 0).all() if stable else (row <= 0).any()):
                yield point
    if not subject.functions:
        yield from _on_lines(subject, sample[:: max(1, len(sample) // LINES)])


def _on_lines(subject: Subject, bases: Sequence[dict[str, Fraction]]) -> Iterator[dict[str, Fraction]]:
    """One sample of every cell on lines through some points, parallel to the letters: exact."""
    ring = subject.ring
    for count, (base, letter) in enumerate(product(bases[:LINES], subject.letters)):
        if count >= subject.effort.lines:
            return
        others = {name: value for name, value in base.items() if name != letter}
        edges: list[Element] = []
        for part in subject.parts:
            (element,) = substituted(ring, [part.image.element], others)
            edges += edges_of(Polynomial.of(ring, element))
        edges = [edge for edge in edges if edge]
        found, _ = cells(ring, edges, letter, ring.box.intervals.get(letter, Interval()))
        for cell in found:
            yield {**base, letter: cell.sample}


def edges_of(polynomial: Polynomial) -> list[Element]:
    """Elements whose zeros part the line into pieces with one count of roots."""
    if polynomial.degree < 1:
        return list(polynomial.coefficients)
    minors = hurwitz_minors(polynomial)
    return [polynomial.coefficients[0], polynomial.leading, *minors[-2:-1]]

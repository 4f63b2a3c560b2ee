"""Questions about several conditions at once, asked of z3 where the cheaper ways came to nothing."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from symplant.algebra.decide_search import SignTable, letters_in, respects
from symplant.algebra.decide_solver import solve
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.points import points
from symplant.algebra.ring import Element
from symplant.derivation.stability.subject import Subject

__all__ = ["alone", "excluded", "follows"]

#: Longest condition that takes part in the search for a point where only one fails.
LONGEST = 5000


def alone(subject: Subject, target: Element, others: Sequence[Element]) -> dict[str, Fraction] | None:
    """A point of the box where the others certainly hold and the target certainly fails."""
    ring, nominal = subject.ring, subject.nominal or {}
    elements = [target, *others]
    if any(len(e) > LONGEST for e in elements):
        return None
    letters = letters_in(ring, [*elements, *subject.nonzero])
    size = sum(len(e) for e in elements)
    sample = list(points(ring.box, letters, nominal, subject.effort.sample(size, subject.effort.points)))
    table = SignTable(ring, elements).signs(sample)
    for point, row in zip(sample, table, strict=True):
        if row[0] < 0 and (row[1:] > 0).all() and _certain(subject, target, others, point):
            return point
    return None


def follows(subject: Subject, target: Element, others: Sequence[Element]) -> str:
    """Why z3 says that the target holds wherever the others do, "" if it does not."""
    solved = solve(subject.ring, others, [target], subject.effort, subject.nonzero)
    if solved.answer != "unsat":
        return ""
    return "follows from the other conditions, proved by z3"


def excluded(subject: Subject, conditions: Sequence[Element]) -> tuple[str, dict[str, Fraction] | None]:
    """Why no point of the box meets all the conditions ("" if z3 did not prove it), or such a point."""
    solved = solve(subject.ring, conditions, [], subject.effort, subject.nonzero)
    if solved.answer == "unsat":
        return "no point of the box meets all the conditions, proved by z3", None
    inside = all(
        interval.contains(solved.values[name])
        for name, interval in subject.ring.box.intervals.items()
        if name in solved.values
    )
    return "", solved.values if solved.answer == "sat" and inside else None


def _certain(
    subject: Subject, target: Element, others: Sequence[Element], point: Mapping[str, Fraction]
) -> bool:
    ring = subject.ring
    return (
        certified_sign(ring, target, point) == -1
        and all(certified_sign(ring, e, point) == 1 for e in others)
        and respects(ring, subject.nonzero, point)
    )

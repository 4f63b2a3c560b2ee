"""One free letter: the exact intervals in which the plant is stable, marginal or unstable."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from symplant.algebra.ball_roots import may_vanish, only_constants_beside
from symplant.algebra.box import Interval
from symplant.algebra.decide_single import cells
from symplant.algebra.expression import names_in
from symplant.algebra.hurwitz import hurwitz_minors
from symplant.algebra.real_roots import RealRoot
from symplant.algebra.ring import Element, Ring
from symplant.derivation.stability.boundary import axis_verdict, simple_image
from symplant.derivation.stability.finding import Endpoint, Point, StabilityInterval
from symplant.derivation.stability.subject import Subject
from symplant.derivation.stability.witnesses import classify

__all__ = ["stability_intervals"]


def stability_intervals(subject: Subject, letter: str) -> tuple[tuple[StabilityInterval, ...], str]:
    """The intervals of a letter over its range, and why there are none ("" if there are).

    The subject contains no other letter.  Between the real roots of the leading and last coefficients
    and of the last Hurwitz determinant but one the number of roots beyond the boundary is constant,
    so one exact sample decides.  Neighbouring intervals with one verdict are joined unless both
    are stable: the point between two stable ones is not.
    """
    ring = subject.ring
    elements = _elements(subject)
    edges, reason = _edges(subject, elements, letter)
    if reason:
        return (), reason

    def happens(root: RealRoot) -> bool:
        return any(may_vanish(ring, element, letter, root) for element in elements)

    interval = ring.box.intervals.get(letter, Interval())
    try:
        found, _ = cells(ring, edges, letter, interval)
    except ArithmeticError:
        return (), "the end points could not be told apart, or from points where nothing happens"
    result: list[StabilityInterval] = []
    for cell in found:
        verdict = _verdict(subject, {letter: cell.sample})
        if verdict is None:
            return (), f"the sign of a condition at {letter} = {cell.sample} could not be certified"
        start, end = _endpoint(cell.left), _endpoint(cell.right)
        # Between two stable intervals the point counts, unless only the norm of an edge is zero there.
        harmless = verdict != "stable" or (cell.left is not None and not happens(cell.left))
        if result and result[-1].verdict == verdict and harmless:
            start = result.pop().start
        result.append(StabilityInterval(start, end, verdict))
    return tuple(result), ""


def _verdict(subject: Subject, point: Point) -> Literal["stable", "unstable", "marginal"] | None:
    kind = classify(subject, point)
    return axis_verdict(subject, point) if kind == "axis" else kind


def _endpoint(root: RealRoot | None) -> Endpoint | None:
    if root is None:
        return None
    if root.exact is not None:
        return Endpoint(root.exact, str(root.exact), str(root.exact))
    lower, upper = root.decimals()
    return Endpoint(None, lower, upper)


def _elements(subject: Subject) -> list[Element]:
    """Elements whose zeros part the line into pieces with one count of roots beyond the boundary."""
    elements: list[Element] = [*subject.nonzero]
    for part in subject.parts:
        image = part.image
        if part.symmetric:
            image = simple_image(image)
        elements += [part.polynomial.leading, *image.coefficients[:1], image.leading]
        if image.degree > 1:
            elements.append(hurwitz_minors(image)[-2])
    return elements


def _edges(subject: Subject, elements: Sequence[Element], letter: str) -> tuple[list[Element], str]:
    ring = subject.ring
    edges = []
    for element in elements:
        plain = rational_multiple(ring, element)
        if plain is None or not only_constants_beside(ring, plain, letter):
            return [], f"{letter} stands inside a function, so the end points are not algebraic"
        if letter in ring.used([plain]):
            edges.append(plain)
    return edges, ""


def rational_multiple(ring: Ring, element: Element) -> Element | None:
    """The norm over the square roots in an element, zero wherever the element is; None if that fails."""
    for function in reversed(ring.functions):
        if function.key not in ring.used([element]):
            continue
        if function.square is None:
            if names_in(function.meaning) & set(ring.letters):
                return None
            continue
        parts = ring.coefficients(ring.reduce(element), function.key)
        if len(parts) == 2:
            root = ring.gen(function.key)
            element = ring.reduce((parts[0] + parts[1] * root) * (parts[0] - parts[1] * root))
    return element

"""Whether an expression in the letters vanishes somewhere in the parameter box, with a witness."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import isqrt

from symplant.algebra.box import Box, Interval
from symplant.algebra.conversion import Converter
from symplant.algebra.decide import decide_positive
from symplant.algebra.decide_search import letters_in
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.expression import Call, walk
from symplant.algebra.points import ladder, points
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.verdict import Verdict

__all__ = ["Surroundings", "Vanishing", "solutions", "square_root", "vanishing"]

#: Points of the box from which a zero is looked for.
POINTS = 60


@dataclass(frozen=True)
class Surroundings:
    """The box, the nominal values, and what must not vanish (the plant is not defined there)."""

    box: Box
    nominal: Mapping[str, Fraction]
    nonzero: tuple[Element, ...] = ()


@dataclass(frozen=True)
class Vanishing:
    """Whether there is a zero in the box.

    `proved`: at `witness` (letters that it does not name may have any value), or between the two
    points of `between`, which differ in one letter.  `refuted`: vanishes nowhere in the box.
    `undecided`: neither could be shown.
    """

    verdict: Verdict
    reason: str
    witness: Mapping[str, Fraction] | None = None
    between: tuple[Mapping[str, Fraction], Mapping[str, Fraction]] | None = None


def vanishing(ring: Ring, element: Element, around: Surroundings) -> Vanishing:
    """Decide whether an element free of the variable has a zero in the box.

    >>> from symplant.algebra.box import Sign
    >>> box = Box({"a": Interval(declared=Sign.POSITIVE), "b": Interval(declared=Sign.POSITIVE)})
    >>> ring = Ring("s", ("a", "b"), box)
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> vanishing(ring, a - b, Surroundings(box, {})).witness
    {'a': Fraction(1, 1), 'b': Fraction(1, 1)}
    >>> vanishing(ring, a + b, Surroundings(box, {})).verdict.value
    'refuted'
    """
    element = _without_root(ring, element)
    if not element:
        return Vanishing(Verdict.PROVED, "identically zero", {})
    if factored_sign(ring, element).is_nonzero:
        return Vanishing(Verdict.REFUTED, "its terms, by their signs over the box, cannot cancel")
    if _is_exponential_less_one(ring, element):
        return Vanishing(
            Verdict.REFUTED, "exp(x) is 1 at x = 0 alone, and its argument is not zero in the box"
        )
    letters = letters_in(ring, (element, *around.nonzero))
    for point in points(around.box, letters, around.nominal, POINTS):
        for letter, value in solutions(ring, element, point):
            candidate = {**point, letter: value}
            if _admissible(ring, element, candidate, around):
                return Vanishing(Verdict.PROVED, "an exact zero inside the box", candidate)
    pair = _sign_change(ring, element, letters, around)
    if pair is not None:
        return Vanishing(
            Verdict.PROVED, "its sign differs at the ends of a segment inside the box", None, pair
        )
    for sign in (1, -1):
        decision = decide_positive(
            ring, sign * element, around.box, nominal=around.nominal, nonzero=around.nonzero, effort=POINTS
        )
        if decision.verdict is Verdict.PROVED:
            return Vanishing(Verdict.REFUTED, decision.because)
    return Vanishing(
        Verdict.UNDECIDED,
        f"neither the sign ladder nor {POINTS} points of the box settle whether it vanishes",
    )


def _is_exponential_less_one(ring: Ring, element: Element) -> bool:
    """Whether an element is exp(x) - 1, up to its sign, with an argument x of known nonzero sign."""
    function = next((f for f in ring.functions if f.key in ring.used([element])), None)
    if function is None or function.kind != "exp" or function.argument is None or len(element) != 2:
        return False
    if element not in (ring.gen(function.key) - 1, 1 - ring.gen(function.key)):
        return False
    if any(isinstance(part, Call) for part in walk(function.argument)):
        return False
    argument = Converter(ring).convert(function.argument)
    return (factored_sign(ring, argument.numerator) * factored_sign(ring, argument.denominator)).is_nonzero


def _without_root(ring: Ring, element: Element) -> Element:
    """A square root alone vanishes where its radicand does."""
    kinds = {function.key: function for function in ring.functions}
    (only, *rest) = [*ring.used([element]), ""]
    function = kinds.get(only)
    if rest == [""] and len(element) == 1 and function is not None and function.kind == "sqrt":
        return ring.reduce(ring.gen(only) ** 2)
    return element


def _admissible(ring: Ring, element: Element, point: Mapping[str, Fraction], around: Surroundings) -> bool:
    return (
        all(_interval(around.box, letter).contains(value) for letter, value in point.items())
        and certified_sign(ring, element, point) == 0
        and all(certified_sign(ring, other, point) not in (0, None) for other in around.nonzero)
    )


def _interval(box: Box, letter: str) -> Interval:
    return box.intervals.get(letter, Interval())


def solutions(ring: Ring, element: Element, point: Mapping[str, Fraction]) -> Iterator[tuple[str, Fraction]]:
    """Rational values of one letter that make an element of letters alone vanish, the rest as in point."""
    if not ring.used([element]) <= set(ring.letters):
        return
    for letter in point:
        coefficients = [ring.value(c, point) for c in ring.coefficients(element, letter)]
        while coefficients and not coefficients[-1]:
            coefficients.pop()
        if len(coefficients) == 2:
            yield letter, -coefficients[0] / coefficients[1]
        elif len(coefficients) == 3:
            c, b, a = coefficients
            root = square_root(b * b - 4 * a * c)
            if root is not None:
                yield letter, (-b + root) / (2 * a)
                yield letter, (-b - root) / (2 * a)


def square_root(value: Fraction) -> Fraction | None:
    """The square root of a rational number if it is rational."""
    if value < 0:
        return None
    top, bottom = isqrt(value.numerator), isqrt(value.denominator)
    return Fraction(top, bottom) if Fraction(top, bottom) ** 2 == value else None


def _sign_change(
    ring: Ring, element: Element, letters: Sequence[str], around: Surroundings
) -> tuple[Mapping[str, Fraction], Mapping[str, Fraction]] | None:
    """Two points that differ in one letter and between which the element must vanish.

    On the segment nothing that must not vanish may depend on the letter unless its sign is known,
    and the letter may not pass the value zero if that is ruled out.
    """
    for letter in letters:
        if any(
            letter in letters_in(ring, (other,)) and not factored_sign(ring, other).is_nonzero
            for other in around.nonzero
        ):
            continue
        interval = _interval(around.box, letter)
        for point in points(around.box, letters, around.nominal, POINTS // 4):
            if not _admissible_elsewhere(ring, point, around):
                continue
            start = certified_sign(ring, element, point)
            for value in _values(interval, point[letter]):
                other = {**point, letter: value}
                end = certified_sign(ring, element, other)
                if start and end and start != end:
                    return point, other
    return None


def _admissible_elsewhere(ring: Ring, point: Mapping[str, Fraction], around: Surroundings) -> bool:
    return all(certified_sign(ring, other, point) not in (0, None) for other in around.nonzero)


def _values(interval: Interval, start: Fraction) -> Iterator[Fraction]:
    for value in ladder(interval, start):
        if interval.sign.is_nonzero and (value > 0) != (start > 0):
            continue
        yield value

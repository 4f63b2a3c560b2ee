"""Where events happen: equations solved for the letter, and their values at the nominal point."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from flint import arb

from symplant.algebra.box import Interval
from symplant.algebra.decide_search import letters_in
from symplant.algebra.enclosure import ball, ball_value, certified_sign, generator_balls, working_precision
from symplant.algebra.expression import Node
from symplant.algebra.letter_images import replaceable
from symplant.algebra.points import ladder
from symplant.algebra.ratio import Ratio
from symplant.algebra.real_roots import RealRoot, real_roots
from symplant.algebra.ring import Element, Ring
from symplant.algebra.substitution import substituted
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.closed_forms import quadratic_trees, root_of_linear

__all__ = ["EventValue", "NominalValues", "nominal_values", "solved_for"]

#: Halvings of a segment on which an equation with functions changes its sign.
HALVINGS = 60
#: Most terms of an equation with functions whose changes of sign are looked for.
LONGEST_EQUATION = 500


@dataclass(frozen=True)
class EventValue:
    """One value of the letter: `lower` <= value <= `upper`, equal where it is exact.

    `inside` says whether it lies in the range of the letter.  `happens`: `proved` where the event
    takes place, `refuted` where the equation has another meaning there (two real roots of opposite
    sign instead of an imaginary pair), `undecided` where this could not be told.
    """

    lower: Fraction
    upper: Fraction
    inside: bool
    happens: Verdict
    root: RealRoot | None = None


@dataclass(frozen=True)
class NominalValues:
    """All values at the nominal point, or what kept them from being found (`complete` is then False)."""

    values: tuple[EventValue, ...]
    complete: bool
    note: str = ""


def solved_for(ring: Ring, equation: Element, letter: str) -> tuple[tuple[Node, Ratio | None], ...]:
    """The values of the letter as trees where the equation is linear or quadratic in it, else ().

    The second of a pair is the value as a ratio where no root sign is needed.
    """
    if not replaceable(ring, letter):
        return ()
    coefficients = ring.coefficients(equation, letter)
    if len(coefficients) == 2:
        return (root_of_linear(ring, coefficients[0], coefficients[1]),)
    if len(coefficients) == 3:
        return tuple((tree, None) for tree in quadratic_trees(ring, *coefficients))
    return ()


def nominal_values(
    ring: Ring,
    equation: Element,
    letter: str,
    nominal: Mapping[str, Fraction],
    interval: Interval,
    frequency: Ratio | None = None,
) -> NominalValues:
    """The real solutions for the letter with all others at their nominal values."""
    others = [name for name in letters_in(ring, [equation]) if name != letter]
    missing = [name for name in others if name not in nominal]
    if missing:
        return NominalValues((), False, f"no nominal value for {', '.join(missing)}")
    point = {name: nominal[name] for name in others}
    if not ring.used([equation]) <= set(ring.letters):
        return _with_functions(ring, equation, letter, point, nominal, interval)
    (plain,) = substituted(ring, [equation], point)
    if not plain:
        return NominalValues((), False, "the equation holds for every value at the nominal point")
    found = []
    for root in real_roots(ring, [plain], letter):
        inside = _is_inside(root, interval)
        happens = Verdict.PROVED if frequency is None else _positive(ring, frequency, letter, root, nominal)
        found.append(EventValue(root.lower, root.upper, inside, happens, root))
    return NominalValues(tuple(found), True)


def _is_inside(root: RealRoot, interval: Interval) -> bool:
    if root.exact is not None:
        return interval.contains(root.exact)
    # An irrational root is no end of the interval, so both ends of its enclosure lie on one side.
    return interval.contains(root.lower) and interval.contains(root.upper)


def _positive(
    ring: Ring, frequency: Ratio, letter: str, root: RealRoot, nominal: Mapping[str, Fraction]
) -> Verdict:
    """Whether the square of the frequency is positive at a root."""
    product = frequency.numerator * frequency.denominator
    names = letters_in(ring, [product])
    if any(name != letter and name not in nominal for name in names):
        return Verdict.UNDECIDED
    point = {name: nominal[name] for name in names if name != letter}
    if root.exact is not None:
        sign = certified_sign(ring, product, {**point, letter: root.exact})
    else:
        sign = _sign_between(ring, product, letter, root, point)
    if sign is None or (sign == 0 and root.exact is None):
        return Verdict.UNDECIDED
    return Verdict.PROVED if sign > 0 else Verdict.REFUTED


def _sign_between(
    ring: Ring, element: Element, letter: str, root: RealRoot, point: Mapping[str, Fraction]
) -> int | None:
    """The sign at an irrational root, from a ball around its enclosure."""
    with working_precision(256):
        middle, radius = (root.lower + root.upper) / 2, (root.upper - root.lower) / 2
        balls = generator_balls(ring, {**point, letter: middle}, ring.used([element]) - {letter})
        balls[letter] = ball(middle) + arb(0, 1) * ball(radius)
        value = ball_value(ring, element, balls)
        return 1 if value > 0 else -1 if value < 0 else None


def _with_functions(
    ring: Ring,
    equation: Element,
    letter: str,
    point: Mapping[str, Fraction],
    nominal: Mapping[str, Fraction],
    interval: Interval,
) -> NominalValues:
    """Solutions that changes of sign prove; there may be others."""
    if len(equation) > LONGEST_EQUATION:
        return NominalValues((), False, "the equation contains functions and is too long for a search")
    start = nominal.get(letter)
    if start is None or not interval.contains(start):
        start = next((v for v in ladder(interval, Fraction(1)) if interval.contains(v)), Fraction(1))
    marks = sorted({start, *ladder(interval, start)})
    signs = [certified_sign(ring, equation, {**point, letter: value}) for value in marks]
    found = [
        EventValue(value, value, True, Verdict.PROVED)
        for value, sign in zip(marks, signs, strict=True)
        if sign == 0
    ]
    for left, right, a, b in zip(marks, marks[1:], signs, signs[1:], strict=False):
        if a and b and a != b:
            found.append(_halved(ring, equation, letter, point, left, right, a))
    note = "values proved by changes of sign; the equation contains functions, so there may be others"
    return NominalValues(tuple(sorted(found, key=lambda v: v.lower)), False, note)


def _halved(
    ring: Ring,
    equation: Element,
    letter: str,
    point: Mapping[str, Fraction],
    left: Fraction,
    right: Fraction,
    sign: int,
) -> EventValue:
    for _ in range(HALVINGS):
        middle = (left + right) / 2
        found = certified_sign(ring, equation, {**point, letter: middle})
        if found is None:
            break
        if found == 0:
            left = right = middle
            break
        left, right = (middle, right) if found == sign else (left, middle)
    return EventValue(left, right, True, Verdict.UNDECIDED)

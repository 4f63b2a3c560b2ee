"""The sign ladder: is an element positive everywhere in a parameter box?  Cheapest rung first.

1. integers and factors of known sign are dropped, the rest is judged by the signs of its terms;
2. a few simple points of the box, replayed exactly, refute it where it fails;
3. a single letter is decided completely by isolating real roots;
4. proofs: collecting in one letter, coefficients in the corners of the box with subdivision,
   arithmetic and geometric means, and factor by factor;
5. a longer search for a point that refutes it.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.decide_bounds import positive_by_bounds
from symplant.algebra.decide_collect import collected_sign
from symplant.algebra.decide_factors import Radical, radical
from symplant.algebra.decide_means import positive_by_means
from symplant.algebra.decide_search import find_sign, letters_in, respects
from symplant.algebra.decide_single import cells
from symplant.algebra.decide_solver import solve
from symplant.algebra.effort import NORMAL, Effort
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.points import centre, points
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import pattern_sign
from symplant.algebra.verdict import Verdict

__all__ = ["Decision", "decide_positive", "over_box"]

QUICK = 48


@dataclass(frozen=True)
class Decision:
    """Whether an element is positive in the whole box.

    A refutation carries `witness`, values of the letters for which the element is certainly not
    positive, unless the only such points are irrational (then `because` says where they are).
    """

    verdict: Verdict
    because: str
    witness: Mapping[str, Fraction] | None = None


def over_box(ring: Ring, box: Box) -> Ring:
    """The same ring with another box; its elements are elements of the first one too."""
    if box is ring.box:
        return ring
    return Ring(ring.variable, ring.letters, box, ring.functions, ring.undecidable)


def decide_positive(
    ring: Ring,
    element: Element,
    box: Box | None = None,
    *,
    nominal: Mapping[str, Fraction] | None = None,
    nonzero: Sequence[Element] = (),
    effort: int | None = None,
    bounds: Effort = NORMAL,
) -> Decision:
    """Decide `element` > 0 over the box (default: the ring's), points with a zero of `nonzero` left out.

    `nominal` steers the search; `bounds` says how much work each rung may take, and `effort`
    another number of points of the long search.

    >>> from symplant.algebra.box import Interval
    >>> ring = Ring("s", ("K",), Box({"K": Interval(declared=Sign.POSITIVE)}))
    >>> K = ring.gen("K")
    >>> decide_positive(ring, K**2 - K + 1).because
    'it has no root for K > 0 and is positive at K = 1'
    >>> decide_positive(ring, 2 * K - 15).witness
    {'K': Fraction(1, 1)}
    """
    ring = ring if box is None else over_box(ring, box)
    nominal = nominal or {}
    element = ring.reduce(element)
    if not element:
        return Decision(Verdict.REFUTED, "it is identically zero", _any_point(ring, nominal))
    kernel = radical(ring, element, nonzero)
    settled = _by_pattern(ring, kernel, nominal)
    if settled is not None:
        return settled
    point = find_sign(ring, kernel.element, (-1, 0), nominal, nonzero, QUICK, bounds)
    if point is not None:
        return Decision(Verdict.REFUTED, f"it is not positive at {_shown(point)}", point)
    letters, count = letters_in(ring, [kernel.element]), bounds.points if effort is None else effort
    if len(letters) == 1 and ring.used([kernel.element]) == set(letters):
        return _one_letter(ring, kernel.element, letters[0], nonzero)
    reason = proved_positive(ring, kernel, bounds)
    if reason:
        return Decision(Verdict.PROVED, reason)
    point = find_sign(ring, kernel.element, (-1, 0), nominal, nonzero, count, bounds)
    if point is not None:
        return Decision(Verdict.REFUTED, f"it is not positive at {_shown(point)}", point)
    asked = ""
    if effort is None and bounds.solver:
        solved = solve(ring, [], [kernel.element], bounds, nonzero)
        if solved.answer == "unsat":
            return Decision(Verdict.PROVED, "proved by z3: no point of the box where it is not positive")
        if solved.answer == "sat" and _replayed(ring, kernel.element, solved.values, nonzero):
            why = f"it is not positive at {_shown(solved.values)} (a point of z3, replayed exactly)"
            return Decision(Verdict.REFUTED, why, solved.values)
        asked = f", z3 answered {solved.answer!r}" if solved.asked else ""
    return Decision(
        Verdict.UNDECIDED,
        "signs of terms and factors, collecting, coefficients over parts of the box and means did not prove "
        f"it, and none of {bounds.sample(len(kernel.element), count)} points refuted it{asked}",
    )


def _replayed(
    ring: Ring, element: Element, point: Mapping[str, Fraction], nonzero: Sequence[Element]
) -> bool:
    """Whether a point lies in the box and refutes the element, exactly."""
    box = ring.box.intervals
    return (
        all(box[name].contains(value) for name, value in point.items() if name in box)
        and certified_sign(ring, element, point) in (-1, 0)
        and respects(ring, nonzero, point)
    )


def proved_positive(ring: Ring, kernel: Radical, bounds: Effort = NORMAL) -> str:
    """Why the element of a radical is positive, by the rungs that need no search; "" if not proved."""
    if len(kernel.factors) > 1:
        sign, reasons = kernel.sign, []
        for factor, exponent in kernel.factors:
            direction, reason = _factor_sign(ring, factor, bounds)
            if not direction:
                break
            sign *= direction**exponent
            reasons.append(reason)
        else:
            return "; ".join(dict.fromkeys(reasons)) if sign > 0 else ""
        if any(exponent % 2 == 0 for _, exponent in kernel.factors):
            return ""
    return _proof(ring, kernel.element, bounds)


def _factor_sign(ring: Ring, factor: Element, bounds: Effort) -> tuple[int, str]:
    for direction in (1, -1):
        reason = _proof(ring, direction * factor, bounds)
        if reason:
            return direction, reason
    return 0, ""


def _proof(ring: Ring, element: Element, bounds: Effort) -> str:
    if pattern_sign(ring, element) is Sign.POSITIVE:
        return "all its terms are positive"
    sign, reason = collected_sign(ring, element) if len(element) <= 500 else (Sign.REAL, "")
    if sign is Sign.POSITIVE:
        return reason
    return positive_by_bounds(ring, element, bounds.boxes, bounds.coefficients) or positive_by_means(
        ring, element, bounds.pairs
    )


def _by_pattern(ring: Ring, kernel: Radical, nominal: Mapping[str, Fraction]) -> Decision | None:
    if kernel.is_settled:
        if kernel.sign > 0:
            return Decision(Verdict.PROVED, _known(kernel, "positive"))
        return Decision(Verdict.REFUTED, _known(kernel, "negative"), _any_point(ring, nominal))
    sign = pattern_sign(ring, kernel.element)
    if sign is Sign.POSITIVE:
        return Decision(Verdict.PROVED, "all its terms are positive")
    if sign in (Sign.NEGATIVE, Sign.NONPOSITIVE, Sign.ZERO):
        return Decision(Verdict.REFUTED, "none of its terms is ever positive", _any_point(ring, nominal))
    return None


def _known(kernel: Radical, sign: str) -> str:
    if not kernel.dropped:
        return f"it is a {sign} number"
    if kernel.by_ranges:
        return f"it is {sign} over the ranges of its letters"
    if len(kernel.dropped) == 1:
        return f"all its terms are {sign}"
    return f"it is {sign} as a product of factors of known sign"


def _one_letter(ring: Ring, element: Element, letter: str, nonzero: Sequence[Element]) -> Decision:
    interval = ring.box.intervals.get(letter, Interval())
    found, roots = cells(ring, [element], letter, interval)
    excluded = [e for e in nonzero if ring.used([e]) == {letter}]
    samples = [cell.sample for cell in found]
    if not found:
        samples = [centre(interval)]  # the interval is a single point
    for sample in samples:
        if ring.value(element, {letter: sample}) <= 0:
            return Decision(Verdict.REFUTED, f"it is not positive at {letter} = {sample}", {letter: sample})
    for root in roots:
        at = root.exact
        if any(e and at is not None and not ring.value(e, {letter: at}) for e in excluded):
            continue
        if at is None:
            below, above = root.decimals()
            return Decision(Verdict.REFUTED, f"it is zero between {letter} = {below} and {above}")
        return Decision(Verdict.REFUTED, f"it is zero at {letter} = {at}", {letter: at})
    where, at = _where(letter, interval), samples[0]
    return Decision(Verdict.PROVED, f"it has no root for {where} and is positive at {letter} = {at}")


def _where(letter: str, interval: Interval) -> str:
    low, high = interval.lower, interval.upper
    if low is not None and high is not None:
        return f"{low} <= {letter} <= {high}"
    words = {Sign.POSITIVE: "> 0", Sign.NONNEGATIVE: ">= 0", Sign.NEGATIVE: "< 0", Sign.NONPOSITIVE: "<= 0"}
    if low is not None:
        return f"{letter} >= {low}"
    if high is not None:
        return f"{letter} <= {high}"
    return f"{letter} {words[interval.declared]}" if interval.declared in words else f"any {letter}"


def _any_point(ring: Ring, nominal: Mapping[str, Fraction]) -> dict[str, Fraction]:
    return next(points(ring.box, ring.letters, nominal, 1))


def _shown(point: Mapping[str, Fraction]) -> str:
    return ", ".join(f"{name} = {value}" for name, value in point.items())

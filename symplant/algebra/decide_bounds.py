"""Positivity from the coefficients in a corner of the box, with subdivision.

Every letter is replaced so that its values become t >= 0: x = l + t for x >= l, and for a bounded
letter x = (l + u t)/(1 + t), whose cleared coefficients are the Bernstein coefficients up to
positive binomial factors (G. T. Cargo and O. Shisha, J. Res. Nat. Bur. Standards 70B (1966) 79-81).
Coefficients that are all nonnegative, with positive ones in the corners that belong to the box,
prove the element positive.  Where they are not, the box is cut in two and both halves are tried.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import product
from math import lcm, prod

from symplant.algebra.box import Interval, Sign
from symplant.algebra.ring import Element, Ring

__all__ = ["has_bounds", "positive_by_bounds"]

#: Largest number of coefficients that one substitution may have.
LARGEST = 20_000
#: Most boxes looked at.
BOXES = 200


@dataclass(frozen=True)
class _Range:
    """Values of one generator; an end that is None is infinite, a closed end belongs to the range."""

    low: Fraction | None
    high: Fraction | None
    low_closed: bool
    high_closed: bool

    def halves(self) -> tuple[_Range, _Range]:
        if self.low is not None and self.high is not None:
            middle = (self.low + self.high) / 2
        elif self.low is not None:
            middle = 2 * self.low if self.low > 0 else self.low + 1
        elif self.high is not None:
            middle = 2 * self.high if self.high < 0 else self.high - 1
        else:
            middle = Fraction(0)
        return (
            replace(self, high=middle, high_closed=True),
            replace(self, low=middle, low_closed=True),
        )


def positive_by_bounds(ring: Ring, element: Element, boxes: int = BOXES) -> str:
    """Why the element is positive in the whole box, or "" if this did not prove it.

    >>> from symplant.algebra.box import Box
    >>> ring = Ring("s", ("K",), Box({"K": Interval(Fraction(1), Fraction(3))}))
    >>> positive_by_bounds(ring, 10 - ring.gen("K") ** 2)
    'all its Bernstein coefficients over the ranges are positive'
    """
    keys = sorted(ring.used([element]), key=lambda key: ring.position[key])
    degrees = element.degrees()
    if prod(int(degrees[ring.position[key]]) + 1 for key in keys) > LARGEST or len(keys) > 12:
        return ""
    ranges = {key: _range(ring, key) for key in keys}
    waiting, looked = [(ranges, 0)], 0
    while waiting:
        current, depth = waiting.pop()
        looked += 1
        if looked > boxes:
            return ""
        verdict = _corner_sign(ring, element, current)
        if verdict > 0:
            continue
        if verdict < 0:
            return ""
        key = _to_cut(keys, current, depth)
        for half in current[key].halves():
            waiting.append(({**current, key: half}, depth + 1))
    if looked == 1:
        return "all its Bernstein coefficients over the ranges are positive"
    return f"all its Bernstein coefficients are positive on each of the {(looked + 1) // 2} parts of the box"


def has_bounds(ring: Ring, key: str) -> bool:
    """Whether more is known of a generator than its sign."""
    values = _range(ring, key)
    return bool(values.low or values.high)


def _range(ring: Ring, key: str) -> _Range:
    if key in ring.letters:
        interval = ring.box.intervals.get(key, Interval())
        low, high, sign = interval.lower, interval.upper, interval.sign
    else:
        kind = next((f.kind for f in ring.functions if f.key == key), "")
        low, high, sign = None, None, ring.signs[ring.position[key]]
        if kind in ("sin", "cos"):
            low, high = Fraction(-1), Fraction(1)
        elif kind == "cosh":
            low = Fraction(1)
    if sign.is_nonnegative and (low is None or low < 0):
        low = Fraction(0)
    if sign.is_nonpositive and (high is None or high > 0):
        high = Fraction(0)
    strict = sign in (Sign.POSITIVE, Sign.NEGATIVE)
    return _Range(
        low,
        high,
        low is not None and not (strict and low == 0),
        high is not None and not (strict and high == 0),
    )


def _to_cut(keys: list[str], ranges: dict[str, _Range], depth: int) -> str:
    """A letter that may take any value first, else one after the other."""
    free = [key for key in keys if ranges[key].low is None and ranges[key].high is None]
    return free[0] if free else keys[depth % len(keys)]


def _corner_sign(ring: Ring, element: Element, ranges: dict[str, _Range]) -> int:
    """1: positive on the ranges; -1: not positive at a corner that belongs to them; 0: not known."""
    if any(r.low is None and r.high is None for r in ranges.values()):
        return 0
    degrees = {key: int(element.degrees()[ring.position[key]]) for key in ranges}
    for key, values in ranges.items():
        element = _shifted(ring, element, key, values)
    table = {tuple(map(int, exponents)): int(value) for exponents, value in element.terms()}
    ends = [_closed_ends(ranges[key], degrees[key]) for key in ranges]
    places = [ring.position[key] for key in ranges]
    # A range without a closed end asks for no corner: any coefficient along it will do.
    pinned = [(place, end) for place, end in zip(places, ends, strict=True) if end]
    reached = {tuple(m[place] for place, _ in pinned) for m, c in table.items() if c > 0}
    corners = set(product(*(end for _, end in pinned)))
    if len(pinned) == len(places):
        full = [0] * len(ring.keys)
        for corner in corners:
            for (place, _), exponent in zip(pinned, corner, strict=True):
                full[place] = exponent
            if table.get(tuple(full), 0) <= 0:
                return -1
    if all(value >= 0 for value in table.values()) and corners <= reached:
        return 1
    return 0


def _closed_ends(values: _Range, degree: int) -> list[int]:
    """Exponents of t at the ends that belong to the range (t = 0 is one end, t = infinity the other)."""
    if values.low is not None and values.high is not None:
        ends = ([0] if values.low_closed else []) + ([degree] if values.high_closed else [])
        return sorted(set(ends))
    return [0] if values.low_closed or values.high_closed else []


def _shifted(ring: Ring, element: Element, key: str, values: _Range) -> Element:
    coefficients = ring.coefficients(element, key)
    degree, t = len(coefficients) - 1, ring.gen(key)
    if degree < 1:
        return element
    low, high = values.low, values.high
    scale = lcm(*(end.denominator for end in (low, high) if end is not None))
    one = ring.constant(scale)
    if low is not None and high is not None:
        top, bottom = int(low * scale) + int(high * scale) * t, one + scale * t
    elif low is not None:
        top, bottom = int(low * scale) + scale * t, one
    else:
        assert high is not None
        top, bottom = int(high * scale) - scale * t, one
    total = ring.zero
    for power, coefficient in enumerate(coefficients):
        if coefficient:
            total = total + coefficient * top**power * bottom ** (degree - power)
    return total

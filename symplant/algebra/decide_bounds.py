"""Positivity from the coefficients in a corner of the box, with subdivision.

Every letter is replaced so that its values become t >= 0: x = l + t for x >= l, and for a bounded
letter x = (l + u t)/(1 + t), whose cleared coefficients are the Bernstein coefficients up to
positive binomial factors (G. T. Cargo and O. Shisha, J. Res. Nat. Bur. Standards 70B (1966) 79-81).
Coefficients that are all nonnegative, with positive ones in the corners that belong to the box,
prove the element positive.  Where they are not, the box is cut in two and both halves are tried.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import product
from math import lcm, prod

from symplant.algebra.box import Interval
from symplant.algebra.expression import names_in
from symplant.algebra.function_range import tree_range
from symplant.algebra.ring import Element, Ring
from symplant.algebra.value_range import ANY, ValueRange, interval_range

__all__ = ["has_bounds", "positive_by_bounds"]

#: Largest number of coefficients that one substitution may have, and most letters.
LARGEST, LETTERS = 20_000, 12
#: Most boxes looked at, and most coefficients in all of them together.
BOXES, COEFFICIENTS = 200, 400_000


def positive_by_bounds(
    ring: Ring, element: Element, boxes: int = BOXES, coefficients: int = COEFFICIENTS
) -> str:
    """Why the element is positive in the whole box, or "" if this did not prove it.

    A function of letters counts as a letter of its own with the values that it can have in each part
    of the box.

    >>> from fractions import Fraction
    >>> from symplant.algebra.box import Box
    >>> ring = Ring("s", ("K",), Box({"K": Interval(Fraction(1), Fraction(3))}))
    >>> positive_by_bounds(ring, 10 - ring.gen("K") ** 2)
    'all its Bernstein coefficients over the ranges are positive'
    """
    keys = sorted(ring.used([element]), key=lambda key: ring.position[key])
    functions = [key for key in keys if key not in ring.letters]
    degrees = element.degrees()
    size = prod(int(degrees[ring.position[key]]) + 1 for key in keys)
    if size > LARGEST or len(keys) > LETTERS:
        return ""
    inner = [x for x in letters_in_trees(ring, functions) if x not in keys]
    ranges = {key: ANY if key in functions else _letter(ring, key) for key in (*keys, *inner)}
    waiting, looked = [(ranges, 0)], 0
    while waiting:
        current, depth = waiting.pop()
        looked += 1
        if looked > boxes or looked * size > coefficients:
            return ""
        narrowed = _narrowed(ring, current, functions)
        if any(values.is_empty for values in narrowed.values()):
            continue
        verdict = _corner_sign(ring, element, {key: narrowed[key] for key in keys})
        # A corner in the values of functions need not be a point of the box.
        if verdict < 0 and not functions:
            return ""
        if verdict <= 0:
            key = _to_cut(list(ranges), narrowed, depth)
            for half in narrowed[key].halves():
                waiting.append(({**current, key: half}, depth + 1))
    where = _function_words(ring, _narrowed(ring, ranges, functions), functions)
    if looked == 1:
        return f"all its Bernstein coefficients over the ranges are positive{where}"
    parts = f"each of the {(looked + 1) // 2} parts of the box"
    return f"all its Bernstein coefficients are positive on {parts}{where}"


def has_bounds(ring: Ring, key: str) -> bool:
    """Whether more is known of a generator than its sign."""
    if key in ring.letters:
        values = _letter(ring, key)
    else:
        values = _narrowed(ring, _inner_ranges(ring, [key]), [key])[key]
    return bool(values.low or values.high)


def letters_in_trees(ring: Ring, keys: Sequence[str]) -> list[str]:
    """The letters inside functions."""
    found: set[str] = set()
    for key in keys:
        found |= names_in(ring.meanings[ring.position[key]])
    return [letter for letter in ring.letters if letter in found]


def _letter(ring: Ring, key: str) -> ValueRange:
    return interval_range(ring.box.intervals.get(key, Interval()))


def _inner_ranges(ring: Ring, functions: Sequence[str]) -> dict[str, ValueRange]:
    return {letter: _letter(ring, letter) for letter in letters_in_trees(ring, functions)}


def _narrowed(
    ring: Ring, ranges: Mapping[str, ValueRange], functions: Sequence[str]
) -> dict[str, ValueRange]:
    """The ranges, those of functions met with what the letters allow."""
    result = dict(ranges)
    for key in functions:
        place = ring.position[key]
        values = tree_range(ring.meanings[place], ranges)
        if ring.signs[place].is_nonnegative:
            values = values.meet(interval_range(Interval(declared=ring.signs[place])))
        result[key] = values.meet(ranges.get(key, ANY))
    return result


def _function_words(ring: Ring, ranges: Mapping[str, ValueRange], functions: Sequence[str]) -> str:
    from symplant.algebra.text import node_text

    words = []
    for key in functions:
        low, high = (end if end is None else float(end) for end in (ranges[key].low, ranges[key].high))
        name = node_text(ring.meanings[ring.position[key]])
        if low is not None and high is not None:
            words.append(f"{name} between {low:.4g} and {high:.4g}")
        elif low is not None or high is not None:
            words.append(f"{name} above {low:.4g}" if low is not None else f"{name} below {high:.4g}")
    return f" ({', '.join(words)})" if words else ""


def _to_cut(keys: list[str], ranges: dict[str, ValueRange], depth: int) -> str:
    """A letter that may take any value first, else one after the other."""
    free = [key for key in keys if ranges[key].low is None and ranges[key].high is None]
    return free[0] if free else keys[depth % len(keys)]


def _corner_sign(ring: Ring, element: Element, ranges: dict[str, ValueRange]) -> int:
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


def _closed_ends(values: ValueRange, degree: int) -> list[int]:
    """Exponents of t at the ends that belong to the range (t = 0 is one end, t = infinity the other)."""
    if values.low is not None and values.high is not None:
        ends = ([0] if values.low_closed else []) + ([degree] if values.high_closed else [])
        return sorted(set(ends))
    return [0] if values.low_closed or values.high_closed else []


def _shifted(ring: Ring, element: Element, key: str, values: ValueRange) -> Element:
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

"""Simple rational points of a parameter box, nearest to its centre first; the same ones every time."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from fractions import Fraction
from itertools import islice
from random import Random

from symplant.algebra.box import Box, Interval, Sign

__all__ = ["centre", "ladder", "points", "simplified"]

SEED = 20240613
_RATIOS = "1/2 2 1/4 4 3/4 3/2 1/10 10 1/100 100 1/1000 1000"
_FACTORS = tuple(Fraction(text) for text in _RATIOS.split())
_SHARES = tuple(Fraction(n, 16) for n in (4, 12, 0, 16, 2, 14, 1, 15, 6, 10))


def centre(interval: Interval, nominal: Fraction | None = None) -> Fraction:
    """A simple value of the interval: the nominal value if it lies inside, else a middle one.

    >>> centre(Interval(Fraction(1), Fraction(4))), centre(Interval(declared=Sign.NEGATIVE))
    (Fraction(5, 2), Fraction(-1, 1))
    """
    if nominal is not None and interval.contains(nominal):
        return nominal
    low, high = interval.lower, interval.upper
    candidates = [Fraction(1), Fraction(-1)]
    if low is not None and high is not None:
        candidates = [(low + high) / 2, (low + 3 * high) / 4, low, high, *candidates]
    elif low is not None:
        candidates = [2 * low, low + 1, low, *candidates]
    elif high is not None:
        candidates = [2 * high, high - 1, high, *candidates]
    candidates.append(Fraction(0))
    return next((value for value in candidates if interval.contains(value)), Fraction(0))


def ladder(interval: Interval, middle: Fraction) -> list[Fraction]:
    """Values of the interval to try instead of the middle one, nearest first."""
    low, high = interval.lower, interval.upper
    values: list[Fraction] = []
    if low is not None and high is not None:
        values = [low + share * (high - low) for share in _SHARES]
    else:
        base = middle if middle else Fraction(1)
        values = [base * factor for factor in _FACTORS]
        values += [bound for bound in (low, high) if bound is not None]
        if interval.sign in (Sign.REAL, Sign.NONZERO):
            values = [w for v in (base, *values) for w in (v, -v)]
    if not interval.sign.is_nonzero:
        values.insert(2, Fraction(0))
    return [v for v in dict.fromkeys(values) if v != middle and interval.contains(v)]


def points(
    box: Box, letters: Sequence[str], nominal: Mapping[str, Fraction], count: int
) -> Iterator[dict[str, Fraction]]:
    """At most `count` points: the centre, then one letter moved, then seeded mixtures.

    >>> box = Box({"k": Interval(declared=Sign.POSITIVE)})
    >>> [point["k"] for point in points(box, ["k"], {}, 3)]
    [Fraction(1, 1), Fraction(1, 2), Fraction(2, 1)]
    """
    return islice(_points(box, letters, nominal), count)


def _points(
    box: Box, letters: Sequence[str], nominal: Mapping[str, Fraction]
) -> Iterator[dict[str, Fraction]]:
    intervals = {name: box.intervals.get(name, Interval()) for name in letters}
    middle = {name: centre(interval, nominal.get(name)) for name, interval in intervals.items()}
    steps = {name: ladder(interval, middle[name]) for name, interval in intervals.items()}
    yield dict(middle)
    for rung in range(max((len(s) for s in steps.values()), default=0)):
        for name in letters:
            if rung < len(steps[name]):
                yield {**middle, name: steps[name][rung]}
    moving = [name for name in letters if steps[name]]
    if len(moving) < 2:
        return
    random = Random(SEED)
    while True:
        reach = random.choice((4, 8, len(_FACTORS) * 2))
        yield {
            name: random.choice([middle[name], *steps[name][:reach]]) if name in moving else middle[name]
            for name in letters
        }


def simplified(
    point: Mapping[str, Fraction],
    middle: Mapping[str, Fraction],
    holds: Callable[[dict[str, Fraction]], bool],
) -> dict[str, Fraction]:
    """The point with as many letters as possible moved back to the middle while `holds(point)` stays true."""
    current = dict(point)
    for name in point:
        if current[name] != middle[name]:
            trial = {**current, name: middle[name]}
            if holds(trial):
                current = trial
    return current

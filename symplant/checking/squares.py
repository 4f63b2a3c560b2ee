"""Points at which square roots are rational: one letter of each radicand is solved for."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from fractions import Fraction
from math import isqrt

from symplant.algebra.expression import Call, Node, names_in, walk
from symplant.checking.evaluation import (
    IrrationalValueError,
    UndefinedValueError,
    evaluate,
    rational_root,
)

__all__ = ["radicands", "with_rational_roots"]

#: Whether a letter may take a value.
Admissible = Callable[[str, Fraction], bool]

_SAMPLES = tuple(Fraction(n) for n in (1, 2, 3, 5, 7, 11))
_ROOT_DENOMINATORS = (3, 2, 5, 7, 1)
_SMALL_ROOTS = tuple(Fraction(n, d) for n, d in ((1, 2), (2, 1), (3, 1), (1, 3), (2, 3), (3, 2), (1, 1)))


def radicands(trees: Iterable[Node]) -> list[Node]:
    """What stands under the square roots of some trees, inner roots before outer ones, each once."""
    found: dict[Node, None] = {}
    for tree in trees:
        for part in walk(tree):
            if isinstance(part, Call) and part.function == "sqrt":
                found.setdefault(part.argument)
    return list(found)


def with_rational_roots(
    under: Iterable[Node], point: Mapping[str, Fraction], admissible: Admissible
) -> dict[str, Fraction] | None:
    """A point near the given one at which every radicand is the square of a fraction; None if none is found.

    For each radicand in turn one letter that no earlier radicand has is solved for.  That works where
    the radicand or its inverse is linear in the letter, or quadratic with a first or last coefficient
    that is a square: then the squares are met along the lines through a rational point of the conic.

    >>> from symplant.algebra.expression import Name, Quotient
    >>> start = {"k": Fraction(5), "m": Fraction(3)}
    >>> with_rational_roots([Quotient(Name("k"), Name("m"))], start, lambda letter, value: value > 0)
    {'k': Fraction(16, 3), 'm': Fraction(3, 1)}
    """
    values = dict(point)
    settled: set[str] = set()
    for radicand in sorted(under, key=lambda tree: len(names_in(tree))):
        try:
            value = evaluate(radicand, values)
            if rational_root(value) is None and not _solve(radicand, values, settled, admissible):
                return None
        except (IrrationalValueError, UndefinedValueError):
            return None
        settled |= names_in(radicand)
    return values


def _solve(radicand: Node, values: dict[str, Fraction], settled: set[str], admissible: Admissible) -> bool:
    """Change one letter so that the radicand is a square; whether one was found."""
    for letter in sorted(names_in(radicand) - settled - {"pi"}):
        start = values[letter]
        for inverted in (False, True):
            graph = _Graph(radicand, values, letter, inverted)
            for candidate in graph.candidates(start):
                if candidate and admissible(letter, candidate):
                    values[letter] = candidate
                    if _is_square(radicand, values):
                        return True
        values[letter] = start
    return False


def _is_square(radicand: Node, values: Mapping[str, Fraction]) -> bool:
    try:
        value = evaluate(radicand, values)
    except (IrrationalValueError, UndefinedValueError):
        return False
    return value != 0 and rational_root(value) is not None


class _Graph:
    """A radicand (or its inverse) as a function of one letter, the others fixed."""

    def __init__(self, radicand: Node, values: Mapping[str, Fraction], letter: str, inverted: bool) -> None:
        self.radicand, self.values, self.letter, self.inverted = radicand, dict(values), letter, inverted

    def __call__(self, x: Fraction) -> Fraction:
        value: Fraction = evaluate(self.radicand, {**self.values, self.letter: x})
        if not self.inverted:
            return value
        if not value:
            raise UndefinedValueError("division by zero")
        return 1 / value

    def candidates(self, start: Fraction) -> Iterator[Fraction]:
        """Values of the letter at which the function is a square, near `start` first."""
        try:
            quadratic = self._quadratic()
            near = self(start)
        except (IrrationalValueError, UndefinedValueError):
            return
        if quadratic is None:
            return
        a, b, c = quadratic
        first, last = rational_root(a), rational_root(c)
        if a == 0 and b != 0:
            for y in _roots_near(near):
                yield (y * y - c) / b
        elif a != 0 and last is not None:  # y = last + t*x meets the conic in x = 0 and in one more point
            for y in _roots_near(near):
                t = (y - last) / start
                if t * t != a:
                    yield (2 * last * t - b) / (a - t * t)
        elif a != 0 and first is not None:  # y = first*x + t meets it at infinity and in one more point
            for y in _roots_near(near):
                t = y - first * start
                if 2 * first * t != b:
                    yield (t * t - c) / (b - 2 * first * t)

    def _quadratic(self) -> tuple[Fraction, Fraction, Fraction] | None:
        """Coefficients a, b, c of a*x**2 + b*x + c, None if the function is not of this form."""
        known: list[tuple[Fraction, Fraction]] = []
        for x in _SAMPLES:
            try:
                known.append((x, self(x)))
            except UndefinedValueError:
                continue
        if len(known) < 5:
            return None
        (x0, y0), (x1, y1), (x2, y2) = known[:3]
        slope = (y1 - y0) / (x1 - x0)
        a = ((y2 - y0) / (x2 - x0) - slope) / (x2 - x1)
        b = slope - a * (x0 + x1)
        c = y0 - b * x0 - a * x0 * x0
        return (a, b, c) if all(a * x * x + b * x + c == y for x, y in known[3:]) else None


def _roots_near(square: Fraction) -> Iterator[Fraction]:
    """Short fractions near the root of a number, then small ones."""
    if square > 0:
        for denominator in _ROOT_DENOMINATORS:
            floor = isqrt(int(square * denominator * denominator))
            for numerator in (floor, floor + 1):
                if numerator not in (0, denominator):  # a root 1 would make letters equal
                    yield Fraction(numerator, denominator)
    yield from _SMALL_ROOTS

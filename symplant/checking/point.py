"""A point at which formulas are checked: a fraction for every letter and for the variable."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import Any

from symplant.algebra.expression import Node
from symplant.checking.evaluation import BALLS, EXACT, Arithmetic, Scalar, ball, evaluate

__all__ = ["Point", "named"]

_NAMES_SHOWN = 6


@dataclass(frozen=True)
class Point:
    """Values of the letters and of the variable.

    `exact` tells whether every function of the plant has a rational value here; where it has not,
    values are balls, and all work with them belongs inside `ball_precision`.

    >>> from symplant.algebra.expression import Name, Power
    >>> point = Point({"k": Fraction(3, 2), "s": Fraction(2)})
    >>> point.evaluate(Power(Name("k"), 2)), str(point)
    (Fraction(9, 4), 'k = 3/2, s = 2')
    """

    values: Mapping[str, Fraction]
    exact: bool = True

    @property
    def arithmetic(self) -> Arithmetic:
        """The kind of number that values at this point are."""
        return EXACT if self.exact else BALLS

    @cached_property
    def scalars(self) -> Mapping[str, Scalar]:
        """The values as numbers of that kind."""
        return self.values if self.exact else {name: ball(value) for name, value in self.values.items()}

    def evaluate(self, node: Node) -> Any:
        """The value of a tree, worked out once; see `evaluation.evaluate` for the errors."""
        known = self._known.get(id(node))
        if known is None:
            known = self._known[id(node)] = (node, evaluate(node, self.scalars, self.arithmetic))
        return known[1]

    @cached_property
    def _known(self) -> dict[int, tuple[Node, Any]]:
        """Values of trees by identity; the trees are held, so that no identity is used twice."""
        return {}

    def __str__(self) -> str:
        return ", ".join(f"{name} = {value}" for name, value in self.values.items())


def named(points: tuple[Point, ...]) -> str:
    """The points in a few words.

    >>> first, second = {"k": Fraction(3, 2), "s": Fraction(2)}, {"k": Fraction(5), "s": Fraction(1, 3)}
    >>> named((Point(first), Point(second)))
    '2 points (k, s) = (3/2, 2), (5, 1/3)'
    """
    names = list(points[0].values)
    count = f"{len(points)} points" if len(points) > 1 else "1 point"
    if len(names) <= _NAMES_SHOWN:
        shown = ", ".join(f"({', '.join(map(str, point.values.values()))})" for point in points)
        return f"{count} ({', '.join(names)}) = {shown}"
    first = ", ".join(f"{name} = {points[0].values[name]}" for name in names[:_NAMES_SHOWN])
    return f"{count} in {len(names)} quantities, the first with {first}, ..."

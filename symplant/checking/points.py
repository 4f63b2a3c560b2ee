"""The choice of points: short fractions inside the parameter box, fixed by the plant's own text."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction

from symplant.algebra.expression import Call, Node, walk
from symplant.algebra.ring import Element, Ring
from symplant.algebra.text import node_text
from symplant.checking.draws import Draws
from symplant.checking.evaluation import (
    IrrationalValueError,
    Scalar,
    UndefinedValueError,
    ball_precision,
)
from symplant.checking.point import Point
from symplant.checking.squares import radicands, with_rational_roots
from symplant.checking.termwise import element_value
from symplant.plant.model import Model

__all__ = ["TRIES", "choose_points"]

#: So many candidates are drawn before the search for points is given up.
TRIES = 200
#: After so many candidates a plant with roots only may have points where these are irrational.
_TRIES_FOR_ROOTS = 60


def choose_points(
    model: Model, ring: Ring, nonzero: Sequence[Element] = (), count: int = 3
) -> tuple[Point, ...]:
    """Points in the parameter box at which all entries are defined and no element of `nonzero` vanishes.

    Reproducible: the draws are fixed by the entries and the names.  Letters are drawn different from
    each other where their ranges allow it.  Fewer points, perhaps none, come back where `TRIES`
    candidates do not yield more.

    >>> from symplant.algebra.expression import Name, Quotient
    >>> from symplant.plant.parameter import Parameter, Signal
    >>> entry = ((Quotient(Name("a"), Name("b")),),)
    >>> x, y, u = Signal("x"), Signal("y"), Signal("u")
    >>> model = Model(entry, entry, entry, None, None, (x,), (u,), (y,), (Parameter("a"), Parameter("b")))
    >>> len(choose_points(model, Ring("s", ("a", "b"))))
    3
    """
    entries = [entry for matrix in model.matrices.values() for row in matrix for entry in row]
    trees = [*entries, *(function.meaning for function in ring.functions)]
    draws = Draws("\n".join([model.variable, *model.letters, *map(node_text, entries)]))
    calls = {part.function for tree in trees for part in walk(tree) if isinstance(part, Call)}
    under = radicands(entries) if calls == {"sqrt"} else []
    found: list[Point] = []
    with ball_precision():
        for attempt in range(TRIES):
            point = _candidate(model, draws, under)
            if point is None or any(point.values == other.values for other in found):
                continue
            point = _defined(point, trees, ring, nonzero)
            if point is None or (under and not point.exact and attempt < _TRIES_FOR_ROOTS):
                continue
            found.append(point)
            if len(found) == count:
                break
    return tuple(found)


def _candidate(model: Model, draws: Draws, under: Sequence[Node]) -> Point | None:
    box = model.box
    values: dict[str, Fraction] = {}
    for letter, interval in box.intervals.items():
        for _ in range(6):
            values[letter] = draws.value(interval)
            if values[letter] not in (*list(values.values())[:-1], 0, 1):
                break
        if not interval.contains(values[letter]):
            return None
    if under:
        values = (
            with_rational_roots(under, values, lambda letter, value: box.intervals[letter].contains(value))
            or values
        )
    values[model.variable] = draws.size() * draws.one_of((1, 1, -1))
    return Point(values)


def _defined(point: Point, trees: Iterable[Node], ring: Ring, nonzero: Sequence[Element]) -> Point | None:
    """The point, exact or not, if everything has a value there and nothing that may not vanish does."""
    try:
        for tree in trees:
            point.evaluate(tree)
        if any(_may_vanish(element_value(ring, element, point)) for element in nonzero):
            return None
    except IrrationalValueError:
        return _defined(Point(point.values, exact=False), trees, ring, nonzero)
    except UndefinedValueError:
        return None
    return point


def _may_vanish(value: Scalar) -> bool:
    return not value if isinstance(value, Fraction) else bool(value.contains(0))

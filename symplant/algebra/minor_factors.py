"""The irreducible factors of a maximal minor, without expanding it.

Elimination with rows kept primitive: what a row was multiplied by and what was divided out of it is
kept in factored form, so the minor comes out as a product of small elements and is never expanded.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from symplant.algebra.factors import factors as irreducible
from symplant.algebra.polynomial import content
from symplant.algebra.ring import Element, Ring
from symplant.errors import UndecidedError

__all__ = ["maximal_minor_factors"]

#: Most products of terms in one step of the elimination.
PRODUCT_LIMIT = 20_000_000


@dataclass
class _Row:
    """A row that was multiplied by the elements `above` and divided by those `below`."""

    entries: list[Element]
    above: list[Element] = field(default_factory=list)
    below: list[Element] = field(default_factory=list)


def maximal_minor_factors(ring: Ring, rows: Sequence[Sequence[Element]]) -> list[Element] | None:
    """Irreducible factors of some nonzero minor that takes all columns; None if all of them vanish.

    Errors: UndecidedError where the elements in between grow too large.

    Shape r x c with r >= c.  Wherever the matrix has a rank below c one of the factors vanishes.  In a
    ring with relations there may be more factors than the minor has.

    >>> ring = Ring("s", ("a", "b"))
    >>> a, b = ring.gen("a"), ring.gen("b")
    >>> maximal_minor_factors(ring, [[a, b], [b, a]])
    [a - b, a + b]
    """
    work = [_primitive(ring, _Row(list(row))) for row in rows]
    columns = set(range(len(rows[0]))) if rows else set()
    powers: dict[str, tuple[Element, int]] = {}
    while columns:
        choices = [
            (len(row.entries[j]), sum(len(e) for e in row.entries), i, j)
            for i, row in enumerate(work)
            for j in columns
            if row.entries[j]
        ]
        if not choices:
            return None
        _, _, index, column = min(choices)
        chosen = work.pop(index)
        columns.discard(column)
        pivot = chosen.entries[column]
        _count(ring, powers, [pivot, *chosen.below], 1)
        _count(ring, powers, chosen.above, -1)
        for row in work:
            entry = row.entries[column]
            if not entry:
                continue
            common = pivot.gcd(entry)
            lift, weight = pivot // common, entry // common
            if _products(lift, row.entries) + _products(weight, chosen.entries) > PRODUCT_LIMIT:
                raise UndecidedError(
                    "the factors of a minor", "elimination, until its elements grew too large"
                )
            row.entries = [
                ring.reduce(lift * x - weight * y) for x, y in zip(row.entries, chosen.entries, strict=True)
            ]
            if not lift.is_constant():
                row.above.append(lift)
            _primitive(ring, row)
    return [factor for factor, total in powers.values() if total > 0 or ring.has_relations]


def _products(factor: Element, entries: Sequence[Element]) -> int:
    return len(factor) * sum(len(entry) for entry in entries)


def _primitive(ring: Ring, row: _Row) -> _Row:
    common = content(ring, row.entries)
    if common and not common.is_one():
        row.entries = [entry // common for entry in row.entries]
        if not common.is_constant():
            row.below.append(common)
    return row


def _count(
    ring: Ring, powers: dict[str, tuple[Element, int]], elements: Sequence[Element], sign: int
) -> None:
    for element in elements:
        for factor, exponent in irreducible(element)[1]:
            positive = -factor if ring.is_led_negative(factor) else factor
            if positive.is_constant():
                continue
            known = powers.get(str(positive), (positive, 0))[1]
            powers[str(positive)] = (positive, known + sign * int(exponent))

"""The rank of a matrix over the ring: an exact nonzero minor, and proof that all larger ones vanish.

All minors larger than a nonzero one vanish as soon as those do that border it (L. Kronecker, 1864;
e.g. F. R. Gantmacher, The Theory of Matrices, 1959, vol. 1, ch. I): (r - q)(c - q) determinants
settle the rank q of an r x c matrix.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from random import Random

from symplant.algebra.determinant import determinant
from symplant.algebra.modular_point import elimination_pivots, random_point
from symplant.algebra.ring import Element, Ring

__all__ = ["Rank", "bordered_minors", "exact_rank", "minor"]

SEED = 7331


@dataclass(frozen=True)
class Rank:
    """A proved rank: `minor` is the determinant of these rows and columns and is not zero.

    `bordered` counts the bordered minors that were shown to vanish identically (none are left to
    look at where the rank is full).
    """

    value: int
    rows: tuple[int, ...]
    columns: tuple[int, ...]
    minor: Element
    bordered: int

    @property
    def reason(self) -> str:
        """How the rank was proved, in one sentence."""
        first = f"a minor of size {self.value} is not zero" if self.value else "every entry is zero"
        if not self.bordered:
            return f"{first}, and none can be larger" if self.value else first
        return f"{first}; the {self.bordered} minors that border it vanish identically"


def exact_rank(ring: Ring, rows: Sequence[Sequence[Element]]) -> Rank:
    """The rank over the field of the letters and the variable; shape r x c.

    >>> ring = Ring("s", ("a",))
    >>> s, a = ring.gen("s"), ring.gen("a")
    >>> rank = exact_rank(ring, [[s, a], [a * s, a**2]])
    >>> rank.value, rank.minor, rank.reason
    (1, s, 'a minor of size 1 is not zero; the 1 minors that border it vanish identically')
    """
    random = Random(SEED)
    best: tuple[list[int], list[int]] = ([], [])
    while True:
        point = random_point(ring, random)
        at = random.randrange(1, point.prime)
        values = [[point.value(entry, at) for entry in row] for row in rows]
        found = elimination_pivots(values, point.prime)
        # A point may be unlucky and show too small a rank; the bordered minors then say so.
        if len(found[0]) >= len(best[0]):
            best = found
        borders = bordered_minors(ring, rows, *best)
        if not any(entry for line in borders for entry in line):
            return Rank(
                len(best[0]),
                tuple(best[0]),
                tuple(best[1]),
                minor(ring, rows, *best),
                sum(len(line) for line in borders),
            )


def minor(
    ring: Ring, rows: Sequence[Sequence[Element]], chosen: Sequence[int], columns: Sequence[int]
) -> Element:
    """The determinant of the chosen rows and columns, in normal form."""
    return ring.reduce(determinant([[rows[i][j] for j in columns] for i in chosen], ring.one))


def bordered_minors(
    ring: Ring, rows: Sequence[Sequence[Element]], chosen: Sequence[int], columns: Sequence[int]
) -> list[list[Element]]:
    """The minors of the chosen rows and columns and one more of each: (r - q) x (c - q).

    Divided by the chosen minor they are the Schur complement (J. J. Sylvester, 1851).
    """
    more_rows = [i for i in range(len(rows)) if i not in chosen]
    more_columns = [j for j in range(len(rows[0]) if rows else 0) if j not in columns]
    return [[minor(ring, rows, [*chosen, i], [*columns, j]) for j in more_columns] for i in more_rows]

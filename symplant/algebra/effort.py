"""How much work each rung of the sign ladder may take, counted in operations, never by the clock.

The same question therefore ends at the same place on every machine.
"""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["EFFORTS", "HIGH", "LOW", "NORMAL", "Effort"]


@dataclass(frozen=True)
class Effort:
    """Bounds for one question.

    `points` of a long search; `terms` evaluated in floating point in one search, and `exact_terms`
    evaluated exactly; `boxes` and `coefficients` of the proof by parts of the box; `pairs` of terms in
    the linear programme; `lines` along which roots are isolated; `solver` the resource limit of the
    solver for nonlinear arithmetic (0: it is not asked), and `solver_degree` the degree in one letter up to
    which it is asked.

    >>> EFFORTS["low"].points < EFFORTS["normal"].points < EFFORTS["high"].points
    True
    """

    name: str
    points: int
    terms: int
    exact_terms: int
    boxes: int
    coefficients: int
    pairs: int
    lines: int
    solver: int
    solver_degree: int

    def sample(self, size: int, most: int) -> int:
        """How many points elements with so many terms may be evaluated at."""
        return max(8, min(most, self.points, self.terms // max(size, 1)))


LOW = Effort("low", 200, 1_000_000, 200_000, 50, 50_000, 4_000, 20, 0, 0)
NORMAL = Effort("normal", 1500, 5_000_000, 600_000, 200, 400_000, 40_000, 200, 1_000_000, 3)
HIGH = Effort("high", 12_000, 400_000_000, 20_000_000, 4000, 10_000_000, 200_000, 3000, 40_000_000, 8)
#: By the names that the command line uses.
EFFORTS = {effort.name: effort for effort in (LOW, NORMAL, HIGH)}

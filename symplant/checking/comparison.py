"""Two values of one quantity at several points: the verdict, with the point where they differ."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.verdict import Check, Verdict
from symplant.checking.evaluation import Scalar, ball, value_text
from symplant.checking.point import Point, named

__all__ = ["Row", "compared"]

#: Balls that overlap agree if the difference is certain to be below this part of the larger value (or of 1).
TOLERANCE = Fraction(1, 10**30)


@dataclass(frozen=True)
class Row:
    """One quantity at one point: its value from the matrices as given, and from the result as printed."""

    quantity: str
    point: Point
    left: Scalar
    right: Scalar

    @property
    def differs(self) -> bool:
        """Whether the two values are certain to differ."""
        if isinstance(self.left, Fraction) and isinstance(self.right, Fraction):
            return self.left != self.right
        return not ball(self.left).overlaps(ball(self.right))


def compared(quantity: str, method: str, rows: Sequence[Row], sides: tuple[str, str]) -> Check:
    """The check that the rows amount to; `sides` names the two columns in the detail.

    >>> point = Point({"k": Fraction(2)})
    >>> row = Row("gain", point, Fraction(1), Fraction(2))
    >>> compared("gain", "substitution", [row], ("matrices", "result")).detail
    'at k = 2: matrices 1, result 2'
    """
    for row in rows:
        if row.differs:
            left, right = f"{sides[0]} {value_text(row.left)}", f"{sides[1]} {value_text(row.right)}"
            return Check(quantity, method, Verdict.REFUTED, f"at {row.point}: {left}, {right}")
    points = named(tuple(row.point for row in rows))
    loose = [row for row in rows if not row.point.exact]
    if not loose:
        return Check(quantity, method, Verdict.PROVED, f"equal at {points}")
    width = max(_width(row) for row in loose)
    if not width < TOLERANCE:
        return Check(quantity, method, Verdict.UNDECIDED, f"the balls are too wide ({width:.1e}) at {points}")
    return Check(quantity, method, Verdict.AGREES, f"relative difference below {width:.1e} at {points}")


def _width(row: Row) -> float:
    """A bound of the difference of two values over the larger of their sizes and 1."""
    left, right = ball(row.left), ball(row.right)
    size = max(1.0, float(left.abs_lower()), float(right.abs_lower()))
    return float((left - right).abs_upper() / size)

"""How wide a shape will print, found without writing it."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction

from symplant.algebra.expression import Number
from symplant.algebra.ring import Ring
from symplant.writing.shapes import Shape, Summand, power_tree
from symplant.writing.written import TreeWriter

__all__ = ["ShapeWidths"]


@dataclass
class ShapeWidths:
    """Widths of shapes over one ring in one notation."""

    ring: Ring
    writer: TreeWriter
    _powers: dict[tuple[int, int], float] = field(default_factory=dict)
    _numbers: dict[int, float] = field(default_factory=dict)

    def width(self, shape: Shape) -> float:
        """Estimated width of a shape on one line."""
        if not shape:
            return self.number(0)
        total = self.writer.plus[1] * (len(shape) - 1)
        if shape[0].value < 0:
            total += self.writer.sign[1]
        return total + sum(map(self.summand, shape))

    def lines(self, shape: Shape, room: float) -> int:
        """About how many lines of a width `room` a shape will fill."""
        return len(self._filled(shape, room, 0.0))

    def _filled(self, shape: Shape, room: float, start: float) -> list[float]:
        """How far each line is filled when a shape is set from `start` on; `lines.broken` does it exactly."""
        filled, split = [start], False
        for summand in shape:
            width = self.summand(summand) + self.writer.plus[1]
            if split or filled[-1] + width > room:
                filled.append(0.0)
            split = width > room and bool(summand.brackets)
            if split:
                begin = width - sum(self.width(inside) for inside, _ in summand.brackets)
                for inside, _ in summand.brackets:
                    filled[-1:] = self._filled(inside, room - 1, begin)
            else:
                filled[-1] += width
        return filled

    def summand(self, summand: Summand) -> float:
        """Width of one summand without its sign."""
        value, powers, brackets, _ = summand
        factors = len(powers) + len(brackets)
        total = sum(self.power(place, exponent) for place, exponent in powers)
        if abs(value) != 1 or not factors:
            total += self.number(abs(value))
            factors += 1
        for inside, exponent in brackets:
            total += self.width(inside) + self.writer.pair
            if exponent > 1:
                total += self.writer.exponent(exponent)
        return total + self.writer.gap * (factors - 1)

    def power(self, place: int, exponent: int) -> float:
        """Width of a power of a generator."""
        known = self._powers.get((place, exponent))
        if known is None:
            known = self.writer.write(power_tree(self.ring, place, exponent)).width
            self._powers[place, exponent] = known
        return known

    def number(self, value: int) -> float:
        """Width of an integer that is not negative."""
        known = self._numbers.get(value)
        if known is None:
            known = self._numbers[value] = self.writer.write(Number(Fraction(value))).width
        return known

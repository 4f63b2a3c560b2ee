"""The matrices as given, with numbers put in, and what follows from them by elimination."""

from __future__ import annotations

from fractions import Fraction
from functools import cached_property
from typing import Any

from symplant.checking.linear import adjugate_times, determinant
from symplant.checking.point import Point
from symplant.plant.model import Matrix, Model

__all__ = ["Site"]


class Site:
    """A plant at one point: E, A, B, C, D as numbers, from the entries as they were written.

    >>> from symplant.algebra.expression import Name, Number
    >>> from symplant.plant.parameter import Parameter, Signal
    >>> entry, one = ((Name("a"),),), ((Number(Fraction(1)),),)
    >>> x, y, u = Signal("x"), Signal("y"), Signal("u")
    >>> model = Model(entry, one, one, None, None, (x,), (u,), (y,), (Parameter("a"),))
    >>> site = Site(model, Point({"a": Fraction(2), "s": Fraction(5)}))
    >>> site.characteristic, site.numerator(0, 0), site.zeros
    (Fraction(3, 1), Fraction(1, 1), Fraction(-1, 1))
    """

    def __init__(self, model: Model, point: Point) -> None:
        n, m, p = len(model.states), len(model.inputs), len(model.outputs)
        self.point = point
        self.A = self._numbers(model.A, n, n)
        self.B = self._numbers(model.B, n, m)
        self.C = self._numbers(model.C, p, n)
        self.D = self._numbers(model.D, p, m)
        E = self._identity(n) if model.E is None else self._numbers(model.E, n, n)
        s = point.scalars[model.variable]
        #: s*E - A at the point.
        self.dynamics = [
            [s * e - a for e, a in zip(*rows, strict=True)] for rows in zip(E, self.A, strict=True)
        ]

    @cached_property
    def characteristic(self) -> Any:
        """det(s*E - A)."""
        return self._elimination[0]

    @cached_property
    def zeros(self) -> Any:
        """det [[A - s*E, B], [C, D]] of a square plant."""
        top = [[-x for x in row] + drive for row, drive in zip(self.dynamics, self.B, strict=True)]
        return determinant(top + [row + direct for row, direct in zip(self.C, self.D, strict=True)])

    def numerator(self, i: int, j: int) -> Any:
        """Entry i, j of C adj(s*E - A) B + D det(s*E - A)."""
        value, states = self._elimination
        if states is not None:
            total = self.D[i][j] * value
            for weight, line in zip(self.C[i], states, strict=True):
                total = total + weight * line[j]
            return total
        rows = [[*row, -drive[j]] for row, drive in zip(self.dynamics, self.B, strict=True)]
        return determinant([*rows, [*self.C[i], self.D[i][j]]])

    @cached_property
    def _elimination(self) -> tuple[Any, list[list[Any]] | None]:
        """det(s*E - A) and adj(s*E - A) B, the latter only where a system can be solved exactly."""
        if self.point.exact:
            return adjugate_times(self.dynamics, self.B)
        return determinant(self.dynamics), None

    def _numbers(self, matrix: Matrix | None, rows: int, columns: int) -> list[list[Any]]:
        if matrix is None:
            return [[self.point.arithmetic.number(Fraction(0))] * columns for _ in range(rows)]
        return [[self.point.evaluate(entry) for entry in row] for row in matrix]

    def _identity(self, size: int) -> list[list[Any]]:
        number = self.point.arithmetic.number
        return [[number(Fraction(int(i == j))) for j in range(size)] for i in range(size)]

"""The plant as a value: E x' = A x + B u, y = C x + D u, entries as they were written."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TypeAlias

from symplant.algebra.box import Box
from symplant.algebra.expression import Node
from symplant.plant.parameter import Parameter, Signal

__all__ = ["Matrix", "Model"]

#: Rows of expression trees; all rows have the same length.
Matrix: TypeAlias = tuple[tuple[Node, ...], ...]


@dataclass(frozen=True)
class Model:
    """A linear plant with n states, m inputs and p outputs, its entries in letters.

    Shapes: A and E are n x n, B is n x m, C is p x n, D is p x m.  `E` is None for the identity
    and `D` is None for zero, so that what was left out can be told from what was written.  In
    discrete time x' is the next state.
    """

    A: Matrix
    B: Matrix
    C: Matrix
    D: Matrix | None
    E: Matrix | None
    states: tuple[Signal, ...]
    inputs: tuple[Signal, ...]
    outputs: tuple[Signal, ...]
    parameters: tuple[Parameter, ...]
    title: str = ""
    discrete: bool = False
    source: str = ""

    @property
    def variable(self) -> str:
        """The polynomial variable: s in continuous, z in discrete time."""
        return "z" if self.discrete else "s"

    @property
    def letters(self) -> tuple[str, ...]:
        """Names of the parameters in the declared order."""
        return tuple(parameter.name for parameter in self.parameters)

    @property
    def box(self) -> Box:
        """The parameter box."""
        return Box({parameter.name: parameter.interval for parameter in self.parameters})

    @property
    def nominal(self) -> dict[str, Fraction]:
        """Nominal values of those parameters that have one."""
        return {p.name: p.nominal for p in self.parameters if p.nominal is not None}

    @property
    def matrices(self) -> dict[str, Matrix]:
        """The matrices that were given, by name, in the order E, A, B, C, D."""
        every = {"E": self.E, "A": self.A, "B": self.B, "C": self.C, "D": self.D}
        return {name: matrix for name, matrix in every.items() if matrix is not None}

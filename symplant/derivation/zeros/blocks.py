"""The system pencil in four blocks, for the plant, for one channel, and where letters are replaced."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property

from symplant.algebra.determinant import determinant
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.rank import minor
from symplant.algebra.ring import Element, Ring
from symplant.derivation.pencil import Pencil

__all__ = ["Blocks"]

Grid = tuple[tuple[Element, ...], ...]


@dataclass(frozen=True)
class Blocks:
    """P(s) = [[A - sE, B], [C, D]] with rows cleared: n states, m inputs, p outputs."""

    ring: Ring
    dynamics: Grid  # A - sE, n x n
    drive: Grid  # B, n x m
    reading: Grid  # C, p x n
    direct: Grid  # D, p x m

    @classmethod
    def of(
        cls, pencil: Pencil, outputs: Sequence[int] | None = None, inputs: Sequence[int] | None = None
    ) -> Blocks:
        """The blocks of a plant, restricted to the outputs and inputs with these positions."""
        model = pencil.model
        rows = range(len(model.outputs)) if outputs is None else outputs
        columns = range(len(model.inputs)) if inputs is None else inputs
        return cls(
            pencil.ring,
            tuple(tuple(-entry for entry in row) for row in pencil.dynamics),
            tuple(tuple(row[j] for j in columns) for row in pencil.drive),
            tuple(pencil.reading[i] for i in rows),
            tuple(tuple(pencil.direct[i][j] for j in columns) for i in rows),
        )

    @property
    def size(self) -> tuple[int, int, int]:
        """Numbers of states, inputs, outputs."""
        width = len(self.drive[0]) if self.drive else len(self.direct[0]) if self.direct else 0
        return len(self.dynamics), width, len(self.reading)

    @property
    def input_rows(self) -> Grid:
        """[A - sE, B]: its rank falls at the input-decoupling zeros."""
        return tuple((*row, *drive) for row, drive in zip(self.dynamics, self.drive, strict=True))

    @property
    def output_rows(self) -> Grid:
        """[A - sE; C]: its rank falls at the output-decoupling zeros."""
        return (*self.dynamics, *self.reading)

    @property
    def rows(self) -> Grid:
        """The whole pencil, (n + p) x (n + m)."""
        lower = ((*row, *direct) for row, direct in zip(self.reading, self.direct, strict=True))
        return (*self.input_rows, *lower)

    @cached_property
    def characteristic(self) -> Polynomial:
        """det(A - sE), rows cleared."""
        return Polynomial.of(self.ring, determinant(self.dynamics, self.ring.one))

    def bordered(self, outputs: Sequence[int], inputs: Sequence[int]) -> Polynomial:
        """det(A - sE) times the minor of the transfer matrix for these outputs and inputs, up to sign."""
        n = len(self.dynamics)
        states = list(range(n))
        element = minor(
            self.ring, self.rows, [*states, *(n + i for i in outputs)], [*states, *(n + j for j in inputs)]
        )
        return Polynomial(self.ring, element)

    def transposed(self) -> Blocks:
        """The dual plant: inputs and outputs change places."""
        n, m, p = self.size
        return Blocks(
            self.ring,
            _transposed(self.dynamics, n),
            _transposed(self.reading, n),
            _transposed(self.drive, m),
            _transposed(self.direct, m) if p else tuple(() for _ in range(m)),
        )

    def mapped(self, ring: Ring, image: Callable[[Sequence[Element]], Sequence[Element]]) -> Blocks:
        """Every row replaced by `image(row)`, a multiple of its value in `ring`.

        Rows of [A - sE, B] and of [C, D] are mapped as wholes, so that each keeps one multiplier.
        """
        n, _, _ = self.size
        upper = [tuple(ring.reduce(entry) for entry in image(row)) for row in self.input_rows]
        lower = [tuple(ring.reduce(entry) for entry in image(row)) for row in self.rows[n:]]
        return Blocks(
            ring,
            tuple(row[:n] for row in upper),
            tuple(row[n:] for row in upper),
            tuple(row[:n] for row in lower),
            tuple(row[n:] for row in lower),
        )


def _transposed(grid: Grid, width: int) -> Grid:
    return tuple(tuple(row[j] for row in grid) for j in range(width))

"""Determinants and adjugates of sparse matrices over an exact commutative ring.

The raw routines never ask what the entries are: they add, multiply and (fraction-free
elimination only) divide exactly.  The choice among them is made by the size of the lattice.

* Subset expansion: Laplace expansion by rows, memoised on the set of used columns (a dynamic
  programme over bit masks).  With the rows ordered so that few columns are open at a time a
  banded or tree-like plant costs little more than its result.
* All cofactors are the derivatives of the determinant with respect to the entries: the same
  lattice of column sets is run forward and backward (Baur and Strassen, Theor. Comput. Sci.
  22 (1983) 317-330, for the idea that all partial derivatives cost a small multiple of the value).
* Fraction-free elimination (E. H. Bareiss, Math. Comp. 22 (1968) 565-578) for dense matrices of
  many rows, where the lattice has too many sets.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, TypeAlias

__all__ = ["adjugate", "determinant", "row_order"]

Entry: TypeAlias = Any  # an element of the ring; only +, -, *, // and truth are used
Rows: TypeAlias = Sequence[Sequence[Entry]]

#: Most products that the subset expansion may need before elimination is taken instead.
LATTICE_LIMIT = 400_000


def determinant(rows: Rows, one: Entry) -> Entry:
    """Determinant of a square matrix; `one` is the ring's unit.

    Shape: n x n, n >= 0 (the empty determinant is `one`).  Entries must be false exactly when zero.

    >>> determinant([[1, 2], [3, 4]], 1)
    -2
    >>> determinant([], 1)
    1
    """
    _check_square(rows)
    order = row_order(rows)
    sign = _parity(order)
    arranged = [rows[row] for row in order]
    if _lattice_size(arranged) <= LATTICE_LIMIT:
        value = _forward(arranged, one)[-1].get((1 << len(rows)) - 1, one - one)
    else:
        value = _bareiss(arranged, one)
    return -value if sign else value


def adjugate(rows: Rows, one: Entry) -> tuple[Entry, list[list[Entry]]]:
    """Determinant and adjugate: `rows` times the adjugate is the determinant times the identity.

    Shape: n x n in, a ring element and n x n out.  The determinant must not vanish identically
    if the matrix is too dense for the subset expansion (ZeroDivisionError then).

    >>> adjugate([[1, 2], [3, 4]], 1)
    (-2, [[4, -2], [-3, 1]])
    """
    _check_square(rows)
    size = len(rows)
    order = row_order(rows)
    arranged = [rows[row] for row in order]
    if 2 * _lattice_size(arranged) > LATTICE_LIMIT:
        return _solved_adjugate(rows, one)
    forward, backward = _forward(arranged, one), _backward(arranged, one)
    zero, full, odd = one - one, (1 << size) - 1, _parity(order)
    value = forward[-1].get(full, zero)
    result = [[zero] * size for _ in range(size)]
    for position, row in enumerate(order):
        for mask, done in forward[position].items():
            for column in range(size):
                if mask >> column & 1:
                    continue
                rest = backward[position + 1].get(mask | 1 << column)
                if rest is None:
                    continue
                term = done * rest
                if ((mask >> (column + 1)).bit_count() + odd) & 1:
                    term = -term
                result[column][row] = result[column][row] + term
    return (-value if odd else value), result


def row_order(rows: Rows) -> list[int]:
    """Rows in an order that opens few new columns at a time.

    >>> row_order([[1, 1, 1], [1, 0, 0], [1, 1, 0]])
    [1, 2, 0]
    """
    support = [frozenset(column for column, entry in enumerate(row) if entry) for row in rows]
    left, seen, order = set(range(len(rows))), frozenset[int](), list[int]()
    while left:
        best = min(left, key=lambda row: (len(support[row] - seen), len(support[row]), row))
        order.append(best)
        seen |= support[best]
        left.remove(best)
    return order


def _check_square(rows: Rows) -> None:
    if any(len(row) != len(rows) for row in rows):
        raise ValueError("a determinant needs a square matrix")


def _parity(order: Sequence[int]) -> int:
    """1 if the permutation is odd."""
    return sum(before > after for i, before in enumerate(order) for after in order[i + 1 :]) & 1


def _lattice_size(rows: Rows) -> int:
    """Number of products that the expansion needs, counted no further than past the limit."""
    masks, products = {0}, 0
    for row in rows:
        bits = [1 << column for column, entry in enumerate(row) if entry]
        products += len(masks) * len(bits)
        if products > LATTICE_LIMIT:
            break
        masks = {mask | bit for mask in masks for bit in bits if not mask & bit}
    return products


def _forward(rows: Rows, one: Entry) -> list[dict[int, Entry]]:
    """layers[i][mask]: the determinant of the first i rows on the columns in `mask`."""
    layers: list[dict[int, Entry]] = [{0: one}]
    for row in rows:
        entries = [(column, entry) for column, entry in enumerate(row) if entry]
        layer: dict[int, Entry] = {}
        for mask, value in layers[-1].items():
            for column, entry in entries:
                if mask >> column & 1:
                    continue
                term = value * entry
                if (mask >> (column + 1)).bit_count() & 1:
                    term = -term
                key = mask | 1 << column
                layer[key] = layer[key] + term if key in layer else term
        layers.append({mask: value for mask, value in layer.items() if value})
    return layers


def _backward(rows: Rows, one: Entry) -> list[dict[int, Entry]]:
    """layers[i][mask]: what completes `mask` (used by the first i rows) to all columns."""
    layers: list[dict[int, Entry]] = [{(1 << len(rows)) - 1: one}]
    for row in reversed(rows):
        entries = [(column, entry) for column, entry in enumerate(row) if entry]
        layer: dict[int, Entry] = {}
        for mask, value in layers[-1].items():
            for column, entry in entries:
                if not mask >> column & 1:
                    continue
                key = mask & ~(1 << column)
                term = value * entry
                if (key >> (column + 1)).bit_count() & 1:
                    term = -term
                layer[key] = layer[key] + term if key in layer else term
        layers.append({mask: value for mask, value in layer.items() if value})
    return layers[::-1]


def _bareiss(rows: Rows, one: Entry) -> Entry:
    work, previous, negative = [list(row) for row in rows], one, False
    for k in range(len(work) - 1):
        pivot_row = next((i for i in range(k, len(work)) if work[i][k]), None)
        if pivot_row is None:
            return one - one
        if pivot_row != k:
            work[k], work[pivot_row] = work[pivot_row], work[k]
            negative = not negative
        pivot = work[k][k]
        for i in range(k + 1, len(work)):
            for j in range(k + 1, len(work)):
                work[i][j] = (work[i][j] * pivot - work[i][k] * work[k][j]) // previous
        previous = pivot
    value = work[-1][-1] if work else one
    return -value if negative else value


def _solved_adjugate(rows: Rows, one: Entry) -> tuple[Entry, list[list[Entry]]]:
    """Adjugate by fraction-free Gauss-Jordan elimination of [M | I]: it ends as [det I | adj M]."""
    size, zero = len(rows), one - one
    work = [list(row) + [one if i == j else zero for j in range(size)] for i, row in enumerate(rows)]
    previous, negative = one, False
    for k in range(size):
        pivot_row = next((i for i in range(k, size) if work[i][k]), None)
        if pivot_row is None:
            raise ZeroDivisionError("the matrix is singular")
        if pivot_row != k:
            # Swapping rows of [M | I] swaps columns of the result back by itself; only the sign stays.
            work[k], work[pivot_row] = work[pivot_row], work[k]
            negative = not negative
        pivot = work[k][k]
        for i in range(size):
            if i == k:
                continue
            factor = work[i][k]
            for j in range(2 * size):
                if j == k:
                    continue
                work[i][j] = (work[i][j] * pivot - factor * work[k][j]) // previous
            work[i][k] = zero
        for i in range(k):
            work[i][i] = pivot
        previous = pivot
    value = previous if size else one
    right = [row[size:] for row in work]
    return (-value, [[-entry for entry in row] for row in right]) if negative else (value, right)

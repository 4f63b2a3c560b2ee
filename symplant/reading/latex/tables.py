"""Matrix environments: their cells, and the determinant of a small one."""

from __future__ import annotations

from collections.abc import Sequence

from symplant.algebra.expression import Node, Product, Sum, negated
from symplant.reading.latex.groups import Group, Item, split
from symplant.reading.latex.tokens import Token, refusal

__all__ = ["DETERMINANTS", "MATRICES", "cells", "determinant"]

#: Environments that hold a matrix.
MATRICES = frozenset(("matrix", "pmatrix", "bmatrix", "Bmatrix", "smallmatrix", "array"))

_STARRED = frozenset(("matrix*", "pmatrix*", "bmatrix*", "Bmatrix*"))
#: Environments that mean the determinant of what they hold.
DETERMINANTS = frozenset(("vmatrix", "vmatrix*"))
_RULES = (r"\hline", r"\toprule", r"\midrule", r"\bottomrule")
_LARGEST_DETERMINANT = 5


def cells(group: Group) -> list[list[tuple[list[Item], int]]]:
    """The cells of a matrix environment by rows: the items of each and the column where it ends.

    Raises `InputError` if it is no matrix environment, if a row is shorter or longer than the first, or if a
    cell is empty.
    """
    if group.kind not in MATRICES | _STARRED | DETERMINANTS:
        known = f"known are {', '.join(sorted(MATRICES))}"
        raise refusal(group.column, rf"'\begin{{{group.kind}}}' is not a matrix", known)
    body = [*group.items]
    if (group.kind in _STARRED or group.kind == "array") and _opens(body, "["):
        del body[0]
    if group.kind == "array":
        if not _opens(body, "{"):
            raise refusal(group.column, r"'\begin{array}' without its column letters")
        del body[0]
    body = [item for item in body if not (isinstance(item, Token) and item.text in _RULES)]
    parts, breaks = split(body, lambda item: isinstance(item, Token) and item.kind == "row")
    ends = [item.column for item in breaks] + [group.end]
    if len(parts) > 1 and not parts[-1]:
        del parts[-1], ends[-1]
    rows = [_cells_of_row(row, end) for row, end in zip(parts, ends, strict=True)]
    for number, row in enumerate(rows, 1):
        if len(row) != len(rows[0]):
            raise refusal(
                parts[number - 1][0].column if parts[number - 1] else ends[number - 1],
                f"row {number} has {_entries(len(row))}, row 1 has {_entries(len(rows[0]))}",
            )
        for position, (items, end) in enumerate(row, 1):
            if not items:
                raise refusal(end, f"row {number}, entry {position} is empty", "write 0 for a zero")
    return rows


def _opens(body: Sequence[Item], kind: str) -> bool:
    return bool(body) and isinstance(body[0], Group) and not body[0].environment and body[0].kind == kind


def _cells_of_row(row: Sequence[Item], end: int) -> list[tuple[list[Item], int]]:
    parts, marks = split(row, lambda item: isinstance(item, Token) and item.text == "&")
    return list(zip(parts, [item.column for item in marks] + [end], strict=True))


def _entries(count: int) -> str:
    return "1 entry" if count == 1 else f"{count} entries"


def determinant(rows: Sequence[Sequence[Node]], column: int) -> Node:
    """The determinant written out by the first row, again and again (Laplace).

    Raises `InputError` if the matrix is not square, or larger than 5 x 5, where this grows out of hand.

    >>> from symplant.algebra.expression import Name
    >>> a, b, c, d = map(Name, "abcd")
    >>> determinant([[a, b], [c, d]], 1) == Sum((Product((a, d)), negated(Product((b, c)))))
    True
    """
    size = len(rows)
    if any(len(row) != size for row in rows):
        raise refusal(column, f"determinant of a matrix with {size} rows and {len(rows[0])} columns")
    if size > _LARGEST_DETERMINANT:
        raise refusal(column, f"determinant of order {size}", f"up to {_LARGEST_DETERMINANT} are written out")
    if size == 1:
        return rows[0][0]
    terms: list[Node] = []
    for skipped, entry in enumerate(rows[0]):
        minor = [[*row[:skipped], *row[skipped + 1 :]] for row in rows[1:]]
        term = Product((entry, determinant(minor, column)), column)
        terms.append(negated(term) if skipped % 2 else term)
    return Sum(tuple(terms), column)

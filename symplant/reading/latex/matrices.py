"""Whole matrices written in LaTeX."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from symplant.algebra.expression import Node
from symplant.errors import Fault, InputError
from symplant.reading.latex.gate import Gate
from symplant.reading.latex.groups import Group, Item, grouped, undisplayed
from symplant.reading.latex.spellings import Spellings
from symplant.reading.latex.tables import DETERMINANTS, cells
from symplant.reading.latex.tokens import refusal, tokenise

__all__ = ["read_latex_matrix"]

_EXAMPLE = r"\begin{bmatrix} ... \end{bmatrix}"


def read_latex_matrix(
    text: str, spellings: Mapping[str, str], *, decimal_comma: bool = False, column: int = 1
) -> list[list[Node]]:
    r"""The trees of a matrix by rows; all rows have the same length.

    The text is one environment (matrix, pmatrix, bmatrix, Bmatrix, smallmatrix or array), which may stand in
    brackets and in a display.  The other arguments are those of `read_latex`.
    Raises `InputError` with the faults of all entries, or the first row that has another length than row 1.

    >>> from symplant.algebra.expression import Name
    >>> rows = read_latex_matrix(r"\begin{bmatrix} a & b \\ b & a \end{bmatrix}", {"a": "a", "b": "b"})
    >>> rows[1] == [Name("b"), Name("a")]
    True
    """
    tokens = undisplayed(tokenise(text, decimal_comma=decimal_comma, column=column))
    group = _environment(grouped(tokens), column)
    declared = Spellings(spellings)
    faults: list[Fault] = []
    rows: list[list[Node]] = []
    for row in cells(group):
        rows.append([])
        for items, end in row:
            try:
                rows[-1].append(Gate(text, column, declared).whole(items, end))
            except InputError as error:
                faults += error.faults
    if faults:
        raise InputError(faults)
    return rows


def _environment(items: Sequence[Item], column: int) -> Group:
    """The one environment that the items are, without the brackets round it."""
    while len(items) == 1 and isinstance(items[0], Group) and items[0].kind in ("(", "[", r"\{", "{"):
        items = items[0].items
    only = items[0] if len(items) == 1 else None
    if isinstance(only, Group) and only.environment:
        if only.kind in DETERMINANTS:
            raise refusal(only.column, f"'\\begin{{{only.kind}}}' is a determinant, not a matrix", _EXAMPLE)
        return only
    for item in items:
        if not (isinstance(item, Group) and item.environment):
            raise refusal(item.column, "a matrix and nothing else is expected here", _EXAMPLE)
    if items:
        raise refusal(items[1].column, "a second matrix")
    raise refusal(column, "no matrix", _EXAMPLE)

"""What Python callers pass, as plain lists: SymPy and NumPy are looked for only if they are loaded."""

from __future__ import annotations

import sys
from collections.abc import Mapping
from typing import Any

__all__ = ["is_symbol", "is_sympy", "plain_rows", "signal_value"]


def is_sympy(value: object) -> bool:
    """Whether a value is a SymPy expression."""
    sympy: Any = sys.modules.get("sympy")
    return sympy is not None and isinstance(value, sympy.Basic)


def is_symbol(value: object) -> bool:
    """Whether a value is a SymPy symbol."""
    sympy: Any = sys.modules.get("sympy")
    return sympy is not None and isinstance(value, sympy.Symbol)


def plain_rows(value: object) -> object:
    """A matrix as a list of lists if it is one of SymPy, NumPy or tuples; anything else as it is.

    The entries stay what they were.

    >>> plain_rows(((1, "k"), (0, 1)))
    [[1, 'k'], [0, 1]]
    """
    rows = _listed(value)
    return [_row(row) for row in rows] if isinstance(rows, list) else rows


def signal_value(value: object) -> object:
    """A list of signals whose symbols have become names or tables; anything else as it is.

    >>> signal_value(("x", {"name": "v"}))
    ['x', {'name': 'v'}]
    """
    values = _listed(value)
    return [_signal(item) for item in values] if isinstance(values, list) else values


def _listed(value: object) -> object:
    sympy: Any = sys.modules.get("sympy")
    numpy: Any = sys.modules.get("numpy")
    if sympy is not None and isinstance(value, sympy.MatrixBase | sympy.NDimArray):
        return value.tolist()
    if numpy is not None and isinstance(value, numpy.ndarray):
        # Not tolist(): it makes doubles of short floats, which then print other decimals.
        plain = numpy.asarray(value)
        return [_listed(item) for item in plain] if plain.ndim else plain[()]
    return list(value) if isinstance(value, list | tuple) else value


def _row(value: object) -> object:
    row = _listed(value)
    if (
        isinstance(row, list)
        and len(row) == 1
        and isinstance(row[0], list)
        and not isinstance(value, list | tuple)
    ):
        return row[0]  # a row that is itself a matrix of one row
    return row


def _signal(item: object) -> object:
    sympy: Any = sys.modules.get("sympy")
    if sympy is None or isinstance(item, str | Mapping):
        return item
    if isinstance(item, sympy.Symbol):
        spelling = item.name
    elif isinstance(item, sympy.core.function.AppliedUndef):
        spelling = item.func.__name__
    else:
        return item
    from symplant.reading.identifiers import identifier_from
    from symplant.reading.tokens import is_identifier

    if is_identifier(spelling):
        return spelling
    return {"name": identifier_from(spelling), "latex": spelling}

"""Matrices as rows of expression trees: lists of rows, or one LaTeX text."""

from __future__ import annotations

import numbers
from dataclasses import dataclass

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, integer
from symplant.errors import InputError
from symplant.plant.model import Matrix
from symplant.reading.entries import EntryReader, is_latex
from symplant.reading.fault_list import FaultList
from symplant.reading.quantities import NumberError, exact_number
from symplant.reading.suggestions import quoted
from symplant.reading.tables import kind_of

__all__ = ["MATRIX_NAMES", "Grid", "read_matrix"]

#: The matrices of E x' = A x + B u, y = C x + D u; the last two may be left out.
MATRIX_NAMES = ("A", "B", "C", "D", "E")

_FORM = "write it as a list of rows: [[..., ...], [..., ...]]"


@dataclass(frozen=True, slots=True)
class Grid:
    """A matrix that has been read, all rows of one length."""

    entries: Matrix

    @property
    def rows(self) -> int:
        return len(self.entries)

    @property
    def columns(self) -> int:
        return len(self.entries[0])


def read_matrix(raw: object, name: str, place: str, reader: EntryReader, faults: FaultList) -> Grid | None:
    """The matrix called `name` that stands at `place`; None if it has no shape.

    Faults stand at "PLACE[row][column]", counted from 1.  Entries that could not be read are zero in
    the grid, so that its shape can still be compared with others.

    >>> faults = FaultList()
    >>> read_matrix([["0", 1], ["-1/2", "0"]], "A", "matrices.A", EntryReader(()), faults).columns
    2
    """
    if isinstance(raw, str):
        return _read_latex(raw, place, reader, faults)
    if not isinstance(raw, list | tuple):
        faults.add(place, f"{kind_of(raw)} where a matrix is expected", _FORM)
        return None
    if not raw:
        faults.add(place, "no rows", _FORM)
        return None
    if not any(isinstance(row, list | tuple) for row in raw):
        faults.add(place, "a list of entries where a list of rows is expected", _flat_hint(raw, name))
        return None
    rows: list[tuple[Node, ...]] = []
    regular = True
    for number, row in enumerate(raw, start=1):
        row_place = f"{place}[{number}]"
        if not isinstance(row, list | tuple):
            faults.add(row_place, f"{kind_of(row)} where a row is expected", "a row is a list: [..., ...]")
            regular = False
            continue
        entries = tuple(
            _read_entry(entry, f"{row_place}[{column}]", reader, faults)
            for column, entry in enumerate(row, start=1)
        )
        if not entries:
            faults.add(row_place, "row without entries")
            regular = False
        rows.append(entries)
    return _checked(rows, place, faults) if regular else None


def _read_latex(text: str, place: str, reader: EntryReader, faults: FaultList) -> Grid | None:
    if not is_latex(text):
        hint = f"a single entry is written [[{quoted(text)}]]" if text.strip() else _FORM
        faults.add(place, "text that is no LaTeX matrix", hint)
        return None
    try:
        rows = reader.read_matrix(text)
    except InputError as error:
        faults.take(error, place)
        return None
    return _checked([tuple(row) for row in rows], place, faults)


def _checked(rows: list[tuple[Node, ...]], place: str, faults: FaultList) -> Grid | None:
    if not rows or not rows[0]:
        faults.add(place, "empty matrix", _FORM)
        return None
    width = len(rows[0])
    ragged = False
    for number, row in enumerate(rows, start=1):
        if len(row) != width:
            count = f"{len(row)} entr{'y' if len(row) == 1 else 'ies'}"
            faults.add(f"{place}[{number}]", f"row of {count}, but row 1 has {width}")
            ragged = True
    return None if ragged else Grid(tuple(rows))


def _read_entry(raw: object, place: str, reader: EntryReader, faults: FaultList) -> Node:
    if isinstance(raw, Number | Name | Sum | Product | Quotient | Power | Call):
        return raw
    try:
        if isinstance(raw, str):
            return reader.read(raw)
        if isinstance(raw, numbers.Number) and not isinstance(raw, bool):
            return Number(exact_number(raw))
        faults.add(place, f"{kind_of(raw)} where an entry is expected", "an entry is text or a number")
    except InputError as error:
        faults.take(error, place)
    except NumberError as error:
        faults.add(place, str(error), error.suggestion)
    return integer(0)


def _flat_hint(entries: list[object] | tuple[object, ...], name: str) -> str:
    shown = [f'"{entry}"' if isinstance(entry, str) else str(entry) for entry in entries]
    if len(shown) > 4 or sum(map(len, shown)) > 40:
        shown = ["...", "..."]
    column = f"[{', '.join(f'[{entry}]' for entry in shown)}]"
    row = f"[[{', '.join(shown)}]]"
    if name == "B":
        return f"a column is written {column}"
    if name == "C":
        return f"a row is written {row}"
    return f"a column is written {column}, a row {row}"

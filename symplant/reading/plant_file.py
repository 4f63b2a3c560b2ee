"""Plant files: TOML text to a plant, with every fault of the file at once."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable
from dataclasses import replace
from decimal import Decimal, InvalidOperation
from pathlib import Path

from symplant.errors import Fault, InputError
from symplant.plant.model import Model
from symplant.reading.fault_list import FaultList
from symplant.reading.locations import line_of, lines_of
from symplant.reading.matrices import MATRIX_NAMES
from symplant.reading.model_building import build_model
from symplant.reading.plant_bytes import file_text
from symplant.reading.tables import check_keys, kind_of

__all__ = ["FORMAT", "read_plant_file", "read_plant_text"]

#: The version of the plant file that is read here.
FORMAT = 1

_TOP_KEYS = ("format", "title", "time", "states", "inputs", "outputs", "parameters", "matrices")
#: Other forms of a plant, which stand in place of the matrices, and additions to it.
_NOT_YET_READ = ("second_order", "equations", "algebraic", "feedback", "channels")
_OTHER_FORMS = ("second_order", "equations")

_ABOVE_TABLES = "it stands above the first [table]"
_ABOVE = dict.fromkeys(("format", "title", "time", "states", "inputs", "outputs"), _ABOVE_TABLES)
_UNDER_MATRICES = dict.fromkeys(MATRIX_NAMES, "it stands under [matrices]")

_TOML_PLACE = re.compile(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)$")
# Python's TOML reader takes time that grows with the square of the number of parts.
_LONG_KEY = re.compile(r"""(?<![\w-])(?:(?:[\w-]++|"[^"\n]*"|'[^'\n]*')[ \t]*+\.[ \t]*+){100}""")
_OUT_OF_RANGE = Decimal("1e999999")


def read_plant_file(path: str | Path) -> Model:
    """The plant that a TOML file describes.

    Raises InputError with every fault of the file: each has its place, such as
    "matrices.A[2][1], column 7", and "NAME.toml:LINE" as its file where the line is known.

    >>> read_plant_file("nowhere/hoist.toml")
    Traceback (most recent call last):
    symplant.errors.InputError: nowhere/hoist.toml: there is no such file
    """
    return read_plant_text(file_text(path), str(path))


def read_plant_text(text: str, file: str = "") -> Model:
    """The plant that a TOML text describes; `file` is the name that faults and the plant carry.

    Raises InputError with every fault of the text.

    >>> read_plant_text('''
    ... format = 1
    ... parameters.k = { sign = "positive" }
    ... matrices = { A = [["-k"]], B = [[1]], C = [[0.5]] }
    ... ''').C[0][0].value
    Fraction(1, 2)
    """
    document = _parsed(text, file)
    try:
        return _read_document(document, file)
    except InputError as error:
        raise InputError(_with_lines(error.faults, text, file)) from None


def _parsed(text: str, file: str) -> dict[str, object]:
    if long := _LONG_KEY.search(text):
        line = text.count("\n", 0, long.start()) + 1
        fault = Fault(f"line {line}", "a key of very many parts", "keys have at most three", file)
        raise InputError([fault])
    try:
        return tomllib.loads(text, parse_float=_spelled)
    except tomllib.TOMLDecodeError as error:
        fault = _toml_fault(error, file)
    except ValueError:
        # Python converts no integer of more than some thousand digits.
        fault = Fault("", "a whole number of very many digits", "write it with a power of ten", file)
    except RecursionError:
        fault = Fault("", "lists or tables nested too deeply", "a matrix is a list of rows", file)
    raise InputError([fault]) from None


def _spelled(text: str) -> Decimal:
    """A TOML float as the exact decimal that is written there."""
    try:
        return Decimal(text)
    except InvalidOperation:  # an exponent that even Decimal does not hold
        return _OUT_OF_RANGE


def _toml_fault(error: tomllib.TOMLDecodeError, file: str) -> Fault:
    message = str(error)
    place = _TOML_PLACE.search(message)
    reason = message[: place.start()] if place else message
    reason = f"not TOML: {reason[:1].lower()}{reason[1:]}"
    hint = ""
    if "\\" in message or "escape" in message.lower():
        hint = "text with a backslash goes in single quotes: '...'"
    if place is None:
        return Fault("", reason, hint, file)
    if place.group(1) is None:
        return Fault("end of the file", reason, hint, file)
    line, column = place.groups()
    return Fault(f"line {line}, column {column}", reason, hint, f"{file}:{line}" if file else "")


def _read_document(document: dict[str, object], file: str) -> Model:
    faults = FaultList()
    check_keys(document, (*_TOP_KEYS, *_NOT_YET_READ), "", faults, _UNDER_MATRICES)
    for key in _NOT_YET_READ:
        if key in document:
            hint = "write the plant as [matrices]" if key in _OTHER_FORMS else ""
            faults.add(key, "not yet read by this version", hint)
    _check_format(document, faults)
    matrices = document.get("matrices")
    if isinstance(matrices, dict):
        check_keys(matrices, MATRIX_NAMES, "matrices", faults, _ABOVE)
    elif matrices is not None:
        faults.add("matrices", f"{kind_of(matrices)} where a table is expected", "write [matrices]")
        matrices = None
    elif not any(form in document for form in _OTHER_FORMS):
        faults.add("matrices", "the table is missing", "write [matrices] with A, B and C")
    return build_model(document, matrices, faults, outer="matrices", elsewhere=_ABOVE, source=file)


def _check_format(document: dict[str, object], faults: FaultList) -> None:
    if "format" not in document:
        faults.add("format", "the version of the file format is missing", f"write format = {FORMAT}")
        return
    value = document["format"]
    if type(value) is not int or value != FORMAT:
        is_short = isinstance(value, str) or (type(value) is int and abs(value) < 10**6)
        reason = f"unknown format {value!r:.40}" if is_short else "the version is a small whole number"
        faults.add("format", reason, f"this version reads format = {FORMAT}")


def _with_lines(faults: Iterable[Fault], text: str, file: str) -> list[Fault]:
    """The faults in the order of the file, each with the line at which it stands where that is known."""
    lines = lines_of(text)
    placed = [(line_of(fault.place, lines), fault) for fault in faults]
    placed.sort(key=lambda pair: pair[0])
    if not file:
        return [fault for _, fault in placed]
    return [replace(fault, file=f"{file}:{line}" if line else file) for line, fault in placed]

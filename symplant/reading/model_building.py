"""From tables and lists, as a plant file or a Python caller has them, to a plant."""

from __future__ import annotations

from collections.abc import Mapping

from symplant.plant.model import Model
from symplant.plant.parameter import Signal
from symplant.reading.entries import EntryReader
from symplant.reading.fault_list import FaultList
from symplant.reading.matrices import MATRIX_NAMES, Grid, read_matrix
from symplant.reading.parameters import read_parameters
from symplant.reading.shapes import settle_sizes
from symplant.reading.signals import check_signal_names, numbered, read_signals
from symplant.reading.spelling_check import check_spellings
from symplant.reading.suggestions import did_you_mean, quoted
from symplant.reading.tables import kind_of, text_field

__all__ = ["build_model", "read_time"]

_VARIABLES = {"continuous": "s", "discrete": "z"}
_SIGNAL_LISTS = ("states", "inputs", "outputs")


def build_model(
    raw: Mapping[str, object],
    matrices: Mapping[str, object] | None,
    faults: FaultList,
    *,
    outer: str = "",
    elsewhere: Mapping[str, str] | None = None,
    source: str = "",
) -> Model:
    """The plant with the given matrices; `raw` holds title, time, signals and parameters.

    Matrices are lists of rows or LaTeX texts, by name; `outer` stands in front of their places.
    None means that there are none to read, which is among the `faults` already.  `elsewhere` tells
    where keys belong that are no parameters.

    Raises InputError with everything that `faults` held before and all that was found here.

    >>> matrices = {"A": [["-k"]], "B": [[1]], "C": [[1]]}
    >>> build_model({"parameters": {"k": {}}}, matrices, FaultList()).states[0].name
    'x1'
    """
    title = text_field(raw, "title", "", faults)
    variable = read_time(raw, faults)
    parameters = read_parameters(raw.get("parameters", {}), variable, faults, elsewhere)
    named: dict[str, tuple[Signal, ...]] = {}
    for key in _SIGNAL_LISTS:
        signals = read_signals(raw[key], key, faults) if raw.get(key) is not None else None
        if signals is not None:
            named[key] = signals
    places = {name: f"{outer}.{name}" if outer else name for name in MATRIX_NAMES}
    reader = EntryReader(parameters)
    grids = {} if matrices is None else _read_matrices(matrices, places, reader, faults)
    check_spellings(parameters, named, faults, latex_was_read=reader.has_read_latex)
    sizes = settle_sizes(grids, {key: len(signals) for key, signals in named.items()}, places, faults)
    states, inputs, outputs = (named.get(key) or numbered(key, sizes.of(key)) for key in _SIGNAL_LISTS)
    check_signal_names(states, inputs, outputs, parameters, faults)
    faults.raise_any()
    entries = {name: grid.entries for name, grid in grids.items()}
    return Model(
        A=entries["A"],
        B=entries["B"],
        C=entries["C"],
        D=entries.get("D"),
        E=entries.get("E"),
        states=states,
        inputs=inputs,
        outputs=outputs,
        parameters=parameters,
        title=title,
        discrete=variable == "z",
        source=source,
    )


def read_time(raw: Mapping[str, object], faults: FaultList) -> str:
    """The variable of the polynomials, from the key `time`; empty if that is at fault."""
    word = raw.get("time", "continuous")
    if isinstance(word, str) and word in _VARIABLES:
        return _VARIABLES[word]
    shown = (
        f"unknown value {quoted(word)}"
        if isinstance(word, str)
        else f"{kind_of(word)} where a word is expected"
    )
    hint = did_you_mean(word, _VARIABLES) if isinstance(word, str) else ""
    faults.add("time", shown, hint or "continuous or discrete")
    return ""


def _read_matrices(
    matrices: Mapping[str, object], places: Mapping[str, str], reader: EntryReader, faults: FaultList
) -> dict[str, Grid]:
    grids: dict[str, Grid] = {}
    for name in MATRIX_NAMES:
        if matrices.get(name) is None:
            if name in ("A", "B", "C"):
                faults.add(places[name], f"matrix {name} is missing")
            continue
        grid = read_matrix(matrices[name], name, places[name], reader, faults)
        if grid is not None:
            grids[name] = grid
    return grids

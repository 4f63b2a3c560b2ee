"""A plant from what a Python caller passes: matrices of SymPy, NumPy, lists or LaTeX."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from symplant.algebra.expression import integer
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.reading.arithmetic import MAX_LENGTH
from symplant.reading.caller_values import is_symbol, is_sympy, plain_rows, signal_value
from symplant.reading.entries import is_latex
from symplant.reading.fault_list import FaultList
from symplant.reading.letters import free_letters
from symplant.reading.model_building import build_model
from symplant.reading.sympy_letters import SymbolTable
from symplant.reading.tables import key_place, kind_of
from symplant.reading.tokens import normal_form

__all__ = ["model_and_symbols", "model_from_arguments"]


def model_from_arguments(
    A: object,
    B: object,
    C: object,
    D: object = None,
    E: object = None,
    *,
    parameters: Mapping[Any, Any] | Iterable[Any] | None = None,
    states: Iterable[Any] | None = None,
    inputs: Iterable[Any] | None = None,
    outputs: Iterable[Any] | None = None,
    time: str = "continuous",
    title: str = "",
) -> Model:
    """The plant E x' = A x + B u, y = C x + D u with n states, m inputs and p outputs.

    Shapes: A and E are n x n, B is n x m, C is p x n, D is p x m; D None is zero, E None the identity.
    Each is a SymPy matrix, a NumPy array, a list of rows or one LaTeX text.  Entries are texts (Python
    arithmetic, or LaTeX if a backslash or brace is in them), numbers or SymPy expressions.  A float is
    the decimal that Python prints for it: 0.1 is one tenth, exactly.

    `parameters` maps names or symbols to tables as in a plant file (sign, range, nominal, unit, latex,
    about), or lists names or symbols.  Without it every letter of the matrices is a parameter, in the
    order of appearance.  What SymPy assumes of a symbol's sign counts.  A symbol whose name is no
    identifier keeps it as its LaTeX spelling and gets a name made of it: K_{\\mathrm{t}} becomes K_t.
    `states`, `inputs` and `outputs` list names, symbols or tables; without them x1, u1, y1 and so on.

    Raises InputError with everything that is wrong, at places such as "A[2][1]", "parameters.k.range".

    >>> model = model_from_arguments([["-k/m"]], [["1/m"]], [[1]], parameters=["m", "k"])
    >>> model.letters, model.inputs[0].name
    (('m', 'k'), 'u1')
    """
    signals = {"states": states, "inputs": inputs, "outputs": outputs}
    return model_and_symbols(A, B, C, D, E, parameters=parameters, time=time, title=title, **signals)[0]


def model_and_symbols(
    A: object,
    B: object,
    C: object,
    D: object = None,
    E: object = None,
    *,
    parameters: Mapping[Any, Any] | Iterable[Any] | None = None,
    states: Iterable[Any] | None = None,
    inputs: Iterable[Any] | None = None,
    outputs: Iterable[Any] | None = None,
    time: str = "continuous",
    title: str = "",
) -> tuple[Model, dict[str, Any]]:
    """The same plant, and the caller's own SymPy symbol for each name that was given as one."""
    faults = FaultList()
    given = {"A": A, "B": B, "C": C, "D": D, "E": E}
    matrices = {name: plain_rows(value) for name, value in given.items() if value is not None}
    table = _declared(parameters, faults)
    _enter_letters(matrices, table)
    trees = {name: _with_trees(value, name, table, faults) for name, value in matrices.items()}
    raw: dict[str, object] = {"title": title, "time": time, "parameters": table.tables}
    for key, value in (("states", states), ("inputs", inputs), ("outputs", outputs)):
        if value is not None:
            raw[key] = signal_value(value)
    symbols: dict[str, Any] = {}
    for symbol, name in table.names.items():
        symbols.setdefault(name, symbol)
    return build_model(raw, trees, faults), symbols


def _declared(parameters: object, faults: FaultList) -> SymbolTable:
    """The table of letters with what was declared; closed if anything was."""
    table = SymbolTable({}, faults, closed=parameters is not None)
    if parameters is None:
        return table
    if isinstance(parameters, str) or not isinstance(parameters, Iterable):
        hint = "write a list of names, or a mapping from names to tables"
        faults.add("parameters", f"{kind_of(parameters)} where names are expected", hint)
        return table
    pairs = parameters.items() if isinstance(parameters, Mapping) else ((name, {}) for name in parameters)
    for number, (key, value) in enumerate(pairs, start=1):
        fields = _fields(value)
        if not isinstance(fields, dict):
            place = key_place("parameters", key)
            faults.add(place, f"{kind_of(value)} where a table is expected", "write {...}")
            fields = {}
        if is_symbol(key):
            table.declare(key, fields)
        elif not isinstance(key, str):
            faults.add(f"parameters[{number}]", f"{kind_of(key)} where a name or a symbol is expected")
        else:
            name = normal_form(key)
            if name in table.tables:
                faults.add(key_place("parameters", name), "declared twice")
            table.tables[name] = fields
    return table


def _fields(value: object) -> object:
    """The fields of one parameter, as a dictionary of our own; whatever is no table stays as it is."""
    if value is None:
        return {}
    if not isinstance(value, Mapping):
        return value
    return {str(key): plain_rows(field) if key == "range" else field for key, field in value.items()}


def _enter_letters(matrices: Mapping[str, object], table: SymbolTable) -> None:
    """Takes up the letters of all entries, in the order in which they are met."""
    for value in matrices.values():
        for row in value if isinstance(value, list) else ():
            for entry in row if isinstance(row, list) else ():
                if is_sympy(entry):
                    symbols: set[Any] = entry.free_symbols
                    table.enter(sorted(filter(is_symbol, symbols), key=lambda symbol: str(symbol.name)))
                elif isinstance(entry, str) and not is_latex(entry):
                    table.enter_letters(free_letters(entry[:MAX_LENGTH]))


def _with_trees(value: object, name: str, table: SymbolTable, faults: FaultList) -> object:
    """A matrix whose SymPy entries have become trees."""
    if not isinstance(value, list):
        return value
    from symplant.reading.sympy_tree import tree_from_sympy

    rows: list[object] = []
    for i, row in enumerate(value, start=1):
        if not isinstance(row, list):
            rows.append(row)
            continue
        entries: list[object] = []
        for j, entry in enumerate(row, start=1):
            if is_sympy(entry):
                try:
                    entries.append(tree_from_sympy(entry, table.names, table.tables))
                except InputError as error:
                    faults.take(error, f"{name}[{i}][{j}]")
                    entries.append(integer(0))
            else:
                entries.append(entry)
        rows.append(entries)
    return rows

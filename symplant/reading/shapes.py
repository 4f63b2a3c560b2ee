"""Sizes: how many states, inputs and outputs there are, and which matrix or list disagrees."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from symplant.reading.fault_list import FaultList
from symplant.reading.matrices import Grid
from symplant.reading.suggestions import listed

__all__ = ["Sizes", "settle_sizes"]

# Which rows and columns of which matrix count what.
_ROWS = {"A": "states", "B": "states", "C": "outputs", "D": "outputs", "E": "states"}
_COLUMNS = {"A": "states", "B": "inputs", "C": "states", "D": "inputs", "E": "states"}


@dataclass(frozen=True, slots=True)
class Sizes:
    """Numbers of states, inputs and outputs; 0 where nothing told."""

    states: int = 0
    inputs: int = 0
    outputs: int = 0

    def of(self, key: str) -> int:
        return {"states": self.states, "inputs": self.inputs, "outputs": self.outputs}[key]


def settle_sizes(
    grids: Mapping[str, Grid], named: Mapping[str, int], place: Mapping[str, str], faults: FaultList
) -> Sizes:
    """The sizes of a plant, with a fault for whatever does not fit.

    `named` holds the lengths of the lists that were given, `place` where each matrix stands.  If the
    matrices agree among each other and a list does not, the list is at fault; otherwise what was
    named counts, or else the first matrix, and every matrix that disagrees is at fault.

    >>> faults = FaultList()
    >>> grid = lambda rows, columns: Grid(((0,) * columns,) * rows)
    >>> grids = {"A": grid(2, 2), "B": grid(3, 1), "C": grid(1, 2)}
    >>> settle_sizes(grids, {}, {name: name for name in grids}, faults).states
    2
    >>> print(faults.found[0])
    B: 3 x 1, but 2 x 1 is needed: 2 states by A, 1 input by B
    """
    counts: dict[str, int] = {}
    sources: dict[str, str] = {}
    for key in ("states", "inputs", "outputs"):
        counts[key], sources[key] = _count(key, grids, named, faults)
    for name, grid in grids.items():
        needed = counts[_ROWS[name]], counts[_COLUMNS[name]]
        if (grid.rows, grid.columns) == needed:
            continue
        why = dict.fromkeys((_ROWS[name], _COLUMNS[name]))
        because = ", ".join(f"{_counted(counts[key], key)} by {sources[key]}" for key in why)
        reason = f"{grid.rows} x {grid.columns}, but {needed[0]} x {needed[1]} is needed: {because}"
        turned = (grid.columns, grid.rows) == needed
        faults.add(place[name], reason, "rows and columns are exchanged" if turned else "")
    return Sizes(**counts)


def _count(
    key: str, grids: Mapping[str, Grid], named: Mapping[str, int], faults: FaultList
) -> tuple[int, str]:
    """How many states, inputs or outputs there are, and what says so."""
    votes = [(name, grid.rows) for name, grid in grids.items() if _ROWS[name] == key]
    votes += [(name, grid.columns) for name, grid in grids.items() if _COLUMNS[name] == key]
    if key not in named:
        if not votes:
            return 0, ""
        name, count = min(votes, key=lambda vote: vote[0])
        return count, name
    count = named[key]
    if votes and all(vote == votes[0][1] != count for _, vote in votes):
        agreed = votes[0][1]
        voters = listed(sorted({name for name, _ in votes}), "and")
        names = "1 name" if count == 1 else f"{count} names"
        faults.add(key, f"{names}, but {_counted(agreed, key)} by {voters}")
        return agreed, voters
    return count, f"'{key}'"


def _counted(count: int, key: str) -> str:
    return f"{count} {key[:-1] if count == 1 else key}"

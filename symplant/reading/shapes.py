"""Sizes: how many states, inputs and outputs there are, and which matrix or list disagrees."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass

from symplant.reading.fault_list import FaultList
from symplant.reading.matrices import Grid
from symplant.reading.suggestions import listed

__all__ = ["Sizes", "settle_sizes"]

_KEYS = ("states", "inputs", "outputs")
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

    `named` holds the lengths of the lists that were given, `place` where each matrix stands.  A list
    against which all matrices agree is at fault; otherwise what was named counts, or else what most
    matrices say, and every matrix that disagrees is at fault.

    >>> faults = FaultList()
    >>> grid = lambda rows, columns: Grid(((0,) * columns,) * rows)
    >>> grids = {"A": grid(2, 2), "B": grid(3, 1), "C": grid(1, 2)}
    >>> settle_sizes(grids, {}, {name: name for name in grids}, faults).states
    2
    >>> print(faults.found[0])
    B: 3 x 1, but 2 x 1 is needed: 2 states by A and C, 1 input by B
    """
    votes = {key: _votes(key, grids) for key in _KEYS}
    counts = {key: named.get(key) or _most_common(votes[key]) for key in _KEYS}
    sources = {key: f"'{key}'" if key in named else _voters(votes[key], counts[key]) for key in _KEYS}
    for key, count in _outvoted(named, votes, grids, counts).items():
        voters = _voters(votes[key], count)
        names = "1 name" if named[key] == 1 else f"{named[key]} names"
        faults.add(key, f"{names}, but {_counted(count, key)} by {voters}")
        counts[key], sources[key] = count, voters
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


def _votes(key: str, grids: Mapping[str, Grid]) -> list[tuple[str, int]]:
    """What the rows and columns of each matrix say of a size."""
    votes = [(name, grid.rows) for name, grid in grids.items() if _ROWS[name] == key]
    votes += [(name, grid.columns) for name, grid in grids.items() if _COLUMNS[name] == key]
    return sorted(votes, key=lambda vote: vote[0])


def _most_common(votes: list[tuple[str, int]]) -> int:
    counts = Counter(count for _, count in votes)
    return counts.most_common(1)[0][0] if counts else 0


def _voters(votes: list[tuple[str, int]], count: int) -> str:
    """The matrices that say nothing else of a size, or whatever says it."""
    against = {name for name, vote in votes if vote != count}
    voters = dict.fromkeys(name for name, vote in votes if vote == count)
    return listed([name for name in voters if name not in against] or voters, "and")


def _outvoted(
    named: Mapping[str, int],
    votes: Mapping[str, list[tuple[str, int]]],
    grids: Mapping[str, Grid],
    counts: Mapping[str, int],
) -> dict[str, int]:
    """Lists against which all matrices agree that fit otherwise, with what those say."""
    outvoted: dict[str, int] = {}
    for key, length in named.items():
        agreed = _most_common(votes[key])
        if not votes[key] or agreed == length or any(vote != agreed for _, vote in votes[key]):
            continue
        others = {name: (_COLUMNS if _ROWS[name] == key else _ROWS)[name] for name, _ in votes[key]}
        sides = {name: grids[name].columns if _ROWS[name] == key else grids[name].rows for name in others}
        if all(other == key or sides[name] == counts[other] for name, other in others.items()):
            outvoted[key] = agreed
    return outvoted


def _counted(count: int, key: str) -> str:
    return f"{count} {key[:-1] if count == 1 else key}"

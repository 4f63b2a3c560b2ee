"""What the benchmarks found, as ratios against SymPy on the same work in the same run, and their table."""

from __future__ import annotations

import json
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

__all__ = ["LIMIT", "Ratios", "Rival"]

#: Seconds after which SymPy is stopped.
LIMIT = 4.0
_PROGRAM = Path(__file__).with_name("sympy_work.py")


@dataclass(frozen=True)
class Rival:
    """One run of SymPy: its seconds, None where it was stopped, and the terms of its determinant.

    `ran` is False where it was stopped on something smaller already.
    """

    seconds: float | None
    terms: int | None = None
    ran: bool = True


@dataclass(frozen=True)
class _Line:
    work: str
    size: int | None
    ours: float
    route: str
    theirs: float | None
    ran: bool = True

    @property
    def cells(self) -> tuple[str, ...]:
        size = "" if self.size is None else str(self.size)
        if not self.ran:
            return self.work, size, _seconds(self.ours), "(stopped on smaller ones)", "", ""
        theirs = f"> {LIMIT:.0f} s" if self.theirs is None else _seconds(self.theirs)
        more = "> " if self.theirs is None else ""
        ratio = (LIMIT if self.theirs is None else self.theirs) / self.ours
        return self.work, size, _seconds(self.ours), self.route, theirs, f"{more}{_rounded(ratio)}"


@dataclass
class Ratios:
    """All findings of a run; SymPy is asked once for each piece of work, and not again beyond its limit."""

    lines: list[_Line] = field(default_factory=list)
    _rivals: dict[tuple[str, int, str], Rival] = field(default_factory=dict)
    _stopped: dict[tuple[str, str], int] = field(default_factory=dict)

    def sympy(self, family: str, size: int, route: str) -> Rival:
        """SymPy on a plant of a family by one route."""
        key = family, size, route
        if key not in self._rivals:
            if self._stopped.get((family, route), size + 1) <= size:
                self._rivals[key] = Rival(None, ran=False)
            else:
                self._rivals[key] = _run(family, size, route)
                if self._rivals[key].seconds is None:
                    self._stopped[family, route] = size
        return self._rivals[key]

    def add(self, work: str, size: int | None, ours: float, route: str, rival: Rival) -> None:
        """Note one ratio: seconds of symplant and what it is compared with."""
        self.lines.append(_Line(work, size, ours, route, rival.seconds, rival.ran))

    def table(self) -> Iterator[str]:
        """The lines of the table, and the largest sizes that both finish."""
        header = ("work", "size", "symplant", "against", "time", "ratio")
        # Where several routes were not run any more, one line says so.
        rows = [header, *dict.fromkeys(line.cells for line in self.lines)]
        widths = [max(len(row[i]) for row in rows) for i in range(len(header))]
        for row in rows:
            yield "  ".join(
                cell.ljust(width) if i in (0, 3) else cell.rjust(width)
                for i, (cell, width) in enumerate(zip(row, widths, strict=True))
            ).rstrip()
        sized = [line for line in self.lines if line.size is not None]
        for work, route in dict.fromkeys((line.work, line.route) for line in sized):
            here = [line for line in sized if (line.work, line.route) == (work, route)]
            both = [line.size for line in here if line.theirs is not None and line.size is not None]
            largest = max(line.size for line in here if line.size is not None)
            reach = (
                f"both finish within {LIMIT:.0f} s up to size {max(both)}" if both else "SymPy never finishes"
            )
            yield f"{work}, against {route}: {reach}; symplant was run up to {largest}"


def _run(family: str, size: int, route: str) -> Rival:
    command = [sys.executable, str(_PROGRAM), family, str(size), route]
    try:
        # A little more than the limit, for the imports and the building of the matrices.
        done = subprocess.run(command, capture_output=True, text=True, check=True, timeout=LIMIT + 1.5)
    except subprocess.TimeoutExpired:
        return Rival(None)
    found = json.loads(done.stdout)
    return Rival(found["seconds"], found["terms"]) if found["seconds"] <= LIMIT else Rival(None)


def _seconds(value: float) -> str:
    for unit, scale in (("s", 1.0), ("ms", 1e-3)):
        if value >= scale:
            return f"{value / scale:.3g} {unit}"
    return f"{value * 1e6:.3g} us"


def _rounded(ratio: float) -> str:
    return f"{ratio:,.0f}" if ratio >= 100 else f"{ratio:.2g}"

"""The one small family of errors; each holds data, so that any front end can show it its own way."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

__all__ = ["BudgetError", "CheckError", "Fault", "InputError", "SymplantError", "UndecidedError"]


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong with an input, with its place and what would mend it.

    >>> print(Fault("matrices.A[2][1], column 7", "undeclared letter 'ml'", "did you mean 'm1'?"))
    matrices.A[2][1], column 7: undeclared letter 'ml' (did you mean 'm1'?)
    """

    place: str
    reason: str
    suggestion: str = ""
    file: str = ""

    def __str__(self) -> str:
        where = ": ".join(part for part in (self.file, self.place) if part)
        hint = f" ({self.suggestion})" if self.suggestion else ""
        return f"{where}: {self.reason}{hint}" if where else f"{self.reason}{hint}"


class SymplantError(Exception):
    """Base of every error that symplant raises on purpose."""


class InputError(SymplantError):
    """The input is at fault; `faults` lists everything that was found wrong with it.

    >>> error = InputError([Fault("time", "unknown value 'sampled'", "continuous or discrete")])
    >>> len(error.faults)
    1
    """

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))

    def at(self, place: str = "", file: str = "") -> InputError:
        """The same faults seen from further out: places prefixed with `place`, file filled in."""
        return InputError(
            replace(
                fault,
                place=_joined(place, fault.place),
                file=fault.file or file,
            )
            for fault in self.faults
        )


class UndecidedError(SymplantError):
    """A question that could not be settled exactly; `tried` names what was tried."""

    def __init__(self, question: str, tried: str = "") -> None:
        self.question, self.tried = question, tried
        super().__init__(f"undecided: {question}" + (f" (tried: {tried})" if tried else ""))


class BudgetError(SymplantError):
    """A time or memory budget ran out before the work was finished."""


class CheckError(SymplantError):
    """A check found something wrong; `checks` holds those that failed."""

    def __init__(self, checks: tuple[object, ...]) -> None:
        self.checks = checks
        super().__init__("; ".join(str(check) for check in checks))


def _joined(outer: str, inner: str) -> str:
    if not outer or not inner:
        return outer or inner
    return f"{outer}, {inner}" if inner.startswith("column ") else f"{outer}.{inner}"

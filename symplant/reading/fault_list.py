"""Where faults are gathered while a plant is read, so that the user hears of all of them at once."""

from __future__ import annotations

from symplant.errors import Fault, InputError

__all__ = ["FaultList"]


class FaultList:
    """The faults found so far, in the order found; each is kept once.

    >>> faults = FaultList()
    >>> faults.add("time", "unknown value 'sampled'", "continuous or discrete")
    >>> faults.found[0].place
    'time'
    """

    def __init__(self) -> None:
        self._faults: dict[Fault, None] = {}

    @property
    def found(self) -> tuple[Fault, ...]:
        """Every fault so far."""
        return tuple(self._faults)

    def add(self, place: str, reason: str, suggestion: str = "") -> None:
        """Notes one fault."""
        self._faults.setdefault(Fault(place, reason, suggestion))

    def take(self, error: InputError, place: str) -> None:
        """Notes the faults of a part that was read by itself; `place` is where the part stands."""
        for fault in error.at(place).faults:
            self._faults.setdefault(fault)

    def raise_any(self) -> None:
        """Raises InputError if anything was found."""
        if self._faults:
            raise InputError(self._faults)

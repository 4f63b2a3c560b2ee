"""What `stability` answers: conditions, crossings, intervals, witnesses, verdict."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from typing import Literal, TypeAlias

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.routh import RouthArray, routh_array
from symplant.algebra.verdict import Check

__all__ = [
    "Bound",
    "Condition",
    "Crossing",
    "Endpoint",
    "Point",
    "SettledCondition",
    "SpecialCase",
    "StabilityFinding",
    "StabilityInterval",
    "StabilityVerdict",
    "Status",
]

Status: TypeAlias = Literal["required", "always", "never", "implied", "undecided"]
StabilityVerdict: TypeAlias = Literal["stable", "unstable", "marginal", "conditional", "undecided"]
Point: TypeAlias = Mapping[str, Fraction]


@dataclass(frozen=True)
class Bound:
    """A condition solved for a letter: letter > value or letter < value."""

    letter: str
    relation: Literal[">", "<"]
    value: Ratio


@dataclass(frozen=True)
class Condition:
    """element > 0, free of the variable; factors of known sign are removed from it.

    `because` gives the reason of the status; `solved` the same condition solved for those letters in
    which it is linear with a coefficient of known sign.  A condition that always holds, or never,
    keeps its factors.
    """

    element: Element
    status: Status
    because: str
    name: str
    solved: tuple[Bound, ...] = ()
    relation: Literal[">"] = ">"


@dataclass(frozen=True)
class SettledCondition:
    """A condition as it stands before the others are known; handed out while the work goes on.

    Whether it follows from others (`implied`) is not yet asked.
    """

    ring: Ring
    condition: Condition


@dataclass(frozen=True)
class Crossing:
    """Where stability can be lost: `element` is zero there.

    `detail` names the place on the unit circle in discrete time; `frequency_squared` is the square of
    the angular frequency of an imaginary pair, valid where `element` is zero.
    """

    element: Element
    at: Literal["origin", "imaginary pair", "infinity", "unit circle"]
    frequency_squared: Ratio | None = None
    detail: str = ""


@dataclass(frozen=True)
class Endpoint:
    """The end of an interval: exact if rational, else enclosed by two decimal strings."""

    exact: Fraction | None
    lower: str
    upper: str


@dataclass(frozen=True)
class StabilityInterval:
    """An open interval of one letter with one verdict; None: unbounded."""

    start: Endpoint | None
    end: Endpoint | None
    verdict: Literal["stable", "unstable", "marginal"]


@dataclass(frozen=True)
class SpecialCase:
    """Where a leading coefficient is zero (`where` = 0) another polynomial decides."""

    where: Element
    finding: StabilityFinding


@dataclass(frozen=True)
class StabilityFinding:
    """Stability of a polynomial over the box of its ring.

    `polynomial` was tested; it is asymptotically stable exactly where all conditions with the status
    required or undecided hold in the box.  `marginal_conditions` is filled where some roots lie
    symmetric to the boundary whatever the letters are: the plant is marginal where they hold.
    `witnesses` has the keys "stable" and "unstable": values for every letter, or None.  `asked` names
    the margin if more than stability was asked of the roots; "stable" then means that it is kept.
    """

    ring: Ring
    polynomial: Polynomial
    discrete: bool
    verdict: StabilityVerdict
    because: str
    conditions: tuple[Condition, ...] = ()
    marginal_conditions: tuple[Condition, ...] = ()
    crossings: tuple[Crossing, ...] = ()
    witnesses: Mapping[str, Point | None] = field(default_factory=dict)
    intervals: tuple[StabilityInterval, ...] = ()
    along: str | None = None
    special_cases: tuple[SpecialCase, ...] = ()
    notes: tuple[str, ...] = ()
    checks: tuple[Check, ...] = ()
    asked: str = ""

    @property
    def binding(self) -> tuple[Condition, ...]:
        """The conditions that decide: required and undecided ones."""
        return tuple(c for c in self.conditions if c.status in ("required", "undecided"))

    @cached_property
    def routh(self) -> RouthArray:
        """Routh's array of the polynomial that was tested (of its bilinear image in discrete time)."""
        from symplant.algebra.bilinear import bilinear

        return routh_array(bilinear(self.polynomial) if self.discrete else self.polynomial)

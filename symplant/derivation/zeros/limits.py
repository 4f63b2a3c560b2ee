"""Where the roots go as a letter tends to zero or to infinity."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from symplant.algebra.division import factors_in_variable
from symplant.algebra.letter_images import replaceable
from symplant.algebra.newton_polygon import branches
from symplant.algebra.polynomial import Polynomial
from symplant.derivation.zeros.closed_forms import ClosedForm, closed_forms
from symplant.derivation.zeros.vanishing import Surroundings

__all__ = ["RootLimit", "root_limits"]


@dataclass(frozen=True)
class RootLimit:
    """`count` roots behave like g * p**exponent, g running through the roots of `edge`.

    `edge` is a polynomial in the variable, which stands for g; `forms` are its closed forms.  Letters
    other than p are in general position; `within` says whether the range of p reaches the limit.
    """

    at: Literal["0", "infinity"]
    exponent: Fraction
    edge: Polynomial
    forms: tuple[ClosedForm, ...]
    within: bool

    @property
    def count(self) -> int:
        """How many roots behave so."""
        return self.edge.degree

    @property
    def goes_to(self) -> Literal["origin", "a finite value", "infinity"]:
        """Where they end."""
        if self.exponent == 0:
            return "a finite value"
        return "origin" if (self.exponent > 0) == (self.at == "0") else "infinity"


def root_limits(zeros: Polynomial, letter: str, around: Surroundings) -> tuple[tuple[RootLimit, ...], str]:
    """The limits of all roots that move, and a note where they cannot be had.

    Roots that are zero for every value of the letter are left out.
    """
    ring = zeros.ring
    if not replaceable(ring, letter):
        return (), f"{letter} stands inside a function: limits are worked out for rational dependence only"
    interval = around.box.intervals.get(letter)
    low, high = (interval.lower, interval.upper) if interval else (None, None)
    reaches_zero = (low is None or low <= 0) and (high is None or high >= 0)
    reaches_infinity = low is None or high is None
    result = []
    for factor, _ in factors_in_variable(zeros):
        if letter not in ring.used([factor.element]):
            continue
        for at, far, within in (("0", False, reaches_zero), ("infinity", True, reaches_infinity)):
            for branch in branches(factor, letter, far):
                forms = closed_forms(branch.edge, around)
                result.append(RootLimit(at, branch.exponent, branch.edge, forms, within))  # type: ignore[arg-type]
    return tuple(result), ""

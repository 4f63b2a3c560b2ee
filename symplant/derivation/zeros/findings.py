"""What is found of zeros: each polynomial or number with its verdict and the reason for it."""

from __future__ import annotations

from dataclasses import dataclass

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.vanishing import Vanishing

__all__ = ["DegreeChange", "NormalRank", "PolynomialFinding", "RelativeDegree", "ZeroStructure"]


@dataclass(frozen=True)
class PolynomialFinding:
    """A polynomial in the variable, primitive, whose roots are the zeros or poles that are meant.

    For letters in general position; 1 where there are none.
    """

    polynomial: Polynomial
    verdict: Verdict
    reason: str

    @property
    def degree(self) -> int:
        """How many there are, multiplicities counted."""
        return self.polynomial.degree


@dataclass(frozen=True)
class NormalRank:
    """The normal rank of the transfer matrix; full is min(outputs, inputs)."""

    value: int
    full: int
    verdict: Verdict
    reason: str


@dataclass(frozen=True)
class DegreeChange:
    """Where `condition` vanishes the relative degree becomes `becomes` (None: the channel vanishes)."""

    condition: Element
    becomes: int | None
    vanishing: Vanishing


@dataclass(frozen=True)
class RelativeDegree:
    """Relative degree of one channel, for general letters and at special values.

    `value` is None for a channel that is identically zero; `leading` is the coefficient of the
    highest power in the numerator as derived.
    """

    channel: str
    value: int | None
    leading: Element
    changes: tuple[DegreeChange, ...]


@dataclass(frozen=True)
class ZeroStructure:
    """Zeros and poles of all kinds, in the names of the contract.

    `invariant`: roots of the invariant polynomials of the system pencil.  `transmission`: zeros of
    the Smith-McMillan form of the transfer matrix.  `system_zeros`: transmission and all decoupling
    zeros together.  `system_poles`: roots of det(sE - A); `transfer_poles`: poles of the
    Smith-McMillan form.  `infinite_zeros`: orders of the zeros (positive) and poles (negative) at
    infinity of the transfer matrix, smallest first; None where they were not computed (then
    `infinite_note` says why).
    """

    invariant: PolynomialFinding
    transmission: PolynomialFinding
    input_decoupling: PolynomialFinding
    output_decoupling: PolynomialFinding
    input_output_decoupling: PolynomialFinding
    system_zeros: PolynomialFinding
    system_poles: PolynomialFinding
    transfer_poles: PolynomialFinding
    normal_rank: NormalRank
    relative_degrees: tuple[RelativeDegree, ...]
    infinite_zeros: tuple[int, ...] | None
    infinite_note: str

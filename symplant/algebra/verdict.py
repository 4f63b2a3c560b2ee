"""The words for how sure a finding is, and the record of one check."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

__all__ = ["Check", "Verdict"]


class Verdict(StrEnum):
    """How a claim or a check came out.

    `AGREES` is for a numerical second opinion within its stated tolerance: evidence, no proof.
    """

    PROVED = "proved"
    REFUTED = "refuted"
    UNDECIDED = "undecided"
    AGREES = "agrees"


@dataclass(frozen=True, slots=True)
class Check:
    """One check that was made: what was compared, how, with what result.

    >>> Check("numerator y/F", "adjugate against bordered determinant", Verdict.PROVED).passed
    True
    """

    what: str
    method: str
    verdict: Verdict
    detail: str = ""

    @property
    def passed(self) -> bool:
        """Whether nothing was found wrong (undecided is not wrong)."""
        return self.verdict is not Verdict.REFUTED

"""What is found of hidden modes: one case for each way in which a mode hides."""

from __future__ import annotations

from dataclasses import dataclass

from symplant.algebra.letter_images import LetterImage
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.findings import ZeroStructure
from symplant.derivation.zeros.free_response import FreeResponse
from symplant.derivation.zeros.hidden_kinds import Kind
from symplant.derivation.zeros.mode_stability import ModeStability
from symplant.derivation.zeros.vanishing import Vanishing

__all__ = ["HiddenCase", "HiddenModes", "ReducedChannel"]


@dataclass(frozen=True)
class ReducedChannel:
    """One channel where the condition holds, everything cancelled that cancels there."""

    output: str
    input: str
    numerator: Polynomial
    denominator: Polynomial


@dataclass(frozen=True)
class HiddenCase:
    """A mode that hides where all `conditions` vanish; no conditions: it hides always.

    `hidden_factor` has the hidden modes as its roots (where the conditions hold), None if they could
    not be found.  `images` say how the conditions were solved, in their order; what was solved for no
    longer occurs in the polynomials, unless the solution is a root.  `visible_in` names the
    outputs whose response to initial conditions still shows the mode.  `warning` is a sentence where
    the mode can be unstable.
    """

    conditions: tuple[Element, ...]
    hidden_factor: Polynomial | None
    kind: Kind
    stability: ModeStability
    inside_box: Vanishing
    reduced: tuple[ReducedChannel, ...]
    visible_in: tuple[str, ...]
    images: tuple[LetterImage, ...]
    verdict: Verdict
    reason: str
    warning: str

    @property
    def always(self) -> bool:
        """Whether the mode hides for all values of the letters."""
        return not self.conditions


@dataclass(frozen=True)
class HiddenModes:
    """The zero structure for general letters, and the case book.

    `complete` is `proved` when every way in which a mode hides inside the box is among the cases;
    otherwise `notes` say what was not looked into.  Cases outside the box are listed as far as they
    were met, with `inside_box` refuted.
    """

    structure: ZeroStructure
    cases: tuple[HiddenCase, ...]
    free_response: tuple[FreeResponse, ...]
    complete: Verdict
    notes: tuple[str, ...]

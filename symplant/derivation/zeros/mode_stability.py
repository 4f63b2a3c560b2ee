"""Whether a hidden mode decays: stability of its factor over the box, restricted to its case."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from symplant.algebra.polynomial import Polynomial
from symplant.derivation.stability.finding import StabilityFinding, StabilityVerdict
from symplant.derivation.stability.study import stability_of
from symplant.derivation.stability.subject import Subject
from symplant.derivation.stability.witnesses import classify
from symplant.derivation.zeros.case_conditions import ConditionChain
from symplant.derivation.zeros.vanishing import Surroundings
from symplant.errors import InputError

__all__ = ["ModeStability", "mode_stability"]


@dataclass(frozen=True)
class ModeStability:
    """The verdict in the words of `stability`, and why.

    `finding` was made over the whole box, of which the case is a part.  `witnesses` ("stable",
    "unstable") are points of the box on which the conditions of the case hold.
    """

    verdict: StabilityVerdict
    because: str
    finding: StabilityFinding | None = None
    witnesses: Mapping[str, Mapping[str, Fraction] | None] = field(default_factory=dict)


def mode_stability(
    factor: Polynomial, chain: ConditionChain, around: Surroundings, discrete: bool
) -> ModeStability:
    """Stability of the roots of a hidden factor where the conditions of the chain hold."""
    try:
        finding = stability_of(
            factor, discrete=discrete, box=around.box, nonzero=around.nonzero, nominal=around.nominal
        )
    except InputError as error:  # a letter cannot be treated apart from a function that contains it
        return ModeStability("undecided", "; ".join(fault.reason for fault in error.faults))
    if not chain.images or finding.verdict in ("stable", "unstable", "marginal"):
        # What holds everywhere in the box holds on the part of it where the conditions do.
        return ModeStability(finding.verdict, finding.because, finding, finding.witnesses)
    subject = Subject(factor, discrete, around.nonzero, around.nominal)
    found: dict[str, Mapping[str, Fraction] | None] = {"stable": None, "unstable": None}
    for point in chain.points(around):
        kind = classify(subject, point) if chain.admits(point, around) else None
        if kind in found and found[kind] is None:
            found[kind] = point
        if all(found.values()):
            return ModeStability(
                "conditional", "points of the case with either outcome were found", finding, found
            )
    one = next((kind for kind, point in found.items() if point is not None), None)
    because = (
        f"only {one} points of the case were found, without proof"
        if one
        else "no point of the case was found"
    )
    return ModeStability("undecided", because, finding, found)

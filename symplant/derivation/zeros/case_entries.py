"""The entries of the case book: what is said of each hidden mode."""

from __future__ import annotations

from collections.abc import Sequence

from symplant.algebra.division import normalised, quotient
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Channel, Derivation
from symplant.derivation.zeros.blocks import Blocks
from symplant.derivation.zeros.case_conditions import ConditionChain
from symplant.derivation.zeros.free_response import free_responses
from symplant.derivation.zeros.hidden_findings import HiddenCase, ReducedChannel
from symplant.derivation.zeros.hidden_kinds import Kind
from symplant.derivation.zeros.hidden_parts import HiddenParts
from symplant.derivation.zeros.mode_stability import ModeStability, mode_stability
from symplant.derivation.zeros.structure import surroundings
from symplant.derivation.zeros.vanishing import Vanishing

__all__ = ["CaseEntries"]


class CaseEntries:
    """Collects the cases of a plant, or of the part between some inputs and outputs (by position)."""

    def __init__(self, derivation: Derivation, outputs: Sequence[int], inputs: Sequence[int]) -> None:
        model = derivation.model
        self.derivation = derivation
        self.around = surroundings(derivation)
        self.outputs = [model.outputs[i].name for i in outputs]
        self.inputs = [model.inputs[j].name for j in inputs]
        self.cases: list[HiddenCase] = []

    def sorted(self) -> tuple[HiddenCase, ...]:
        """The cases: few conditions first, those outside the box last among their like."""
        return tuple(
            sorted(
                self.cases,
                key=lambda case: (len(case.conditions), case.inside_box.verdict is Verdict.REFUTED),
            )
        )

    def enter(
        self, chain: ConditionChain, blocks: Blocks, parts: HiddenParts, extra: dict[Kind, Polynomial]
    ) -> None:
        """One case for each kind in which something hides in addition to what is known."""
        if not extra:
            return
        inside = chain.inside(self.around)
        reduced = tuple(self._reduced(chain, channel) for channel in self._channels())
        responses = free_responses(blocks)
        for kind, factor in extra.items():
            shown = normalised(chain.back(factor))
            if any(self._is_same(case, chain, kind, shown) for case in self.cases):
                continue
            stability = mode_stability(shown, chain, self.around, self.derivation.model.discrete)
            visible = tuple(
                self.outputs[r.output] for r in responses if kind == "uncontrollable" and r.shows(factor)
            )
            self.cases.append(
                HiddenCase(
                    chain.conditions,
                    shown,
                    kind,
                    stability,
                    inside,
                    reduced,
                    visible,
                    chain.images,
                    parts.verdict,
                    parts.reason,
                    _warning(kind, stability, inside.verdict, visible),
                )
            )

    def enter_unsolved(
        self, chain: ConditionChain, condition: Element, sides: Sequence[str], inside: Vanishing, reason: str
    ) -> None:
        """A condition that no letter could be solved from: named, its mode left open."""
        kind: Kind = "both" if len(sides) == 2 else "uncontrollable" if "input" in sides else "unobservable"
        self.cases.append(
            HiddenCase(
                (*chain.conditions, chain.back(Polynomial(chain.target, condition)).element),
                None,
                kind,
                ModeStability("undecided", reason),
                inside,
                (),
                (),
                chain.images,
                Verdict.UNDECIDED,
                reason,
                "a mode may hide here, and it may be unstable",
            )
        )

    def _is_same(self, case: HiddenCase, chain: ConditionChain, kind: Kind, factor: Polynomial) -> bool:
        """Whether a case says the same (sin t = 0 is solved twice, with cos t = 1 and -1)."""
        known = case.hidden_factor
        return (
            case.kind == kind
            and [str(c) for c in case.conditions] == [str(c) for c in chain.conditions]
            and known is not None
            and known.element == factor.element
        )

    def _channels(self) -> list[Channel]:
        return [
            channel
            for channel in self.derivation.channels
            if channel.output.name in self.outputs and channel.input.name in self.inputs
        ]

    def _reduced(self, chain: ConditionChain, channel: Channel) -> ReducedChannel:
        pair = [channel.numerator, channel.denominator]
        for image in chain.images:
            row = image.row([polynomial.element for polynomial in pair])
            pair = [Polynomial.of(image.target, element) for element in row]
        numerator, denominator = pair
        common = denominator if numerator.is_zero else numerator.gcd(denominator)
        if common.degree > 0:
            numerator, denominator = _cancelled(numerator, denominator, common)
        ring = chain.ring
        ratio = Ratio.of(ring, chain.back(numerator).element, chain.back(denominator).element)
        return ReducedChannel(
            channel.output.name,
            channel.input.name,
            Polynomial.of(ring, ratio.numerator),
            Polynomial.of(ring, ratio.denominator),
        )


def _warning(kind: Kind, stability: ModeStability, inside: Verdict, visible: Sequence[str]) -> str:
    if stability.verdict == "stable" or inside is Verdict.REFUTED:
        return ""
    word = {
        "unstable": "is not stable",
        "marginal": "does not decay",
        "conditional": "is unstable for some values",
        "undecided": "may be unstable",
    }[stability.verdict]
    where = f"; it shows in the response to initial conditions of {', '.join(visible)}" if visible else ""
    return f"a mode that the transfer function does not show ({kind}) {word}{where}"


def _cancelled(
    numerator: Polynomial, denominator: Polynomial, common: Polynomial
) -> tuple[Polynomial, Polynomial]:
    """Both without the common factor, their ratio unchanged."""
    if numerator.is_zero:
        return numerator, Polynomial.constant(numerator.ring, 1)
    ring, top, bottom = numerator.ring, quotient(numerator, common), quotient(denominator, common)
    if ring.has_relations:
        # There each division multiplies by powers of a leading coefficient; put the ratio right.
        scale = Ratio.of(ring, numerator.leading * bottom.leading, denominator.leading * top.leading)
        top = Polynomial.of(ring, top.element * scale.numerator)
        bottom = Polynomial.of(ring, bottom.element * scale.denominator)
    return top, bottom

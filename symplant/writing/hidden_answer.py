"""The machine answer of `hidden`: decoupling zeros, and the case book."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import TYPE_CHECKING

from symplant.algebra.text import factored_text, node_text, ratio_text
from symplant.algebra.verdict import Check
from symplant.writing.answer import Answer, Latex, check_rows, head_answer, polynomial_answer

if TYPE_CHECKING:
    from symplant.algebra.ring import Ring
    from symplant.derivation.zeros.findings import RelativeDegree, ZeroStructure
    from symplant.derivation.zeros.free_response import FreeResponse
    from symplant.derivation.zeros.hidden_findings import HiddenCase, HiddenModes, ReducedChannel
    from symplant.derivation.zeros.vanishing import Vanishing
    from symplant.plant.model import Model

__all__ = ["case_witnesses", "hidden_answer", "structure_answer"]

#: The polynomials of a zero structure, in the names of the contract.
POLYNOMIALS = (
    "input_decoupling",
    "output_decoupling",
    "input_output_decoupling",
    "invariant",
    "transmission",
    "system_zeros",
    "system_poles",
    "transfer_poles",
)


def hidden_answer(modes: HiddenModes, model: Model, checks: Sequence[Check], latex: Latex) -> Answer:
    """The answer of `hidden`."""
    ring = modes.structure.invariant.polynomial.ring
    return {
        **head_answer("hidden", model),
        **structure_answer(modes.structure, latex),
        "cases": [_case(ring, case, latex) for case in modes.cases],
        "complete": str(modes.complete),
        "notes": list(modes.notes),
        "free_response": [_response(response, model) for response in modes.free_response],
        "checks": check_rows(checks),
    }


def structure_answer(structure: ZeroStructure, latex: Latex) -> Answer:
    """All polynomials of zeros and poles with their verdicts, and the ranks."""
    answer: Answer = {}
    for name in POLYNOMIALS:
        finding = getattr(structure, name)
        answer[name] = {
            **polynomial_answer(finding.polynomial, latex),
            "verdict": str(finding.verdict),
            "because": finding.reason,
        }
    rank = structure.normal_rank
    answer |= {
        "normal_rank": rank.value,
        "full_rank": rank.full,
        "normal_rank_verdict": str(rank.verdict),
        "relative_degrees": [_degree(found, structure) for found in structure.relative_degrees],
        "infinite_zeros": None if structure.infinite_zeros is None else list(structure.infinite_zeros),
        "infinite_zeros_note": structure.infinite_note,
    }
    return answer


def _degree(found: RelativeDegree, structure: ZeroStructure) -> Answer:
    ring = structure.invariant.polynomial.ring
    return {
        "channel": found.channel,
        "relative_degree": found.value,
        "changes": [
            {
                "condition": factored_text(ring, change.condition),
                "becomes": change.becomes,
                **_inside(change.vanishing),
            }
            for change in found.changes
        ],
    }


def _case(ring: Ring, case: HiddenCase, latex: Latex) -> Answer:
    factor = case.hidden_factor
    texts = [factored_text(ring, condition) for condition in case.conditions]
    return {
        "condition": texts[0] if texts else "0",
        "conditions": texts,
        "always": case.always,
        "hidden_factor": None if factor is None else factored_text(factor.ring, factor.element),
        "hidden_factor_latex": None if factor is None else latex(factor.ring, factor.element),
        "kind": case.kind,
        "verdict": case.stability.verdict,
        "because": case.stability.because,
        "witnesses": {side: _point(point) for side, point in case_witnesses(case).items()},
        **_inside(case.inside_box),
        "warning": case.warning or None,
        "visible_in": list(case.visible_in),
        "solved": [
            {"of": node_text(image.target.meanings[image.target.position[key]]), "value": ratio_text(value)}
            for image in case.images
            for key, value in image.values.items()
        ],
        "reduced": [_reduced(channel) for channel in case.reduced],
        "proof": {"verdict": str(case.verdict), "because": case.reason},
    }


def case_witnesses(case: HiddenCase) -> Mapping[str, Mapping[str, Fraction] | None]:
    """Points of the case that show either outcome.

    A verdict that holds in the whole box comes with points of the box, on which the conditions of the
    case need not hold: they are left out.
    """
    if case.always or case.stability.verdict in ("conditional", "undecided"):
        return case.stability.witnesses
    return dict.fromkeys(("stable", "unstable"))


def _inside(found: Vanishing) -> Answer:
    between = None if found.between is None else [_point(point) for point in found.between]
    return {
        "inside_box": str(found.verdict),
        "inside_box_because": found.reason,
        "inside_box_witness": _point(found.witness),
        "inside_box_between": between,
    }


def _point(point: Mapping[str, Fraction] | None) -> dict[str, str] | None:
    return None if point is None else {name: str(value) for name, value in point.items()}


def _reduced(channel: ReducedChannel) -> Answer:
    ring = channel.numerator.ring
    return {
        "output": channel.output,
        "input": channel.input,
        "numerator": factored_text(ring, channel.numerator.element),
        "denominator": factored_text(ring, channel.denominator.element),
    }


def _response(response: FreeResponse, model: Model) -> Answer:
    ring = response.denominator.ring
    return {
        "output": model.outputs[response.output].name,
        "numerators": {
            state.name: factored_text(ring, numerator.element)
            for state, numerator in zip(model.states, response.numerators, strict=True)
        },
        "denominator": factored_text(ring, response.denominator.element),
        "visible": factored_text(ring, response.visible.element),
    }

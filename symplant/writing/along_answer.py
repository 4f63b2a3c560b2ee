"""What happens to the zeros along one parameter, as data."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product
from symplant.algebra.text import element_text, factored_text, node_text, polynomial_text, ratio_text
from symplant.writing.answer import Answer, ratio_answer
from symplant.writing.enclosures import complex_answer, enclosure_answer

if TYPE_CHECKING:
    from symplant.algebra.ring import Ring
    from symplant.derivation.zeros.along import Along, Event, SensitivityFinding
    from symplant.derivation.zeros.limits import RootLimit
    from symplant.derivation.zeros.sensitivities import Motion, NominalSensitivity

__all__ = ["along_answer", "is_real", "leading_term"]


def along_answer(along: Along) -> Answer:
    """Events, sensitivities and limits."""
    ring = along.zeros.ring
    return {
        "parameter": along.parameter,
        "events": [_event(ring, event) for event in along.events],
        "sensitivities": [_sensitivity(ring, finding) for finding in along.sensitivities],
        "limits": [_limit(ring, along.parameter, limit) for limit in along.limits],
        "notes": list(along.notes),
    }


def _event(ring: Ring, event: Event) -> Answer:
    return {
        "event": event.event,
        "equation": factored_text(ring, event.equation),
        "values": [node_text(tree) for tree, _ in event.values],
        "frequency_squared": ratio_answer(event.frequency_squared),
        "others_at_nominal": event.at_nominal,
        "nominal": [
            {
                "value": enclosure_answer((value.lower, value.upper)),
                "inside": value.inside,
                "happens": str(value.happens),
            }
            for value in event.nominal.values
        ],
        "nominal_complete": event.nominal.complete,
        "nominal_note": event.nominal.note,
    }


def _sensitivity(ring: Ring, finding: SensitivityFinding) -> Answer:
    formula = finding.formula
    return {
        "factor": polynomial_text(ring, formula.factor.element),
        "multiplicity": formula.multiplicity,
        "derivative": ratio_text(formula.derivative),
        "relative": ratio_text(formula.relative),
        "motion": None if formula.motion is None else _motion(formula.motion),
        "nominal": [_at_nominal(at) for at in finding.nominal],
        "nominal_note": finding.note,
    }


def _motion(motion: Motion) -> Answer:
    return {
        "of": motion.of,
        "slope": ratio_text(motion.slope),
        "sign": motion.sign.value,
        "verdict": str(motion.verdict),
        "because": motion.reason,
    }


def is_real(at: NominalSensitivity) -> bool:
    """Whether a zero is real.

    The balls of all zeros are apart, and the polynomial is real: a ball that meets the real axis holds
    its own conjugate, so that its zero is real.
    """
    return bool(at.zero.imag.contains(0))


def _at_nominal(at: NominalSensitivity) -> Answer:
    real = is_real(at)
    parts: dict[str, Any] = {"zero": at.zero, "derivative": at.derivative, "relative": at.relative}
    return {name: None if value is None else complex_answer(value, real) for name, value in parts.items()}


def _limit(ring: Ring, parameter: str, limit: RootLimit) -> Answer:
    trees = [zero.tree for form in limit.forms for zero in form.zeros]
    return {
        "at": limit.at,
        "count": limit.count,
        "goes_to": limit.goes_to,
        "exponent": str(limit.exponent),
        "edge": element_text(ring, limit.edge.element),
        "leading": [node_text(leading_term(tree, parameter, limit.exponent)) for tree in trees],
        "within": limit.within,
    }


def leading_term(factor: Node, parameter: str, exponent: Fraction) -> Node:
    """factor * parameter**exponent as a tree; a half is a square root, other fractions exp(e*log(p)).

    >>> node_text(leading_term(Name("g"), "p", Fraction(-3, 2)))
    'g*sqrt(p)**(-3)'
    """
    if exponent == 0:
        return factor
    power: Node
    if exponent.denominator == 1:
        power = _whole(Name(parameter), int(exponent))
    elif exponent.denominator == 2:
        power = _whole(Call("sqrt", Name(parameter)), exponent.numerator)
    else:
        power = Call("exp", Product((Number(exponent), Call("log", Name(parameter)))))
    return Product((factor, power))


def _whole(base: Node, exponent: int) -> Node:
    return base if exponent == 1 else Power(base, exponent)

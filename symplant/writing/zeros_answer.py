"""The machine answer of `zeros`, part by part."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

from symplant.algebra.expression import Name, Node, Power, Product, Quotient, integer
from symplant.algebra.text import element_text, factored_text, node_text, polynomial_text, ratio_text
from symplant.algebra.verdict import Check
from symplant.writing.along_answer import along_answer
from symplant.writing.answer import (
    Answer,
    Latex,
    check_rows,
    head_answer,
    polynomial_answer,
    stability_finding_answer,
)

if TYPE_CHECKING:
    from symplant.algebra.scalings import Monomial, Scaling
    from symplant.derivation.zeros.closed_forms import ClosedForm
    from symplant.derivation.zeros.directions import Directions
    from symplant.derivation.zeros.influence import Influence
    from symplant.derivation.zeros.study import ZerosStudy

__all__ = ["monomial_text", "monomial_tree", "zeros_answer", "zeros_part"]


def zeros_answer(study: ZerosStudy, checks: Sequence[Check], latex: Latex) -> Answer:
    """The answer of `zeros`."""
    answer: Answer = {**head_answer("zeros", study.derivation.model)}
    answer |= {"output": study.output, "input": study.input}
    for part in _PARTS:
        if part != "along" or study.along is not None:
            answer |= zeros_part(study, part, latex)
    answer["checks"] = check_rows(checks)
    return answer


def zeros_part(study: ZerosStudy, part: str, latex: Latex) -> Answer:
    """One part by itself; `part` names a field of the study."""
    return _PARTS[part](study, latex)


def _polynomial(study: ZerosStudy, latex: Latex) -> Answer:
    return {"zero_polynomial": polynomial_answer(study.polynomial, latex), "zero_polynomial_is": study.kind}


def _forms(study: ZerosStudy, latex: Latex) -> Answer:
    forms = study.forms or ()
    return {
        "closed_forms": [
            {
                "zero": node_text(zero.tree),
                "multiplicity": form.multiplicity,
                "when": None if form.when is None else factored_text(form.factor.ring, form.when),
            }
            for form in forms
            for zero in form.zeros
        ],
        "factors": [_factor(form) for form in forms],
    }


def _factor(form: ClosedForm) -> Answer:
    ring = form.factor.ring
    return {
        "factor": polynomial_text(ring, form.factor.element),
        "degree": form.factor.degree,
        "multiplicity": form.multiplicity,
        "closed": bool(form.zeros),
        "when": None if form.when is None else factored_text(ring, form.when),
    }


def _phase(study: ZerosStudy, latex: Latex) -> Answer:
    if study.minimum_phase is not None:
        found = stability_finding_answer(study.minimum_phase, latex)
        if study.phase_note:
            found["notes"] = [*found["notes"], study.phase_note]
        return {"minimum_phase": found}
    empty: Answer = {"verdict": "undecided", "because": study.phase_note}
    empty |= {key: [] for key in ("conditions", "crossings", "marginal_conditions", "intervals")}
    empty |= {
        "along": None,
        "special_cases": [],
        "witnesses": {"stable": None, "unstable": None},
        "notes": [],
    }
    return {"minimum_phase": empty}


def _influence(study: ZerosStudy, latex: Latex) -> Answer:
    assert study.influence is not None
    return influence_answer(study.influence)


def influence_answer(found: Influence) -> Answer:
    """What each letter does, and the monomials through which it does it."""
    return {
        "influence": [
            {
                "parameter": letter.parameter,
                "moves_zeros": letter.moves_zeros,
                "moves_poles": letter.moves_poles,
                "scales_gain": letter.scales_gain,
                "verdict": str(letter.verdict),
                "because": letter.reason,
            }
            for letter in found.letters
        ],
        "groups": {
            "zeros": _scaling(found.zeros),
            "poles": _scaling(found.poles),
            "zeros_and_poles": _scaling(found.together),
        },
    }


def _scaling(scaling: Scaling) -> Answer:
    return {
        "through": [monomial_text(group) for group in scaling.groups],
        "frequency": monomial_text(scaling.frequency) if scaling.frequency else None,
        "frequency_root": scaling.root if scaling.frequency else None,
        "ratios": [monomial_text(group) for group in scaling.ratios],
        "inside_functions": list(scaling.frozen),
    }


def monomial_text(monomial: Monomial) -> str:
    """A product of powers in Python arithmetic.

    >>> monomial_text((("m", -1), ("k", 2)))
    'k**2/m'
    """
    return node_text(monomial_tree(monomial))


def monomial_tree(monomial: Monomial) -> Node:
    """A product of powers as a tree, negative powers below a bar."""
    above = [_power(name, exponent) for name, exponent in monomial if exponent > 0]
    below = [_power(name, -exponent) for name, exponent in monomial if exponent < 0]
    top = _product(above) if above else integer(1)
    return Quotient(top, _product(below)) if below else top


def _product(parts: list[Node]) -> Node:
    return parts[0] if len(parts) == 1 else Product(tuple(parts))


def _power(name: str, exponent: int) -> Node:
    return Name(name) if exponent == 1 else Power(Name(name), exponent)


def _directions(study: ZerosStudy, latex: Latex) -> Answer:
    assert study.directions is not None
    return directions_answer(study.directions)


def directions_answer(found: Directions) -> Answer:
    """The zero directions; a common factor of state and input is arbitrary."""
    return {
        "directions": [
            {
                "zero": ratio_text(direction.zero),
                "state": [element_text(direction.ring, entry) for entry in direction.state],
                "input": [element_text(direction.ring, entry) for entry in direction.input],
                "verdict": str(direction.verdict),
                "because": direction.reason,
            }
            for direction in found.directions
        ],
        "direction_notes": list(found.notes),
    }


def _along(study: ZerosStudy, latex: Latex) -> Answer:
    assert study.along is not None
    return {"along": along_answer(study.along)}


_PARTS: Mapping[str, Callable[[Any, Latex], Answer]] = {
    "polynomial": _polynomial,
    "forms": _forms,
    "minimum_phase": _phase,
    "influence": _influence,
    "directions": _directions,
    "along": _along,
}

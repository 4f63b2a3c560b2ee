"""Machine answers: findings as plain data in the shape of the JSON contract."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import TYPE_CHECKING, Any, TypeAlias

from symplant.algebra.text import (
    FACTOR_LIMIT,
    collected_text,
    element_text,
    factored_text,
    node_text,
    polynomial_text,
    ratio_text,
)
from symplant.algebra.verdict import Check

if TYPE_CHECKING:
    from symplant.algebra.polynomial import Polynomial
    from symplant.algebra.ratio import Ratio
    from symplant.algebra.ring import Element, Ring
    from symplant.derivation.derive import Channel, Derivation, Scaled
    from symplant.derivation.stability.finding import Condition, Endpoint, SettledCondition, StabilityFinding
    from symplant.errors import Fault
    from symplant.plant.model import Model
    from symplant.writing.report import WrittenReport

__all__ = [
    "FORMAT",
    "Answer",
    "check_rows",
    "condition_answer",
    "decimal_text",
    "derive_answer",
    "endpoint_answer",
    "fault_answer",
    "finding_answer",
    "head_answer",
    "polynomial_answer",
    "ratio_answer",
    "report_answer",
    "stability_answer",
    "stability_finding_answer",
]

#: Version of the shape of every answer.
FORMAT = 1

Answer: TypeAlias = "dict[str, Any]"
#: How an element is written in LaTeX.
Latex: TypeAlias = "Callable[[Ring, Element], str]"


def plant_answer(model: Model) -> Answer:
    """The plant as every answer repeats it: names, units, what is known of the letters."""
    return {
        "title": model.title,
        "time": "discrete" if model.discrete else "continuous",
        "variable": model.variable,
        "states": [signal.name for signal in model.states],
        "inputs": [signal.name for signal in model.inputs],
        "outputs": [signal.name for signal in model.outputs],
        "parameters": [
            {
                "name": p.name,
                "latex": p.latex or None,
                "unit": p.unit,
                "nominal": _number(p.nominal),
                "range": None if p.lower is None or p.upper is None else [_number(p.lower), _number(p.upper)],
                "sign": p.interval.sign.value,
                "about": p.about,
            }
            for p in model.parameters
        ],
    }


def polynomial_answer(polynomial: Polynomial, latex: Latex) -> Answer:
    """POLY of the contract: ascending coefficients, the whole, the whole factored, LaTeX."""
    ring, element = polynomial.ring, polynomial.element
    texts = [element_text(ring, coefficient) for coefficient in polynomial.coefficients]
    expression = collected_text(ring, polynomial.coefficients, texts)
    return {
        "variable": ring.variable,
        "coefficients": texts or ["0"],
        "expression": expression,
        "factored": expression if len(element) > FACTOR_LIMIT else factored_text(ring, element),
        "latex": latex(ring, element),
    }


def derive_answer(derivation: Derivation, checks: Sequence[Check], latex: Latex) -> Answer:
    """The answer of `derive`."""
    ring = derivation.ring
    characteristic, zero = derivation.characteristic_polynomial, derivation.zero_polynomial
    written: list[tuple[Polynomial, Answer]] = []

    def poly(polynomial: Polynomial) -> Answer:
        # Most denominators are the characteristic polynomial; a long one is written once.
        for known, text in written:
            if known.element == polynomial.element:
                return text
        written.append((polynomial, polynomial_answer(polynomial, latex)))
        return written[-1][1]

    answer: Answer = {
        **head_answer("derive", derivation.model),
        "characteristic_polynomial": {
            **poly(characteristic.polynomial),
            "multiplier": _multiplier(ring, characteristic.multiplier),
        },
        "channels": [
            {
                "output": channel.output.name,
                "input": channel.input.name,
                "numerator": poly(channel.numerator),
                "denominator": poly(channel.denominator),
                "common_factor": poly(channel.common_factor),
                "relative_degree": channel.relative_degree,
                "multiplier": _multiplier(ring, channel.multiplier),
            }
            for channel in derivation.channels
        ],
        "zero_polynomial": None
        if zero is None
        else {**poly(zero.polynomial), "multiplier": _multiplier(ring, zero.multiplier)},
    }
    if derivation.zero_polynomial_note:
        answer["zero_polynomial_note"] = derivation.zero_polynomial_note
    answer["assumed_nonzero"] = [polynomial_text(ring, element) for element in derivation.assumed_nonzero]
    answer["assumed_domain"] = [
        f"{node_text(tree)} {relation} 0" for tree, relation in derivation.pencil.setting.domain
    ]
    if ring.undecidable:
        answer["undecided_equality"] = ring.undecidable
    answer["checks"] = check_rows(checks)
    return answer


def stability_answer(
    finding: StabilityFinding, model: Model, checks: Sequence[Check], latex: Latex
) -> Answer:
    """The answer of `stability`."""
    return {
        **head_answer("stability", model),
        **stability_finding_answer(finding, latex),
        "checks": check_rows(checks),
    }


def stability_finding_answer(finding: StabilityFinding, latex: Latex) -> Answer:
    """A stability finding by itself."""
    ring = finding.polynomial.ring
    return {
        "verdict": str(finding.verdict),
        "because": finding.because,
        "asked": finding.asked or "stability",
        "conditions": [condition_answer(ring, condition, latex) for condition in finding.conditions],
        "crossings": [
            {
                "expression": factored_text(ring, crossing.element),
                "at": crossing.at,
                "frequency_squared": ratio_answer(crossing.frequency_squared),
                "detail": crossing.detail,
            }
            for crossing in finding.crossings
        ],
        "marginal_conditions": [condition_answer(ring, c, latex) for c in finding.marginal_conditions],
        "intervals": [
            {"from": endpoint_answer(i.start), "to": endpoint_answer(i.end), "verdict": i.verdict}
            for i in finding.intervals
        ],
        "along": finding.along,
        "special_cases": [
            {
                "where": factored_text(ring, case.where),
                "verdict": case.finding.verdict,
                "conditions": [condition_answer(ring, c, latex) for c in case.finding.conditions],
            }
            for case in finding.special_cases
        ],
        "witnesses": {
            side: None if point is None else {name: str(value) for name, value in point.items()}
            for side, point in finding.witnesses.items()
        },
        "notes": list(finding.notes),
    }


def check_rows(checks: Sequence[Check]) -> list[Answer]:
    """The checks as data."""
    return [
        {"what": c.what, "method": c.method, "verdict": str(c.verdict), "detail": c.detail} for c in checks
    ]


def fault_answer(command: str, faults: Sequence[Fault]) -> Answer:
    """What a machine is told about input at fault."""
    return {
        "format": FORMAT,
        "command": command,
        "faults": [
            {"file": f.file, "place": f.place, "reason": f.reason, "suggestion": f.suggestion} for f in faults
        ],
    }


def condition_answer(ring: Ring, condition: Condition, latex: Latex) -> Answer:
    """One stability condition."""
    return {
        "expression": factored_text(ring, condition.element),
        "relation": condition.relation,
        "latex": f"{latex(ring, condition.element)} {condition.relation} 0",
        "status": condition.status,
        "because": condition.because,
        "name": condition.name,
        "solved": [
            {"parameter": b.letter, "relation": b.relation, "value": ratio_text(b.value)}
            for b in condition.solved
        ],
    }


def endpoint_answer(end: Endpoint | None) -> Answer | str | None:
    """An exact end as text, another by two decimals that enclose it."""
    if end is None:
        return None
    return decimal_text(end.exact) if end.exact is not None else {"lower": end.lower, "upper": end.upper}


def decimal_text(value: Fraction) -> str:
    """An exact number as text: a decimal where it ends, else a fraction.

    >>> decimal_text(Fraction(15, 2)), decimal_text(Fraction(470, 19))
    ('7.5', '470/19')
    """
    rest, twos, fives = value.denominator, 0, 0
    while rest % 2 == 0:
        rest, twos = rest // 2, twos + 1
    while rest % 5 == 0:
        rest, fives = rest // 5, fives + 1
    places = max(twos, fives)
    if rest != 1 or places > 15:
        return str(value)
    digits = str(abs(value.numerator) * 10**places // value.denominator).rjust(places + 1, "0")
    sign = "-" if value < 0 else ""
    return f"{sign}{digits[:-places]}.{digits[-places:]}" if places else sign + digits


def head_answer(command: str, model: Model) -> Mapping[str, Any]:
    """What every answer begins with."""
    return {"format": FORMAT, "command": command, "plant": plant_answer(model)}


def _multiplier(ring: Ring, multiplier: tuple[Element, Element]) -> str:
    top, bottom = (factored_text(ring, part) for part in multiplier)
    return top if bottom == "1" else f"({top})/({bottom})"


def _number(value: Fraction | None) -> str | None:
    """An exact number as text: JSON's own numbers would be rounded by most readers."""
    return None if value is None else str(value)


def ratio_answer(ratio: Ratio | None) -> str | None:
    """A ratio as text, None for none."""
    return None if ratio is None else ratio_text(ratio)


def finding_answer(finding: Scaled | Channel | SettledCondition, latex: Latex) -> Answer:
    """One finding by itself, to be merged into the answer of work that was stopped."""
    from symplant.derivation.derive import Scaled
    from symplant.derivation.stability.finding import SettledCondition

    if isinstance(finding, SettledCondition):
        return {"conditions": [condition_answer(finding.ring, finding.condition, latex)]}
    if isinstance(finding, Scaled):
        return {"characteristic_polynomial": polynomial_answer(finding.polynomial, latex)}
    return {
        "channels": [
            {
                "output": finding.output.name,
                "input": finding.input.name,
                "numerator": polynomial_answer(finding.numerator, latex),
                "denominator": polynomial_answer(finding.denominator, latex),
                "common_factor": polynomial_answer(finding.common_factor, latex),
                "relative_degree": finding.relative_degree,
            }
        ]
    }


def report_answer(model: Model, written: WrittenReport, checks: Sequence[Check]) -> Answer:
    """What `report` wrote."""
    return {
        **head_answer("report", model),
        "main": str(written.main),
        "pdf": None if written.pdf is None else str(written.pdf),
        "note": written.note,
        "checks": check_rows(checks),
    }

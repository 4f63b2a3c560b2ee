"""The response to initial conditions where a mode hides: letters put in, common factors cancelled."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from symplant.algebra.division import quotient
from symplant.algebra.polynomial import Polynomial, content
from symplant.derivation.zeros.free_response import FreeResponse
from symplant.derivation.zeros.hidden_findings import HiddenCase

__all__ = ["CaseResponse", "case_responses"]


@dataclass(frozen=True)
class CaseResponse:
    """One output (its position): the sum of `numerators[i]` x0[i], over `denominator`, cancelled."""

    output: int
    numerators: tuple[Polynomial, ...]
    denominator: Polynomial


def case_responses(case: HiddenCase, responses: Sequence[FreeResponse]) -> tuple[CaseResponse, ...]:
    """The responses where the conditions of a case hold.

    Nothing is given where a condition was solved by a root, or is not solved.
    """
    if len(case.images) != len(case.conditions) or any(image.root for image in case.images):
        return ()
    found = []
    for response in responses:
        row = [polynomial.element for polynomial in (*response.numerators, response.denominator)]
        for image in case.images:
            row = image.row(row)
        parts = _cancelled([Polynomial.of(response.denominator.ring, element) for element in row])
        found.append(CaseResponse(response.output, tuple(parts[:-1]), parts[-1]))
    return tuple(found)


def _cancelled(parts: list[Polynomial]) -> list[Polynomial]:
    """Polynomials without their common factor, their ratios unchanged."""
    common = parts[-1]
    for part in parts[:-1]:
        common = common.gcd(part)
    ring = common.ring
    if common.degree > 0 and not ring.has_relations:
        # In a ring with relations each division would multiply by another power of a coefficient.
        parts = [part if part.is_zero else quotient(part, common) for part in parts]
    shared = content(ring, [part.element for part in parts if not part.is_zero])
    return [Polynomial(ring, part.element // shared) for part in parts]

"""The response to initial conditions: Y0(s) = C adj(sE - A) E x0 / det(sE - A)."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from symplant.algebra.determinant import adjugate
from symplant.algebra.division import divide, normalised
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.blocks import Blocks

__all__ = ["FreeResponse", "free_response", "free_responses"]


@dataclass(frozen=True)
class FreeResponse:
    """One output: the sum over the states of `numerators[i]` x0[i], over `denominator`.

    Numerators and denominator share one nonzero multiplier that is free of the variable; nothing is
    cancelled.  `output` is the position of the output among those looked at.
    """

    output: int
    numerators: tuple[Polynomial, ...]
    denominator: Polynomial

    @property
    def visible(self) -> Polynomial:
        """What is left of the denominator when all numerators are cancelled: the modes that show."""
        common = self.denominator
        for numerator in self.numerators:
            common = common.gcd(numerator)
        return normalised(divide(self.denominator, common))

    def shows(self, factor: Polynomial) -> bool:
        """Whether some root of the factor is among the modes that show."""
        return self.visible.gcd(factor).degree > 0


def free_response(derivation: Derivation) -> tuple[FreeResponse, ...]:
    """The free response of every output.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.plant_file import read_plant_text
    >>> text = '''
    ... format = 1
    ... [parameters]
    ... a = { sign = "positive", nominal = 3 }
    ... b = { sign = "positive", nominal = 2 }
    ... [matrices]
    ... A = [["-a", "1"], ["0", "-b"]]
    ... B = [["1"], ["1"]]
    ... C = [["1", "0"]]
    ... '''
    >>> derivation = derive(read_plant_text(text))
    >>> (response,) = free_response(derivation)
    >>> [numerator.element for numerator in response.numerators]
    [s + b, 1]
    """
    return free_responses(Blocks.of(derivation.pencil), derivation.pencil.output_multipliers)


def free_responses(blocks: Blocks, multipliers: Sequence[Element] | None = None) -> tuple[FreeResponse, ...]:
    """The free response of every output of a pencil; `multipliers` are those of the rows of C."""
    ring, (n, _, p) = blocks.ring, blocks.size
    dynamics = [[-entry for entry in row] for row in blocks.dynamics]
    determinant, adjoint = adjugate(dynamics, ring.one)
    mass = [
        [coefficients[1] if len(coefficients := ring.coefficients(entry)) > 1 else ring.zero for entry in row]
        for row in dynamics
    ]
    responses = []
    for i in range(p):
        row = [
            _dot([blocks.reading[i][k] for k in range(n)], [adjoint[k][j] for k in range(n)], ring.zero)
            for j in range(n)
        ]
        numerators = tuple(
            Polynomial.of(ring, _dot(row, [mass[k][j] for k in range(n)], ring.zero)) for j in range(n)
        )
        scale = ring.one if multipliers is None else multipliers[i]
        responses.append(FreeResponse(i, numerators, Polynomial.of(ring, determinant * scale)))
    return tuple(responses)


def _dot(left: Sequence[Element], right: Sequence[Element], zero: Element) -> Element:
    total = zero
    for a, b in zip(left, right, strict=True):
        if a and b:
            total = total + a * b
    return total

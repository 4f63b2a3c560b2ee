"""What hides of a pencil, sorted into uncontrollable, unobservable and both."""

from __future__ import annotations

from dataclasses import dataclass

from symplant.algebra.division import divide, divides, normalised, product
from symplant.algebra.letter_images import LetterImage
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.blocks import Blocks
from symplant.derivation.zeros.hidden_kinds import Kind
from symplant.derivation.zeros.smith_mcmillan import hidden_part
from symplant.derivation.zeros.structure import decoupling

__all__ = ["HiddenParts", "hidden_parts"]


@dataclass(frozen=True)
class HiddenParts:
    """Polynomials whose roots hide, by kind; `input` and `output` are all decoupling zeros."""

    input: Polynomial
    output: Polynomial
    by_kind: dict[Kind, Polynomial]
    verdict: Verdict
    reason: str

    def imaged(self, image: LetterImage) -> HiddenParts:
        """The same polynomials where a condition holds."""
        return HiddenParts(
            image.polynomial(self.input),
            image.polynomial(self.output),
            {kind: image.polynomial(part) for kind, part in self.by_kind.items()},
            self.verdict,
            self.reason,
        )

    def beyond(self, known: HiddenParts) -> dict[Kind, Polynomial]:
        """What hides in addition to what is known, by kind; empty where nothing does."""
        found: dict[Kind, Polynomial] = {}
        for kind, part in self.by_kind.items():
            rest = normalised(part)
            old = known.by_kind[kind]
            if old.degree > 0:
                rest = divide(rest, rest.gcd(old))
            if rest.degree > 0:
                found[kind] = rest
        return found


def hidden_parts(blocks: Blocks) -> HiddenParts | None:
    """The hidden polynomials of a pencil; None where det(A - sE) vanishes identically."""
    if blocks.characteristic.is_zero:
        return None
    found = decoupling(blocks)
    first, second = found.input.polynomial, found.output.polynomial
    verdicts = [found.input.verdict, found.output.verdict]
    reason = f"{found.input.reason}; {found.output.reason}"
    both = Polynomial.constant(blocks.ring, 1)
    if first.degree > 0 and second.degree > 0:
        hidden, why, settled = hidden_part(blocks, normalised(blocks.characteristic), (first, second))
        if settled and divides(hidden, product(first, second)):
            both = divide(product(first, second), hidden)
        else:
            both = first.gcd(second)
            verdicts.append(Verdict.UNDECIDED)
        reason = f"{reason}; {why}"
    verdict = Verdict.PROVED if set(verdicts) == {Verdict.PROVED} else Verdict.UNDECIDED
    by_kind: dict[Kind, Polynomial] = {
        "uncontrollable": _without(first, both),
        "unobservable": _without(second, both),
        "both": both,
    }
    return HiddenParts(first, second, by_kind, verdict, reason)


def _without(polynomial: Polynomial, both: Polynomial) -> Polynomial:
    return divide(polynomial, both) if divides(both, polynomial) else polynomial

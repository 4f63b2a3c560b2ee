"""Which letters move the zeros, the poles, only the gain, or nothing, and through which monomials."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from symplant.algebra.decide_search import letters_in
from symplant.algebra.division import normalised
from symplant.algebra.letter_derivative import LetterDerivative
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Ring
from symplant.algebra.scalings import Scaling, find_scaling
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.structure import channel_positions
from symplant.derivation.zeros.target import target

__all__ = ["Influence", "LetterInfluence", "influence"]


@dataclass(frozen=True)
class LetterInfluence:
    """What one letter does.

    A letter moves the roots of a polynomial exactly when the ratio of some coefficient to the leading
    one depends on it.  The gain of a channel is the ratio of the leading coefficients of numerator
    and denominator; `scales_gain` holds if that of some channel looked at depends on the letter.
    """

    parameter: str
    moves_zeros: bool
    moves_poles: bool
    scales_gain: bool
    verdict: Verdict
    reason: str

    @property
    def only_gain(self) -> bool:
        """Whether the letter scales the gain and moves neither zeros nor poles."""
        return self.scales_gain and not self.moves_zeros and not self.moves_poles

    @property
    def nothing(self) -> bool:
        """Whether the letter has no influence at all on transfer functions and poles."""
        return not (self.scales_gain or self.moves_zeros or self.moves_poles)


@dataclass(frozen=True)
class Influence:
    """All letters, and the monomials through which zeros, poles, and both depend on them.

    The monomials are proved for letters that are not zero.
    """

    letters: tuple[LetterInfluence, ...]
    zeros: Scaling
    poles: Scaling
    together: Scaling


def influence(derivation: Derivation, output: str | None = None, input: str | None = None) -> Influence:
    """The influence of every letter on the plant, or on the channels of one output or input.

    Errors: KeyError for a name that is no output or input.

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
    >>> [(x.parameter, x.moves_zeros, x.moves_poles, x.scales_gain) for x in influence(derivation).letters]
    [('a', False, True, False), ('b', True, True, False)]
    """
    ring = derivation.ring
    zeros = target(derivation, output, input)
    poles = derivation.characteristic_polynomial.polynomial
    gains = _gains(derivation, output, input)
    convert = derivation.pencil.setting.converter().convert
    found = []
    for letter in derivation.model.letters:
        slope = LetterDerivative(ring, letter, convert)
        moves_zeros, moves_poles = _moves(slope, zeros), _moves(slope, poles)
        scales = any(bool(slope.ratio(gain)) for gain in gains)
        verdict = Verdict.PROVED
        reason = "derivatives of the coefficient ratios, worked out exactly"
        if ring.undecidable and (moves_zeros or moves_poles or scales):
            verdict, reason = Verdict.UNDECIDED, ring.undecidable
        found.append(LetterInfluence(letter, moves_zeros, moves_poles, scales, verdict, reason))
    elements = [normalised(p).element for p in (zeros, poles) if not p.is_zero]
    frozen = _inside_functions(ring)
    return Influence(
        tuple(found),
        find_scaling(ring, elements[:-1], frozen),
        find_scaling(ring, elements[-1:], frozen),
        find_scaling(ring, elements, frozen),
    )


def _moves(slope: LetterDerivative, polynomial: Polynomial) -> bool:
    """Whether c_i'/c_n' differs from c_i/c_n for some coefficient."""
    if polynomial.degree < 1:
        return False
    ring, leading = polynomial.ring, Ratio.of(polynomial.ring, polynomial.leading)
    rate = slope.element(polynomial.leading)
    for coefficient in polynomial.coefficients[:-1]:
        if slope.element(coefficient) * leading + -(rate * Ratio.of(ring, coefficient)):
            return True
    return False


def _gains(derivation: Derivation, output: str | None, input: str | None) -> list[Ratio]:
    outputs, inputs = channel_positions(derivation, output, input)
    names = (
        {derivation.model.outputs[i].name for i in outputs},
        {derivation.model.inputs[j].name for j in inputs},
    )
    return [
        Ratio.of(derivation.ring, channel.numerator.leading, channel.denominator.leading)
        for channel in derivation.channels
        if channel.output.name in names[0] and channel.input.name in names[1]
    ]


def _inside_functions(ring: Ring) -> Sequence[str]:
    """Letters that a function of the ring contains."""
    elements = [ring.gen(function.key) for function in ring.functions]
    return letters_in(ring, elements) if elements else []

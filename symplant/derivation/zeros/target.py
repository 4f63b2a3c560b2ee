"""The polynomial whose roots are meant by "the zeros" of a plant or of a channel."""

from __future__ import annotations

from symplant.algebra.polynomial import Polynomial
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.structure import channel_positions, find_zeros

__all__ = ["target"]


def target(derivation: Derivation, output: str | None = None, input: str | None = None) -> Polynomial:
    """The numerator of the named channel; without names the zero polynomial of the plant.

    For a plant that is not square, or whose zero polynomial vanishes identically, and for one output
    or one input alone, it is the polynomial of the invariant zeros.
    Errors: KeyError for a name that is no output or input.
    """
    outputs, inputs = channel_positions(derivation, output, input)
    if len(outputs) == len(inputs) == 1:
        names = (derivation.model.outputs[outputs[0]].name, derivation.model.inputs[inputs[0]].name)
        return next(c.numerator for c in derivation.channels if (c.output.name, c.input.name) == names)
    whole = output is None and input is None
    if whole and derivation.zero_polynomial and not derivation.zero_polynomial.polynomial.is_zero:
        return derivation.zero_polynomial.polynomial
    return find_zeros(derivation, output, input).invariant.polynomial

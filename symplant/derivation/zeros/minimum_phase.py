"""Minimum phase: stability of the zeros."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace
from fractions import Fraction

from symplant.derivation.derive import Derivation
from symplant.derivation.stability.finding import StabilityFinding
from symplant.derivation.stability.study import stability_of
from symplant.derivation.zeros.target import target
from symplant.errors import UndecidedError

__all__ = ["minimum_phase"]


def minimum_phase(
    derivation: Derivation,
    output: str | None = None,
    input: str | None = None,
    along: str | None = None,
    fixed: Mapping[str, Fraction] | None = None,
    stage: Callable[[str], None] = lambda name: None,
) -> StabilityFinding:
    """Whether all zeros of the plant or of one channel lie inside; "stable" means that they do.

    `along` and `fixed` as for `stability`.  Errors: KeyError for a name that is no output or input,
    InputError for letters at fault, UndecidedError where the transfer function is identically zero.
    """
    zeros = target(derivation, output, input)
    if zeros.is_zero:
        raise UndecidedError("whether the zeros lie inside", "the transfer function is identically zero")
    model = derivation.model
    finding = stability_of(
        zeros,
        discrete=model.discrete,
        box=model.box,
        nonzero=derivation.assumed_nonzero,
        nominal=model.nominal,
        along=along,
        fixed=fixed,
        stage=stage,
    )
    if zeros.degree < 1:
        return replace(finding, because="there are no finite zeros")
    return finding

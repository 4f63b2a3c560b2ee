"""The whole of a job, deriving and checking, as the command line and Python callers both need it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from symplant.algebra.verdict import Check
from symplant.derivation.derive import Channel, Derivation, Scaled, derive, derive_stages

if TYPE_CHECKING:
    from symplant.checking.numerical_process import NumericalProcess
    from symplant.checking.substitution import Substitution
    from symplant.derivation.stability import SettledCondition, StabilityFinding
    from symplant.plant.model import Model

__all__ = ["Derived", "Stabilised", "derive_and_check", "derive_plan", "stability_and_check"]

SUBSTITUTION = "the exact substitution"
OPINION = "the numerical second opinion"
CONDITIONS = "the stability conditions"

Stage = Callable[[str], None]


@dataclass(frozen=True)
class Derived:
    """What was derived, and every check made of it."""

    derivation: Derivation
    substitution: Substitution
    checks: tuple[Check, ...]

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return all(check.passed for check in self.checks)


@dataclass(frozen=True)
class Stabilised:
    """A derivation with its checks, and the stability conditions found from it."""

    derived: Derived
    finding: StabilityFinding

    @property
    def checks(self) -> tuple[Check, ...]:
        """The checks of the derivation, and of the conditions by a second criterion."""
        return (*self.derived.checks, *self.finding.checks)

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return all(check.passed for check in self.checks)


def derive_plan(model: Model, stability: bool = False) -> list[str]:
    """The stages of the job by name, in order."""
    plan = [*derive_stages(model), SUBSTITUTION, OPINION]
    return [*plan, CONDITIONS] if stability else plan


def derive_and_check(
    model: Model,
    numerics: NumericalProcess | None = None,
    stage: Stage = lambda name: None,
    found: Callable[[Scaled | Channel], None] = lambda finding: None,
) -> Derived:
    """Derive everything, then check it: both routes, exact substitution, numerical second opinion.

    `numerics` is the process of the second opinion if it was started before (its libraries load slowly);
    left out, one is started here.
    """
    from symplant.checking.second_opinion import SecondOpinion, second_opinion_request
    from symplant.checking.substitution import check_by_substitution

    with SecondOpinion(numerics) as second:
        derivation = derive(model, stage, found)
        second.ask(second_opinion_request(derivation))
        stage(SUBSTITUTION)
        substitution = check_by_substitution(derivation)
        stage(OPINION)
        numerical = second.checks()
    checks = (*derivation.checks, *substitution.checks, *numerical)
    return Derived(derivation, substitution, checks)


def stability_and_check(
    model: Model,
    numerics: NumericalProcess | None = None,
    stage: Stage = lambda name: None,
    found: Callable[[Scaled | Channel | SettledCondition], None] = lambda finding: None,
    along: str | None = None,
    fixed: Mapping[str, Fraction] | None = None,
    effort: str = "normal",
    plan: Callable[[list[str]], None] = lambda names: None,
    decay: Fraction | None = None,
    damping: Fraction | None = None,
) -> Stabilised:
    """Derive and check, then reduce the stability conditions; see `derivation.stability.stability`."""
    from symplant.algebra.effort import EFFORTS
    from symplant.derivation.stability import Margins, stability

    margins = Margins(decay, damping)
    margins.check(model.discrete)
    derived = derive_and_check(model, numerics, stage, found)
    finding = stability(
        derived.derivation,
        along=along,
        fixed=fixed or {},
        stage=stage,
        effort=EFFORTS[effort],
        found=found,
        plan=lambda names: plan([*derive_plan(model), *names]),
        margins=margins,
    )
    return Stabilised(derived, finding)

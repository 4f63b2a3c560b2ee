"""The jobs of `zeros` and `hidden`: derive, check, then look at the zeros or at what hides."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from symplant.algebra.verdict import Check
from symplant.derivation.zeros.hidden import hidden_modes
from symplant.derivation.zeros.hidden_findings import HiddenModes
from symplant.derivation.zeros.study import ZerosStudy, study_plan, study_zeros
from symplant.errors import Fault, InputError
from symplant.face.work import Derived, derive_and_check, derive_plan

if TYPE_CHECKING:
    from symplant.checking.numerical_process import NumericalProcess
    from symplant.derivation.derive import Channel, Scaled
    from symplant.plant.model import Model

__all__ = [
    "HiddenWork",
    "ZerosWork",
    "check_names",
    "hidden_and_check",
    "hidden_of",
    "hidden_plan",
    "zeros_and_check",
    "zeros_of",
    "zeros_plan",
]

#: The parts of the search for hidden modes that a budget may stop, in order.
HIDDEN_STAGES = (
    "decoupling zeros",
    "normal rank",
    "invariant zeros",
    "transmission zeros",
    "relative degrees",
    "zeros at infinity",
    "conditions of the inputs",
    "conditions of the outputs",
)

Stage = Callable[[str], None]


@dataclass(frozen=True)
class ZerosWork:
    """A derivation with its checks, and what was found of the zeros."""

    derived: Derived
    study: ZerosStudy

    @property
    def checks(self) -> tuple[Check, ...]:
        """The checks of the derivation and of the zero directions."""
        return (*self.derived.checks, *self.study.checks)

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return all(check.passed for check in self.checks)


@dataclass(frozen=True)
class HiddenWork:
    """A derivation with its checks, and what was found of hidden modes."""

    derived: Derived
    modes: HiddenModes

    @property
    def checks(self) -> tuple[Check, ...]:
        """The checks of the derivation; what hides carries its own reasons."""
        return self.derived.checks

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return self.derived.passed


def check_names(
    model: Model,
    along: str | None = None,
    output: str | None = None,
    input: str | None = None,
    option: str = "",
) -> None:
    """Refuse names that the plant has not, all at once.

    `option` stands before the names of the places ("--" on the command line).  Errors: InputError.
    """
    from symplant.reading.suggestions import did_you_mean, listed, quoted

    faults = []
    for place, noun, name, known in (
        ("along", "parameter", along, list(model.letters)),
        ("output", "output", output, [y.name for y in model.outputs]),
        ("input", "input", input, [u.name for u in model.inputs]),
    ):
        if name is None or name in known:
            continue
        hint = did_you_mean(name, known) or (f"the plant has {listed(known, 'and')}" if known else "")
        faults.append(Fault(f"{option}{place}", f"no {noun} is called {quoted(name)}", hint))
    if faults:
        raise InputError(faults)


def zeros_plan(model: Model, along: str | None = None) -> list[str]:
    """The stages of the job by name, in order."""
    return [*derive_plan(model), *study_plan(along)]


def hidden_plan(model: Model) -> list[str]:
    """The stages of the job by name, in order."""
    return [*derive_plan(model), *HIDDEN_STAGES]


def zeros_and_check(
    model: Model,
    numerics: NumericalProcess | None = None,
    stage: Stage = lambda name: None,
    found: Callable[[Scaled | Channel], None] = lambda finding: None,
    part: Callable[[ZerosStudy, str], None] = lambda study, name: None,
    along: str | None = None,
    output: str | None = None,
    input: str | None = None,
) -> ZerosWork:
    """Derive and check, then study the zeros; see `derivation.zeros.study.study_zeros`."""
    return zeros_of(derive_and_check(model, numerics, stage, found), stage, part, along, output, input)


def zeros_of(
    derived: Derived,
    stage: Stage = lambda name: None,
    part: Callable[[ZerosStudy, str], None] = lambda study, name: None,
    along: str | None = None,
    output: str | None = None,
    input: str | None = None,
) -> ZerosWork:
    """The study of the zeros of what was derived."""
    return ZerosWork(derived, study_zeros(derived.derivation, along, output, input, stage, part))


def hidden_and_check(
    model: Model,
    numerics: NumericalProcess | None = None,
    stage: Stage = lambda name: None,
    found: Callable[[Scaled | Channel], None] = lambda finding: None,
) -> HiddenWork:
    """Derive and check, then look for hidden modes; see `derivation.zeros.hidden.hidden_modes`."""
    return hidden_of(derive_and_check(model, numerics, stage, found), stage)


def hidden_of(derived: Derived, stage: Stage = lambda name: None) -> HiddenWork:
    """The hidden modes of what was derived."""
    return HiddenWork(derived, hidden_modes(derived.derivation, stage=stage))

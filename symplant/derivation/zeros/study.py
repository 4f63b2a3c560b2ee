"""All that is said of the zeros of a plant or of one channel, found one part after the other."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.verdict import Check
from symplant.derivation.derive import Derivation
from symplant.derivation.stability.finding import StabilityFinding
from symplant.derivation.zeros.along import Along
from symplant.derivation.zeros.along import along as along_parameter
from symplant.derivation.zeros.closed_forms import ClosedForm, closed_forms
from symplant.derivation.zeros.directions import Directions, directions
from symplant.derivation.zeros.influence import Influence, influence
from symplant.derivation.zeros.minimum_phase import minimum_phase
from symplant.derivation.zeros.structure import surroundings
from symplant.derivation.zeros.target import target
from symplant.errors import InputError, UndecidedError

__all__ = ["ZerosStudy", "study_plan", "study_zeros"]

CLOSED, PHASE, LETTERS, DIRECTIONS = (
    "the closed forms of the zeros",
    "the conditions for minimum phase",
    "the influence of the parameters",
    "the zero directions",
)


@dataclass(frozen=True)
class ZerosStudy:
    """What was found; a part that is None was not reached, or not asked for.

    `output` and `input` are the names that the zeros were narrowed down to.  `minimum_phase` is None
    where the question has no answer; `phase_note` says why, or why there are no intervals.
    """

    derivation: Derivation
    output: str | None
    input: str | None
    polynomial: Polynomial
    forms: tuple[ClosedForm, ...] | None = None
    minimum_phase: StabilityFinding | None = None
    phase_note: str = ""
    influence: Influence | None = None
    directions: Directions | None = None
    along: Along | None = None

    @property
    def kind(self) -> str:
        """What the polynomial is: a channel's numerator, the zero polynomial, or that of invariant zeros."""
        model, zero = self.derivation.model, self.derivation.zero_polynomial
        outputs = 1 if self.output is not None else len(model.outputs)
        inputs = 1 if self.input is not None else len(model.inputs)
        if outputs == inputs == 1:
            return "numerator"
        whole = self.output is None and self.input is None
        return "zero polynomial" if whole and zero and not zero.polynomial.is_zero else "invariant zeros"

    @property
    def checks(self) -> tuple[Check, ...]:
        """The checks of the directions: each is put into the pencil."""
        found = self.directions.directions if self.directions else ()
        return tuple(
            Check(
                f"zero direction {number}", "the pencil at the zero times the direction", d.verdict, d.reason
            )
            for number, d in enumerate(found, 1)
        )


def study_plan(along: str | None = None) -> list[str]:
    """The parts by name, in order."""
    return [CLOSED, PHASE, LETTERS, DIRECTIONS, *([f"the zeros along {along}"] if along else [])]


def study_zeros(
    derivation: Derivation,
    along: str | None = None,
    output: str | None = None,
    input: str | None = None,
    stage: Callable[[str], None] = lambda name: None,
    found: Callable[[ZerosStudy, str], None] = lambda study, part: None,
) -> ZerosStudy:
    """Everything about the zeros; `found` is told of each part, by its field, as soon as it is there.

    Errors: KeyError for a name that is no parameter, output or input.
    """
    zeros = target(derivation, output, input)
    study = ZerosStudy(derivation, output, input, zeros)
    found(study, "polynomial")
    stage(CLOSED)
    forms = () if zeros.is_zero else closed_forms(zeros, surroundings(derivation))
    study = replace(study, forms=forms)
    found(study, "forms")
    stage(PHASE)
    study = _with_phase(study, along)
    found(study, "minimum_phase")
    stage(LETTERS)
    study = replace(study, influence=influence(derivation, output, input))
    found(study, "influence")
    stage(DIRECTIONS)
    study = replace(study, directions=directions(derivation, output, input))
    found(study, "directions")
    if along is not None:
        stage(f"the zeros along {along}")
        study = replace(study, along=along_parameter(derivation, along, output, input))
        found(study, "along")
    return study


def _with_phase(study: ZerosStudy, along: str | None) -> ZerosStudy:
    """Minimum phase, with the intervals of one letter where all others have values."""
    model = study.derivation.model
    others = [p for p in model.parameters if p.name != along]
    try:
        if along and all(p.nominal is not None for p in others):
            try:
                return replace(study, minimum_phase=_phase(study, along))
            except InputError as error:
                # A letter inside a function cannot be given a value here: no intervals then.
                note = f"no intervals of {along}: {error.faults[0].reason}"
                return replace(study, minimum_phase=_phase(study, None), phase_note=note)
        return replace(study, minimum_phase=_phase(study, None))
    except UndecidedError as error:
        return replace(study, phase_note=error.tried or error.question)


def _phase(study: ZerosStudy, along: str | None) -> StabilityFinding:
    return minimum_phase(study.derivation, study.output, study.input, along=along)

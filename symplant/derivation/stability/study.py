"""Stability of a plant, or of any polynomial, over the parameter box."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import TypeAlias

from symplant.algebra.box import Box, Interval
from symplant.algebra.decide import over_box
from symplant.algebra.effort import NORMAL, Effort
from symplant.algebra.points import centre
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.derivation.derive import Derivation
from symplant.derivation.pencil import Pencil, build_pencil
from symplant.derivation.stability.boundary import marginal_conditions, symmetric_sentence
from symplant.derivation.stability.candidates import Candidate, candidates
from symplant.derivation.stability.cross_check import cross_checks
from symplant.derivation.stability.crossings import crossings
from symplant.derivation.stability.energy import conservative_argument, energy_argument
from symplant.derivation.stability.finding import (
    Condition,
    Point,
    SettledCondition,
    SpecialCase,
    StabilityFinding,
    StabilityInterval,
)
from symplant.derivation.stability.fixing import fixed_model, values_along
from symplant.derivation.stability.implication import reduced
from symplant.derivation.stability.intervals import stability_intervals
from symplant.derivation.stability.margins import Margins
from symplant.derivation.stability.settling import Settled, settle_all
from symplant.derivation.stability.solving import condition_of
from symplant.derivation.stability.subject import Subject, restricted, subject_of
from symplant.derivation.stability.vanishing_leading import content_notes, lower_subject, vanishing_note
from symplant.derivation.stability.verdict import judge
from symplant.plant.model import Model

__all__ = ["stability", "stability_of"]

Source: TypeAlias = Model | Pencil | Derivation
#: How often a vanishing leading coefficient is followed by the next one.
CASES = 2
REDUCTION, WITNESSES = "what follows from what", "witnesses"


NO_MARGINS = Margins()


def _quiet(name: str) -> None:
    """Report no stage."""


def _unheard(finding: object) -> None:
    """Hand out nothing before the end."""


def stability(
    source: Source,
    *,
    along: str | None = None,
    fixed: Mapping[str, Fraction] | None = None,
    stage: Callable[[str], None] = _quiet,
    effort: Effort = NORMAL,
    found: Callable[[SettledCondition], None] = _unheard,
    plan: Callable[[list[str]], None] = _unheard,
    margins: Margins = NO_MARGINS,
) -> StabilityFinding:
    """Stability of a plant over its parameter box.

    `along` asks for the exact intervals of one letter with all others at the values `fixed` or else
    nominal; the rest of the answer is about the whole box.  With one letter in all the intervals come
    by themselves.  Without `along`, letters in `fixed` have these values throughout.  `stage` is told
    what is being worked on; `effort` bounds the work on each condition; `found` is handed each
    condition when it is settled, and `plan` the stages to come when they are known.  With `margins` all
    of the answer is about more than stability: poles left of a line, in a circle, in a sector.

    Errors: InputError for unknown letters, letters without nominal value, and singular pencils.
    """
    values = dict(fixed or {})
    margins.check((source if isinstance(source, Model) else source.model).discrete)
    model = source if isinstance(source, Model) else source.model
    stage("the characteristic polynomial")
    line: Subject | None = None
    outside = [
        f"{k} = {v}"
        for k, v in values.items()
        if k in model.letters and not model.box.intervals[k].contains(v)
    ]
    if along is not None:
        others = values_along(along, model.letters, model.nominal, values)
        line = subject_of(build_pencil(fixed_model(model, others)), effort)
        values = {}
    if values or isinstance(source, Model):
        subject = subject_of(build_pencil(fixed_model(model, values)), effort)
    else:
        subject = subject_of(source.pencil if isinstance(source, Derivation) else source, effort)
    notes = []
    if model.E is not None:
        notes.append(
            "descriptor plant: the verdict is about the finite poles; modes at infinity are not in it"
        )
    if outside:
        notes.append(f"fixed outside its range: {', '.join(outside)}")
    subject = margins.applied(subject)
    line = None if line is None else margins.applied(line)
    finding = _study(subject, along, line, values, stage, notes, 0, found, plan)
    return margins.told(finding)


def stability_of(
    polynomial: Polynomial,
    *,
    discrete: bool = False,
    box: Box | None = None,
    nonzero: Sequence[Element] = (),
    nominal: Mapping[str, Fraction] | None = None,
    pencil: Pencil | None = None,
    along: str | None = None,
    fixed: Mapping[str, Fraction] | None = None,
    stage: Callable[[str], None] = _quiet,
    effort: Effort = NORMAL,
    found: Callable[[SettledCondition], None] = _unheard,
    plan: Callable[[list[str]], None] = _unheard,
) -> StabilityFinding:
    """Where all roots of a polynomial lie inside the boundary; used for zeros as well as poles.

    The box is that of the polynomial's ring unless one is given.  `nonzero` lists irreducible
    elements assumed not to vanish.  A multiple root on the boundary is judged with `pencil` if
    it is given, and counts as growing if not.

    Errors: InputError for letters at fault; ValueError for the zero polynomial.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("K",))
    >>> s, K = ring.gen("s"), ring.gen("K")
    >>> finding = stability_of(Polynomial.of(ring, s**3 + 5 * s**2 + (K - 6) * s + K))
    >>> finding.verdict, [condition.element for condition in finding.binding]
    ('conditional', [2*K - 15])
    """
    if polynomial.is_zero:
        raise ValueError("the zero polynomial has no roots to judge")
    fixed, nominal = dict(fixed or {}), dict(nominal or {})
    ring = polynomial.ring if box is None else over_box(polynomial.ring, box)
    subject = Subject(Polynomial(ring, polynomial.element), discrete, tuple(nonzero), nominal, pencil, effort)
    line = None
    if along is not None:
        line = restricted(subject, values_along(along, ring.letters, nominal, fixed))
        fixed = {}
    elif fixed:
        subject = restricted(subject, fixed)
    return _study(subject, along, line, fixed, stage, [], 0, found, plan)


def _study(
    subject: Subject,
    along: str | None,
    line: Subject | None,
    fixed: Mapping[str, Fraction],
    stage: Callable[[str], None],
    notes: list[str],
    depth: int = 0,
    tell: Callable[[SettledCondition], None] = _unheard,
    plan: Callable[[list[str]], None] = _unheard,
) -> StabilityFinding:
    ring = subject.ring
    found: list[Candidate] = []
    symmetric: list[Condition] = []
    for number, part in enumerate(subject.parts):
        if part.symmetric:
            because = symmetric_sentence(subject, part)
            symmetric.append(Condition(ring.zero, "never", because, f"factor {part.text}"))
        else:
            found += candidates(subject, part, number)

    def argument() -> str:
        return energy_argument(subject.pencil) if subject.pencil is not None and not symmetric else ""

    def report(one: Settled) -> None:
        if tell is not _unheard:
            tell(SettledCondition(ring, condition_of(ring, one)))

    plan([*(candidate.stage for candidate in found), REDUCTION, WITNESSES])
    settled, proof = settle_all(subject, found, stage, argument, report)
    stage(REDUCTION)
    ordinary = reduced(subject, settled)
    conserved = conservative_argument(subject.pencil) if symmetric and subject.pencil is not None else ""
    marginal = marginal_conditions(subject, stage) if symmetric and not conserved else []
    if len(subject.letters) == 1 and line is None:
        line, along = subject, subject.letters[0]
    intervals: tuple[StabilityInterval, ...] = ()
    if line is not None and along is not None:
        stage(f"the intervals of {along}")
        intervals, reason = stability_intervals(line, along)
        notes = [*notes, f"no exact intervals: {reason}"] if reason else notes
    outcome = judge(
        subject, ordinary, marginal, intervals if line is subject else (), stage, proof, conserved
    )
    below = lower_subject(subject) if depth < CASES else None
    cases = (
        (SpecialCase(below[0], _study(below[1], None, None, fixed, stage, [], depth + 1)),) if below else ()
    )
    case_note = vanishing_note(subject)
    return StabilityFinding(
        ring,
        subject.polynomial,
        subject.discrete,
        outcome.verdict,
        outcome.because,
        (*symmetric, *(condition_of(ring, c) for c in ordinary)),
        tuple(condition_of(ring, c) for c in marginal),
        crossings(subject, ordinary),
        {kind: _completed(subject, point, fixed) for kind, point in outcome.witnesses.items()},
        intervals,
        along if intervals else None,
        cases,
        (*notes, *([case_note] if case_note else []), *content_notes(subject)),
        cross_checks(subject, ordinary),
    )


def _completed(subject: Subject, point: Point | None, fixed: Mapping[str, Fraction]) -> Point | None:
    """The point with a value for every letter of the plant, so that it can be replayed elsewhere."""
    if point is None:
        return None
    ring, nominal = subject.ring, subject.nominal or {}
    box = ring.box
    rest = {
        name: centre(box.intervals.get(name, Interval()), nominal.get(name))
        for name in ring.letters
        if name not in point and name not in fixed
    }
    found = {**point, **rest}
    return {**{name: found[name] for name in ring.letters if name not in fixed}, **fixed}

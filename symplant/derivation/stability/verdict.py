"""From settled conditions to the verdict, with exact witnesses."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from symplant.algebra.verdict import Verdict
from symplant.derivation.stability.boundary import axis_verdict, semisimple, symmetric_sentence
from symplant.derivation.stability.finding import Point, StabilityInterval, StabilityVerdict
from symplant.derivation.stability.implication import contradiction
from symplant.derivation.stability.planes import stable_cell
from symplant.derivation.stability.settling import Settled
from symplant.derivation.stability.solver import excluded as excluded_by_solver
from symplant.derivation.stability.subject import Subject
from symplant.derivation.stability.witnesses import classify, find_point

__all__ = ["Outcome", "judge"]


@dataclass(frozen=True)
class Outcome:
    """A verdict, why, and points that show it."""

    verdict: StabilityVerdict
    because: str
    witnesses: Mapping[str, Point | None]


def judge(
    subject: Subject,
    ordinary: Sequence[Settled],
    marginal: Sequence[Settled],
    intervals: Sequence[StabilityInterval],
    stage: Callable[[str], None],
    proof: str = "",
    conserved: str = "",
) -> Outcome:
    """The verdict over the box.

    `proof` is the reason if all conditions were proved at once, `conserved` the one why all roots lie on
    the boundary without harm; `intervals` are given if there is one
    letter in all and they are exact.
    """
    nothing: dict[str, Point | None] = {"stable": None, "unstable": None}
    if not subject.parts:
        return Outcome("stable", "there are no finite poles: nothing can grow", nothing)
    symmetric = [part for part in subject.parts if part.symmetric]
    never = [c for c in ordinary if c.status == "never"]
    if conserved and not ordinary:
        why = [symmetric_sentence(subject, part) for part in symmetric]
        return _nowhere("marginal", [*why, conserved], find_point(subject, [], {"axis"}))
    if symmetric or never:
        return _never_stable(subject, ordinary, marginal, stage)
    if not any(c.open for c in ordinary):
        return Outcome("stable", proof or _stable_reason(ordinary), nothing)
    excluded = contradiction(subject, ordinary)
    if excluded or (intervals and all(i.verdict != "stable" for i in intervals)):
        reason = excluded or "no interval of the letter is stable"
        return _never_stable(subject, ordinary, marginal, stage, reason)
    stage("witnesses")
    elements = [c.element for c in ordinary if c.open]
    stable = find_point(subject, elements, {"stable"})
    if stable is None:
        stable, complete = stable_cell(subject)
        if complete and stable is None:
            one, two = subject.letters
            reason = f"none of the cells into which the boundary cuts the plane of {one} and {two} is stable"
            return _never_stable(subject, ordinary, marginal, stage, reason)
    if stable is None:
        nowhere, point = excluded_by_solver(subject, elements)
        if nowhere:
            return _never_stable(subject, ordinary, marginal, stage, nowhere)
        stable = point if point is not None and classify(subject, point) == "stable" else None
    unstable = find_point(subject, elements, {"unstable"}) or find_point(subject, elements, {"axis"})
    found = {"stable": stable, "unstable": unstable}
    if stable is not None and unstable is not None:
        because = f"stable and unstable at the points shown, both replayed {_how(subject)}"
        return Outcome("conditional", because, found)
    missing = "a stable point" if stable is None else "a point that is not stable"
    return Outcome("undecided", f"{missing} was neither found nor excluded", found)


def _how(subject: Subject) -> str:
    if subject.functions:
        return "in rigorous ball arithmetic (functions of letters occur)"
    return "in exact arithmetic"


def _stable_reason(ordinary: Sequence[Settled]) -> str:
    reasons = list(dict.fromkeys(c.because for c in ordinary if c.members[0].kind == "determinant"))
    if not reasons:
        reasons = list(dict.fromkeys(c.because for c in ordinary))
    if not reasons:
        return "every condition holds in the whole box"
    return "every condition holds in the whole box; " + "; ".join(reasons)


def _never_stable(
    subject: Subject,
    ordinary: Sequence[Settled],
    marginal: Sequence[Settled],
    stage: Callable[[str], None],
    reason: str = "",
) -> Outcome:
    """Nowhere asymptotically stable: unstable, or marginal in the whole box?"""
    symmetric = [part for part in subject.parts if part.symmetric]
    why = [symmetric_sentence(subject, part) for part in symmetric]
    why += [f"the {c.name} is never positive: {c.because}" for c in ordinary if c.status == "never"]
    why += [reason] if reason else []
    strictly = any(c.strictly_negative for c in (*ordinary, *marginal))
    multiple = {part.text: semisimple(subject, part) for part in symmetric if part.multiplicity > 1}
    defective = [text for text, verdict in multiple.items() if verdict is Verdict.REFUTED]
    settled = not any(c.open or c.status == "never" for c in (*ordinary, *marginal))
    stage("witnesses")
    elements = [c.element for c in (*ordinary, *marginal) if c.open]
    if settled and symmetric and all(verdict is Verdict.PROVED for verdict in multiple.values()):
        if multiple:
            why.append("multiple roots on the boundary have as many eigenvectors as their multiplicity")
        why.append("no root lies beyond the boundary, and those on it do not grow")
        return _nowhere("marginal", why, find_point(subject, elements, {"axis"}))
    why += [
        f"the roots of the factor {text} are multiple and have too few eigenvectors: motions grow"
        for text in defective
    ]
    if strictly or defective:
        return _nowhere("unstable", why, find_point(subject, elements, {"unstable", "axis"}))
    beyond = find_point(subject, elements, {"unstable"})
    if beyond is not None:
        if any(c.open for c in marginal):
            why.append("marginal only where the further conditions hold")
        return _nowhere("unstable", why, beyond)
    point = find_point(subject, elements, {"axis"})
    if point is not None and not subject.functions and axis_verdict(subject, point) == "unstable":
        return _nowhere("unstable", why, point)
    why.append("nowhere asymptotically stable; whether marginal or unstable was not settled")
    return _nowhere("undecided", why, point)


def _nowhere(verdict: StabilityVerdict, why: Sequence[str], point: Point | None) -> Outcome:
    return Outcome(verdict, "; ".join(why), {"stable": None, "unstable": point})

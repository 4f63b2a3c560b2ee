"""Each candidate is given its status: always, never, required, or undecided."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from symplant.algebra.box import Sign
from symplant.algebra.decide import Decision, decide_positive
from symplant.algebra.decide_factors import Radical, radical
from symplant.algebra.decide_search import find_sign
from symplant.algebra.ring import Element
from symplant.algebra.sign_pattern import pattern_sign
from symplant.algebra.verdict import Verdict
from symplant.derivation.stability.candidates import Candidate
from symplant.derivation.stability.finding import Point, Status
from symplant.derivation.stability.subject import Subject

__all__ = ["Settled", "settle", "settle_all"]


@dataclass(frozen=True)
class Settled:
    """A candidate with its status.  `element` is what the sign depends on (all of it if settled).

    `strictly_negative`: proved negative in the whole box, so that a root lies beyond the boundary.
    """

    members: tuple[Candidate, ...]
    element: Element
    status: Status
    because: str
    strictly_negative: bool = False

    @property
    def name(self) -> str:
        """The names of all candidates that came to the same condition."""
        return " and ".join(dict.fromkeys(member.name for member in self.members))

    @property
    def open(self) -> bool:
        """Whether it still restricts the box."""
        return self.status in ("required", "undecided")


def settle_all(
    subject: Subject,
    found: list[Candidate],
    stage: Callable[[str], None],
    argument: Callable[[], str] = lambda: "",
    report: Callable[[Settled], None] = lambda settled: None,
) -> tuple[list[Settled], str]:
    """Settle candidates, those with the same radical as one; `argument` proves all of them if not "".

    The cheap rungs come first for all of them; only if something is left open is `argument` asked.
    Its reason is returned too ("" where it was not needed or did not prove anything).  `report` is told
    of each condition when it is settled.
    """
    rest: list[tuple[int, Candidate]] = []
    done: dict[int, Settled] = {}
    for place, candidate in enumerate(found):
        if candidate.kind == "coefficient":
            settled = _cheaply(subject, candidate, candidate.make())
            if settled is not None:
                done[place] = settled
                report(settled)
                continue
        rest.append((place, candidate))
    reason = argument() if rest and all(s.status == "always" for s in done.values()) else ""
    if reason:
        # Determinants are not expanded: they may be huge, and the argument has settled them.
        for place, candidate in rest:
            if candidate.kind == "coefficient":
                done[place] = Settled((candidate,), candidate.make(), "always", reason)
                report(done[place])
        return [done[place] for place in sorted(done)], reason
    known: dict[str, int] = {}
    for place, candidate in rest:
        stage(candidate.stage)
        element = candidate.make()
        settled = _cheaply(subject, candidate, element)
        if settled is None:
            kernel = radical(subject.ring, element, subject.nonzero)
            twin = known.get(str(kernel.element))
            if twin is not None:
                same = done[twin]
                done[twin] = Settled(
                    (*same.members, candidate),
                    same.element,
                    same.status,
                    same.because,
                    same.strictly_negative,
                )
                continue
            known[str(kernel.element)] = place
            settled = settle(subject, candidate, element, kernel)
        done[place] = settled
        report(settled)
    return [done[place] for place in sorted(done)], ""


def _cheaply(subject: Subject, candidate: Candidate, element: Element) -> Settled | None:
    """Settle by the signs of terms and factors, if they suffice."""
    ring = subject.ring
    if not element:
        return Settled((candidate,), element, "never", "it is identically zero")
    if pattern_sign(ring, element) is Sign.POSITIVE:
        return Settled((candidate,), element, "always", _plainly(element))
    kernel = radical(ring, element, subject.nonzero)
    if kernel.is_settled:
        decision = decide_positive(ring, element, nonzero=subject.nonzero)
        if decision.verdict is Verdict.PROVED:
            return Settled((candidate,), element, "always", decision.because)
        return Settled((candidate,), element, "never", decision.because, strictly_negative=True)
    if pattern_sign(ring, kernel.element) in (Sign.NONPOSITIVE, Sign.NEGATIVE):
        negative = pattern_sign(ring, kernel.element) is Sign.NEGATIVE
        return Settled((candidate,), element, "never", "none of its terms is ever positive", negative)
    return None


def _plainly(element: Element) -> str:
    return "it is a positive number" if element.is_constant() else "all its terms are positive"


def settle(subject: Subject, candidate: Candidate, element: Element, kernel: Radical) -> Settled:
    """Settle one candidate by the whole sign ladder."""
    ring, nominal, nonzero = subject.ring, subject.nominal or {}, subject.nonzero
    effort = subject.effort
    decision = decide_positive(ring, kernel.element, nominal=nominal, nonzero=nonzero, bounds=effort)
    if decision.verdict is Verdict.PROVED:
        return Settled((candidate,), element, "always", decision.because)
    if decision.verdict is Verdict.UNDECIDED:
        return Settled((candidate,), kernel.element, "undecided", decision.because)
    holds = find_sign(ring, kernel.element, (1,), nominal, nonzero, effort=effort)
    if holds is None:
        opposite = decide_positive(ring, -kernel.element, nominal=nominal, nonzero=nonzero, bounds=effort)
        if opposite.verdict is Verdict.PROVED:
            return Settled((candidate,), element, "never", f"minus it is positive: {opposite.because}", True)
        if kernel.sign < 0 and all(exponent == 2 for _, exponent in kernel.factors):
            return Settled((candidate,), element, "never", "it is minus a square")
        return _required(candidate, kernel, opposite.witness, decision)
    return _required(candidate, kernel, holds, decision)


def _required(candidate: Candidate, kernel: Radical, holds: Point | None, decision: Decision) -> Settled:
    fails = _at(decision.witness) if decision.witness else decision.because
    return Settled((candidate,), kernel.element, "required", f"holds {_at(holds)}, fails {fails}")


def _at(point: Point | None) -> str:
    if point is None:
        return "at no point that was found"
    return "at " + ", ".join(f"{name} = {value}" for name, value in point.items())

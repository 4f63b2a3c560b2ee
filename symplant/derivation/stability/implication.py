"""Conditions that follow from the others, with the reason; the rest is what binds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise

from symplant.algebra.box import Interval, Sign
from symplant.algebra.decide_factors import radical
from symplant.algebra.decide_search import letters_in
from symplant.algebra.decide_single import cells
from symplant.algebra.real_roots import real_roots
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign, pattern_sign
from symplant.algebra.text import element_text
from symplant.derivation.stability.settling import Settled
from symplant.derivation.stability.solver import alone, follows
from symplant.derivation.stability.subject import Subject

__all__ = ["contradiction", "irredundant", "reduced"]

#: Terms of unknown sign that are tried to be matched, and the largest product of term counts.
MATCHED, LARGEST = 6, 40_000


def reduced(subject: Subject, settled: Sequence[Settled]) -> list[Settled]:
    """Mark what follows from the rest; each step uses only conditions that are still kept."""
    result = list(settled)
    for number in range(len(subject.parts)):
        result = _halved(result, number, subject)
    return irredundant(subject, result)


def irredundant(subject: Subject, settled: Sequence[Settled]) -> list[Settled]:
    """Mark one after the other the conditions that follow from those still kept."""
    result = list(settled)
    for place in _weakest_first(result):
        others = [c for i, c in enumerate(result) if c.open and i != place]
        reason = _follows(subject, result[place].element, others)
        if reason:
            result[place] = replace(result[place], status="implied", because=reason)
    return _each_needed(subject, result)


def _each_needed(subject: Subject, settled: list[Settled]) -> list[Settled]:
    """For each condition a point where it alone fails; else z3 is asked whether it follows."""
    result = list(settled)
    if sum(c.open for c in result) < 2:
        return result
    # Those at which a root crosses the boundary go last: they are what the engineer asks about.
    order = sorted(_weakest_first(result), key=lambda i: any(m.event for m in result[i].members))
    for place in order:
        others = [c.element for i, c in enumerate(result) if c.open and i != place]
        target = result[place]
        if not others or alone(subject, target.element, others) is not None:
            continue
        reason = follows(subject, target.element, others)
        if reason:
            result[place] = replace(target, status="implied", because=reason)
        else:
            unsure = "whether it follows from the others was not settled"
            result[place] = replace(target, because=f"{target.because}; {unsure}")
    return result


def contradiction(subject: Subject, settled: Sequence[Settled]) -> str:
    """Why no point of the box meets two of the conditions together, "" if that was not found."""
    open_ones = [c for c in settled if c.open]
    for i, first in enumerate(open_ones):
        for second in open_ones[i + 1 :]:
            if _outweighed(subject, -first.element, second.element):
                one, two = (element_text(subject.ring, c.element) for c in (first, second))
                return f"{one} > 0 and {two} > 0 exclude each other"
    return ""


def _weakest_first(settled: Sequence[Settled]) -> list[int]:
    """Open conditions, coefficients before determinants: the latter usually bind."""
    order = [i for i, c in enumerate(settled) if c.open]
    return sorted(order, key=lambda i: (settled[i].members[0].kind != "coefficient", i))


def _halved(settled: list[Settled], number: int, subject: Subject) -> list[Settled]:
    """Lienard and Chipart: of the coefficients of one factor every second one is enough."""
    part = subject.parts[number]
    if part.symmetric:
        return settled
    degree = part.image.degree
    if any(c.status == "never" for c in settled for m in c.members if m.part == number):
        return settled
    kept = {0, degree} | ({degree - 1} if degree % 2 == 0 else set())
    halves = [kept | set(range(start, degree + 1, 2)) for start in (0, 1)]

    def cost(half: set[int]) -> tuple[int, int]:
        members = [
            c
            for c in settled
            for m in c.members
            if m.part == number and m.kind == "coefficient" and m.index in half and c.open
        ]
        return len(members), sum(len(c.element) for c in members)

    half = min(halves, key=cost)
    result = []
    for condition in settled:
        dispensable = condition.open and all(
            m.part == number and m.kind == "coefficient" and m.index not in half for m in condition.members
        )
        if dispensable:
            because = "follows from the other coefficients and the determinants (Liénard–Chipart)"
            condition = replace(condition, status="implied", because=because)
        result.append(condition)
    return result


def _follows(subject: Subject, target: Element, others: Sequence[Settled]) -> str:
    ring = subject.ring
    for other in others:
        if _outweighed(subject, target, other.element):
            return f"follows from {element_text(ring, other.element)} > 0"
    for i, first in enumerate(others):
        for second in others[i + 1 :]:
            if len(first.element) * len(second.element) > LARGEST:
                continue
            product = ring.reduce(first.element * second.element)
            if product and not product % target and radical(ring, product, subject.nonzero).element == target:
                return (
                    f"is the product of {element_text(ring, first.element)} and "
                    f"{element_text(ring, second.element)}"
                )
    return _single_letter(subject, target, [other.element for other in others])


def _outweighed(subject: Subject, target: Element, given: Element) -> bool:
    """Whether m*target = u*given + v with positive m, u and a v that is never negative."""
    ring = subject.ring
    if len(target) * len(given) > LARGEST:
        return False
    wanting, offered = _unsure_terms(ring, target), _unsure_terms(ring, given)
    if len(wanting) > MATCHED or len(offered) > MATCHED:
        return False
    for below, size in wanting:
        for above, amount in offered:
            if (size > 0) != (amount > 0):
                continue
            common = [min(a, b) for a, b in zip(below, above, strict=True)]
            m = _monomial(ring, above, common, abs(amount))
            u = _monomial(ring, below, common, abs(size))
            if pattern_sign(ring, m) is not Sign.POSITIVE or pattern_sign(ring, u) is not Sign.POSITIVE:
                continue
            rest = ring.reduce(m * target - u * given)
            if not rest or factored_sign(ring, rest).is_nonnegative:
                return True
    return False


def _monomial(ring: Ring, exponents: Sequence[int], less: Sequence[int], value: int) -> Element:
    return ring.context.from_dict({tuple(e - c for e, c in zip(exponents, less, strict=True)): value})


def _unsure_terms(ring: Ring, element: Element) -> list[tuple[tuple[int, ...], int]]:
    """Terms that may be negative."""
    result = []
    for exponents, value in element.terms():
        sign = Sign.POSITIVE if int(value) > 0 else Sign.NEGATIVE
        for place, exponent in enumerate(exponents):
            if exponent:
                sign = sign * ring.signs[place] ** int(exponent)
        if not sign.is_nonnegative:
            result.append((tuple(map(int, exponents)), int(value)))
    return result


def _single_letter(subject: Subject, target: Element, given: Sequence[Element]) -> str:
    """Exact for one letter: no cell of the interval meets the others but not this one."""
    ring = subject.ring
    letters = letters_in(ring, [target])
    if len(letters) != 1 or ring.used([target]) != set(letters):
        return ""
    letter = letters[0]
    usable = [g for g in given if ring.used([g]) == {letter}]
    if not usable:
        return ""
    interval = ring.box.intervals.get(letter, Interval())
    found, roots = cells(ring, [target, *usable], letter, interval)
    for cell in found:
        at = {letter: cell.sample}
        if all(ring.value(g, at) > 0 for g in usable) and ring.value(target, at) <= 0:
            return ""
    # A root at a closed end of the interval has no cell beyond it.
    ends = [{letter: root.exact} for root in roots if root.exact is not None]
    if any(ring.value(target, at) <= 0 and all(ring.value(g, at) > 0 for g in usable) for at in ends):
        return ""
    # An even root of the target between two cells that meet the others is a point where only it fails.
    mine = {root.factor for root in real_roots(ring, [target], letter)}
    theirs = {root.factor for root in real_roots(ring, usable, letter)}
    for left, right in pairwise(found):
        root = left.right
        if root is None or root.factor not in mine or root.factor in theirs:
            continue
        if all(ring.value(g, {letter: cell.sample}) > 0 for g in usable for cell in (left, right)):
            return ""
    listed = " and ".join(f"{element_text(ring, g)} > 0" for g in usable)
    return f"follows from {listed} by the roots in {letter}"

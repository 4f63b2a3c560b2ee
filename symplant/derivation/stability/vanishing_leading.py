"""Where a leading coefficient vanishes the degree drops: a polynomial, and a case, of its own."""

from __future__ import annotations

from fractions import Fraction

from symplant.algebra.decide_search import letters_in
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.text import element_text
from symplant.derivation.stability.candidates import leading
from symplant.derivation.stability.subject import Subject, restricted

__all__ = ["content_notes", "lower_subject", "vanishing_note"]


def vanishing_note(subject: Subject) -> str:
    """A sentence if the leading coefficient can vanish in the box, else ""."""
    whole = subject.polynomial.primitive()
    vanishing = leading(subject, whole).vanishing
    if vanishing is None or not subject.parts:
        return ""
    text = element_text(subject.ring, vanishing)
    return f"where {text} = 0 the degree drops below {whole.degree}: a case of its own"


def lower_subject(subject: Subject) -> tuple[Element, Subject] | None:
    """What vanishes, and the polynomial without its leading term; None if nothing is left or vanishes.

    Where the equation fixes a letter to a number, the number is put in.
    """
    ring = subject.ring
    whole = subject.polynomial.primitive()
    vanishing = leading(subject, whole).vanishing
    if vanishing is None or not subject.parts:
        return None
    s = ring.gen(ring.variable)
    rest = Polynomial.of(ring, whole.element - whole.leading * s**whole.degree)
    if rest.is_zero:
        return None
    without = Subject(rest, subject.discrete, subject.nonzero, subject.nominal, effort=subject.effort)
    lower = _on_zero(without, vanishing)
    return None if lower.polynomial.is_zero else (vanishing, lower)


def _on_zero(subject: Subject, vanishing: Element) -> Subject:
    """Put in the value of a letter where the vanishing element fixes it to a number."""
    ring = subject.ring
    used = letters_in(ring, [vanishing])
    if len(used) != 1 or ring.used([vanishing]) != set(used):
        return subject
    parts = ring.coefficients(vanishing, used[0])
    if len(parts) != 2:
        return subject
    low, high = (int(c.leading_coefficient()) if c else 0 for c in parts)
    return restricted(subject, {used[0]: Fraction(-low, high)})


def content_notes(subject: Subject) -> list[str]:
    """A sentence if a factor free of the variable can vanish in the box."""
    ring = subject.ring
    content = subject.content
    if content.is_constant() or factored_sign(ring, content).is_nonzero:
        return []
    open_factors = [
        factor
        for factor, _ in irreducible(content)[1]
        if not factored_sign(ring, factor).is_nonzero
        and not any(factor in (known, -known) for known in subject.nonzero)
    ]
    if not open_factors:
        return []
    text = " * ".join(f"({element_text(ring, f)})" for f in open_factors)
    return [f"where {text} = 0 the polynomial vanishes identically and says nothing"]

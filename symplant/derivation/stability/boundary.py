"""Roots that lie on the boundary, or symmetric to it, whatever the letters are: marginal plants.

An even polynomial h has only simple roots on the imaginary axis, and none elsewhere, exactly when h + h'
has all its roots in the open left half plane (Hermite and Biehler: the roots of the two parts
interlace on the axis).  A multiple root is harmless only if it has as many eigenvectors as its
multiplicity, which the adjugate of the pencil tells: f^(m-1) divides it entry by entry.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal

from symplant.algebra.bilinear import bilinear
from symplant.algebra.determinant import adjugate
from symplant.algebra.division import divides
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.routh import root_counts
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.substitution import substituted
from symplant.algebra.verdict import Verdict
from symplant.derivation.stability.candidates import candidates
from symplant.derivation.stability.finding import Point
from symplant.derivation.stability.implication import irredundant
from symplant.derivation.stability.settling import Settled, settle_all
from symplant.derivation.stability.subject import Part, Subject

__all__ = ["axis_verdict", "marginal_conditions", "semisimple", "simple_image", "symmetric_sentence"]


def symmetric_sentence(subject: Subject, part: Part) -> str:
    """Why a part is never inside the boundary."""
    if part.image.degree < part.polynomial.degree:
        return f"the factor {part.text} has its root at z = -1 whatever the letters are"
    if part.polynomial.degree == 1:
        where = "z = 1" if subject.discrete else "the origin"
        return f"the factor {part.text} has its root at {where} whatever the letters are"
    mirror = "unit circle" if subject.discrete else "imaginary axis"
    return f"the roots of the factor {part.text} lie symmetric to the {mirror} whatever the letters are"


def marginal_conditions(subject: Subject, stage: Callable[[str], None]) -> list[Settled]:
    """Conditions for the symmetric parts to have only simple roots, all on the boundary."""
    ring = subject.ring
    images = [(i, part.image) for i, part in enumerate(subject.parts) if part.symmetric]
    images = [(i, image) for i, image in images if image.degree > 0]
    if sum(image.degree for _, image in images) < 2:
        return []
    # All of them at once: roots of different factors that meet are no longer simple.
    product = ring.one
    for _, image in images:
        product = ring.reduce(product * image.element)
    together = Polynomial.of(ring, product)
    tested = simple_image(together)
    number = images[0][0]
    suffix = " of the symmetric part plus its derivative"
    found = candidates(subject, subject.parts[number], number, tested, suffix)
    if len(images) > 1:
        # The leading coefficient is that of the product, so signs must be taken from it.
        whole = Subject(together, False, subject.nonzero, subject.nominal, effort=subject.effort)
        part = Part(together, 1, tested, False)
        found = candidates(whole, part, number, tested, suffix)
    return irredundant(subject, settle_all(subject, found, stage)[0])


def simple_image(image: Polynomial) -> Polynomial:
    """The image plus its derivative: stable where the image has only simple roots, all on the axis.

    >>> from symplant.algebra.ring import Ring
    >>> ring = Ring("s", ("k",))
    >>> simple_image(Polynomial.of(ring, ring.gen("s") ** 2 + ring.gen("k"))).coefficients
    (k, 2, 1)
    """
    ring = image.ring
    s, total = ring.gen(ring.variable), image.element
    for power, coefficient in enumerate(image.coefficients[1:], 1):
        total = total + power * coefficient * s ** (power - 1)
    return Polynomial.of(ring, total)


def axis_verdict(subject: Subject, point: Point) -> Literal["marginal", "unstable"] | None:
    """At a rational point with roots on the boundary and none beyond: are those roots harmless?

    None where a multiple root is not settled.  No functions of letters (ValueError).
    """
    if subject.functions:
        raise ValueError("exact only for rational values")
    ring, total, lost = subject.ring, subject.ring.one, 0
    multiple: list[Part] = []
    for part in subject.parts:
        (element,) = substituted(ring, [part.polynomial.element], point)
        at = Polynomial.of(ring, element)
        image = bilinear(at) if subject.discrete else at
        total = total * image.element
        lost += at.degree - image.degree
        if part.multiplicity > 1 and (at.degree > image.degree or _on_axis(image).degree > 0):
            multiple.append(part)
    common = _on_axis(Polynomial.of(ring, total))
    values = [int(c.leading_coefficient()) if c else 0 for c in simple_image(common).coefficients]
    simple = lost < 2 and root_counts(values).left == common.degree
    if not simple:
        return "unstable" if subject.pencil is None else None
    verdicts = {semisimple(subject, part) for part in multiple}
    if Verdict.REFUTED in verdicts:
        return "unstable"
    return None if Verdict.UNDECIDED in verdicts else "marginal"


def _on_axis(image: Polynomial) -> Polynomial:
    """The common factor of the even and the odd part: all roots that have their mirror image."""
    ring, s = image.ring, image.ring.gen(image.ring.variable)
    halves = [ring.zero, ring.zero]
    for power, coefficient in enumerate(image.coefficients):
        halves[power % 2] = halves[power % 2] + coefficient * s**power
    return Polynomial.of(ring, halves[0]).gcd(Polynomial.of(ring, halves[1]))


def semisimple(subject: Subject, part: Part) -> Verdict:
    """Whether the multiple roots of a part have a full set of eigenvectors, for all letters.

    Refuted means: for no letters in the box.  Without a pencil a multiple root counts as defective.
    """
    if part.multiplicity == 1:
        return Verdict.PROVED
    if subject.pencil is None:
        return Verdict.REFUTED
    ring = subject.ring
    _, adjoint = adjugate(subject.pencil.dynamics, ring.one)
    power = Polynomial.of(ring, part.polynomial.element ** (part.multiplicity - 1))
    entries = [Polynomial.of(ring, entry) for row in adjoint for entry in row]
    left_over = [entry for entry in entries if not divides(power, entry)]
    if not left_over:
        return Verdict.PROVED
    if any(_divides_nowhere(power, entry) for entry in left_over):
        return Verdict.REFUTED
    return Verdict.UNDECIDED


def _divides_nowhere(power: Polynomial, entry: Polynomial) -> bool:
    """Whether the remainder of the entry has a coefficient that is nonzero in the whole box."""
    ring = power.ring
    rest, s = entry, ring.gen(ring.variable)
    while rest.degree >= power.degree:
        shift = s ** (rest.degree - power.degree)
        rest = Polynomial.of(ring, rest.element * power.leading - power.element * rest.leading * shift)
    # The remainder was multiplied by powers of the leading coefficient, which is not zero either.
    return any(factored_sign(ring, c).is_nonzero for c in rest.coefficients if c)

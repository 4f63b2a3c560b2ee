"""The polynomial under test, split into the factors that can be tested one by one."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property

from symplant.algebra.bilinear import bilinear
from symplant.algebra.decide_search import letters_in
from symplant.algebra.determinant import determinant
from symplant.algebra.division import factors_in_variable
from symplant.algebra.effort import NORMAL, Effort
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.algebra.substitution import substituted
from symplant.algebra.text import polynomial_text
from symplant.derivation.pencil import Pencil
from symplant.errors import Fault, InputError

__all__ = ["Part", "Subject", "has_symmetric_roots", "restricted", "subject_of"]

#: Above this number of terms a polynomial is tested as a whole.
LARGEST_SPLIT = 3000


@dataclass(frozen=True)
class Part:
    """A factor of the polynomial, with its image under the bilinear map in discrete time.

    `symmetric`: whatever the letters are, its roots lie symmetric to the stability boundary.
    """

    polynomial: Polynomial
    multiplicity: int
    image: Polynomial
    symmetric: bool

    @property
    def text(self) -> str:
        """The factor as it is named in sentences."""
        text = polynomial_text(self.polynomial.ring, self.polynomial.element)
        return text if len(text) <= 60 else f"of degree {self.polynomial.degree}"


@dataclass(frozen=True)
class Subject:
    """A polynomial in s, or in z if `discrete`, and what is known about its letters.

    `nonzero` are irreducible elements assumed not to vanish, `nominal` steers searches, `pencil`
    serves to tell whether a multiple root on the boundary has a full set of eigenvectors, `effort`
    bounds the work on each question.
    """

    polynomial: Polynomial
    discrete: bool
    nonzero: tuple[Element, ...] = ()
    nominal: Mapping[str, Fraction] | None = None
    pencil: Pencil | None = None
    effort: Effort = NORMAL

    @property
    def ring(self) -> Ring:
        """The ring of the polynomial."""
        return self.polynomial.ring

    @cached_property
    def content(self) -> Element:
        """The factor free of the variable; where it vanishes the polynomial says nothing."""
        return self.polynomial.content()

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        """The factors that contain the variable."""
        if len(self.polynomial.element) > LARGEST_SPLIT:
            found = [(self.polynomial.primitive(), 1)]
        else:
            found = factors_in_variable(self.polynomial)
        result = []
        for factor, multiplicity in found:
            image = bilinear(factor) if self.discrete else factor
            result.append(Part(factor, multiplicity, image, has_symmetric_roots(factor, image)))
        return tuple(result)

    @cached_property
    def letters(self) -> tuple[str, ...]:
        """The letters that the polynomial depends on."""
        return tuple(letters_in(self.ring, [part.polynomial.element for part in self.parts]))

    @cached_property
    def functions(self) -> bool:
        """Whether functions of letters occur."""
        used = self.ring.used([part.polynomial.element for part in self.parts])
        return bool(used - set(self.ring.letters) - {self.ring.variable})


def subject_of(pencil: Pencil, effort: Effort = NORMAL) -> Subject:
    """The characteristic polynomial of a pencil as the subject.

    Errors: InputError where it vanishes identically.
    """
    ring = pencil.ring
    element = ring.reduce(determinant(pencil.dynamics, ring.one))
    if not element:
        reason = "the characteristic polynomial vanishes identically for the values given"
        raise InputError([Fault("matrices", reason, "the equations do not determine the states")])
    polynomial = Polynomial(ring, element)
    return Subject(polynomial, pencil.model.discrete, pencil.divisors, pencil.model.nominal, pencil, effort)


def restricted(subject: Subject, values: Mapping[str, Fraction]) -> Subject:
    """The subject with letters replaced; functions of these letters are beyond it (InputError).

    The pencil is left out, because it still has the letters.
    """
    ring = subject.ring
    inside = {
        letter
        for key in ring.used([subject.polynomial.element]) - set(ring.letters) - {ring.variable}
        for letter in letters_in(ring, [ring.gen(key)])
    }
    faults = [
        Fault("fixed", f"'{name}' stands inside a function", "fix it in the plant instead")
        for name in values
        if name in inside
    ]
    if faults:
        raise InputError(faults)
    element, *nonzero = substituted(ring, [subject.polynomial.element, *subject.nonzero], values)
    return Subject(
        Polynomial.of(ring, element),
        subject.discrete,
        tuple(e for e in nonzero if not e.is_constant()),
        subject.nominal,
        effort=subject.effort,
    )


def has_symmetric_roots(factor: Polynomial, image: Polynomial) -> bool:
    """Whether the image is even or odd, or the factor has the root z = -1 (at infinity in the image)."""
    parities = {power % 2 for power, c in enumerate(image.coefficients) if c}
    return len(parities) == 1 and factor.degree > 0 and (image.degree > 0 or image.degree < factor.degree)

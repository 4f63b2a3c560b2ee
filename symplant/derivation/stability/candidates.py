"""The conditions to be settled: coefficients and every second Hurwitz determinant.

A polynomial of degree n with a_n > 0 has all its roots in the open left half plane exactly when all
its coefficients and H_{n-1}, H_{n-3}, ... are positive; of the coefficients a_0 and either those of
even or those of odd powers suffice (A. Lienard and M. H. Chipart, J. Math. Pures Appl. 10 (1914)
291-346; F. R. Gantmacher, Theory of Matrices, vol. 2, ch. XV, sec. 13).  The half with H_{n-1} is taken: the
other one has H_n = a_0 H_{n-1} in it, which is never simpler.

A leading coefficient of unknown sign multiplies every coefficient and the determinants of odd order:
the conditions are then right for either sign.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from symplant.algebra.box import Sign
from symplant.algebra.decide_factors import Radical, radical
from symplant.algebra.hurwitz import hurwitz_minor
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.sign_pattern import pattern_sign
from symplant.derivation.stability.subject import Part, Subject

__all__ = ["Candidate", "Leading", "candidates", "determinant_orders", "leading"]


@dataclass(frozen=True)
class Candidate:
    """One inequality `make()` > 0, its name, and what happens where it is met with equality.

    `index` is the power of a coefficient or the order of a determinant; `part` the number of the
    factor that it belongs to; `event` is "origin", "pair", "minus one" or "".
    """

    kind: str
    index: int
    part: int
    name: str
    event: str
    make: Callable[[], Element]

    @property
    def stage(self) -> str:
        """How the work on it is called."""
        return f"the sign of the {self.name}"


@dataclass(frozen=True)
class Leading:
    """What is known of the coefficient that a polynomial begins with.

    `sign` is 1 or -1 where known, else 0 and `factor` multiplies the conditions; `vanishing` is the
    element on whose zeros the degree drops, None if there are none in the box.
    """

    sign: int
    factor: Element
    vanishing: Element | None


def leading(subject: Subject, polynomial: Polynomial) -> Leading:
    """Judge the leading coefficient of a factor, as a polynomial in s or z."""
    ring = subject.ring
    kernel: Radical = radical(ring, polynomial.leading, subject.nonzero)
    if kernel.is_settled:
        return Leading(kernel.sign, ring.constant(kernel.sign), None)
    zeros = ring.one
    for factor, _ in kernel.factors:
        if not any(factor in (known, -known) for known in subject.nonzero):
            zeros = zeros * factor
    vanishing = None if zeros.is_one() else zeros
    known = pattern_sign(ring, kernel.element)
    if known in (Sign.NONNEGATIVE, Sign.NONPOSITIVE):
        sign = 1 if known is Sign.NONNEGATIVE else -1
        return Leading(sign, ring.constant(sign), vanishing)
    return Leading(0, kernel.element, vanishing)


def determinant_orders(degree: int) -> list[int]:
    """Orders of the Hurwitz determinants that are needed besides the coefficients.

    >>> determinant_orders(6), determinant_orders(2)
    ([5, 3], [])
    """
    return list(range(degree - 1, 1, -2))


def candidates(
    subject: Subject, part: Part, number: int, image: Polynomial | None = None, suffix: str | None = None
) -> list[Candidate]:
    """The conditions for one factor (or for `image` in its place), coefficients by rising power first."""
    ring = subject.ring
    image = part.image if image is None else image
    degree, first = image.degree, leading(subject, part.polynomial)
    if suffix is None:
        suffix = f" of the factor {part.text}" if len(subject.parts) > 1 else ""
    result = []
    for power, coefficient in enumerate(image.coefficients):
        if power == degree and not subject.discrete:
            continue
        result.append(
            Candidate(
                "coefficient",
                power,
                number,
                _coefficient_name(subject, power, degree) + suffix,
                _event(subject, "coefficient", power, degree),
                lambda c=coefficient: ring.reduce(c * first.factor),  # type: ignore[misc]
            )
        )
    for order in determinant_orders(degree):

        def make(order: int = order) -> Element:
            minor = hurwitz_minor(ring, image.coefficients, order)
            return ring.reduce(minor * first.factor) if order % 2 else minor

        name = f"Hurwitz determinant {order}{suffix}"
        result.append(
            Candidate("determinant", order, number, name, _event(subject, "determinant", order, degree), make)
        )
    return result


def _coefficient_name(subject: Subject, power: int, degree: int) -> str:
    variable = "w" if subject.discrete else subject.ring.variable
    if subject.discrete and power == 0:
        return "value at z = 1"
    if subject.discrete and power == degree:
        return "value at z = -1" if degree % 2 == 0 else "minus the value at z = -1"
    return f"coefficient of {variable}^{power}"


def _event(subject: Subject, kind: str, index: int, degree: int) -> str:
    if kind == "coefficient" and index == 0:
        return "origin"
    if kind == "coefficient" and index == degree:
        return "minus one"
    # For degree 2 the last determinant but one is the coefficient of the first power itself.
    if degree >= 2 and index == degree - 1 and (kind == "determinant" or degree == 2):
        return "pair"
    return ""

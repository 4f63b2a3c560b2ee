"""Margins as stability of another polynomial: poles left of a line, within a circle, within a sector.

Left of Re s = -sigma: p(s - sigma) is stable.  Within |z| = rho: p(rho z) is.  Damping ratio above zeta (all
poles within the sector around the negative real axis): with cos(phi) = c and zeta = sin(phi), the real
polynomial p(s e^(j phi)) p(s e^(-j phi)) is stable; its coefficients hold cos((i - k) phi), and with
s = c w only even powers of c remain, which are polynomials in zeta^2.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from math import lcm

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.derivation.stability.finding import Crossing, StabilityFinding
from symplant.derivation.stability.subject import Subject
from symplant.errors import Fault, InputError

__all__ = ["Margins"]


@dataclass(frozen=True)
class Margins:
    """What is asked of the poles beyond stability; at most one of the two.

    `decay` is sigma > 0 in continuous time, and in discrete time the radius rho with 0 < rho < 1; `damping`
    is zeta with 0 < zeta < 1, in continuous time only.
    """

    decay: Fraction | None = None
    damping: Fraction | None = None

    def __bool__(self) -> bool:
        return self.decay is not None or self.damping is not None

    def check(self, discrete: bool) -> None:
        """InputError with every fault of the values."""
        faults = []
        if self.decay is not None and self.decay <= 0:
            faults.append(Fault("decay", "must be above zero", "leave it out to ask for stability alone"))
        if self.decay is not None and discrete and self.decay >= 1:
            faults.append(Fault("decay", "is a radius in discrete time", "give a value between 0 and 1"))
        if self.damping is not None and not 0 < self.damping < 1:
            faults.append(Fault("damping", "is a damping ratio", "give a value between 0 and 1"))
        if self.damping is not None and discrete:
            faults.append(Fault("damping", "is for continuous time", "ask for a radius with decay"))
        if self.decay is not None and self.damping is not None:
            faults.append(Fault("damping", "one margin at a time", "ask for decay and damping one by one"))
        if faults:
            raise InputError(faults)

    def words(self, discrete: bool) -> str:
        """What is asked, as a sentence."""
        if self.damping is not None:
            return f"damping ratio of every pole above {self.damping}"
        if discrete:
            return f"every pole within the circle |z| = {self.decay}"
        return f"every pole left of Re s = -{self.decay}"

    def applied(self, subject: Subject) -> Subject:
        """The subject whose stability is what is asked; multiple roots on the boundary are not judged."""
        if not self:
            return subject
        polynomial = subject.polynomial
        if self.damping is not None:
            element = _sector(polynomial, self.damping)
        elif subject.discrete:
            element = _circle(polynomial, self.decay or Fraction(1))
        else:
            element = _line(polynomial, self.decay or Fraction(0))
        moved = Polynomial.of(subject.ring, subject.ring.reduce(element))
        return replace(subject, polynomial=moved, pencil=None)

    def told(self, finding: StabilityFinding) -> StabilityFinding:
        """The finding with what was asked; frequencies on a sector are left out."""
        if not self:
            return finding
        words = self.words(finding.discrete)
        found = finding.crossings
        if self.damping is not None:
            found = tuple(Crossing(c.element, c.at, None, c.detail) for c in found)
        return replace(finding, asked=words, crossings=found)


def _line(polynomial: Polynomial, sigma: Fraction) -> Element:
    ring, n = polynomial.ring, polynomial.degree
    p, q = sigma.numerator, sigma.denominator
    moved, total = q * ring.gen(ring.variable) - p, ring.zero
    for power, coefficient in enumerate(polynomial.coefficients):
        total = total + coefficient * moved**power * q ** (n - power)
    return total


def _circle(polynomial: Polynomial, rho: Fraction) -> Element:
    ring, n = polynomial.ring, polynomial.degree
    p, q = rho.numerator, rho.denominator
    return ring.from_coefficients(
        [c * (p**power * q ** (n - power)) for power, c in enumerate(polynomial.coefficients)]
    )


def _sector(polynomial: Polynomial, zeta: Fraction) -> Element:
    ring, a = polynomial.ring, polynomial.coefficients
    square = 1 - zeta**2  # c^2
    values = {
        (i, k): _even(abs(i - k), square) * square ** ((i + k + (i - k) % 2) // 2)
        for i in range(len(a))
        for k in range(len(a))
    }
    scale = lcm(*(value.denominator for value in values.values()))
    parts = [ring.zero] * (2 * len(a) - 1)
    for (i, k), value in values.items():
        parts[i + k] = parts[i + k] + int(value * scale) * a[i] * a[k]
    return ring.from_coefficients(parts)


def _even(n: int, square: Fraction) -> Fraction:
    """Chebyshev's T_n(c), divided by c if n is odd, from the square of c."""
    before, now = Fraction(1), Fraction(1)  # T_0, and T_1 over c
    if n == 0:
        return before
    for k in range(2, n + 1):
        before, now = now, 2 * (square if k % 2 == 0 else 1) * now - before
    return now

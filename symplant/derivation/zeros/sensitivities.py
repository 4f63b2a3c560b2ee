"""How fast the roots move with a letter: dz/dp by implicit differentiation, and (p/z) dz/dp."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, TypeAlias

from flint import acb, acb_poly

from symplant.algebra.box import Sign
from symplant.algebra.decide import decide_positive
from symplant.algebra.decide_search import letters_in
from symplant.algebra.division import factors_in_variable
from symplant.algebra.enclosure import ball_value, generator_balls, working_precision
from symplant.algebra.expression import Node
from symplant.algebra.letter_derivative import LetterDerivative
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.vanishing import Surroundings

if TYPE_CHECKING:
    from flint import acb as _acb

__all__ = ["Motion", "NominalSensitivity", "Sensitivity", "nominal_sensitivities", "sensitivities"]

ComplexBall: TypeAlias = "_acb"
PRECISION = 512
#: Radius to which the roots are refined, for those of ordinary size.
TOLERANCE = 1e-40


@dataclass(frozen=True)
class Motion:
    """Whether a real root moves to the right or left everywhere in the box: the sign of its slope.

    `of` is "zero", or "mean of the pair" for a factor of degree 2: half the sum of its two roots, which
    is their common real part where they are complex.
    """

    of: str
    slope: Ratio
    sign: Sign
    verdict: Verdict
    reason: str


@dataclass(frozen=True)
class Sensitivity:
    """One irreducible factor: `derivative` is dz/dp as a ratio in z (the variable) and the letters.

    It holds at simple roots z of `factor`; `relative` is (p/z) dz/dp.  Both are zero where the factor
    does not contain the letter.
    """

    factor: Polynomial
    multiplicity: int
    derivative: Ratio
    relative: Ratio
    motion: Motion | None


@dataclass(frozen=True)
class NominalSensitivity:
    """A root at the nominal point with its sensitivities, as complex balls; None where not finite."""

    zero: ComplexBall
    derivative: ComplexBall | None
    relative: ComplexBall | None


def sensitivities(
    zeros: Polynomial,
    letter: str,
    around: Surroundings,
    convert: Callable[[Node], Ratio] | None = None,
) -> tuple[Sensitivity, ...]:
    """The sensitivity of the roots of every factor.

    >>> from symplant.algebra.box import Box
    >>> ring = Ring("s", ("k", "c"))
    >>> s, k, c = (ring.gen(x) for x in "skc")
    >>> (found,) = sensitivities(Polynomial.of(ring, c * s + k), "k", Surroundings(Box(), {}))
    >>> found.derivative.numerator, found.derivative.denominator
    (-1, c)
    """
    ring = zeros.ring
    slope = LetterDerivative(ring, letter, convert)
    result = []
    for factor, multiplicity in factors_in_variable(zeros):
        along = slope.element(factor.element)
        across = Ratio.of(ring, ring.reduce(factor.element.derivative(ring.variable)))
        derivative = -(along / across)
        relative = derivative * Ratio.of(ring, ring.gen(letter), ring.gen(ring.variable))
        result.append(
            Sensitivity(factor, multiplicity, derivative, relative, _motion(factor, slope, along, around))
        )
    return tuple(result)


def nominal_sensitivities(
    sensitivity: Sensitivity, nominal: Mapping[str, Fraction]
) -> tuple[tuple[NominalSensitivity, ...], str]:
    """The roots of a factor at the nominal point with their sensitivities, and why there are none."""
    ring, factor = sensitivity.factor.ring, sensitivity.factor
    parts = (sensitivity.derivative, sensitivity.relative)
    elements = [factor.element, *(e for r in parts for e in (r.numerator, r.denominator))]
    missing = [name for name in letters_in(ring, elements) if name not in nominal]
    if missing:
        return (), f"no nominal value for {', '.join(missing)}"
    with working_precision(PRECISION):
        used = ring.used(elements) - {ring.variable}
        balls = generator_balls(ring, nominal, used)
        values = [ball_value(ring, c, balls) for c in factor.coefficients]
        try:
            roots = acb_poly(values).roots(TOLERANCE)
        except ValueError:
            return (), "the zeros at the nominal point could not be told apart: two of them coincide there"
        found = []
        for root in roots:
            at = [_at(ring, ratio, balls, root) for ratio in parts]
            found.append(NominalSensitivity(root, at[0], at[1]))
    return tuple(found), ""


def _at(ring: Ring, ratio: Ratio, balls: Mapping[str, object], root: ComplexBall) -> ComplexBall | None:
    top, bottom = (
        _polynomial_value(ring, part, balls, root) for part in (ratio.numerator, ratio.denominator)
    )
    value = top / bottom
    return value if value.is_finite() else None


def _polynomial_value(
    ring: Ring, element: Element, balls: Mapping[str, object], root: ComplexBall
) -> ComplexBall:
    total = acb(0)
    for coefficient in reversed(ring.coefficients(element)):
        total = total * root + acb(ball_value(ring, coefficient, balls))  # type: ignore[arg-type]
    return total


def _motion(factor: Polynomial, slope: LetterDerivative, along: Ratio, around: Surroundings) -> Motion | None:
    ring = factor.ring
    if factor.degree > 2 or not along:
        return None
    n = factor.degree
    centre = Ratio.of(ring, -factor.coefficients[n - 1], ring.constant(n) * factor.leading)
    rate = slope.ratio(centre)
    of = "zero" if n == 1 else "mean of the pair"
    if not rate:
        return Motion(of, rate, Sign.ZERO, Verdict.PROVED, "its derivative is identically zero")
    product = rate.numerator * rate.denominator
    plain = factored_sign(ring, product)
    if plain in (Sign.NONNEGATIVE, Sign.NONPOSITIVE):
        return Motion(of, rate, plain, Verdict.PROVED, "the signs of its factors")
    reasons = []
    for sign, direction in ((1, Sign.POSITIVE), (-1, Sign.NEGATIVE)):
        decision = decide_positive(
            ring, sign * product, around.box, nominal=around.nominal, nonzero=around.nonzero, effort=200
        )
        if decision.verdict is Verdict.PROVED:
            return Motion(of, rate, direction, Verdict.PROVED, decision.because)
        reasons.append(decision)
    if all(decision.verdict is Verdict.REFUTED for decision in reasons):
        return Motion(of, rate, Sign.REAL, Verdict.REFUTED, "; ".join(d.because for d in reasons))
    return Motion(of, rate, Sign.REAL, Verdict.UNDECIDED, reasons[0].because)

"""Common factors of numerators and denominators: that they divide both, and that nothing is missing."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import Any

from symplant.algebra.verdict import Check, Verdict
from symplant.checking.comparison import Row, compared
from symplant.checking.draws import Draws
from symplant.checking.formula import Formulas
from symplant.checking.point import Point, named
from symplant.checking.residues import PRIME, gcd_degree, generator_residues
from symplant.checking.termwise import horner
from symplant.derivation.derive import Channel

__all__ = ["check_common_factor", "remainder"]

_DIVISION = "division of polynomials in {s} with numbers put in"
_EUCLID = f"Euclid's algorithm modulo the prime {PRIME}"
_RESIDUE_POINTS = 3


def check_common_factor(channel: Channel, formulas: Formulas, points: Sequence[Point]) -> Check:
    """The common factor of a channel: division leaves no remainder at the points, and modulo a prime the
    greatest common divisor has no higher degree (it never has a lower one than that over the letters).

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.arguments import model_from_arguments
    >>> derivation = derive(model_from_arguments([["-a", 0], [0, "-b"]], [[1], [1]], [[1, 0]]))
    >>> point = Point({"a": Fraction(2), "b": Fraction(3), "s": Fraction(5)})
    >>> check = check_common_factor(derivation.channels[0], Formulas(derivation.ring), [point])
    >>> check.what, check.verdict.value
    ('common factor y1/u1', 'proved')
    """
    ring, what = formulas.ring, f"common factor {channel.name}"
    division = _DIVISION.format(s=ring.variable)
    parts = [formulas.of(p.element) for p in (channel.common_factor, channel.numerator, channel.denominator)]
    degree = channel.common_factor.degree
    used: list[Point] = []
    if degree > 0:
        rows: list[Row] = []
        for point in points:
            factor, *whole = (part.terms.coefficients(point) for part in parts)
            if _may_be_zero(factor[-1]):
                continue
            used.append(point)
            # The factor's own text is checked against the terms that are divided by.
            at = point.scalars[ring.variable]
            rows.append(Row(what, point, horner(factor, at), parts[0].value(point)))
            for name, dividend in zip(("numerator", "denominator"), whole, strict=True):
                rest = remainder(dividend, factor)
                if any(not _may_be_zero(value) for value in rest):
                    return Check(what, division, Verdict.REFUTED, f"at {point} it does not divide the {name}")
        check = compared(what, division, rows, ("terms", "text")) if rows else None
        if check is None:
            return Check(what, division, Verdict.UNDECIDED, "its first coefficient vanishes at every point")
        if check.verdict not in (Verdict.PROVED, Verdict.AGREES):
            return check
    found = _greatest_degree(channel, formulas)
    divides = f"divides both at {named(tuple(used))}" if used else "none claimed"
    verdict = Verdict.PROVED if all(point.exact for point in used) else Verdict.AGREES
    method = f"{division}; {_EUCLID}" if used else _EUCLID
    if found is None:
        detail = f"{divides}; whether there is more in common was not decided"
        return Check(what, method, verdict if used else Verdict.UNDECIDED, detail)
    if found > degree:
        shown = f"modulo the prime the two share a factor of degree {found} in {ring.variable}"
        return Check(what, method, Verdict.REFUTED, f"{shown}, not {degree}, at {_RESIDUE_POINTS} points")
    if found < degree:
        return Check(what, method, Verdict.UNDECIDED, f"{divides}; modulo the prime its degree is {found}")
    return Check(what, method, verdict, f"{divides}; nothing more in common")


def _greatest_degree(channel: Channel, formulas: Formulas) -> int | None:
    """The lowest degree of the greatest common divisor at points modulo the prime; None if there are none."""
    terms = [formulas.of(p.element).terms for p in (channel.numerator, channel.denominator)]
    draws = Draws(f"{channel.name} {channel.denominator.degree} {' '.join(formulas.ring.keys)}")
    lowest: int | None = None
    for _ in range(_RESIDUE_POINTS):
        residues = generator_residues(formulas.ring, draws)
        if residues is None:
            break
        top, bottom = (part.residues(residues, PRIME) for part in terms)
        if bottom[-1] == 0:  # degrees are bounds only where the first coefficient stays
            continue
        degree = gcd_degree(top, bottom)
        lowest = degree if lowest is None else min(lowest, degree)
        if lowest <= channel.common_factor.degree:
            break
    return lowest


def remainder(dividend: Sequence[Any], divisor: Sequence[Any]) -> list[Any]:
    """What division leaves, coefficients ascending; the last coefficient of the divisor is not zero.

    >>> remainder([Fraction(2), Fraction(3), Fraction(1)], [Fraction(1), Fraction(1)])
    [Fraction(0, 1)]
    """
    rest, size = list(dividend), len(divisor)
    while len(rest) >= size:
        factor, shift = rest[-1] / divisor[-1], len(rest) - size
        for i in range(size - 1):
            rest[shift + i] = rest[shift + i] - factor * divisor[i]
        rest.pop()
    return rest


def _may_be_zero(value: Any) -> bool:
    return not value if isinstance(value, Fraction) else bool(value.contains(0))

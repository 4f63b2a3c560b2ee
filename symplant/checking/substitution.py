"""The exact substitution: numbers into the matrices as given, against the results as printed."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

from symplant.algebra.ring import Element
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.common_factors import check_common_factor
from symplant.checking.comparison import Row, compared
from symplant.checking.evaluation import PRECISION, UndefinedValueError, ball_precision
from symplant.checking.formula import Formula, Formulas
from symplant.checking.point import Point, named
from symplant.checking.points import TRIES, choose_points
from symplant.checking.site import Site
from symplant.derivation.derive import Derivation

__all__ = ["STAGE", "Substitution", "check_by_substitution"]

#: The name of this work in progress reports.
STAGE = "the exact substitution"


@dataclass(frozen=True)
class Substitution:
    """The checks that were made, the numbers behind them, and the points that were used."""

    checks: tuple[Check, ...]
    rows: tuple[Row, ...]
    points: tuple[Point, ...]


@dataclass(frozen=True)
class _Quantity:
    """A derived polynomial, its multiplier, and how to have it from the numbers."""

    name: str
    formula: Formula
    multiplier: tuple[Formula, Formula]
    reference: Callable[[Site], Any]


def check_by_substitution(
    derivation: Derivation, stage: Callable[[str], None] = lambda name: None
) -> Substitution:
    """Check every derived polynomial at a few points by elimination on the matrices as they were given.

    Nothing is shared with the derivation but the entries: numbers go into the trees of the entries, the
    determinants are found by elimination over fractions, and the other side is the printed text, read
    again.  Where functions have no rational values, balls take the place of fractions and the verdict
    is `agrees`.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.arguments import model_from_arguments
    >>> found = check_by_substitution(derive(model_from_arguments([["-k/m"]], [["1/m"]], [[1]])))
    >>> found.checks[0].what, found.checks[0].verdict.value, found.rows[0].left == found.rows[0].right
    ('characteristic polynomial', 'proved', True)
    """
    stage(STAGE)
    with ball_precision():
        return _substituted(derivation)


def _substituted(derivation: Derivation) -> Substitution:
    points = choose_points(derivation.model, derivation.ring, derivation.assumed_nonzero)
    if not points:
        detail = f"no point of the parameter box was found where all is defined ({TRIES} tried)"
        check = Check("derived polynomials", "exact substitution", Verdict.UNDECIDED, detail)
        return Substitution((check,), (), ())
    sites = [Site(derivation.model, point) for point in points]
    formulas = Formulas(derivation.ring)
    checks: list[Check] = []
    rows: list[Row] = []
    for quantity in _quantities(derivation, formulas):
        check, made = _checked(quantity, sites)
        checks.append(check)
        rows += made
    checks += [check_common_factor(channel, formulas, points) for channel in derivation.channels]
    checks.append(_nonzero(derivation, formulas, points))
    return Substitution(tuple(checks), tuple(rows), points)


def _quantities(derivation: Derivation, formulas: Formulas) -> Iterator[_Quantity]:
    def multiplier(pair: tuple[Element, Element]) -> tuple[Formula, Formula]:
        return formulas.of(pair[0]), formulas.of(pair[1])

    scaled = derivation.characteristic_polynomial
    formula = formulas.of(scaled.polynomial.element)
    yield _Quantity(
        "characteristic polynomial", formula, multiplier(scaled.multiplier), lambda site: site.characteristic
    )
    outputs, inputs = derivation.model.outputs, derivation.model.inputs
    for channel in derivation.channels:
        i, j = outputs.index(channel.output), inputs.index(channel.input)
        factor = multiplier(channel.multiplier)
        yield _Quantity(
            f"numerator {channel.name}",
            formulas.of(channel.numerator.element),
            factor,
            lambda site, i=i, j=j: site.numerator(i, j),  # type: ignore[misc]
        )
        yield _Quantity(
            f"denominator {channel.name}",
            formulas.of(channel.denominator.element),
            factor,
            lambda site: site.characteristic,
        )
    if derivation.zero_polynomial is not None:
        scaled = derivation.zero_polynomial
        formula = formulas.of(scaled.polynomial.element)
        yield _Quantity("zero polynomial", formula, multiplier(scaled.multiplier), lambda site: site.zeros)


def _checked(quantity: _Quantity, sites: list[Site]) -> tuple[Check, list[Row]]:
    exact = all(site.point.exact for site in sites)
    numbers = "exact substitution" if exact else f"substitution with balls of {PRECISION} bits"
    form = "the printed text, read again" if quantity.formula.from_text else "the polynomial, term by term"
    method = f"{numbers} into the matrices as given, against {form}"
    for formula in (quantity.formula, *quantity.multiplier):
        if formula.unreadable:
            return Check(quantity.name, method, Verdict.REFUTED, formula.unreadable), []
    rows: list[Row] = []
    for site in sites:
        try:
            top, bottom = (formula.value(site.point) for formula in quantity.multiplier)
            factor = top * site.point.arithmetic.inverse(bottom)
            site.point.arithmetic.inverse(factor)
        except UndefinedValueError:
            detail = f"at {site.point}: the multiplier is zero or undefined"
            return Check(quantity.name, method, Verdict.REFUTED, detail), rows
        left = quantity.reference(site) * factor
        rows.append(Row(quantity.name, site.point, left, quantity.formula.value(site.point)))
    return compared(quantity.name, method, rows, ("from the matrices", "from the result")), rows


def _nonzero(derivation: Derivation, formulas: Formulas, points: tuple[Point, ...]) -> Check:
    """What was assumed nonzero is, at the points; they were chosen so, and it is seen to here once more."""
    what, method = "assumed nonzero", "values at the points, where every entry of the matrices is defined"
    for element in derivation.assumed_nonzero:
        formula = formulas.of(element)
        if formula.unreadable:
            return Check(what, method, Verdict.REFUTED, formula.unreadable)
        for point in points:
            try:
                point.arithmetic.inverse(formula.value(point))
            except UndefinedValueError:
                return Check(what, method, Verdict.REFUTED, f"at {point}: one vanishes: {element}")
    count = len(derivation.assumed_nonzero)
    detail = f"none of {count} vanishes at {named(points)}" if count else "nothing was divided by"
    return Check(what, method, Verdict.PROVED, detail)

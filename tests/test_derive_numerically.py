"""Random plants: every result against SciPy's eigenvalues and frequency responses."""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction
from typing import Any

import numpy as np
import scipy.linalg
import sympy
from hypothesis import event, given
from random_plants import (
    SYMBOLS,
    Texts,
    Written,
    derived,
    expression,
    frequencies,
    plants,
    points,
    quick,
    rich_entries,
)

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Verdict


def float_of(texts: Texts, point: Mapping[str, Fraction]) -> Any:
    put = {SYMBOLS[name]: sympy.Rational(value.numerator, value.denominator) for name, value in point.items()}
    return np.array([[float(expression(text).subs(put)) for text in row] for row in texts])


def tree_value(node: Node, point: Mapping[str, Fraction]) -> float:
    """The value of a tree in floating point, by code that nothing else shares."""
    match node:
        case Number(value=value):
            return float(value)
        case Name(name=name):
            return math.pi if name == "pi" else float(point[name])
        case Sum(terms=terms):
            return math.fsum(tree_value(term, point) for term in terms)
        case Product(factors=factors):
            return math.prod(tree_value(factor, point) for factor in factors)
        case Quotient(numerator=top, denominator=bottom):
            return tree_value(top, point) / tree_value(bottom, point)
        case Power(base=base, exponent=exponent):
            return float(tree_value(base, point) ** exponent)
        case Call(function=function, argument=argument):
            return float(getattr(math, function)(tree_value(argument, point)))


class Evaluated:
    """Elements of one ring at one point, term by term."""

    def __init__(self, ring: Ring, point: Mapping[str, Fraction]) -> None:
        self.ring = ring
        self.values = [
            0.0 if key == ring.variable else tree_value(meaning, point)
            for key, meaning in zip(ring.keys, ring.meanings, strict=True)
        ]

    def coefficients(self, element: Element, size: int) -> Any:
        """Ascending coefficients in s, `size` of them, and the sum of the sizes of all terms."""
        place = self.ring.position[self.ring.variable]
        result, weight = np.zeros(size + 1), np.zeros(size + 1)
        for exponents, coefficient in element.to_dict().items():
            powers = [
                (base, int(e))
                for k, (base, e) in enumerate(zip(self.values, exponents, strict=True))
                if k != place
            ]
            term = float(coefficient) * math.prod(base**e for base, e in powers)
            result[int(exponents[place])] += term
            weight[int(exponents[place])] += abs(term)
        return result, weight

    def at(self, element: Element, s: complex) -> tuple[complex, float]:
        """The value at s, and what rounding may have done to it."""
        degree = int(element.degrees()[self.ring.position[self.ring.variable]]) if element else 0
        values, weights = self.coefficients(element, degree)
        powers = [s**k for k in range(degree + 1)]
        blur = 1e-12 * sum(w * abs(x) for w, x in zip(weights, powers, strict=True))
        return sum(v * x for v, x in zip(values, powers, strict=True)), blur

    def ratio(self, ratio: tuple[Element, Element]) -> float:
        (top, _), (bottom, _) = self.at(ratio[0], 0), self.at(ratio[1], 0)
        return (top / bottom).real


def check_against_scipy(plant: Written, point: Mapping[str, Fraction], s: complex) -> None:
    found = derived(plant)
    assert {check.verdict for check in found.checks} == {Verdict.PROVED}
    here = Evaluated(found.ring, point)
    A, B, C, D, E = (float_of(plant.full[name], point) for name in "ABCDE")
    n, m, p = len(A), B.shape[1], len(C)

    # The pencil's determinant at s, and at the eigenvalues that SciPy finds (infinite ones included).
    polynomial = found.characteristic_polynomial
    check_determinant(here, polynomial.polynomial.element, polynomial.multiplier, s * E - A, s)
    check_eigenvalues(here, polynomial.polynomial.element, polynomial.multiplier, A, E)

    # The frequency response.
    dynamics = s * E - A
    if np.linalg.cond(dynamics) < 1e7:
        response = C @ np.linalg.solve(dynamics, B) + D
        scale = 1 + np.linalg.norm(C) * np.linalg.norm(B) * np.linalg.norm(np.linalg.inv(dynamics))
        for index, channel in enumerate(found.channels):
            top, top_blur = here.at(channel.numerator.element, s)
            bottom, bottom_blur = here.at(channel.denominator.element, s)
            if bottom_blur > 1e-6 * abs(bottom):
                continue
            allowed = 1e-7 * scale + (top_blur + bottom_blur * abs(top / bottom)) / abs(bottom)
            assert abs(top / bottom - response[divmod(index, m)]) <= allowed
            event("frequency response compared")

    # The zeros: generalized eigenvalues of the system pencil.
    if m == p:
        assert found.zero_polynomial is not None
        zero = found.zero_polynomial
        system = np.block([[A, B], [C, D]])
        dropped = scipy.linalg.block_diag(E, np.zeros((p, m)))
        check_determinant(here, zero.polynomial.element, zero.multiplier, system - s * dropped, s)
        sign = (zero.multiplier[0] * (-1) ** (n + m), zero.multiplier[1])
        check_eigenvalues(here, zero.polynomial.element, sign, system, dropped)


def check_determinant(
    here: Evaluated, element: Element, multiplier: tuple[Element, Element], matrix: Any, s: complex
) -> None:
    factor = here.ratio(multiplier)
    assert factor != 0
    value, blur = here.at(element, s)
    bound = np.prod([np.linalg.norm(row) for row in matrix])  # Hadamard
    assert abs(value / factor - np.linalg.det(matrix)) <= 1e-11 * bound + blur / abs(factor)


def check_eigenvalues(
    here: Evaluated, element: Element, multiplier: tuple[Element, Element], A: Any, E: Any
) -> None:
    """det(alpha E - beta A) vanishes at SciPy's pairs, as far as rounding of A and E allows."""
    size = len(A)
    coefficients, weights = here.coefficients(element, size)
    factor = here.ratio(multiplier)
    for alpha, beta in scipy.linalg.eigvals(A, E, homogeneous_eigvals=True).T:
        length = math.hypot(abs(alpha), abs(beta))
        if length == 0:  # a singular pencil: any number is an eigenvalue
            continue
        alpha, beta = alpha / length, beta / length
        powers = [alpha**k * beta ** (size - k) for k in range(size + 1)]
        value = sum(c * x for c, x in zip(coefficients, powers, strict=True)) / factor
        blur = 1e-12 * sum(w * abs(x) for w, x in zip(weights, powers, strict=True)) / abs(factor)
        bound = (np.linalg.norm(A, 2) * abs(beta) + np.linalg.norm(E, 2) * abs(alpha)) ** size
        assert abs(value) <= 1e-11 * bound + blur


@quick
@given(plants(), points, frequencies)
def test_random_plants_against_scipy(plant: Written, point: Mapping[str, Fraction], s: complex) -> None:
    check_against_scipy(plant, point, s)


@quick
@given(plants(square=True), points, frequencies)
def test_random_square_plants_against_scipy(
    plant: Written, point: Mapping[str, Fraction], s: complex
) -> None:
    check_against_scipy(plant, point, s)


@quick
@given(plants(rich_entries, states=3, channels=2), points, frequencies)
def test_functions_of_letters_against_scipy(
    plant: Written, point: Mapping[str, Fraction], s: complex
) -> None:
    check_against_scipy(plant, point, s)

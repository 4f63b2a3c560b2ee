"""Random plants: every result against a second derivation by SymPy, and what must not change them."""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction
from typing import Any, NamedTuple

import sympy
from hypothesis import assume, event, given
from hypothesis import strategies as st
from random_plants import LETTERS, SYMBOLS, S, Texts, Written, derived, plants, quick, symbolic
from sympy.polys.matrices import DomainMatrix

from symplant.algebra.ring import Element, Ring
from symplant.derivation.derive import Derivation

POLYNOMIALS = sympy.ZZ[(S, *SYMBOLS.values())]


class Cleared(NamedTuple):
    """Rows of a matrix over SymPy's polynomial ring, and what each was multiplied by."""

    rows: list[list[Any]]
    multipliers: list[Any]

    @property
    def multiplier(self) -> Any:
        return math.prod(self.multipliers, start=POLYNOMIALS.one)


def cleared(rows: list[list[Any]]) -> Cleared:
    """Each row times the product of its entries' denominators."""
    result, multipliers = [], []
    for row in rows:
        parts = [sympy.fraction(sympy.together(entry)) for entry in row]
        multiplier = math.prod((POLYNOMIALS.from_sympy(bottom) for _, bottom in parts), start=POLYNOMIALS.one)
        result.append(
            [
                POLYNOMIALS.from_sympy(top) * multiplier.exquo(POLYNOMIALS.from_sympy(below))
                for top, below in parts
            ]
        )
        multipliers.append(multiplier)
    return Cleared(result, multipliers)


def determinant(rows: list[list[Any]]) -> Any:
    """By Berkowitz's algorithm, which divides by nothing."""
    size = len(rows)
    return DomainMatrix(rows, (size, size), POLYNOMIALS).charpoly_berk()[-1] * (-1) ** size


def polynomial_of(ring: Ring, element: Element) -> Any:
    assert ring.keys == ("s", *LETTERS)
    terms = {tuple(map(int, exponents)): int(value) for exponents, value in element.to_dict().items()}
    return POLYNOMIALS.ring.from_dict(terms)


def same(
    found: Derivation, element: Element, multiplier: tuple[Element, Element], value: Any, over: Any
) -> bool:
    """Whether element = value/over * multiplier, the multiplier being free of s and not zero."""
    top, bottom = (polynomial_of(found.ring, part) for part in multiplier)
    assert top and bottom and not any(POLYNOMIALS.to_sympy(part).has(S) for part in (top, bottom))
    return bool(polynomial_of(found.ring, element) * over * bottom == value * top)


@quick
@given(plants(states=3, channels=2))
def test_every_result_against_a_second_derivation(plant: Written) -> None:
    found = derived(plant)
    A, B, C, D, E = (sympy.Matrix(symbolic(plant.full[name])) for name in "ABCDE")
    n, m, p = len(plant.A), len(plant.B[0]), len(plant.C)
    rows = cleared((S * E - A).row_join(-B).tolist())
    readings = cleared(C.row_join(D).tolist())
    dynamics = [row[:n] for row in rows.rows]
    characteristic = determinant(dynamics)
    scaled = found.characteristic_polynomial
    assert same(found, scaled.polynomial.element, scaled.multiplier, characteristic, rows.multiplier)
    adjoint = DomainMatrix(dynamics, (n, n), POLYNOMIALS).adjugate()
    drive = DomainMatrix([[-entry for entry in row[n:]] for row in rows.rows], (n, m), POLYNOMIALS)
    for i, reading in enumerate(readings.rows):
        inner = (DomainMatrix([reading[:n]], (1, n), POLYNOMIALS) * adjoint * drive).to_list()[0]
        for j in range(m):
            channel = found.channels[i * m + j]
            assert channel.output is found.model.outputs[i] and channel.input is found.model.inputs[j]
            below = rows.multiplier * readings.multipliers[i]
            denominator = characteristic * readings.multipliers[i]
            numerator = inner[j] + reading[n + j] * characteristic
            assert same(found, channel.denominator.element, channel.multiplier, denominator, below)
            assert same(found, channel.numerator.element, channel.multiplier, numerator, below)
    if m != p:
        assert found.zero_polynomial is None and found.zero_polynomial_note
        return
    zero = found.zero_polynomial
    assert zero is not None
    # The rows above are those of [sE - A, -B]: their signs turn n times.
    pencil = determinant(rows.rows + readings.rows) * (-1) ** n
    assert same(
        found, zero.polynomial.element, zero.multiplier, pencil, rows.multiplier * readings.multiplier
    )


def at_point(polynomial: Any, point: Mapping[str, Fraction]) -> Any:
    """The polynomial in s that is left once numbers are put in for the letters."""
    total: dict[int, Fraction] = {}
    for (power, *exponents), value in polynomial.terms():
        factors = (point[letter] ** e for letter, e in zip(LETTERS, exponents, strict=True))
        total[power] = total.get(power, Fraction(0)) + int(value) * math.prod(factors, start=Fraction(1))
    rational = {power: sympy.Rational(*value.as_integer_ratio()) for power, value in total.items()}
    return sympy.Poly(rational or {0: 0}, S, domain="QQ")


#: Numbers that no plant drawn here makes special.
GENERIC = {"a": Fraction(10007, 4099), "b": Fraction(7919, 5003), "c": Fraction(6007, 9973)}


@quick
@given(plants(states=4, channels=1))
def test_common_factor_divides_both_and_leaves_nothing_common(plant: Written) -> None:
    found = derived(plant)
    for channel in found.channels:
        above, below, common = (
            polynomial_of(found.ring, p.element)
            for p in (channel.numerator, channel.denominator, channel.common_factor)
        )
        # A primitive polynomial that divides over the field of the letters divides over the integers (Gauss).
        assert not above.rem(common) and not below.rem(common)
        # Whatever is common to both is so at every point.
        assert at_point(above, GENERIC).gcd(at_point(below, GENERIC)).degree() == common.degree(0)
        event(f"common factor of degree {common.degree(0)}")
        if above:
            assert channel.relative_degree == below.degree(0) - above.degree(0)


@quick
@given(plants(states=4, channels=1))
def test_zero_polynomial_of_one_channel_is_its_numerator(plant: Written) -> None:
    found = derived(plant)
    ring, zero, channel = found.ring, found.zero_polynomial, found.channels[0]
    assert zero is not None
    # det [[A - sE, B], [C, D]] is (-1)^n times the numerator.
    first = zero.polynomial.element * zero.multiplier[1] * channel.multiplier[0]
    second = channel.numerator.element * channel.multiplier[1] * zero.multiplier[0]
    assert ring.is_zero(first - second * (-1) ** len(plant.A))


@quick
@given(plants(), st.permutations(range(5)), st.sampled_from(["a", "-2*b", "1/(a + c)"]))
def test_scaled_and_exchanged_equations_change_no_transfer_function(
    plant: Written, order: list[int], scale: str
) -> None:
    rows = [i for i in order if i < len(plant.A)]
    mixed = {k: [plant.full[k][i] for i in rows] for k in "EAB"}
    for matrix in mixed.values():
        matrix[0] = [f"({scale})*({text})" for text in matrix[0]]
    found, again = derived(plant), Written(mixed["A"], mixed["B"], plant.C, plant.D, mixed["E"]).derive()
    for one, other in zip(found.channels, again.channels, strict=True):
        left = one.numerator.element * other.denominator.element
        assert not left - one.denominator.element * other.numerator.element


@quick
@given(plants(states=3, channels=1))
def test_turned_coordinates_leave_no_angle(plant: Written) -> None:
    # x = T z and the equations times T', T a rotation: sine and cosine must cancel by themselves.
    n = len(plant.A)
    assume(n >= 2)
    turn = [["1" if i == j else "0" for j in range(n)] for i in range(n)]
    turn[0][:2], turn[1][:2] = ["cos(a)", "-sin(a)"], ["sin(a)", "cos(a)"]
    back = [list(column) for column in zip(*turn, strict=True)]
    A, B, C, D, E = (plant.full[name] for name in "ABCDE")
    A, B, C, E = times(back, times(A, turn)), times(back, B), times(C, turn), times(back, times(E, turn))
    found = derived(plant)
    turned = Written(A, B, C, D, E).derive()
    ring, (one,), (other,) = turned.ring, found.channels, turned.channels
    above, below = other.numerator.element, other.denominator.element
    assert ring.used([above, below]) <= {*LETTERS, "s"}
    first, second = (ring.adopt(part.element, found.ring) for part in (one.numerator, one.denominator))
    assert above * second == below * first


def times(first: Texts, second: Texts) -> Texts:
    return [
        [
            " + ".join(f"({x})*({row[j]})" for x, row in zip(line, second, strict=True))
            for j in range(len(second[0]))
        ]
        for line in first
    ]

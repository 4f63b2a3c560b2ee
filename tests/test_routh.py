"""Routh's array and exact root counts: published tables, exact constructions, numerical roots."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.bilinear import bilinear
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.algebra.routh import root_counts, routh_array

# Counts (right, axis, left). Polynomials and zero-row counts: value seen in public text; the others
# from memory. Sources: Ogata, Modern Control Engineering, ch. 5; Nise, Control Systems Engineering, ch. 6;
# Dorf & Bishop, Modern Control Systems, ch. 6.
TABLES = [
    ((1, 2, 3, 4, 5), (2, 0, 2)),
    ((1, 2, 1, 2), (0, 2, 1)),
    ((1, 2, 24, 48, -25, -50), (1, 2, 2)),
    ((1, 2, 3, 6, 5, 3), (2, 0, 3)),
    ((1, 7, 6, 42, 8, 56), (0, 4, 1)),
    ((1, 1, 12, 22, 39, 59, 48, 38, 20), (2, 4, 2)),
    ((1, 10, 31, 1030), (2, 0, 1)),
    # Franklin, Powell, Emami-Naeini, Feedback Control of Dynamic Systems, Example 3.32.
    ((1, 4, 3, 2, 1, 4, 4), (2, 0, 4)),
    # SLICOT documentation, example MC01TD: two zeros in the right half plane (public text).
    ((1, -1, 1, 0, 2), (2, 0, 2)),
]


@pytest.mark.parametrize(("falling", "counts"), TABLES)
def test_published_tables(falling: tuple[int, ...], counts: tuple[int, int, int]) -> None:
    found = root_counts(falling[::-1])
    assert (found.right, found.axis, found.left) == counts


def test_first_column_of_franklin_example() -> None:
    # Franklin, Powell, Emami-Naeini, Example 3.32: 1, 4, 5/2, 2, 3, -76/15, 4.
    ring = Ring("s", ())
    s = ring.gen("s")
    array = routh_array(Polynomial.of(ring, s**6 + 4 * s**5 + 3 * s**4 + 2 * s**3 + s**2 + 4 * s + 4))
    column = [Fraction(str(r.numerator)) / Fraction(str(r.denominator)) for r in array.first_column]
    assert column == [1, 4, Fraction(5, 2), 2, 3, Fraction(-76, 15), 4]


def test_zero_row_is_the_derivative_of_the_auxiliary_polynomial() -> None:
    # Ogata, ch. 5: s^5+2s^4+24s^3+48s^2-25s-50, auxiliary 2s^4+48s^2-50, derivative 8s^3+96s.
    ring = Ring("s", ())
    s = ring.gen("s")
    array = routh_array(Polynomial.of(ring, s**5 + 2 * s**4 + 24 * s**3 + 48 * s**2 - 25 * s - 50))
    assert array.rows[2].kind == "zero row"
    assert [str(entry.numerator) for entry in array.rows[2].entries] == ["8", "96"]
    assert array.auxiliary is not None and array.auxiliary.power == 4


def test_zero_pivot_is_named_and_keeps_what_stood_there() -> None:
    ring = Ring("s", ("K",))
    s, K = ring.gen("s"), ring.gen("K")
    array = routh_array(Polynomial.of(ring, s**4 + s**3 + 2 * s**2 + 2 * s + K))
    row = array.rows[2]
    assert row.kind == "zero pivot"
    assert [str(entry.numerator) for entry in row.replaced] == ["0", "K"]
    assert all(array.first_column)


def test_leading_coefficient_must_not_vanish() -> None:
    with pytest.raises(ValueError, match="leading"):
        root_counts([1, 0])
    ring = Ring("s", ())
    with pytest.raises(ValueError, match="zero polynomial"):
        routh_array(Polynomial.of(ring, ring.zero))


@given(st.lists(st.integers(-9, 9), min_size=2, max_size=8).filter(lambda c: c[-1] != 0))
@settings(max_examples=200, deadline=None)
def test_counts_against_numerical_roots(coefficients: list[int]) -> None:
    roots = np.roots(coefficients[::-1])
    if len(roots) and np.min(np.abs(roots.real)) < 1e-3:
        return
    counts = root_counts(coefficients)
    assert (counts.right, counts.axis) == (int(np.sum(roots.real > 0)), 0)


# Factors with known roots: ascending coefficients and (right, axis, left).
_FACTORS = st.one_of(
    st.integers(1, 4).map(lambda a: ([a, 1], (0, 0, 1))),
    st.integers(1, 4).map(lambda a: ([-a, 1], (1, 0, 0))),
    st.integers(1, 4).map(lambda a: ([a, 0, 1], (0, 2, 0))),
    st.just(([0, 1], (0, 1, 0))),
    st.integers(1, 4).map(lambda a: ([4 * a**4, 0, 0, 0, 1], (2, 0, 2))),
    st.tuples(st.integers(1, 3), st.integers(1, 3)).map(
        lambda p: ([p[0] ** 2 + p[1] ** 2, -2 * p[0], 1], (2, 0, 0))
    ),
    st.tuples(st.integers(1, 3), st.integers(1, 3)).map(
        lambda p: ([p[0] ** 2 + p[1] ** 2, 2 * p[0], 1], (0, 0, 2))
    ),
)


@given(st.lists(_FACTORS, max_size=6), st.sampled_from([1, -1, 3]))
@settings(max_examples=300, deadline=None)
def test_counts_of_exact_constructions(
    factors: list[tuple[list[int], tuple[int, int, int]]], lead: int
) -> None:
    product, right, axis, left = [lead], 0, 0, 0
    for coefficients, (r, a, l) in factors:  # noqa: E741
        product = [
            int(x) for x in np.convolve(np.array(product, dtype=object), np.array(coefficients, dtype=object))
        ]
        right, axis, left = right + r, axis + a, left + l
    counts = root_counts(product)
    assert (counts.right, counts.axis, counts.left) == (right, axis, left)


@given(st.lists(st.integers(-9, 9), min_size=2, max_size=7).filter(lambda c: c[-1] != 0))
@settings(max_examples=100, deadline=None)
def test_array_agrees_with_counts(coefficients: list[int]) -> None:
    ring = Ring("s", ())
    polynomial = Polynomial.of(ring, ring.from_coefficients([ring.constant(c) for c in coefficients]))
    column = [
        Fraction(str(r.numerator)) / Fraction(str(r.denominator))
        for r in routh_array(polynomial).first_column
    ]
    changes = sum((a > 0) != (b > 0) for a, b in pairwise(column))
    assert changes == root_counts(coefficients).right


@given(st.lists(st.integers(-9, 9), min_size=2, max_size=6).filter(lambda c: c[-1] != 0))
@settings(max_examples=150, deadline=None)
def test_bilinear_map_carries_the_disc_to_the_half_plane(coefficients: list[int]) -> None:
    ring = Ring("z", ())
    polynomial = Polynomial.of(ring, ring.from_coefficients([ring.constant(c) for c in coefficients]))
    image = bilinear(polynomial)
    at_minus_one = len(coefficients) - 1 - image.degree
    roots = np.abs(np.roots(coefficients[::-1]))
    if len(roots) and np.min(np.abs(roots - 1)) < 1e-3:
        return
    assert at_minus_one == 0
    counts = root_counts([int(c.leading_coefficient()) if c else 0 for c in image.coefficients])
    assert (counts.left, counts.axis) == (int(np.sum(roots < 1)), 0)


@pytest.mark.parametrize("multiplicity", [1, 2, 3])
def test_bilinear_degree_drops_by_the_multiplicity_of_minus_one(multiplicity: int) -> None:
    ring = Ring("z", ("a",))
    z, a = ring.gen("z"), ring.gen("a")
    polynomial = Polynomial.of(ring, (z + 1) ** multiplicity * (z - a) * (2 * z - 1))
    assert bilinear(polynomial).degree == 2
    assert bilinear(Polynomial.of(ring, z - 1)).coefficients == (ring.zero, ring.constant(2))

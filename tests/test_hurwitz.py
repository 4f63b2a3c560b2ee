"""Hurwitz minors: against determinants by another route, published conditions, and time."""

from __future__ import annotations

import time
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.hurwitz import hurwitz_matrix, hurwitz_minors, hurwitz_table
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring


def _polynomial(ring: Ring, *falling: Element | int) -> Polynomial:
    parts = [ring.constant(c) if isinstance(c, int) else c for c in falling]
    return Polynomial.of(ring, ring.from_coefficients(parts[::-1]))


def test_maxwell_governor() -> None:
    # J. C. Maxwell, Proc. R. Soc. 16 (1868) 270-283 (from memory): MBn^3 + (MY+FB)n^2 + FYn + FG, and
    # H2 = F*((MY + FB)*Y - MB*G), which is (F/M + Y/B)*Y/B - G/B > 0 up to positive factors.
    ring = Ring("s", ("M", "B", "Y", "F", "G"))
    M, B, Y, F, G = (ring.gen(x) for x in "MBYFG")
    minors = hurwitz_minors(_polynomial(ring, M * B, M * Y + F * B, F * Y, F * G))
    assert minors[1] == F * ((M * Y + F * B) * Y - M * B * G)
    assert minors[2] == F * G * minors[1]


def test_rotating_shaft() -> None:
    # D. M. Smith, Proc. R. Soc. A 142 (1933) 92-118 (from memory): H3 = 4m(ce+ci)^2[k(ce+ci)^2 - m ci^2 W^2].
    ring = Ring("s", ("m", "c", "i", "k", "W"))
    m, c, i, k, W = (ring.gen(x) for x in "mcikW")
    s = ring.gen("s")
    one = m * s**2 + (c + i) * s + k
    polynomial = Polynomial.of(ring, one**2 + (i * W) ** 2)
    # With leading coefficient m**2 the minor carries a further m.
    assert hurwitz_minors(polynomial)[2] == m * 4 * (c + i) ** 2 * (k * (c + i) ** 2 - m * i**2 * W**2)


@given(st.lists(st.integers(-9, 9), min_size=2, max_size=8).filter(lambda c: c[-1] != 0))
@settings(max_examples=100, deadline=None)
def test_minors_against_numerical_determinants(coefficients: list[int]) -> None:
    ring = Ring("s", ())
    polynomial = _polynomial(ring, *coefficients[::-1])
    matrix = [[int(str(x)) for x in row] for row in hurwitz_matrix(ring, polynomial.coefficients)]
    for k, minor in enumerate(hurwitz_minors(polynomial), 1):
        numeric = np.linalg.det(np.array(matrix, dtype=float)[:k, :k])
        assert float(int(str(minor))) == pytest.approx(numeric, rel=1e-6, abs=1e-4)


@given(st.lists(st.integers(1, 9), min_size=4, max_size=9))
@settings(max_examples=50, deadline=None)
def test_both_routes_agree(coefficients: list[int]) -> None:
    ring = Ring("s", ("a", "b", "c"))
    a, b, c = (ring.gen(x) for x in "abc")
    letters = [a, b, c, a * b, a + c, ring.one]
    parts = [value * letters[i % 6] + i for i, value in enumerate(coefficients)]
    polynomial = _polynomial(ring, *parts)
    table = hurwitz_table(ring, polynomial.coefficients)
    if table is not None:
        assert tuple(row[0] for row in table[1:]) == hurwitz_minors(polynomial)


def test_a_vanishing_minor_is_no_obstacle() -> None:
    ring = Ring("s", ("K",))
    s, K = ring.gen("s"), ring.gen("K")
    polynomial = Polynomial.of(ring, s**4 + s**3 + 2 * s**2 + 2 * s + K)
    assert hurwitz_table(ring, polynomial.coefficients) is None
    assert hurwitz_minors(polynomial) == (ring.one, ring.zero, -K, -(K**2))


def test_sixth_degree_chain_is_fast() -> None:
    # Three damped masses between walls and springs: degree 6, nine letters, up to 1605 terms.
    names = tuple(f"{x}{i}" for x in "mkc" for i in (1, 2, 3))
    ring = Ring("s", names)
    m, k, c = ([ring.gen(f"{x}{i}") for i in (1, 2, 3)] for x in "mkc")
    s = ring.gen("s")
    link = [c[i] * s + k[i] for i in range(3)]
    a, b, d = m[0] * s**2 + link[0] + link[1], m[1] * s**2 + link[1] + link[2], m[2] * s**2 + link[2]
    polynomial = Polynomial.of(ring, a * b * d - a * link[2] ** 2 - d * link[1] ** 2)
    best = min(_seconds(polynomial) for _ in range(3))
    assert len(hurwitz_minors(polynomial)[4]) == 1605
    assert best < 0.05


def _seconds(polynomial: Polynomial) -> float:
    start = time.perf_counter()
    hurwitz_minors(polynomial)
    return time.perf_counter() - start


def test_value_at_a_point() -> None:
    ring = Ring("s", ("K",))
    minors = hurwitz_minors(_polynomial(ring, 1, 5, ring.gen("K") - 6, ring.gen("K")))
    assert ring.value(minors[1], {"K": Fraction(15, 2)}) == 0

"""Routh's array on the page: the rows, the special ones explained, the count of roots."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.derivation.stability import stability_of
from symplant.writing.plain import PlainFormulas
from symplant.writing.routh_rows import routh_rows


def _rows(*ascending: Any, letters: str = "", discrete: bool = False, width: int = 100) -> list[str]:
    ring = Ring("z" if discrete else "s", tuple(letters.split()))
    total = ring.zero
    for power, value in enumerate(ascending):
        element = value(*(ring.gen(x) for x in letters.split())) if callable(value) else ring.constant(value)
        total = total + element * ring.gen(ring.variable) ** power
    finding = stability_of(Polynomial.of(ring, total), discrete=discrete)
    return routh_rows(finding, PlainFormulas(finding.ring, width, True))


def test_an_ordinary_array() -> None:
    # Routh's scheme of s^4 + 2 s^3 + 3 s^2 + 4 s + 5, K. Ogata, Modern Control Engineering (from memory).
    assert _rows(5, 4, 3, 2, 1) == [
        "s^4   | 1    3   5",
        "s^3   | 2    4",
        "s^2   | 1    5",
        "s^1   | −6",
        "s^0   | 5",
        "2 changes of sign in the first column: 2 roots in the right half plane",
    ]


def test_a_row_of_zeros_names_the_auxiliary_polynomial() -> None:
    # s^5 + 2 s^4 + 24 s^3 + 48 s^2 - 25 s - 50, K. Ogata, Modern Control Engineering (from memory).
    text = "\n".join(_rows(-50, -25, 48, 24, 2, 1))
    assert "2 s^4 + 48 s^2 − 50," in text and "symmetric to the origin" in text
    assert "1 change of sign in the first column: 1 root in the right half plane" in text


def test_a_zero_pivot_shows_the_row_as_it_came_out() -> None:
    text = "\n".join(_rows(1, 2, 2, 1, 1))
    assert "came out as  0   1" in text and "minus" in text and "by 1 place," in text
    assert "2 changes of sign" in text


def test_letters_in_the_array() -> None:
    rows = _rows(lambda K: K, lambda K: K - 6, 5, 1, letters="K")
    assert any(re.fullmatch(r"s\^1 +\| \(4 K − 30\)/5", row) for row in rows)
    assert not any("change" in row for row in rows)  # the signs are what the conditions are about


@pytest.mark.parametrize("width", [24, 60])
def test_a_wide_array_puts_entries_under_each_other(width: int) -> None:
    rows = _rows(
        lambda a, b: a * b + 3,
        lambda a, b: a**2 - b,
        lambda a, b: a + 7 * b,
        lambda a, b: 2 * a + b,
        1,
        letters="a b",
        width=width,
    )
    assert [row[:3] for row in rows if row[0] == "s"] == ["s^4", "s^3", "s^2", "s^1", "s^0"]


@given(st.lists(st.integers(-5, 5), min_size=2, max_size=6), st.booleans())
@settings(max_examples=80, deadline=None)
def test_the_count_is_that_of_numerical_roots(values: list[int], discrete: bool) -> None:
    if not values[-1]:
        return
    roots = np.roots(values[::-1])
    distance = np.abs(roots) - 1 if discrete else roots.real
    if len(roots) < 1 or min(abs(distance)) < 1e-5:
        return
    last = _rows(*values, discrete=discrete)[-1]
    assert int(last.split()[0]) == int((distance > 0).sum())

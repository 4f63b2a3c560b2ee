"""Stability conditions against numerical roots and eigenvalues at random points."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import Any

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from stability_subjects import POSITIVE, plant

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.derivation.stability import stability, stability_of
from symplant.derivation.stability.witnesses import classify


def _random_box(random: Random, letters: str) -> Box:
    choices = [
        Interval(),
        POSITIVE,
        Interval(declared=Sign.NONNEGATIVE),
        Interval(declared=Sign.NEGATIVE),
        Interval(Fraction(1), Fraction(3)),
        Interval(Fraction(-1), Fraction(2)),
    ]
    return Box({name: random.choice(choices) for name in letters})


@given(st.integers(0, 100_000), st.booleans())
@settings(max_examples=40, deadline=None)
def test_conditions_agree_with_numerical_roots(seed: int, discrete: bool) -> None:
    random = Random(seed)
    letters = "ab"[: random.randint(1, 2)]
    ring = Ring("s", tuple(letters), _random_box(random, letters))
    s = ring.gen("s")
    element = ring.zero
    for power in range(random.randint(2, 5)):
        for _ in range(random.randint(1, 2)):
            term = ring.constant(random.choice([1, 2, 3, 5, -1]))
            for _ in range(random.randint(0, 2)):
                term = term * ring.gen(random.choice(letters))
            element = element + term * s**power
    polynomial = Polynomial.of(ring, element)
    if polynomial.degree < 1:
        return
    finding = stability_of(polynomial, discrete=discrete)
    for _ in range(40):
        point = {x: Fraction(random.randint(-50, 50), random.randint(1, 12)) for x in letters}
        values = [float(ring.value(c, point)) for c in polynomial.coefficients]
        if not ring.box.contains(point) or not values[-1]:
            continue
        roots = np.roots(values[::-1])
        margin = max(abs(roots)) - 1 if discrete else max(roots.real)
        if abs(margin) < 1e-4:
            continue
        holds = [certified_sign(ring, c.element, point) == 1 for c in finding.conditions]
        open_ones = [
            h for h, c in zip(holds, finding.conditions, strict=True) if c.status not in ("always", "implied")
        ]
        assert all(open_ones) == (margin < 0)
        assert all(holds) == all(open_ones)
        assert finding.verdict != "stable" or margin < 0
        assert finding.verdict not in ("unstable", "marginal") or margin > 0
    for kind, witness in finding.witnesses.items():
        if witness is not None:
            assert ring.box.contains(witness)
            found = classify(_subject(polynomial, discrete), witness)
            assert (found == "stable") == (kind == "stable")


def _subject(polynomial: Polynomial, discrete: bool) -> Any:
    from symplant.derivation.stability.subject import Subject

    return Subject(polynomial, discrete)


@given(st.integers(0, 100_000))
@settings(max_examples=25, deadline=None)
def test_plants_agree_with_eigenvalues(seed: int) -> None:
    random = Random(seed)
    n = random.randint(2, 3)
    texts = ["0", "1", "-1", "-a", "-b/a", "a - b", "-2*b", "b", "-3", "a/(a + b)"]
    A = [[random.choice(texts) for _ in range(n)] for _ in range(n)]
    for i in range(n):
        A[i][i] = random.choice(["-a", "-2*b", "-a - b", "-3", "a - b"])
    model = plant(A, "a b")
    finding = stability(model)
    for _ in range(40):
        a, b = Fraction(random.randint(1, 60), random.randint(1, 9)), Fraction(random.randint(1, 60), 7)
        values = {"a": float(a), "b": float(b)}
        matrix = [[eval(entry, {}, values) for entry in row] for row in A]  # texts of this test only
        margin = max(np.linalg.eigvals(np.array(matrix, dtype=float)).real)
        if abs(margin) < 1e-6:
            continue
        holds = all(
            certified_sign(finding.ring, c.element, {"a": a, "b": b}) == 1
            for c in finding.conditions
            if c.status not in ("always", "implied")
        )
        assert holds == (margin < 0)

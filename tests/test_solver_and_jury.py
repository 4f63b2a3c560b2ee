"""The solver behind the sign ladder, what it may claim; Jury's table as a second criterion."""

from __future__ import annotations

from fractions import Fraction
from random import Random

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra import decide_solver
from symplant.algebra.bilinear import bilinear
from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.decide import decide_positive
from symplant.algebra.decide_solver import Solved, solve
from symplant.algebra.effort import LOW, NORMAL
from symplant.algebra.hurwitz import hurwitz_minors
from symplant.algebra.jury import critical_minor, inside_circle
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.algebra.verdict import Verdict
from symplant.derivation.stability import stability_of

POSITIVE = Interval(declared=Sign.POSITIVE)


def _ring(variable: str = "s", **intervals: Interval) -> Ring:
    return Ring(variable, tuple(intervals), Box(intervals))


def test_a_polynomial_without_certificate_is_proved_by_the_solver() -> None:
    ring = _ring(x=POSITIVE, y=POSITIVE, z=POSITIVE, w=POSITIVE)
    x, y, z, w = (ring.gen(name) for name in "xyzw")
    # By the mean of three terms; the certificates of the cheaper rungs pair two.
    element = x**2 * y + y**2 * z + z**2 * x - 3 * x * y * z + w
    assert decide_positive(ring, element, bounds=LOW).verdict is Verdict.UNDECIDED
    decision = decide_positive(ring, element)
    assert decision.verdict is Verdict.PROVED and "proved by z3" in decision.because


@pytest.mark.parametrize("value", [Fraction(5), Fraction(-5)])
def test_a_point_of_the_solver_counts_only_if_it_holds(
    value: Fraction, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A solver that lies is not believed: its point is replayed, and must lie in the box."""
    ring = _ring(x=POSITIVE, y=POSITIVE, z=POSITIVE, w=POSITIVE)
    x, y, z, w = (ring.gen(name) for name in "xyzw")
    element = x**2 * y + y**2 * z + z**2 * x - 3 * x * y * z + w
    wrong = Solved("sat", {"x": Fraction(1), "y": Fraction(1), "z": Fraction(1), "w": value})
    monkeypatch.setattr("symplant.algebra.decide.solve", lambda *asked: wrong)
    assert decide_positive(ring, element).verdict is Verdict.UNDECIDED


def test_a_solver_that_is_not_there_is_no_fault(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(decide_solver, "find_spec", lambda name: None)
    ring = _ring(x=Interval())
    assert solve(ring, [], [ring.gen("x") ** 2 + 1], NORMAL).answer == "unknown"
    monkeypatch.undo()
    monkeypatch.setattr(decide_solver.sys, "executable", "/nowhere/python")
    assert solve(ring, [], [ring.gen("x") ** 2 + 1], NORMAL).answer == "unknown"


def test_a_condition_that_follows_from_two_others_is_dropped() -> None:
    # a > 1 and b > 1 give a*b + a > 2, which no single one of them does.
    ring = _ring(a=Interval(), b=Interval())
    s, a, b = (ring.gen(name) for name in ("s", "a", "b"))
    finding = stability_of(Polynomial.of(ring, (s + a - 1) * (s + b - 1) * (s + a * b + a - 2)))
    assert {str(c.element) for c in finding.binding} == {"a - 1", "b - 1"}
    (dropped,) = [c for c in finding.conditions if c.status == "implied"]
    assert "z3" in dropped.because


@given(st.lists(st.integers(-9, 9), min_size=2, max_size=7))
@settings(max_examples=200, deadline=None)
def test_jury_agrees_with_numerical_roots(values: list[int]) -> None:
    if not values[-1]:
        return
    size = max(abs(np.roots(values[::-1])), default=0)
    if abs(size - 1) > 1e-6:
        assert inside_circle([Fraction(v) for v in values]) == (size < 1)


@pytest.mark.parametrize("n", [2, 3, 4, 5])
def test_the_critical_minor_is_the_last_determinant_but_one(n: int) -> None:
    names = tuple(f"a{i}" for i in range(n + 1))
    ring = Ring("z", names)
    total = sum((ring.gen(x) * ring.gen("z") ** i for i, x in enumerate(names)), ring.zero)
    whole = Polynomial.of(ring, total)
    assert hurwitz_minors(bilinear(whole))[-2] == 2 ** (n * (n - 1) // 2) * critical_minor(whole)


@given(st.integers(0, 10_000))
@settings(max_examples=15, deadline=None)
def test_conditions_pass_the_second_criterion(seed: int) -> None:
    random = Random(seed)
    discrete = random.random() < 0.5
    ring = _ring("z" if discrete else "s", a=POSITIVE, b=Interval(Fraction(-1), Fraction(1)))
    s, a, b = (ring.gen(name) for name in (ring.variable, "a", "b"))
    terms = [random.choice([a, b, a * b, a + b, ring.one]) * random.randint(1, 3) * s**i for i in range(4)]
    finding = stability_of(Polynomial.of(ring, sum(terms, ring.zero)), discrete=discrete, effort=LOW)
    assert all(check.passed for check in finding.checks)
    assert not finding.checks or any("table" in c.method or "array" in c.method for c in finding.checks)

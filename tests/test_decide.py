"""The sign ladder: every rung, exact witnesses, and no false proof."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.decide import decide_positive
from symplant.algebra.decide_bounds import positive_by_bounds
from symplant.algebra.decide_factors import radical
from symplant.algebra.decide_means import positive_by_means
from symplant.algebra.decide_single import cells
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.expression import Call, Name, Power, Sum, integer
from symplant.algebra.functions import build_ring
from symplant.algebra.real_roots import between, real_roots
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Verdict

POSITIVE = Interval(declared=Sign.POSITIVE)


def _ring(**intervals: Interval) -> Ring:
    return Ring("s", tuple(intervals), Box(intervals))


def _gens(ring: Ring) -> list[Element]:
    return [ring.gen(letter) for letter in ring.letters]


def test_known_factors_are_dropped() -> None:
    ring = _ring(m=POSITIVE, K=Interval(), n=Interval(declared=Sign.NEGATIVE))
    m, K, n = _gens(ring)
    kernel = radical(ring, 6 * m**3 * n * (15 - 2 * K))
    assert kernel.element == 2 * K - 15
    assert set(map(str, kernel.dropped)) == {"m", "n"}


def test_even_powers_stay_as_squares_unless_assumed_nonzero() -> None:
    ring = _ring(a=Interval(), b=Interval())
    a, b = _gens(ring)
    assert radical(ring, (a - b) ** 4 * b).element == (a - b) ** 2 * b
    assert radical(ring, (a - b) ** 4 * b, [b - a]).element == b


@pytest.mark.parametrize(
    ("low", "high", "verdict"),
    [
        (Fraction(8), None, Verdict.PROVED),
        (Fraction(15, 2), None, Verdict.REFUTED),
        (None, None, Verdict.REFUTED),
    ],
)
def test_one_letter_is_decided_at_closed_ends(
    low: Fraction | None, high: Fraction | None, verdict: Verdict
) -> None:
    ring = _ring(K=Interval(low, high))
    decision = decide_positive(ring, 2 * ring.gen("K") - 15)
    assert decision.verdict is verdict
    if decision.witness is not None:
        assert ring.box.contains(decision.witness)
        assert ring.value(2 * ring.gen("K") - 15, decision.witness) <= 0


def test_irrational_double_root_refutes_without_witness() -> None:
    ring = _ring(a=POSITIVE)
    (a,) = _gens(ring)
    decision = decide_positive(ring, (a**2 - 2) ** 2)
    assert decision.verdict is Verdict.REFUTED
    assert decision.witness is None and "1.414213562373095048" in decision.because
    assert decide_positive(ring, (a**2 - 2) ** 2 + 1).verdict is Verdict.PROVED


@pytest.mark.parametrize(
    "make",
    [
        lambda x, y: x**2 - 2 * x * y + y**2 + 1,
        lambda x, y: x**4 * y**2 + x**2 * y**4 - 3 * x**2 * y**2 + 2,  # Motzkin's polynomial plus one
        lambda x, y: 100 - x**2 * y**3 + x * y,
        lambda x, y: (x**2 + 1) * (y**2 + x**2 + 1),
    ],
)
def test_proofs_over_ranges(make: object) -> None:
    assert callable(make)
    side = Interval(Fraction(-2), Fraction(2))
    ring = _ring(x=side, y=side)
    assert decide_positive(ring, make(*_gens(ring))).verdict is Verdict.PROVED


def test_boundary_case_is_refuted_at_a_corner() -> None:
    side = Interval(Fraction(-2), Fraction(2))
    ring = _ring(x=side, y=side)
    x, y = _gens(ring)
    decision = decide_positive(ring, 32 - x**2 * y**3)
    assert decision.verdict is Verdict.REFUTED and decision.witness is not None
    assert ring.value(32 - x**2 * y**3, decision.witness) <= 0


def test_open_end_is_no_corner() -> None:
    # a > 0 is declared, so a = 0 does not count although it bounds the interval.
    ring = _ring(a=Interval(Fraction(0), Fraction(1), Sign.POSITIVE), b=Interval(Fraction(0), Fraction(1)))
    a, b = _gens(ring)
    assert positive_by_bounds(ring, a * (2 - a * b))
    assert not positive_by_bounds(ring, b * (2 - a * b))


def test_means_certificate_is_verified_exactly() -> None:
    ring = _ring(a=POSITIVE, b=POSITIVE, c=POSITIVE)
    a, b, c = _gens(ring)
    assert positive_by_means(ring, a**2 + b**2 + c**2 - a * b - b * c - a * c + a)
    # Only nonnegative: zero at a = b = c.
    assert not positive_by_means(ring, a**2 + b**2 + c**2 - a * b - b * c - a * c)
    assert not positive_by_means(ring, a**2 + b**2 - 3 * a * b)


def test_functions_of_letters_are_certified_by_balls() -> None:
    # sin(a) < a for a > 0; the witness of a refutation is rational and certified.
    a = Name("a")
    trees = {"x": Sum((a, Call("sin", a))), "y": Call("sin", a)}
    setting = build_ring("s", ("a",), trees, Box({"a": POSITIVE}))
    ring = setting.ring
    sine = setting.converter().convert(trees["y"]).numerator
    assert certified_sign(ring, ring.gen("a") - sine, {"a": Fraction(1, 1000)}) == 1
    assert certified_sign(ring, sine, {"a": Fraction(4)}) == -1
    assert decide_positive(ring, sine + 2).verdict is Verdict.PROVED
    refuted = decide_positive(ring, sine)
    assert refuted.verdict is Verdict.REFUTED and refuted.witness is not None
    assert certified_sign(ring, sine, refuted.witness) in (-1, 0)


def test_identically_zero_by_a_relation() -> None:
    a = Name("a")
    tree = Sum((Power(Call("sin", a), 2), Power(Call("cos", a), 2), integer(-1)))
    setting = build_ring("s", ("a",), {"x": tree})
    decision = decide_positive(setting.ring, setting.converter().convert(tree).numerator)
    assert decision.verdict is Verdict.REFUTED and decision.because == "it is identically zero"


@given(st.integers(0, 10_000))
@settings(max_examples=60, deadline=None)
def test_never_a_false_verdict(seed: int) -> None:
    random = Random(seed)
    choices = [POSITIVE, Interval(), Interval(Fraction(-1), Fraction(2)), Interval(lower=Fraction(1))]
    ring = _ring(a=random.choice(choices), b=random.choice(choices))
    a, b = _gens(ring)
    element = ring.zero
    for _ in range(random.randint(1, 5)):
        element = element + random.randint(-3, 5) * a ** random.randint(0, 3) * b ** random.randint(0, 3)
    decision = decide_positive(ring, element, effort=60)
    if decision.verdict is Verdict.REFUTED and decision.witness is not None:
        point = {"a": Fraction(1), "b": Fraction(1), **decision.witness}
        assert ring.value(element, point) <= 0
        assert all(ring.box.intervals[name].contains(value) for name, value in decision.witness.items())
    if decision.verdict is Verdict.PROVED:
        for _ in range(200):
            point = {x: Fraction(random.randint(-40, 40), random.randint(1, 10)) for x in "ab"}
            if ring.box.contains(point):
                assert ring.value(element, point) > 0


@given(st.lists(st.integers(-6, 6), min_size=1, max_size=4), st.integers(-5, 5))
@settings(max_examples=100, deadline=None)
def test_real_roots_are_isolated(rational: list[int], shift: int) -> None:
    ring = _ring(x=Interval())
    (x,) = _gens(ring)
    element = (x**2 + shift) ** 2 + ring.zero
    for value in rational:
        element = element * (2 * x - value)
    roots = real_roots(ring, [element], "x")
    expected = {Fraction(v, 2) for v in rational}
    assert {r.exact for r in roots if r.exact is not None} >= expected
    irrational = [r for r in roots if r.exact is None]
    assert all(r.lower**2 < -shift < r.upper**2 or r.upper**2 < -shift < r.lower**2 for r in irrational)
    assert all(a.upper < b.lower for a, b in pairwise(roots))
    for root in irrational:
        low, high = map(Fraction, root.decimals(20))
        assert low < high and low <= root.lower and root.upper <= high
        assert high - low <= abs(low) * Fraction(1, 10**17)


@given(st.fractions(-9, 9, max_denominator=60), st.fractions(-9, 9, max_denominator=60))
def test_between_is_the_simplest_fraction(one: Fraction, other: Fraction) -> None:
    low, high = sorted((one, other))
    if low == high:
        return
    found = between(low, high)
    assert low < found < high
    for denominator in range(1, found.denominator):
        first = (low * denominator).__floor__() + 1
        assert not first < high * denominator


def test_cells_of_an_interval_with_a_gap() -> None:
    ring = _ring(x=Interval(declared=Sign.NONZERO))
    (x,) = _gens(ring)
    found, roots = cells(ring, [x**2 - 4], "x", ring.box.intervals["x"])
    assert len(found) == 4 and [root.exact for root in roots] == [-2, 2]

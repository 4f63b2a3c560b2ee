"""Values of trees and elements by the checkers' own code, and the points at which they are taken."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from flint import fmpq, fmpq_mat
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Interval, Sign
from symplant.algebra.expression import FUNCTIONS, Call, Name, Number
from symplant.algebra.ring import Ring
from symplant.checking.draws import Draws, simplest_between
from symplant.checking.evaluation import (
    BALLS,
    EXACT,
    IrrationalValueError,
    UndefinedValueError,
    ball,
    ball_precision,
    evaluate,
    value_text,
)
from symplant.checking.linear import adjugate_times, determinant
from symplant.checking.point import Point
from symplant.checking.points import choose_points
from symplant.checking.residues import PRIME, gcd_degree, generator_residues, root_residue
from symplant.checking.squares import radicands, with_rational_roots
from symplant.checking.termwise import Terms, horner
from symplant.derivation.derive import derive
from symplant.reading.arguments import model_from_arguments
from symplant.reading.arithmetic import read_arithmetic

SMALL = st.fractions(min_value=-9, max_value=9, max_denominator=6)


def value(text: str, **at: int | str) -> Fraction:
    result: Fraction = evaluate(read_arithmetic(text, list(at)), {k: Fraction(v) for k, v in at.items()})
    return result


@pytest.mark.parametrize(
    ("text", "at", "expected"),
    [
        ("-k/m", {"k": 3, "m": "1/2"}, "-6"),
        ("a - b*c + 2**-1", {"a": 1, "b": 2, "c": 3}, "-9/2"),
        ("-a**2", {"a": 3}, "-9"),
        ("(a + b)**3/(a - b)**2", {"a": 1, "b": 3}, "16"),
        ("sqrt(k/m)*m", {"k": 8, "m": 2}, "4"),
        ("a**(3/2)", {"a": 4}, "8"),
        (
            "sin(0) + 2*cos(a - a) + exp(0*a) + log(a/a) + sinh(0) + cosh(0) + tanh(0) + atan(0) + tan(0)",
            {"a": 5},
            "4",
        ),
        ("0.1 + 1e-3", {}, "101/1000"),
    ],
)
def test_exact_values(text: str, at: dict[str, int | str], expected: str) -> None:
    assert value(text, **at) == Fraction(expected)


@pytest.mark.parametrize("text", ["1/(a - a)", "(a - a)**-2", "sqrt(-a)", "log(a - 2)", "log(-a)"])
def test_undefined_values_are_told_in_both_arithmetics(text: str) -> None:
    tree = read_arithmetic(text, ["a"])
    with pytest.raises(UndefinedValueError):
        evaluate(tree, {"a": Fraction(2)})
    with ball_precision(), pytest.raises(UndefinedValueError):
        evaluate(tree, {"a": ball(Fraction(2))}, BALLS)


@pytest.mark.parametrize("text", ["sqrt(a)", "pi*a", "exp(a)", "sin(a)", "log(a)"])
def test_irrational_values_are_refused_exactly(text: str) -> None:
    with pytest.raises(IrrationalValueError):
        evaluate(read_arithmetic(text, ["a"]), {"a": Fraction(2)}, EXACT)


@pytest.mark.parametrize("name", FUNCTIONS)
def test_balls_hold_the_value_of_every_function(name: str) -> None:
    with ball_precision():
        result = evaluate(Call(name, Name("x")), {"x": ball(Fraction(1, 3))}, BALLS)
        assert float(result.mid()) == pytest.approx(getattr(math, name)(1 / 3), rel=1e-15)
        assert result.rad() < 1e-98


def test_a_name_of_a_letter_wins_over_the_constant_pi() -> None:
    assert evaluate(Name("pi"), {"pi": Fraction(3)}) == 3


@given(st.lists(SMALL, min_size=3, max_size=3))
def test_exact_values_lie_in_the_balls(numbers: list[Fraction]) -> None:
    tree = read_arithmetic("(a - b/3)**2*c - a*(b + 2*c)/7 + 1/(1 + a**2)", ["a", "b", "c"])
    at = dict(zip("abc", numbers, strict=True))
    with ball_precision():
        enclosure = evaluate(tree, {name: ball(number) for name, number in at.items()}, BALLS)
        assert enclosure.overlaps(ball(evaluate(tree, at)))


def test_long_values_are_shown_by_their_size() -> None:
    assert value_text(Fraction(-22, 7)) == "-22/7"
    assert value_text(Fraction(-(10**90) - 1)).startswith(
        "-1.000000000000000000e90 (exactly an integer of 91 digits"
    )
    assert value_text(Fraction(1, 3**20000)).startswith("3.7575572547")  # beyond what Python turns into text
    assert "e-9543" in value_text(Fraction(1, 3**20000))


@given(
    st.integers(1, 6).flatmap(
        lambda n: st.lists(st.lists(SMALL, min_size=n, max_size=n), min_size=n, max_size=n)
    )
)
@settings(max_examples=60)
def test_determinants_and_adjugates_agree_with_flint(rows: list[list[Fraction]]) -> None:
    n = len(rows)
    exact = fmpq_mat(n, n, [fmpq(x.numerator, x.denominator) for row in rows for x in row]).det()
    expected = Fraction(int(exact.p), int(exact.q))
    assert determinant(rows) == expected
    with ball_precision():
        assert determinant([[ball(x) for x in row] for row in rows]).overlaps(ball(expected))
    found, product = adjugate_times(rows, [[Fraction(i + 1)] for i in range(n)])
    assert found == expected
    if product is None:
        assert expected == 0
    else:
        for i, row in enumerate(rows):
            assert sum(x * y[0] for x, y in zip(row, product, strict=True)) == expected * (i + 1)


def test_a_matrix_with_a_zero_pivot_needs_no_special_care() -> None:
    rows = [[Fraction(x) for x in row] for row in ((0, 1, 0), (1, 0, 0), (0, 0, 2))]
    assert determinant(rows) == -2
    assert adjugate_times(rows, [[Fraction(1)], [Fraction(0)], [Fraction(0)]])[1] == [[0], [-2], [0]]


@given(
    st.dictionaries(st.tuples(*[st.integers(0, 3)] * 4), st.integers(-9, 9).filter(bool), max_size=12),
    st.lists(SMALL, min_size=4, max_size=4),
)
def test_values_of_elements_agree_with_the_ring(
    terms: dict[tuple[int, ...], int], numbers: list[Fraction]
) -> None:
    ring = Ring("s", ("a", "b", "c"))
    element = ring.element(("a", "s", "b", "c"), terms)
    values = dict(zip(("a", "s", "b", "c"), numbers, strict=True))
    taken = Terms(ring, element)
    coefficients = taken.coefficients(Point(values))
    assert horner(coefficients, values["s"]) == ring.value(element, values)
    with ball_precision():
        balls = taken.coefficients(Point(values, exact=False))
        assert all(x.overlaps(ball(y)) for x, y in zip(balls, coefficients, strict=True))
    whole = {key: Fraction(i * i + 3) for i, key in enumerate(ring.keys)}
    residues = taken.residues([int(whole[key]) for key in ring.keys], PRIME)
    assert horner(residues, int(whole["s"])) % PRIME == ring.value(element, whole) % PRIME


def test_values_of_elements_of_many_letters() -> None:
    letters = tuple(f"x{i}" for i in range(30))
    ring = Ring("s", letters)
    element = ring.one
    for i in range(0, 30, 3):
        element = (
            element * (ring.gen(letters[i]) - 2 * ring.gen(letters[i + 1]) * ring.gen("s"))
            if i < 24
            else element
        )
    values = {key: Fraction(i + 1, 2 + i % 3) for i, key in enumerate(ring.keys)}
    assert horner(Terms(ring, element).coefficients(Point(values)), values["s"]) == ring.value(
        element, values
    )


# Points modulo the prime


def test_the_prime_is_what_it_is_said_to_be() -> None:
    assert pow(2, PRIME - 1, PRIME) == 1 and fmpq(PRIME).p.is_prime()
    small = [2, *(p for p in range(3, 40) if all(p % q for q in range(2, p)))]
    assert all(root_residue(p) is not None for p in small)
    assert root_residue(-1) is None


def test_residues_obey_the_relations_of_functions() -> None:
    model = model_from_arguments(
        [["-sqrt(k/m)", "sin(x)*cos(y)"], ["tanh(q)", "-sqrt(2*k) - sqrt(3)"]],
        [[1], [0]],
        [[1, "sqrt(1 + sqrt(k))"]],
    )
    ring = derive(model).ring
    residues = generator_residues(ring, Draws("test"))
    assert residues is not None
    at = dict(zip(ring.keys, residues, strict=True))
    assert len([f for f in ring.functions if f.square]) >= 5
    for function in ring.functions:
        if function.square is not None:
            square = ring.element(*function.square)
            expected = ring.value(square, {key: Fraction(number) for key, number in at.items()})
            assert (at[function.key] ** 2 - int(expected)) % PRIME == 0


@pytest.mark.parametrize(
    ("first", "second", "degree"),
    [
        ([6, 11, 6, 1], [2, 3, 1], 2),
        ([1, 1], [2, 1], 0),
        ([0], [3, 1], 1),
        ([5], [7], 0),
        ([1, 2, 1], [1, 1], 1),
    ],
)
def test_degree_of_a_greatest_common_divisor(first: list[int], second: list[int], degree: int) -> None:
    assert gcd_degree(first, second) == gcd_degree(second, first) == degree


# Draws and points


@given(SMALL, SMALL)
def test_the_simplest_fraction_has_the_smallest_denominator(one: Fraction, other: Fraction) -> None:
    lower, upper = sorted((one, other))
    found = simplest_between(lower, upper)
    assert lower <= found <= upper
    for denominator in range(1, found.denominator):
        assert math.floor(upper * denominator) < math.ceil(lower * denominator)


@pytest.mark.parametrize("sign", [sign for sign in Sign if sign is not Sign.ZERO])
@pytest.mark.parametrize("bounds", [(None, None), (-3, None), (None, 4), (-1, 7), (0, 5), (-5, 0)])
def test_draws_lie_in_the_interval(sign: Sign, bounds: tuple[int | None, int | None]) -> None:
    lower, upper = (None if bound is None else Fraction(bound) for bound in bounds)
    interval = Interval(lower, upper, sign)
    if interval.sign is Sign.ZERO:
        return
    draws = Draws("x")
    values = [draws.value(interval) for _ in range(50)]
    assert all(interval.contains(drawn) for drawn in values)
    assert len(set(values)) > 5 and 0 not in values


def test_points_are_the_same_every_time_and_lie_in_the_box() -> None:
    model = model_from_arguments(
        [["-k/(m - M)", "c"], ["1/k", "-1/T"]],
        [[1], [0]],
        [[1, 0]],
        parameters={
            "m": {"range": [1, 2]},
            "M": {"range": [1, 2]},
            "k": {"sign": "negative"},
            "c": {},
            "T": {"range": [5, 5]},
        },
    )
    derivation = derive(model)
    points = choose_points(model, derivation.ring, derivation.assumed_nonzero)
    assert [dict(p.values) for p in points] == [
        dict(p.values) for p in choose_points(model, derivation.ring, derivation.assumed_nonzero)
    ]
    assert len(points) == 3 and all(point.exact for point in points)
    for point in points:
        assert model.box.contains(point.values) and point.values["m"] != point.values["M"]
        assert set(point.values) == {*model.letters, "s"}
        assert max(number.denominator for number in point.values.values()) < 200


def test_points_depend_on_the_plant() -> None:
    one = model_from_arguments([["-a"]], [["b"]], [[1]])
    other = model_from_arguments([["-a"]], [["2*b"]], [[1]])
    ring = Ring("s", ("a", "b"))
    assert choose_points(one, ring)[0].values != choose_points(other, ring)[0].values


def test_no_points_where_the_box_leaves_none() -> None:
    model = model_from_arguments(
        [["1/(a - b)"]], [[1]], [[1]], parameters={"a": {"range": [2, 2]}, "b": {"range": [2, 2]}}
    )
    assert choose_points(model, derive(model).ring) == ()


ROOTS = [
    "sqrt(k/m)",
    "sqrt(k*m) + sqrt(k/m)",
    "sqrt(1 - z**2)",
    "sqrt(a**2 + b**2)",
    "1/sqrt(L*C)",
    "sqrt(R**2 - 4*L/C)",
    "sqrt(2*g/h)*sqrt(1 + k/g)",
    "sqrt(a + sqrt(b))",
]


@pytest.mark.parametrize("text", ROOTS)
def test_roots_are_rational_at_the_points(text: str) -> None:
    letters = sorted({c for c in text if c.isalpha()} - set("sqrt")) or ["k"]
    model = model_from_arguments(
        [[f"-({text})"]], [[1]], [[1]], parameters={letter: {"sign": "positive"} for letter in letters}
    )
    derivation = derive(model)
    points = choose_points(model, derivation.ring, derivation.assumed_nonzero)
    assert len(points) == 3
    for point in points:
        assert point.exact and isinstance(point.evaluate(model.A[0][0]), Fraction)
        assert model.box.contains(point.values)


def test_roots_that_are_never_rational_get_balls() -> None:
    model = model_from_arguments([["-sqrt(2)*k"]], [[1]], [[1]])
    points = choose_points(model, derive(model).ring)
    assert len(points) == 3 and not any(point.exact for point in points)


def test_a_point_with_rational_roots_keeps_the_other_letters() -> None:
    under = radicands([read_arithmetic("sqrt(k/m) + c", ["k", "m", "c"])])
    start = {"k": Fraction(5), "m": Fraction(3), "c": Fraction(7)}
    found = with_rational_roots(under, start, lambda letter, number: 1 < number < 9)
    assert found is not None and found["c"] == 7 and 1 < found["k"] < 9
    assert evaluate(Call("sqrt", under[0]), found) > 0
    assert with_rational_roots([Number(Fraction(2))], {}, lambda letter, number: True) is None

"""The exact substitution: right derivations pass, and every kind of wrong one is refuted with the point."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction
from typing import Any

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from symplant.algebra.polynomial import Polynomial
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.point import Point
from symplant.checking.site import Site
from symplant.checking.substitution import STAGE, check_by_substitution
from symplant.derivation.derive import Derivation, Scaled, derive
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments

TWO_MASSES = model_from_arguments(
    [[0, 0, 1, 0], [0, 0, 0, 1], ["-(k1+k2)/m1", "k2/m1", "-c/m1", 0], ["k2/m2", "-k2/m2", 0, 0]],
    [[0, 0], [0, 0], ["1/m1", 0], [0, "1/m2"]],
    [[1, 0, 0, 0], [0, 1, 0, 0]],
    parameters={name: {"sign": "positive"} for name in ("m1", "m2", "k1", "k2", "c")},
    inputs=["F", "G"],
    outputs=["x", "y"],
)
HIDDEN = model_from_arguments([["-a", 0], [1, "-b"]], [[1], [0]], [["b - c", "c - a"]], [["d"]])


BELOW = re.compile(r"relative difference below [0-9.]+e-(8|9|1[0-9])[0-9] ")


def chain(masses: int) -> Model:
    """Masses in a row, each tied to the one before it, pushed at the first and read at the last."""
    n = masses
    A: list[list[Any]] = [[0] * (2 * n) for _ in range(2 * n)]
    for i in range(n):
        A[i][n + i] = 1
        for letter, offset in (("k", 0), ("c", n)):
            after = f" + {letter}{i + 2}" if i + 1 < n else ""
            A[n + i][offset + i] = f"-({letter}{i + 1}{after})/m{i + 1}"
            if i:
                A[n + i][offset + i - 1] = f"{letter}{i + 1}/m{i + 1}"
            if i + 1 < n:
                A[n + i][offset + i + 1] = f"{letter}{i + 2}/m{i + 1}"
    B = [[0] for _ in range(2 * n)]
    B[n][0] = "1/m1"  # type: ignore[call-overload]
    C = [[0] * (2 * n)]
    C[0][n - 1] = 1
    names = [f"{letter}{i + 1}" for i in range(n) for letter in "mkc"]
    return model_from_arguments(A, B, C, parameters={name: {"sign": "positive"} for name in names})


def checks_of(derivation: Derivation) -> dict[str, Check]:
    return {check.what: check for check in check_by_substitution(derivation).checks}


def verdicts(derivation: Derivation) -> set[Verdict]:
    return {check.verdict for check in checks_of(derivation).values()}


PLANTS: dict[str, Model] = {
    "two masses": TWO_MASSES,
    "hidden mode": HIDDEN,
    "roots": model_from_arguments(
        [[0, 1], ["-k/m", "-2*zeta*sqrt(k/m)"]],
        [[0], ["1/m"]],
        [[1, 0]],
        parameters={name: {"sign": "positive"} for name in ("k", "m", "zeta")},
    ),
    "singular E": model_from_arguments([[1, 0], [0, "-R"]], [[-1], [1]], [[0, 1]], None, [[0, "L"], [0, 0]]),
    "no letters": model_from_arguments([[-1, 2], ["1/3", -4]], [[1], [1]], [[1, 0]], [["0.5"]]),
    "unstable, discrete": model_from_arguments([["a", 1], [0, "b"]], [[0], [1]], [[1, 0]], time="discrete"),
    "numerator zero": model_from_arguments([["-a", 0], [0, "-b"]], [[1], [0]], [[0, 1]]),
    "rank lost": model_from_arguments([["-a", 1], [0, "-b"]], [[1, 2], ["b", "2*b"]], [[1, 0], [0, 1]]),
    "wide": model_from_arguments([["-a"]], [["b", "c"]], [["d"]]),
    "letters named as functions of other systems": model_from_arguments(
        [["-E", "I"], ["S", "-N"]], [["beta"], ["lambda"]], [["gamma", 1]]
    ),
}


@pytest.mark.parametrize("name", PLANTS)
def test_right_derivations_are_proved(name: str) -> None:
    result = check_by_substitution(derive(PLANTS[name]))
    assert {check.verdict for check in result.checks} == {Verdict.PROVED}
    assert len(result.points) == 3
    assert result.rows and all(row.left == row.right for row in result.rows)
    assert all(isinstance(row.left, Fraction) for row in result.rows)


@pytest.mark.parametrize(
    "entry",
    [
        "-sin(al)*cos(al) - tan(al)/3",
        "-exp(-a*h)",
        "-log(k) - sinh(k)/cosh(k)",
        "-atan(k) - pi*k",
        "-sqrt(2)*k - sin(k)**2",
    ],
)
def test_functions_agree_within_balls(entry: str) -> None:
    model = model_from_arguments([[entry, "1/k"], ["k", -1]], [[1], ["m"]], [[1, 1]])
    result = check_by_substitution(derive(model))
    tried = [check for check in result.checks if "polynomial" in check.what or "ator" in check.what]
    assert {check.verdict for check in tried} == {Verdict.AGREES}
    assert all("balls of 333 bits" in check.method and BELOW.match(check.detail) for check in tried)


def test_what_is_checked_and_how_is_told() -> None:
    told: list[str] = []
    result = check_by_substitution(derive(TWO_MASSES), stage=told.append)
    assert told == [STAGE]
    whats = [check.what for check in result.checks]
    assert whats[:3] == ["characteristic polynomial", "numerator x/F", "denominator x/F"]
    assert {"zero polynomial", "common factor y/G", "assumed nonzero"} <= set(whats)
    first = result.checks[0]
    assert "matrices as given" in first.method and "printed text" in first.method
    assert first.detail.startswith("equal at 3 points (m1, m2, k1, k2, c, s) = (")


def test_long_polynomials_are_told_to_be_checked_term_by_term() -> None:
    checks = checks_of(derive(chain(5)))
    assert {check.verdict for check in checks.values()} == {Verdict.PROVED}
    assert "term by term" in checks["characteristic polynomial"].method
    assert "printed text" in checks["numerator y1/u1"].method


# Wrong derivations


def with_characteristic(derivation: Derivation, change: Callable[[Any], Any]) -> Derivation:
    scaled = derivation.characteristic_polynomial
    polynomial = Polynomial(derivation.ring, change(scaled.polynomial.element))
    return replace(derivation, characteristic_polynomial=replace(scaled, polynomial=polynomial))


def with_channel(derivation: Derivation, index: int, **changes: Any) -> Derivation:
    channels = list(derivation.channels)
    channels[index] = replace(channels[index], **changes)
    return replace(derivation, channels=tuple(channels))


def one_sign_changed(derivation: Derivation, element: Any, term: int) -> Any:
    exponents = element.monoms()[term]
    value = element.coeffs()[term]
    return element - 2 * derivation.ring.context.from_dict({exponents: value})


@pytest.mark.parametrize("term", range(7))
def test_a_wrong_sign_in_any_term_is_refuted_with_the_point(term: int) -> None:
    right = derive(TWO_MASSES)
    wrong = with_characteristic(right, lambda element: one_sign_changed(right, element, term))
    check = checks_of(wrong)["characteristic polynomial"]
    assert check.verdict is Verdict.REFUTED
    assert check.detail.startswith("at m1 = ") and "s = " in check.detail
    assert "from the matrices" in check.detail and "from the result" in check.detail


def test_a_dropped_term_and_a_wrong_exponent_are_refuted() -> None:
    right = derive(TWO_MASSES)
    element = right.characteristic_polynomial.polynomial.element
    last = right.ring.context.from_dict({element.monoms()[-1]: element.coeffs()[-1]})
    for wrong in (element - last, element - last + last * right.ring.gen("m1"), 2 * element, -element):
        changed = with_characteristic(right, lambda _, wrong=wrong: wrong)
        assert checks_of(changed)["characteristic polynomial"].verdict is Verdict.REFUTED


def test_a_wrong_sign_in_a_long_polynomial_is_refuted() -> None:
    right = derive(chain(5))
    wrong = with_characteristic(right, lambda element: one_sign_changed(right, element, 333))
    assert checks_of(wrong)["characteristic polynomial"].verdict is Verdict.REFUTED


@pytest.mark.parametrize("side", [0, 1])
def test_a_wrong_multiplier_is_refuted(side: int) -> None:
    right = derive(TWO_MASSES)
    scaled = right.characteristic_polynomial
    multiplier = list(scaled.multiplier)
    multiplier[side] = multiplier[side] * right.ring.gen("m1")
    wrong = replace(
        right, characteristic_polynomial=Scaled(scaled.polynomial, (multiplier[0], multiplier[1]))
    )
    assert checks_of(wrong)["characteristic polynomial"].verdict is Verdict.REFUTED
    channel = replace(right.channels[0], multiplier=(multiplier[0], multiplier[1]))
    checks = checks_of(replace(right, channels=(channel, *right.channels[1:])))
    assert checks["numerator x/F"].verdict is checks["denominator x/F"].verdict is Verdict.REFUTED


def test_a_multiplier_that_vanishes_is_refuted() -> None:
    right = derive(HIDDEN)
    wrong = with_channel(
        right,
        0,
        multiplier=(right.ring.zero, right.ring.one),
        numerator=Polynomial(right.ring, right.ring.zero),
    )
    assert checks_of(wrong)["numerator y1/u1"].verdict is Verdict.REFUTED


def test_swapped_channels_are_refuted() -> None:
    right = derive(TWO_MASSES)
    first, second = right.channels[0].numerator, right.channels[2].numerator
    wrong = with_channel(with_channel(right, 0, numerator=second), 2, numerator=first)
    checks = checks_of(wrong)
    assert checks["numerator x/F"].verdict is checks["numerator y/F"].verdict is Verdict.REFUTED
    assert checks["numerator y/G"].verdict is Verdict.PROVED


@pytest.mark.parametrize("matrix", ["A", "B", "C"])
def test_a_derivation_of_another_plant_is_refuted(matrix: str) -> None:
    right = derive(HIDDEN)
    rows = [list(row) for row in getattr(HIDDEN, matrix)]
    rows[0][0] = model_from_arguments([["2*b"]], [[1]], [[1]]).A[0][0]
    model = replace(HIDDEN, **{matrix: tuple(map(tuple, rows))})
    wrong = replace(right, pencil=replace(right.pencil, model=model))
    assert Verdict.REFUTED in verdicts(wrong)


def test_a_wrong_zero_polynomial_is_refuted() -> None:
    right = derive(TWO_MASSES)
    assert right.zero_polynomial is not None
    zeros = right.zero_polynomial
    wrong = replace(zeros, polynomial=Polynomial(right.ring, -zeros.polynomial.element))
    check = checks_of(replace(right, zero_polynomial=wrong))["zero polynomial"]
    assert check.verdict is Verdict.REFUTED


def test_a_wrong_sign_under_functions_is_refuted() -> None:
    model = model_from_arguments([["-sin(al)", "cos(al)"], ["k", "-1"]], [[1], [0]], [[1, 0]])
    right = derive(model)
    wrong = with_characteristic(right, lambda element: one_sign_changed(right, element, 1))
    assert checks_of(wrong)["characteristic polynomial"].verdict is Verdict.REFUTED


def test_common_factors_that_are_too_large_or_too_small_are_refuted() -> None:
    right = derive(HIDDEN)
    ring, factor = right.ring, right.channels[0].common_factor
    assert factor.degree == 0  # the direct term d keeps the mode in view
    plain = derive(replace(HIDDEN, D=None, C=((HIDDEN.C[0][0], HIDDEN.C[0][1]),)))
    name = "common factor y1/u1"
    assert checks_of(plain)[name].verdict is Verdict.PROVED
    too_large = Polynomial(ring, ring.gen("s") + ring.gen("a"))
    check = checks_of(with_channel(right, 0, common_factor=too_large))[name]
    assert check.verdict is Verdict.REFUTED and "does not divide" in check.detail
    observable = derive(model_from_arguments([["-a", 0], [0, "-b"]], [[1], [1]], [[1, 0]]))
    assert observable.channels[0].common_factor.degree == 1
    too_small = with_channel(observable, 0, common_factor=Polynomial.constant(observable.ring, 1))
    check = checks_of(too_small)[name]
    assert check.verdict is Verdict.REFUTED and "degree 1" in check.detail


def test_a_common_factor_with_roots_is_checked() -> None:
    model = model_from_arguments(
        [["-sqrt(k/m)", 0], [0, "-sqrt(k)"]], [[1], [1]], [[1, 0]],
        parameters={"k": {"sign": "positive"}, "m": {"sign": "positive"}},
    )  # fmt: skip
    derivation = derive(model)
    assert derivation.channels[0].common_factor.degree == 1
    assert checks_of(derivation)["common factor y1/u1"].verdict is Verdict.PROVED


def test_no_point_means_undecided_and_says_so() -> None:
    model = model_from_arguments(
        [["1/(a - b)"]], [[1]], [[1]], parameters={"a": {"range": [2, 2]}, "b": {"range": [2, 2]}}
    )
    (check,) = check_by_substitution(derive(model)).checks
    assert check.verdict is Verdict.UNDECIDED and "no point" in check.detail


def test_a_point_that_is_a_pole_needs_no_division() -> None:
    point = Point({"a": Fraction(3), "b": Fraction(5), "c": Fraction(7), "d": Fraction(0), "s": Fraction(-3)})
    site = Site(HIDDEN, point)
    assert site.characteristic == 0
    # (b - c)(s + b) + (c - a) at s = -a
    assert site.numerator(0, 0) == (5 - 7) * (-3 + 5) + (7 - 3)
    assert site.zeros == site.numerator(0, 0)


# Random plants


ENTRIES = st.sampled_from(
    [
        "0",
        "0",
        "1",
        "-1",
        "a",
        "-b",
        "a*b",
        "a/b",
        "-1/c",
        "(a + b)/c",
        "2*c",
        "a - c",
        "1/(a + b)",
        "0.5",
        "c**2",
    ]
)


@st.composite
def plants(draw: st.DrawFn) -> Model:
    n, m, p = draw(st.integers(1, 3)), draw(st.integers(1, 2)), draw(st.integers(1, 2))

    def matrix(rows: int, columns: int) -> list[list[str]]:
        return [[draw(ENTRIES) for _ in range(columns)] for _ in range(rows)]

    return model_from_arguments(
        matrix(n, n),
        matrix(n, m),
        matrix(p, n),
        matrix(p, m) if draw(st.booleans()) else None,
        matrix(n, n) if draw(st.booleans()) else None,
        parameters={"a": {"sign": "positive"}, "b": {"sign": "positive"}, "c": {"sign": "nonzero"}},
    )


@given(plants())
@settings(max_examples=80, deadline=None)
def test_random_plants_pass(model: Model) -> None:
    try:
        derivation = derive(model)
    except InputError:
        assume(False)
    assert verdicts(derivation) == {Verdict.PROVED}


@given(plants(), st.data())
@settings(max_examples=60, deadline=None)
def test_random_plants_with_a_changed_term_are_refuted(model: Model, data: st.DataObject) -> None:
    try:
        right = derive(model)
    except InputError:
        assume(False)
    index = data.draw(st.integers(0, len(right.channels) - 1))
    which = data.draw(st.sampled_from(["numerator", "denominator"]))
    element = getattr(right.channels[index], which).element
    assume(len(element) > 0)
    term = data.draw(st.integers(0, len(element) - 1))
    polynomial = Polynomial(right.ring, one_sign_changed(right, element, term))
    wrong = with_channel(right, index, **{which: polynomial})
    assert checks_of(wrong)[f"{which} {right.channels[index].name}"].verdict is Verdict.REFUTED

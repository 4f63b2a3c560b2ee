"""Greatest common divisors of polynomials whose coefficients obey relations."""

from __future__ import annotations

from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.division import divides
from symplant.algebra.expression import Node
from symplant.algebra.functions import Setting, build_ring
from symplant.algebra.modular_point import random_point
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.derivation.derive import derive
from symplant.reading.arguments import model_from_arguments
from symplant.reading.arithmetic import read_arithmetic

LETTERS = ("a", "b", "c")


def setting() -> Setting:
    trees: dict[str, Node] = {
        text: read_arithmetic(text, LETTERS) for text in ("sin(a)", "cos(a)", "sqrt(b*c + 1)", "sqrt(3)")
    }
    return build_ring("s", LETTERS, trees)


SETTING = setting()
RING = SETTING.ring


def element(text: str) -> Element:
    return SETTING.converter().convert(read_arithmetic(text, (*LETTERS, "s"))).numerator


terms = st.sampled_from(
    [
        "1",
        "-2",
        "a",
        "b - c",
        "sin(a)",
        "cos(a)",
        "sqrt(b*c + 1)",
        "sqrt(3)",
        "a*cos(a) - 1",
        "sqrt(3)*sin(a)",
    ]
)
polynomials = st.builds(
    lambda coefficients, monic: element(
        " + ".join(f"({c})*s**{k}" for k, c in enumerate(coefficients))
        + (f" + s**{len(coefficients)}" if monic else "")
    ),
    st.lists(terms, min_size=1, max_size=3),
    st.booleans(),
)


@settings(max_examples=60, deadline=None)
@given(polynomials, polynomials, polynomials)
def test_what_was_multiplied_in_is_found(shared: Element, first: Element, second: Element) -> None:
    common = Polynomial.of(RING, shared)
    one, other = Polynomial.of(RING, shared * first), Polynomial.of(RING, shared * second)
    if one.is_zero or other.is_zero:
        return
    found = one.gcd(other)
    assert divides(found, one) and divides(found, other)
    assert divides(common, found)
    assert found.element == other.gcd(one).element
    assert RING.reduce(found.element) == found.element


@pytest.mark.parametrize(
    ("one", "other", "expected"),
    [
        # Factors that only the relations show.
        ("s**2 + cos(a)**2 - 1", "s - sin(a)", "s - sin(a)"),
        ("s**2 + cos(a)**2", "s - sin(a)", "1"),
        ("s**2 - 3", "s - sqrt(3)", "s - sqrt(3)"),
        ("s**2 - b*c - 1", "s**2 + (1 - sqrt(b*c + 1))*s - sqrt(b*c + 1)", "s - sqrt(b*c + 1)"),
        ("s*sin(a) - cos(a)", "s*(1 - cos(a)**2) - sin(a)*cos(a)", "sin(a)*cos(a) - (1 - cos(a)**2)*s"),
        ("(s + sin(a))*(s + 1)", "(s + cos(a))*(s + 1)", "s + 1"),
        ("s + sin(a)", "s + cos(a)", "1"),
    ],
)
def test_factors_that_relations_hide(one: str, other: str, expected: str) -> None:
    found = Polynomial.of(RING, element(one)).gcd(Polynomial.of(RING, element(other)))
    assert found.element == element(expected)


@pytest.mark.parametrize(
    ("A", "B", "C", "E"),
    [
        (
            [["-b/a", "-a", "1"], ["a", "c", "-sqrt(c*a)"], ["a", "c", "-sqrt(c*a)"]],
            [["-a/c"], ["sin(pi/3)*c"], ["-a"]],
            [["sin(c)", "sin(a)", "cos(2*c)"]],
            [["a", "log(b + 1)", "0"], ["-b/a", "a", "sin(pi/3)*c"], ["sin(pi/3)*c", "sin(a)", "sqrt(b/c)"]],
        ),
        (
            [
                ["exp(-a/2)", "sqrt(a)", "sin(c - a/2)"],
                ["1", "-b", "-3*a"],
                ["sin(a)", "tanh(a)", "sin(b - c/2)"],
            ],
            [["sin(c)"], ["sin(a)"], ["sqrt(b)"]],
            [["sin(b - c/2)", "sqrt(a)", "sin(b - a/2)"]],
            [["-b**2/a**2", "0", "0"], ["0", "-1/c", "0"], ["0", "0", "b"]],
        ),
    ],
)
def test_plants_with_many_functions_take_no_remainder_sequence(
    A: list[list[str]], B: list[list[str]], C: list[list[str]], E: list[list[str]]
) -> None:
    # The coefficients of a remainder sequence filled ten gigabytes here; this took milliseconds.
    table = {letter: {"sign": "positive"} for letter in LETTERS}
    (channel,) = derive(model_from_arguments(A, B, C, E=E, parameters=table)).channels
    assert channel.common_factor.degree == 0


def test_point_modulo_a_prime_in_spite_of_many_roots() -> None:
    # Drawn all at once, fourteen roots would exist once in sixteen thousand draws.
    texts = [f"{f}({a})" for f in ("sin", "sinh") for a in LETTERS] + [
        f"sqrt({a} + {k})" for a in LETTERS for k in (0, 1)
    ]
    texts += ["sqrt(2)", "sqrt(3 + sqrt(2))"]
    ring = build_ring("s", LETTERS, {text: read_arithmetic(text, LETTERS) for text in texts}).ring
    point = random_point(ring, Random(1))
    related = [function for function in ring.functions if function.square]
    assert len(related) == 14
    for function in related:
        assert function.square is not None
        relation = ring.gen(function.key) ** 2 - ring.element(*function.square)
        assert not point.image(relation)

"""What functions of letters can be over a box, and what follows for signs and for exact intervals."""

from __future__ import annotations

import math
from fractions import Fraction
from random import Random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.decide import decide_positive
from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, integer
from symplant.algebra.function_range import tree_range
from symplant.algebra.functions import build_ring
from symplant.algebra.value_range import ValueRange
from symplant.algebra.verdict import Verdict
from symplant.derivation.stability import stability
from symplant.reading.arguments import model_from_arguments

POSITIVE = Interval(declared=Sign.POSITIVE)
FUNCTIONS = ["exp", "log", "sqrt", "sin", "cos", "tan", "sinh", "cosh", "tanh", "atan"]


def _tree(random: Random, depth: int) -> Node:
    kind = random.randrange(8) if depth else random.randrange(2)
    parts = [_tree(random, depth - 1) for _ in range(2)] if depth else []
    match kind:
        case 0:
            return Name(random.choice("ab"))
        case 1:
            return Number(Fraction(random.randint(-3, 3), random.randint(1, 3)))
        case 2:
            return Sum(tuple(parts))
        case 3:
            return Product(tuple(parts))
        case 4:
            return Quotient(parts[0], parts[1])
        case 5:
            return Power(parts[0], random.randint(2, 3))
        case _:
            return Call(random.choice(FUNCTIONS), parts[0])


def _value(tree: Node, at: dict[str, float]) -> float:
    match tree:
        case Number(value=value):
            return float(value)
        case Name(name=name):
            return at[name]
        case Sum(terms=terms):
            return sum(_value(t, at) for t in terms)
        case Product(factors=factors):
            return math.prod(_value(t, at) for t in factors)
        case Quotient(numerator=top, denominator=bottom):
            return _value(top, at) / _value(bottom, at)
        case Power(base=base, exponent=exponent):
            return float(_value(base, at) ** exponent)
        case Call(function=function, argument=argument):
            return float(getattr(math, function)(_value(argument, at)))


@given(st.integers(0, 10**6))
@settings(max_examples=300, deadline=None)
def test_no_value_lies_outside_its_range(seed: int) -> None:
    random = Random(seed)
    tree = _tree(random, 3)
    box = {}
    for letter in "ab":
        low = Fraction(random.randint(-4, 4), random.randint(1, 3))
        box[letter] = ValueRange(low, low + Fraction(random.randint(0, 6), random.randint(1, 3)), True, True)
    found = tree_range(tree, box)
    for _ in range(20):
        at = {}
        for letter, values in box.items():
            assert values.low is not None and values.high is not None
            at[letter] = float(values.low + Fraction(random.randint(0, 16), 16) * (values.high - values.low))
        try:
            value = _value(tree, at)
        except (ValueError, ZeroDivisionError, OverflowError):
            continue  # not defined here
        if abs(value) > 1e12:
            continue  # rounding has the word
        slack = 1e-9 * (1 + abs(value))
        assert found.low is None or value >= float(found.low) - slack
        assert found.high is None or value <= float(found.high) + slack


@pytest.mark.parametrize(
    ("function", "low", "high", "sign"),
    [
        ("exp", None, 0, Sign.POSITIVE),
        ("cos", 0, 1, Sign.POSITIVE),
        ("sin", 0, 3, Sign.NONNEGATIVE),
        ("sin", 1, 3, Sign.POSITIVE),
        ("sin", 1, 4, Sign.REAL),
        ("tanh", -3, -1, Sign.NEGATIVE),
        ("log", 2, None, Sign.POSITIVE),
        ("log", 1, None, Sign.NONNEGATIVE),
        ("sqrt", 0, None, Sign.NONNEGATIVE),
        ("cosh", None, None, Sign.POSITIVE),
    ],
)
def test_signs_of_functions(function: str, low: int | None, high: int | None, sign: Sign) -> None:
    ends = [None if end is None else Fraction(end) for end in (low, high)]
    values = ValueRange(ends[0], ends[1], low is not None, high is not None)
    assert tree_range(Call(function, Name("x")), {"x": values}).sign is sign


@pytest.mark.parametrize("text", ["1 - exp(-h/tau)", "exp(h/tau) - 1", "2 - sin(h)", "1 + h**2 - cos(h)/2"])
def test_functions_of_arguments_of_known_sign(text: str) -> None:
    h, tau = Name("h"), Name("tau")
    ratio = Quotient(h, tau)
    trees: dict[str, Node] = {
        "1 - exp(-h/tau)": Sum(
            (integer(1), Product((integer(-1), Call("exp", Product((integer(-1), ratio))))))
        ),
        "exp(h/tau) - 1": Sum((Call("exp", ratio), integer(-1))),
        "2 - sin(h)": Sum((integer(2), Product((integer(-1), Call("sin", h))))),
        "1 + h**2 - cos(h)/2": Sum(
            (integer(1), Power(h, 2), Product((Number(Fraction(-1, 2)), Call("cos", h))))
        ),
    }
    setting = build_ring("s", ("h", "tau"), {"x": trees[text]}, Box({"h": POSITIVE, "tau": POSITIVE}))
    ratio_found = setting.converter().convert(trees[text])
    decision = decide_positive(setting.ring, ratio_found.numerator * ratio_found.denominator)
    assert decision.verdict is Verdict.PROVED
    # Equality at an end that belongs to the box is not positive.
    closed = Box({"h": Interval(Fraction(0)), "tau": POSITIVE})
    setting = build_ring("s", ("h", "tau"), {"x": trees[text]}, closed)
    found = setting.converter().convert(trees[text])
    wanted = Verdict.PROVED if text[0] == "2" or "cos" in text else Verdict.REFUTED
    assert decide_positive(setting.ring, found.numerator * found.denominator).verdict is wanted


def _line(entry: str, **more: object) -> list[tuple[str | None, str | None, str]]:
    table = {"x": {"sign": "real"}, "a": {"nominal": 1, "sign": "positive"}}
    model = model_from_arguments([[entry]], [["1"]], [["1"]], parameters=table)
    found = stability(model, along="x").intervals
    return [(i.start and i.start.lower[:17], i.end and i.end.upper[:17], i.verdict) for i in found]


def test_end_points_made_of_functions_of_numbers() -> None:
    # The decimals are those of numpy.roots; where one root meets its double no end point is certified.
    ends = _line("x**2 - exp(-a)*x - cos(a)")
    assert [verdict for _, _, verdict in ends] == ["unstable", "stable", "unstable"]
    assert ends[1][0] is not None and ends[1][1] is not None
    assert ends[1][0].startswith("-0.5737779885") and ends[1][1].startswith("0.94165742968")
    assert len(_line("x**3 - exp(a)*x + sqrt(a + 2)*sin(a)")) == 4


def test_a_root_of_the_norm_alone_is_no_end_point() -> None:
    # -(sqrt(x) + 2) - 1: the norm of sqrt(x) + 3 is zero at x = 9, where nothing happens.
    table = {"x": {"sign": "positive"}}
    model = model_from_arguments([["-sqrt(x) - 3"]], [["1"]], [["1"]], parameters=table)
    assert [i.verdict for i in stability(model, along="x").intervals] == ["stable"]

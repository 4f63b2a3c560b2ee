"""The table of LaTeX inputs: each is read right or refused, and never read as something else."""

from __future__ import annotations

import json
import operator
import random
from fractions import Fraction
from functools import reduce
from pathlib import Path
from typing import Any

import mpmath
import pytest

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.errors import InputError
from symplant.reading.latex import canonical_spelling, read_latex

TABLE = json.loads((Path(__file__).parent / "data" / "latex_table.json").read_text(encoding="utf-8"))
CASES = TABLE["cases"]

#: A letter of the text that cancels in the expected value is missing in the case's own list.
CANCELLED = {r"\frac{d}{d s}": ["d"]}

#: Legitimate inputs that are refused, and why.
REFUSED = {
    "no tree for it: a cube root": [r"\sqrt[3]{a}", r"x^{\frac{2}{3}}"],
    "no tree for it: a letter in the exponent": [
        *("A^T", "z^T", "z^{T_s}", "x^b_a", "a^{b^c}", "x_1^{n+1}", "a^{- b}"),
    ],
    "no tree for it: a value at a point": ["a|_{b=1}", "a b|_{b=1}"],
    "a comma is a decimal sign only if announced": ["1,5", "2 + 1,5 k"],
    "prints as something else": ["x^10", "a^-1"],
    "a product or the value of a function": [
        *("R(C)", "a(2)", r"a \left(b\right)", r"K \left(1\right)", "x[a]", "s(M)"),
    ],
    "a product or a mixed number": [r"3 \frac{1}{2} k"],
}
REFUSED_INPUTS = {latex for group in REFUSED.values() for latex in group}


def spellings(names: list[str]) -> dict[str, str]:
    """The spellings of some letters; of two letters that print alike only the first is declared."""
    declared: dict[str, str] = {}
    taken: dict[str, str] = {}
    for name in names:
        for spelling in TABLE["letters"][name]:
            if taken.setdefault(canonical_spelling(spelling), name) == name:
                declared[spelling] = name
    return declared


ALL_LETTERS = spellings(list(TABLE["letters"]))

#: For a letter that prints like another one, the other.
PRINTS_LIKE = {
    name: {canonical_spelling(text): other for text, other in ALL_LETTERS.items()}[
        canonical_spelling(found[0])
    ]
    for name, found in TABLE["letters"].items()
}


def declared_for(case: dict[str, Any]) -> dict[str, str]:
    if case["letters"] is None:
        return ALL_LETTERS
    return spellings([*case["letters"], *CANCELLED.get(case["latex"], [])])


def value(node: Node, point: dict[str, Any], functions: Any) -> Any:
    """The value of a tree, on its own: exact if the point is, floating if functions occur."""

    def of(part: Node) -> Any:
        match part:
            case Number(value=number):
                return functions.mpf(number.numerator) / number.denominator if functions else number
            case Name(name=name):
                return functions.pi if name == "pi" and name not in point else point[name]
            case Sum(terms=terms):
                return reduce(operator.add, map(of, terms))
            case Product(factors=factors):
                return reduce(operator.mul, map(of, factors))
            case Quotient(numerator=top, denominator=bottom):
                return of(top) / of(bottom)
            case Power(base=base, exponent=exponent):
                return of(base) ** exponent
            case Call(function=function, argument=argument):
                return getattr(functions, function)(of(argument))

    return of(node)


def agrees(node: Node, expected: str, rng: random.Random) -> bool:
    """Whether a tree and an expected expression have the same value at random points."""
    context = mpmath.mp.clone()
    context.dps = 60
    floating = any(isinstance(part, Call) for part in walk(node)) or "sqrt" in expected or "exp(" in expected
    for _ in range(4):
        drawn = {name: Fraction(rng.randint(1, 10**6), rng.randint(1, 10**6)) for name in TABLE["letters"]}
        exact = {name: drawn[PRINTS_LIKE[name]] for name in drawn}
        point: dict[str, Any] = dict(exact)
        names: dict[str, Any] = {"Rational": Fraction}
        if floating:
            point = {name: context.mpf(one.numerator) / one.denominator for name, one in exact.items()}
            names = {"Rational": lambda top, bottom: context.mpf(top) / bottom}
            names |= {name: getattr(context, name) for name in ("sin", "cos", "tan", "exp", "log", "sqrt")}
            names |= {name: getattr(context, name) for name in ("sinh", "cosh", "tanh", "atan")}
        want = eval(expected, {"__builtins__": {}}, {**names, **point})
        got = value(node, point, context if floating else None)
        if floating and abs(got - want) > context.mpf(10) ** -40 * (1 + abs(want)):
            return False
        if not floating and got != want:
            return False
    return True


def outcome(case: dict[str, Any]) -> Node | InputError:
    try:
        return read_latex(case["latex"], declared_for(case))
    except InputError as error:
        return error


def test_table_is_whole() -> None:
    assert len(CASES) == 304
    assert sum(case["expected"] is None for case in CASES) == 70
    assert {case["latex"] for case in CASES if case["expected"] is not None} > REFUSED_INPUTS


@pytest.mark.parametrize("case", CASES, ids=[f"{i}-{case['category']}" for i, case in enumerate(CASES)])
def test_right_or_refused(case: dict[str, Any]) -> None:
    result = outcome(case)
    if case["expected"] is None or case["latex"] in REFUSED_INPUTS:
        assert isinstance(result, InputError), result
        for fault in result.faults:
            assert fault.place.startswith("column ")
            assert 1 <= int(fault.place.removeprefix("column ")) <= len(case["latex"]) + 1
            assert fault.reason
    else:
        assert not isinstance(result, InputError), str(result)
        assert agrees(result, case["expected"], random.Random(case["latex"]))


@pytest.mark.parametrize("case", CASES, ids=[f"{i}-{case['category']}" for i, case in enumerate(CASES)])
def test_never_misread_with_every_letter_declared(case: dict[str, Any]) -> None:
    """More letters may turn an input into one that is refused, never into another value."""
    if case["latex"] in ("e^{-s T}", r"e^{-t/\tau}", "e^{T}", "e^T", "e^x", "e^{- T_{s} s}"):
        with pytest.raises(InputError):  # with e declared these are powers of it, which have no tree
            read_latex(case["latex"], ALL_LETTERS)
        return
    try:
        node = read_latex(case["latex"], ALL_LETTERS)
    except InputError:
        return
    assert case["expected"] is not None
    assert agrees(node, case["expected"], random.Random(case["latex"]))


def test_decimal_commas_once_announced() -> None:
    assert read_latex("1,5", {}, decimal_comma=True) == Number(Fraction(3, 2))
    node = read_latex("2 + 1,5 k", {"k": "k"}, decimal_comma=True)
    assert agrees(node, "2+Rational(3,2)*k", random.Random(0))


def test_results_do_not_depend_on_what_was_read_before() -> None:
    first = [repr(outcome(case)) for case in CASES]
    order = list(range(len(CASES)))
    random.Random(5).shuffle(order)
    hostile = ["b d e", "x = 5", r"\variable{p0q}", "(" * 70, r"\frac{k}{", "\x00", "i_d i_q", "a'''^"]
    second = dict[int, str]()
    for step, index in enumerate(order):
        with pytest.raises(InputError):
            read_latex(hostile[step % len(hostile)], {"k": "k"})
        second[index] = repr(outcome(CASES[index]))
    assert [second[index] for index in range(len(CASES))] == first


def test_results_do_not_depend_on_the_package_having_been_used_directly() -> None:
    read_latex("a", {"a": "a"})
    import latex2sympy2

    letters = {"E": "E", "I": "I", "L": "L", "x_1": "x1"}
    before = repr(read_latex(r"\frac{3 E I}{L^3} + x_1", letters))
    latex2sympy2.latex2sympy("x_1 = 5")
    latex2sympy2.latex2sympy("I = 3")
    with pytest.raises(Exception, match="expected"):
        latex2sympy2.latex2sympy("b d e =")
    assert repr(read_latex(r"\frac{3 E I}{L^3} + x_1", letters)) == before

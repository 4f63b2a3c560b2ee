"""The read-back: what is printed reads back to what was meant, and every misprint is refuted."""

from __future__ import annotations

import re
import time
from collections.abc import Mapping
from dataclasses import replace
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.conversion import Converter
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.layout import sides, without_layout
from symplant.checking.modular import MisprintError, read_modulo
from symplant.checking.point import Point
from symplant.checking.points import choose_points
from symplant.checking.readback import STAGE, Printed, read_back
from symplant.checking.residue_point import residue_points
from symplant.derivation.derive import Derivation, derive
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments
from symplant.reading.arithmetic import read_arithmetic

SPELLINGS = {
    "s": "s",
    "m": "m",
    r"k_{\mathrm{r}}": "k",
    r"\alpha": "al",
    r"\mathrm{mass}": "M",
    "h'": "h",
    "e": "e",
    r"\pi": "pi",
}


def derived(A: Any, B: Any = (("1",),), C: Any = (("1",),), **parameters: Any) -> Derivation:
    return derive(
        model_from_arguments(A, [list(r) for r in B], [list(r) for r in C], parameters=parameters or None)
    )


RATIONAL = derived([["-k/m - al*M", "h"], ["e", "-2"]], [["1"], ["0"]], [["1", "0"]])
POSITIVE = {"sign": "positive"}
FUNCTIONS = derived(
    [["-sqrt(k/m)", "sin(al)*cos(al)"], ["exp(-h*e)", "-log(M) - sqrt(2)"]],
    [["1"], ["0"]],
    [["1", "0"]],
    k=POSITIVE,
    m=POSITIVE,
    al={},
    h={},
    e={},
    M=POSITIVE,
)


def points_of(derivation: Derivation) -> tuple[Point, ...]:
    return choose_points(derivation.model, derivation.ring, derivation.assumed_nonzero)


def element_of(ring: Ring, text: str) -> Element:
    """An element from arithmetic in the ring's generators."""
    return Converter(ring).convert(read_arithmetic(text, ring.keys)).numerator


def check(latex: str, meant: str, over: str = "", derivation: Derivation = RATIONAL, **options: Any) -> Check:
    ring = derivation.ring
    divisor = element_of(ring, over) if over else None
    printed = Printed("formula", latex, ring, element_of(ring, meant), divisor, **options)
    (only,) = read_back([printed], SPELLINGS, points_of(derivation))
    return only


RIGHT = [
    (r"k_{\mathrm{r}} m - 2 s^{2}", "k*m - 2*s**2", ""),
    (r"-m \left(s - k_{\mathrm{r}}\right)^{3}", "-m*(s - k)**3", ""),
    (r"\frac{k_{\mathrm{r}}}{2 m} + 1", "k + 2*m", "2*m"),
    (r"1.5 \cdot 10^{3} \alpha", "1500*al", ""),
    (r"\frac{m}{4} \cdot 10^{-2}", "m", "400"),
    (r"1\,234\,567 m", "1234567*m", ""),
    (r"3 \, \mathrm{mass} \, m + h'^{2}", "3*M*m + h**2", ""),
    (r"e^{2} s", "e**2*s", ""),
    (r"\Delta(s) = s + m", "s + m", ""),
    (r"\bigl(s + m\bigr) \big/ \bigl(s - m\bigr)", "s + m", "s - m"),
    (r"\left(s + m\right)^{-1}", "1", "s + m"),
]


@pytest.mark.parametrize(("latex", "meant", "over"), RIGHT)
def test_right_formulas_are_proved_by_both_readers(latex: str, meant: str, over: str) -> None:
    found = check(latex, meant, over)
    assert found.verdict is Verdict.PROVED
    assert "exact values at points" in found.method and "second reader" in found.method
    assert "equal at 3 points" in found.detail and "equal at 2 points modulo" in found.detail


@pytest.mark.parametrize(
    ("latex", "meant"),
    [
        (r"\sqrt{k_{\mathrm{r}} m}", "_sqrt1"),
        (r"\left(k_{\mathrm{r}} m\right)^{\frac{3}{2}}", "_sqrt1**3"),
        (r"\sin^{2} \alpha + \cos(\alpha) s", "_sin1**2 + _cos1*s"),
        (r"\sqrt{2} \ln \mathrm{mass}", "_log1*_sqrt2"),
    ],
)
def test_functions_are_read_by_both_readers(latex: str, meant: str) -> None:
    keys = FUNCTIONS.ring.keys
    assert {"_sqrt1", "_sin1", "_cos1"} <= set(keys)
    log, two = (next(k for k in keys if k.startswith(p)) for p in ("_log", "_sqrt2"))
    found = check(latex, meant.replace("_log1", log).replace("_sqrt2", two), derivation=FUNCTIONS)
    assert found.verdict is Verdict.AGREES, found
    assert "balls" in found.method and "second reader" in found.method


def test_exponentials_are_read_by_the_second_reader() -> None:
    derivation = derived([["-exp(-a*h)"]], a={}, h={})
    ring = derivation.ring
    (key,) = (key for key in ring.keys if key.startswith("_exp"))
    spellings = {"a": "a", "h": "h", "s": "s"}
    for latex in (r"e^{-a h}", r"\exp\left(-a h\right)"):
        printed = Printed("x", latex + " s", ring, ring.gen(key) * ring.gen("s"))
        assert {c.verdict for c in read_back([printed], spellings, points_of(derivation))} == {Verdict.AGREES}
        (point,) = residue_points(ring, 1)
        assert read_modulo(latex, spellings, point) == point.element(ring.gen(key))


@pytest.mark.parametrize(
    ("latex", "meant", "over"),
    [
        (r"k_{\mathrm{r}} m + 2 s^{2}", "k*m - 2*s**2", ""),
        (r"k_{\mathrm{r}} m", "k*m - 2*s**2", ""),
        (r"k_{\mathrm{r}} m - 2 s^{3}", "k*m - 2*s**2", ""),
        (r"k_{\mathrm{r}} m - 20 s^{2}", "k*m - 2*s**2", ""),
        (r"-m \left(s + k_{\mathrm{r}}\right)^{3}", "-m*(s - k)**3", ""),
        (r"-m s - k_{\mathrm{r}}", "-m*(s - k)", ""),
        (r"\frac{k_{\mathrm{r}}}{m} + 1", "k + 2*m", "2*m"),
        (r"\frac{2 m}{k_{\mathrm{r}}}", "k", "2*m"),
        (r"1\,234\,576 m", "1234567*m", ""),
        (r"\alpha", "m", ""),
    ],
)
def test_misprints_are_refuted_with_the_point(latex: str, meant: str, over: str) -> None:
    found = check(latex, meant, over)
    assert found.verdict is Verdict.REFUTED
    assert re.match(r"at .*k = .*s = .*printed .*, meant ", found.detail)


@pytest.mark.parametrize(
    "latex",
    [
        r"k_{\mathrm{r} m",
        r"k_{\mathrm{r}} m +",
        r"\frac{k_{\mathrm{r}}}",
        r"\left(m s",
        "q m",
        r"m \\ \unknown",
        "",
        r"m = s < \alpha < m",
    ],
)
def test_what_cannot_be_read_is_refuted(latex: str) -> None:
    found = check(latex, "k*m")
    assert found.verdict is Verdict.REFUTED and found.detail.startswith("what is printed cannot be read")


def test_what_one_reader_alone_can_read_is_told() -> None:
    found = check(r"k_{\mathrm{r}} \times m", "k*m")
    assert found.verdict is Verdict.UNDECIDED and "one of two readers refuses it" in found.detail
    assert check(r"k_{\mathrm{r}} \times s", "k*m").verdict is Verdict.REFUTED


@pytest.mark.parametrize(
    ("latex", "difference", "verdict"),
    [
        (r"k_{\mathrm{r}} > 2 m", "k - 2*m", Verdict.PROVED),
        (r"k_{\mathrm{r}} \le 2 m", "k - 2*m", Verdict.PROVED),
        (r"k_{\mathrm{r}} > -2 m", "k - 2*m", Verdict.REFUTED),
        (r"2 m > k_{\mathrm{r}}", "k - 2*m", Verdict.REFUTED),
    ],
)
def test_of_inequalities_both_sides_are_read(latex: str, difference: str, verdict: Verdict) -> None:
    assert check(latex, difference).verdict is verdict


def test_of_equations_both_sides_are_read_where_asked_for() -> None:
    assert check(r"k_{\mathrm{r}} = 2 m", "k - 2*m", two_sided=True).verdict is Verdict.PROVED
    assert check(r"k_{\mathrm{r}} = 2 m", "k - 2*m").verdict is Verdict.REFUTED
    assert check(r"k_{\mathrm{r}} = 2 m", "2*m").verdict is Verdict.PROVED


def test_formulas_that_pass_are_told_together_and_failures_come_first() -> None:
    ring = RATIONAL.ring
    m, s = ring.gen("m"), ring.gen("s")
    printed = [
        Printed("first", "m s", ring, m * s),
        Printed("second", "m", ring, m),
        Printed("third", "m + s", ring, m - s),
    ]
    told: list[str] = []
    checks = read_back(printed, SPELLINGS, points_of(RATIONAL), stage=told.append)
    assert told == [STAGE]
    assert [(c.what, c.verdict) for c in checks] == [
        ("third", Verdict.REFUTED),
        ("2 printed formulas", Verdict.PROVED),
    ]
    assert checks[1].detail.startswith("first, second: each equal at 3 points")


def test_without_points_the_second_reader_alone_checks() -> None:
    ring = RATIONAL.ring
    (found,) = read_back([Printed("x", "m", ring, ring.gen("m"))], SPELLINGS, ())
    assert found.verdict is Verdict.PROVED and "exact" not in found.method


# Layout


@pytest.mark.parametrize(
    ("display", "expression"),
    [
        ("\\begin{align}\nG &= a \\notag \\\\\n&\\quad{} + b \\label{eq:x}\n\\end{align}", "G = a + b"),
        ("\\begin{split}\n& a \\\\[2pt] &\\qquad - b\n\\end{split}", "a - b"),
        (r"\left( a + b \right. \\ & \left. {} + c \right) d", r"( a + b + c ) d"),
        ("a % a comment with 50 \\% and = signs\n+ b", "a + b"),
        (r"12\,345 \\ &\quad{} \,678 \cdot a", r"12\,345\,678 \cdot a"),
        (r"\begingroup\allowdisplaybreaks a + k_{} \endgroup", "a + k_{}"),
        (r"\displaystyle \frac{a}{b} \tag{1}", r"\frac{a}{b}"),
    ],
)  # fmt: skip
def test_layout_is_left_out_and_nothing_else(display: str, expression: str) -> None:
    assert without_layout(display) == expression


@pytest.mark.parametrize(
    ("expression", "both", "expected"),
    [
        (r"a \leq b", False, ("a", "b")),
        (r"a \neq b", False, ("a", "b")),
        (r"\left(a\right) < b", False, (r"\left(a\right)", "b")),
        (r"G = H = a", False, ("a",)),
        (r"a = b", True, ("a", "b")),
    ],
)
def test_sides(expression: str, both: bool, expected: tuple[str, ...]) -> None:
    assert sides(expression, both) == expected


# The second reader alone


RING = Ring("s", ("a", "b"))
NAMES = {"s": "s", "a": "a", "b": "b"}


@pytest.mark.parametrize(
    "text",
    [
        "a +", "a b )", "( a", "a / b s", "2 3", "a 2", r"\frac{a}", r"\sqrt a", "a^2", "a^{b}", "a^{2}^{3}",
        "x", r"\sin^{-1} a", "a - - b", r"a \cdot", "{", "", r"\sin 2", r"a^{\frac{1}{3}}", "a = b", "a_{1}",
    ],
)  # fmt: skip
def test_what_our_writer_never_prints_is_refused(text: str) -> None:
    (point,) = residue_points(RING, 1)
    with pytest.raises(MisprintError):
        read_modulo(text, NAMES, point)


@st.composite
def formulas(draw: st.DrawFn, depth: int = 3) -> tuple[str, Any]:
    """LaTeX and the value of the same formula as a quotient of elements."""
    kind = draw(
        st.sampled_from(
            ["letter", "number"] if depth == 0 else ["letter", "sum", "product", "fraction", "power"]
        )
    )
    if kind == "letter":
        name = draw(st.sampled_from("sab"))
        return name, (RING.gen(name), RING.one)
    if kind == "number":
        number = draw(st.integers(1, 2_000_000))
        return f"{number:,}".replace(",", r"\,"), (RING.constant(number), RING.one)
    left, (p, q) = draw(formulas(depth=depth - 1))
    if kind == "power":
        exponent = draw(st.integers(2, 3))
        return rf"\left({left}\right)^{{{exponent}}}", (p**exponent, q**exponent)
    right, (u, v) = draw(formulas(depth=depth - 1))
    if kind == "sum":
        sign = draw(st.sampled_from("+-"))
        return rf"\bigl({left} {sign} \left({right}\right)\bigr)", (
            p * v + (u if sign == "+" else -u) * q,
            q * v,
        )
    if kind == "product":
        return rf"\left({left}\right) \cdot {right}", (p * u, q * v)
    return rf"\frac{{{left}}}{{{right}}}", (p * v, q * u)


@given(formulas())
@settings(max_examples=80, deadline=None)
def test_both_readers_find_the_value_of_random_formulas(made: tuple[str, Any]) -> None:
    latex, (top, bottom) = made
    if not bottom:
        return
    model = model_from_arguments([["a"]], [["b"]], [[1]])
    printed = Printed("x", latex, RING, top, bottom)
    (found,) = read_back([printed], NAMES, choose_points(model, RING, [bottom]))
    assert found.verdict in (Verdict.PROVED, Verdict.UNDECIDED)
    assert found.verdict is Verdict.PROVED or "division" in found.detail
    changed = replace(printed, element=top + bottom)
    (found,) = read_back([changed], NAMES, choose_points(model, RING, [bottom]))
    assert found.verdict is Verdict.REFUTED or "division" in found.detail


def long_formula(count: int) -> tuple[Ring, Element, str, Mapping[str, str]]:
    """A polynomial of many terms in six letters, and its LaTeX."""
    letters = tuple(f"p{i}" for i in range(6))
    ring = Ring("s", letters)
    element, parts = ring.zero, []
    for i in range(count):
        exponents = [(i // 4**j) % 4 for j in range(6)]
        value = i + 2 if i % 3 else -i - 2
        element = element + ring.element(letters, {tuple(exponents): value})
        powers = [f"p_{{{j}}}^{{{e}}}" for j, e in enumerate(exponents) if e]
        parts.append(f"{'+' if value > 0 else '-'} {abs(value)} " + " ".join(powers))
    return (
        ring,
        element,
        " ".join(parts).lstrip("+ "),
        {"s": "s", **{f"p_{{{j}}}": f"p{j}" for j in range(6)}},
    )


def test_long_formulas_are_read_quickly_and_a_dropped_term_is_found() -> None:
    ring, element, latex, spellings = long_formula(1000)
    model = model_from_arguments([["+".join(ring.letters)]], [[1]], [[1]])
    points = choose_points(model, ring)
    read_back([Printed("x", "p_{0}", ring, ring.gen("p0"))], spellings, points)  # loads the parser
    started = time.perf_counter()
    (found,) = read_back([Printed("x", latex, ring, element)], spellings, points)
    assert time.perf_counter() - started < 5  # about half a second
    assert found.verdict is Verdict.PROVED and "exact values" in found.method
    dropped = latex.replace("+ 501 ", "+ 500 ")
    assert dropped != latex
    assert read_back([Printed("x", dropped, ring, element)], spellings, points)[0].verdict is Verdict.REFUTED


def test_very_long_formulas_are_read_by_the_second_reader_alone_and_that_is_told() -> None:
    ring, element, latex, spellings = long_formula(4000)
    model = model_from_arguments([["+".join(ring.letters)]], [[1]], [[1]])
    points = choose_points(model, ring)
    (found,) = read_back([Printed("x", latex, ring, element)], spellings, points)
    assert found.verdict is Verdict.PROVED
    assert "exact" not in found.method and "second reader" in found.method
    dropped = " ".join(latex.split(" + ")[:-1])
    assert read_back([Printed("x", dropped, ring, element)], spellings, points)[0].verdict is Verdict.REFUTED


def plant_of(texts: list[list[str]]) -> Model:
    return model_from_arguments(texts, [[1]] * len(texts), [[1] * len(texts)])


def test_an_identically_vanishing_divisor_is_not_read_as_right() -> None:
    ring = derive(plant_of([["-a", "b"], ["1", "-1"]])).ring
    printed = Printed("x", r"\frac{a}{b - b}", ring, ring.gen("a"), ring.gen("b"))
    (found,) = read_back([printed], NAMES, choose_points(plant_of([["a", "b"], ["1", "1"]]), ring))
    assert found.verdict in (Verdict.UNDECIDED, Verdict.REFUTED)

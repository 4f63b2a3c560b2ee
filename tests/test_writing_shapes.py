"""Shapes as an author gives them: against SymPy's own, and by example."""

from fractions import Fraction

import pytest
import sympy

from symplant.algebra.conversion import Converter
from symplant.algebra.expression import Call, Name, Number, Quotient
from symplant.algebra.functions import build_ring
from symplant.algebra.ring import Ring
from symplant.reading.arithmetic import read_arithmetic
from symplant.writing.formula import FormulaWriter
from symplant.writing.shapes import multiplied_out, shape_tree
from symplant.writing.spelling import Spelling
from symplant.writing.width import width

LETTERS = ("a", "b", "c", "d", "k1", "k2", "k3", "m1", "m2", "m3", "J", "l", "g")
SPELLED = {name: f"{name[0]}_{{{name[1:]}}}" if name[1:] else name for name in LETTERS}
RING = Ring("s", LETTERS)
WRITER = FormulaWriter(RING, Spelling.of("s", SPELLED))


def element(text: str, ring: Ring = RING):
    """An element from arithmetic written in this file."""
    value = Converter(ring).convert(read_arithmetic(text, ring.keys))
    assert value.denominator.is_one()
    return value.numerator


SUMS = (
    "a*b + a*c + a*d",
    "m1*k2 + m1*k3 + m2*k1 + m2*k2",
    "(a + b)*(c + d)",
    "(a + b)*(c + d) + a**2",
    "J*m1 + J*m2 + m1*m2*l**2 + J*m3",
    "-a*b - a*c",
    "a**2*b - 2*a*b**2 + b**3",
    "6*a*k1 + 6*a*k2 + 4*b*k1",
    "k1*k2*m3 + k1*k3*m3 + k2*k3*m3 + k1*k2*m2 + k1*k3*m2",
    "m1*(k1 + k2)*(k2 + k3) - m2*k2**2",
    "a**3*b + a**2*c + a*d + J",
    "l**2*m1*m2 + J*(m1 + m2) - g*l*m1*m2",
    "(a - b)**4",
    "(a*c - b*d)**2 + (a*d + b*c)**2",
    "a*b*c + a*b*d + a*J*c + a*J*d + k1",
)


@pytest.mark.parametrize("text", SUMS)
def test_no_sum_is_longer_than_the_best_of_sympy(text):
    meant = element(text)
    shape = WRITER.trees.shapes.shortest(meant)
    assert multiplied_out(RING, shape) == meant
    ours = width(WRITER.writer.text(shape_tree(RING, shape)))
    symbols = {name: sympy.Symbol(spelled) for name, spelled in SPELLED.items()}
    theirs = sympy.sympify(str(meant).replace("^", "**"), locals=symbols)
    forms = [sympy.expand(theirs), sympy.factor(theirs)]
    forms += [sympy.collect(sympy.expand(theirs), symbol) for symbol in theirs.free_symbols]
    forms += [sympy.collect(sympy.expand(theirs), symbol, sympy.factor) for symbol in theirs.free_symbols]
    assert ours <= min(width(sympy.latex(form)) for form in forms) + 1e-9


POLYNOMIALS = {
    "m1*s**2 + c*s + k1": r"m_{1} s^{2} + c s + k_{1}",
    "(m1*s**2 + k1 + k2)*(m2*s**2 + k2) - k2**2": (
        r"m_{1} m_{2} s^{4} + \left(m_{2} \left(k_{1} + k_{2}\right) + k_{2} m_{1}\right) s^{2} + k_{1} k_{2}"
    ),
    "-a*s - b*s": r"-\left(a + b\right) s",
    "a*s - b*s + c - d": r"\left(a - b\right) s + c - d",
    "b*s - a*s": r"\left(b - a\right) s",
    "-a*s**2 + b": r"-a s^{2} + b",
    "2*a*b*s + 2*a*c*s + 2*a*d*s": r"2 a \left(b + c + d\right) s",
    "7*s**3": r"7 s^{3}",
    "-1": "-1",
    "0": "0",
    "1000000*s + 123456789": r"10^{6} s + 123\,456\,789",
    "123456789*s": r"123\,456\,789 \, s",
}


@pytest.mark.parametrize("text", POLYNOMIALS)
def test_polynomials_by_falling_powers(text):
    assert WRITER.latex(element(text)) == POLYNOMIALS[text]


FACTORED = {
    "m1*s**4 + k1*s**2": r"s^{2} \left(m_{1} s^{2} + k_{1}\right)",
    "a*(m1*s + c)*s*(b + d)": r"a s \left(b + d\right) \left(m_{1} s + c\right)",
    "(s + 1)**2*(s + 2)": r"\left(s + 2\right) \left(s + 1\right)^{2}",
    "a - b*s": r"-b s + a",
    "a*b - a*c": r"a \left(b - c\right)",
    "a*c - a*b - a": r"a \left(c - b - 1\right)",
    "s**2 + 1": r"s^{2} + 1",
}


@pytest.mark.parametrize("text", FACTORED)
def test_products(text):
    assert WRITER.factored_latex(element(text)) == FACTORED[text]


RATIOS = {
    ("k1", "m1*s**2 + c*s + k1"): r"\frac{k_{1}}{m_{1} s^{2} + c s + k_{1}}",
    ("-k1", "m1*s"): r"-\frac{k_{1}}{m_{1} s}",
    ("-a*s - b", "-c*s - d"): r"\frac{a s + b}{c s + d}",
    ("a - b*s", "s + 1"): r"\frac{-b s + a}{s + 1}",
    ("a*b*s + a*b*c", "s"): r"\frac{a b \left(s + c\right)}{s}",
    ("3*a", "1"): "3 a",
    ("0", "s"): r"\frac{0}{s}",
}


@pytest.mark.parametrize(("top", "bottom"), RATIOS)
def test_quotients(top, bottom):
    assert WRITER.ratio_latex(element(top), element(bottom)) == RATIOS[top, bottom]


def test_sines_stand_for_cosines_where_that_is_shorter():
    sine, cosine = Call("sin", Name("al")), Call("cos", Name("al"))
    setting = build_ring(
        "s", ("J", "m", "k", "al"), {"": sine, "other": cosine, "growth": Call("sinh", Name("al"))}
    )
    ring = setting.ring
    writer = FormulaWriter(ring, Spelling.of("s", {"J": "J", "m": "m", "k": "k", "al": r"\alpha"}))
    c, s, ch, sh = (ring.gen(key) for key in ("_cos1", "_sin1", "_cosh1", "_sinh1"))
    j, m = ring.gen("J"), ring.gen("m")
    assert writer.latex(ring.reduce(j + m * s**2)) == r"J + m \sin^{2} \alpha"
    assert writer.latex(ring.reduce(j + m * c**2)) == r"J + m \cos^{2} \alpha"
    assert writer.latex(ring.reduce(1 - c**2)) == r"\sin^{2} \alpha"
    assert writer.latex(ring.reduce(sh**2)) == r"\sinh^{2} \alpha"
    assert writer.latex(ring.reduce(ch**2)) == r"\cosh^{2} \alpha"


def test_functions_stand_behind_letters_and_before_the_variable():
    trees = {
        "f": Call("sqrt", Name("k")),
        "g": Call("exp", Name("m")),
        "h": Call("cos", Name("al")),
        "p": Name("pi"),
    }
    ring = build_ring("s", ("m", "k", "al"), trees).ring
    writer = FormulaWriter(ring, Spelling.of("s", {"m": "m", "k": "k", "al": r"\alpha"}))
    product = ring.constant(-3)
    for key in ("_cos1", "k", "pi", "_sqrt1", "s"):
        product = product * ring.gen(key)
    assert writer.latex(product) == r"-3 \pi k \sqrt{k} \cos(\alpha) s"
    assert writer.latex(ring.gen("_exp1") ** 3 * ring.gen("m")) == "m e^{3 m}"
    half = build_ring("s", ("m",), {"": Call("exp", Quotient(Name("m"), Number(Fraction(-6))))}).ring
    writer = FormulaWriter(half, Spelling.of("s", {"m": "m"}))
    assert [writer.latex(half.gen("_exp1") ** n) for n in (1, 4, 6)] == ["e^{-m/6}", "e^{-2 m/3}", "e^{-m}"]


def test_a_sum_over_many_lines_is_flat_and_equal():
    factors = zip("abcd", "bcdJ", "lgJa", strict=True)
    meant = element("*".join(f"({x} + {y} + {z})" for x, y, z in factors)) * element("k1 + k2 + m1")
    writer = FormulaWriter(RING, WRITER.spelling, 20.0)
    shape = writer.trees.shapes.polynomial(meant)
    assert multiplied_out(RING, shape) == meant
    assert all(not inner.brackets for summand in shape for held in summand.brackets for inner in held.inside)
    assert writer.polynomial("p", meant).width <= 20.0

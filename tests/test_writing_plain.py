"""Formulas on the terminal: in Unicode as by hand, in ASCII as Python arithmetic that reads back."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.conversion import Converter
from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.algebra.functions import build_ring
from symplant.algebra.ring import Ring
from symplant.reading.arithmetic import read_arithmetic
from symplant.writing.plain import PlainFormulas
from symplant.writing.plain_tree import UnicodeWriter, columns, terminal_names

LETTERS = ("m1", "m2", "k_r", "omega0", "lambda", "zeta", "K")
RING = Ring("s", LETTERS, Box({name: Interval(declared=Sign.POSITIVE) for name in LETTERS if name != "K"}))


def element(text: str, ring: Ring = RING):
    value = Converter(ring).convert(read_arithmetic(text, ring.keys))
    assert value.denominator.is_one()
    return value.numerator


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("m1*s**2 + 2*zeta*omega0*s + k_r", "m₁ s² + 2 ω₀ ζ s + k_r"),
        ("s**12 - lambda", "s¹² − λ"),
        ("-(m1 + m2)*s", "−(m₁ + m₂) s"),
        ("3*(m1 + m2 + lambda + zeta)**2", "3 (m₁ + m₂ + λ + ζ)²"),
        ("0", "0"),
        ("10000000*s", "10⁷ s"),
    ],
)
def test_polynomials_in_unicode(text, shown):
    formulas = PlainFormulas(RING)
    assert formulas.writer.text(formulas.trees.shortest(element(text))) == shown


def test_names_that_would_look_alike_stay_as_they_are():
    assert terminal_names(["k1", "k_1", "k2", "omega", "ω", "K_t2", "x12", "Lambda", "_q", "a1b"]) == {
        "k1": "k1",
        "k_1": "k_1",
        "k2": "k₂",
        "omega": "omega",
        "ω": "ω",
        "K_t2": "K_t₂",
        "x12": "x₁₂",
        "Lambda": "Λ",
        "_q": "_q",
        "a1b": "a1b",
    }


def test_every_greek_word_has_its_letter():
    names = terminal_names(["alpha", "lambda", "omicron", "Omega", "epsilon", "xi", "Upsilon"])
    assert "".join(names.values()) == "αλomicronΩεξΥ"


K, A, M = Name("k"), Name("alpha"), Name("m")
MINUS = Number(-1)
TREES = {
    "k/m": Quotient(K, M),
    "k m / α": Quotient(Product((K, M)), A),
    "k / (α m)": Quotient(K, Product((A, M))),
    "−(k + m) / α": Quotient(Product((MINUS, Sum((K, M)))), A),
    "(k + m) / (k − m)": Quotient(Sum((K, M)), Sum((K, Product((MINUS, M))))),
    "(k/m) α": Product((Quotient(K, M), A)),
    "(k/m)²": Power(Quotient(K, M), 2),
    "k⁻²": Power(K, -2),
    "sin²(α) √k √(k m)": Product((Power(Call("sin", A), 2), Call("sqrt", K), Call("sqrt", Product((K, M))))),
    "exp(−α k) ln(m) arctan(k/m)": Product(
        (Call("exp", Product((MINUS, A, K))), Call("log", M), Call("atan", Quotient(K, M)))
    ),
    "2 π k": Product((K, Number(2), Name("pi"))),
    "(√k)³": Power(Call("sqrt", K), 3),
    "2·3 k": Product((Number(2), Number(3), K)),
}


@pytest.mark.parametrize("shown", TREES)
def test_trees_in_unicode(shown):
    assert UnicodeWriter(terminal_names(["k", "alpha", "m"])).text(TREES[shown]) == shown


TOP, BOTTOM = element("omega0**2"), element("s**2 + 2*zeta*omega0*s + omega0**2")


def test_a_fraction_in_two_storeys():
    assert PlainFormulas(RING).ratio("G(s)", TOP, BOTTOM).split("\n") == [
        "               ω₀²",
        "G(s) = ───────────────────",
        "       s² + 2 ω₀ ζ s + ω₀²",
    ]
    assert PlainFormulas(RING, unicode=False).ratio("G(s)", -TOP, BOTTOM).split("\n") == [
        "                     omega0**2",
        "G(s) = - ----------------------------------",
        "         s**2 + 2*omega0*zeta*s + omega0**2",
    ]


def test_a_short_fraction_stays_on_the_line_and_a_long_one_is_broken():
    assert PlainFormulas(RING).ratio("", element("K"), element("m1")) == "K/m₁"
    assert PlainFormulas(RING, 20).ratio("G", TOP, BOTTOM).split("\n") == [
        "G = ω₀²",
        "      / (s²",
        "        + 2 ω₀ ζ s",
        "        + ω₀²)",
    ]


@pytest.mark.parametrize(
    ("text", "shown", "plain"),
    [
        ("2*K - 15", "K > 15/2", "K > 15/2"),
        ("m1*K - lambda", "K > λ/m₁", "K > lambda/m1"),
        ("k_r - m1*omega0**2", "k_r > m₁ ω₀²", "k_r > m1*omega0**2"),
        ("-m1 - m2", "m₁ + m₂ < 0", "m1 + m2 < 0"),
    ],
)
def test_conditions(text, shown, plain):
    assert PlainFormulas(RING).condition(element(text)) == shown
    assert PlainFormulas(RING, unicode=False).condition(element(text)) == plain
    assert PlainFormulas(RING).condition(element(text), ">=") == shown.replace(">", "≥").replace("<", "≤")


@st.composite
def elements(draw, ring: Ring, largest: int = 8):
    total = ring.zero
    for _ in range(draw(st.integers(1, largest))):
        term = ring.constant(draw(st.integers(-20_000_000, 20_000_000)))
        for key in draw(st.lists(st.sampled_from(ring.keys), max_size=5)):
            term = term * ring.gen(key)
        total = total + term
    return ring.reduce(total)


FUNCTIONS: dict[str, Node] = {
    "sine": Call("sin", Name("lambda")),
    "decay": Call("exp", Quotient(Product((MINUS, Name("K"), Name("m1"))), Number(3))),
    "root": Call("sqrt", Quotient(Name("m1"), Name("m2"))),
    "pi": Name("pi"),
}
SETTING = build_ring("s", LETTERS, FUNCTIONS, RING.box)


@given(elements(SETTING.ring), st.integers(30, 100))
@settings(max_examples=100, deadline=None)
def test_ascii_lines_fit_and_read_back(element, width):
    ring = SETTING.ring
    formulas = PlainFormulas(ring, width, unicode=False)
    for text in (formulas.polynomial("p", element), formulas.factored("p", element)):
        lines = text.split("\n")
        assert all(line.isascii() and len(line) <= width for line in lines)
        tree = read_arithmetic(" ".join(lines).removeprefix("p = "), [*LETTERS, "s"])
        # exp(-2*K*m1/3) is a power of the ring's generator: both trees go into one ring.
        setting = build_ring("s", LETTERS, {"printed": tree, **FUNCTIONS}, ring.box)
        value = setting.converter().convert(tree)
        meant = setting.ring.adopt(element, ring)
        assert setting.ring.is_zero(value.numerator - meant * value.denominator)


@given(elements(SETTING.ring), elements(SETTING.ring), st.integers(30, 100))
@settings(max_examples=60, deadline=None)
def test_unicode_lines_fit(top, bottom, width):
    formulas = PlainFormulas(SETTING.ring, width)
    texts = [formulas.polynomial("Δ(s)", top), formulas.ratio("", top, bottom or SETTING.ring.one)]
    texts += [formulas.condition(top), formulas.ratio("G(s)", top, bottom or SETTING.ring.one)]
    for line in "\n".join(texts).split("\n"):
        assert columns(line) <= width
        assert line == line.rstrip()

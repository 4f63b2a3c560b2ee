"""Conditions as people state them."""

import pytest

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.conversion import Converter
from symplant.algebra.ring import Ring
from symplant.reading.arithmetic import read_arithmetic
from symplant.writing.conditions import condition
from symplant.writing.formula import FormulaWriter
from symplant.writing.spelling import Spelling
from symplant.writing.width import width

POSITIVE = "m k c l g T"
LETTERS = (*POSITIVE.split(), "K", "x", "n")
SIGNS = {**dict.fromkeys(POSITIVE.split(), Sign.POSITIVE), "n": Sign.NEGATIVE, "K": Sign.REAL, "x": Sign.REAL}
RING = Ring("s", LETTERS, Box({name: Interval(declared=sign) for name, sign in SIGNS.items()}))
WRITER = FormulaWriter(RING, Spelling.of("s", {name: name for name in LETTERS}))


def element(text: str):
    return Converter(RING).convert(read_arithmetic(text, LETTERS)).numerator


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("2*K - 15", r"K > \frac{15}{2}"),
        ("15 - 2*K", r"K < \frac{15}{2}"),
        ("3*K", "K > 0"),
        ("-K", "K < 0"),
        ("k - m*g*l", "k > m l g"),
        ("m*g*l - k", "m l g > k"),
        ("m*K - c*l", r"K > \frac{c l}{m}"),
        ("c*l - m*K", r"K < \frac{c l}{m}"),
        ("n*K - c", r"K < \frac{c}{n}"),
        ("c*k - m*l*g", "k c > m l g"),
        ("4*c*k - 6", r"k c > \frac{3}{2}"),
        ("6 - 4*c*k", r"k c < \frac{3}{2}"),
        ("5*k - 5*m", "k > m"),
        ("m*k*(c - l)", "c > l"),
        ("m**2*K", "K > 0"),
        ("n*(c - l)", "l > c"),
        ("x*(k - c)", r"x \left(k - c\right) > 0"),
        ("-x**2*K*m", "-K x^{2} > 0"),
        ("m*k + c*l", "m k + c l > 0"),
        ("-m - c", "m + c < 0"),
        ("K**2 - x", r"K^{2} > x"),
        ("c + k - l - g", r"k + c - l - g > 0"),
        ("K*x - 1", "K x > 1"),
        ("7", "1 > 0"),
        ("-7", "1 < 0"),
        ("0", "0 > 0"),
    ],
)
def test_what_is_said(text, shown):
    assert condition(WRITER, element(text)).latex == shown


def test_a_letter_can_be_asked_for():
    meant = element("c*k - m*l*g")
    assert condition(WRITER, meant, isolate="l").latex == r"l < \frac{k c}{m g}"
    assert condition(WRITER, meant, isolate="T").latex == "k c > m l g"  # it does not occur
    assert condition(WRITER, element("K**2*k - c"), isolate="K").latex == "k K^{2} > c"  # it is not linear
    assert condition(WRITER, element("x*K - c*k"), isolate="K").latex == "K x > k c"  # x may have either sign


@pytest.mark.parametrize(
    ("relation", "straight", "turned"),
    [
        (">", ">", "<"),
        (">=", r"\ge", r"\le"),
        ("<", "<", ">"),
        ("<=", r"\le", r"\ge"),
        ("=", "=", "="),
        ("!=", r"\ne", r"\ne"),
    ],
)
def test_every_relation_is_kept_or_turned_with_its_sides(relation, straight, turned):
    assert condition(WRITER, element("2*K - 15"), relation).latex == rf"K {straight} \frac{{15}}{{2}}"
    assert condition(WRITER, element("15 - 2*K"), relation).latex == rf"K {turned} \frac{{15}}{{2}}"


def test_nonzero_factors_fall_away_from_an_equation_only():
    assert condition(WRITER, element("n*(k - c)"), "!=").latex == r"k \ne c"
    assert condition(WRITER, element("x*(k - c)"), "!=").latex == r"x \left(k - c\right) \ne 0"


def test_a_long_condition_is_set_in_lines():
    text = " + ".join(f"m**{i}*k*c**{i}*T" for i in range(1, 12)) + " - " + "*".join(["l", "g", "x**3"])
    writer = FormulaWriter(RING, WRITER.spelling, 24.0)
    for meant in (element(text), element(f"-({text})"), element(text + " - g - x")):
        formula = condition(writer, meant).formula
        assert len(formula.rows) > 2
        assert formula.width <= 24.0
        assert all(width(row.replace("&", "")) <= 24.2 for row in formula.rows)
        assert formula.display().count(">") + formula.display().count("<") == 1

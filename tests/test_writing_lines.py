"""Lines never wider than the page, and what stands in them."""

import math
import shutil
import subprocess
from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.conversion import Converter
from symplant.algebra.determinant import determinant
from symplant.algebra.expression import Call, Name, Number, Power, Product, Quotient, Sum
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.reading.latex import read_latex
from symplant.writing.display import PAGE_LINES, set_formula
from symplant.writing.formula import FormulaWriter
from symplant.writing.latex_tree import LatexWriter, matrix_latex
from symplant.writing.lines import broken
from symplant.writing.spelling import Spelling
from symplant.writing.width import RELATION, width


def chain(masses: int):
    """The characteristic polynomial of a chain of damped masses, the first one tied to the wall."""
    letters = [f"{kind}{i + 1}" for kind in "mkc" for i in range(masses)]
    ring = Ring("s", letters)
    s = ring.gen("s")
    rows = [[ring.zero] * masses for _ in range(masses)]
    for i in range(masses):
        link = ring.gen(f"c{i + 1}") * s + ring.gen(f"k{i + 1}")
        rows[i][i] = rows[i][i] + ring.gen(f"m{i + 1}") * s**2 + link
        if i:
            rows[i - 1][i - 1] = rows[i - 1][i - 1] + link
            rows[i - 1][i] = rows[i][i - 1] = -link
    spelling = Spelling.of("s", {name: f"{name[0]}_{{{name[1:]}}}" for name in letters})
    return ring, determinant(rows, ring.one), spelling


CHAINS = {masses: chain(masses) for masses in (2, 3, 4, 5, 6)}
NAMES = {"m": "m_{1}", "k": r"k_{\mathrm{r}}", "al": r"\alpha", "l": "l"}
SPELLING = Spelling.of("s", NAMES)
WRITER = LatexWriter(SPELLING)


def setting(masses: int, room: float):
    ring, element, spelling = CHAINS[masses]
    return FormulaWriter(ring, spelling, room).polynomial(r"\Delta(s)", element)


@pytest.mark.parametrize("masses", CHAINS)
@pytest.mark.parametrize("room", [18.0, 24.0, 32.0, 40.0])
def test_no_line_of_a_chain_is_wider_than_the_page(masses, room):
    formula = setting(masses, room)
    left = width(formula.lhs) + RELATION
    for line, indent in zip(formula.lines, formula.indents, strict=True):
        assert left + indent + width(line) <= room + 0.01
    assert formula.width <= room + 0.01
    used = sum(width(line) for line in formula.lines) / len(formula.lines)
    assert len(formula.lines) < 3 or used > 0.5 * (room - left)  # the page is used, too


@pytest.mark.parametrize("masses", [2, 3])
def test_the_lines_of_a_chain_read_back(masses):
    ring, element, spelling = CHAINS[masses]
    formula = setting(masses, 20.0)
    value = Converter(ring).convert(read_latex(formula.body, spelling.inverse))
    assert (value.numerator, value.denominator) == (element, ring.one)


#: Trees that cannot be broken between terms, with a sample of what they are broken into.
STUBBORN = {
    "letters": (Product(tuple(Power(Name("k"), n) for n in range(2, 30))), r"\cdot k"),
    "brackets": (
        Product(tuple(Power(Sum((Name("k"), Name("m"), Number(Fraction(n)))), 2) for n in range(1, 7))),
        r"\cdot \left(k",
    ),
    "number": (Number(Fraction(10**99 - 1)), r"\,999"),
    "function": (
        Product((Name("k"), Call("sin", Sum(tuple(Power(Name("al"), n) for n in range(2, 30)))), Name("s"))),
        r"\sin\bigl(",
    ),
    "root": (Call("sqrt", Sum(tuple(Power(Name("m"), n) for n in range(2, 30)))), r"\bigr)^{1/2}"),
    "cube of a function": (
        Power(Call("cos", Sum(tuple(Power(Name("al"), n) for n in range(2, 20)))), 3),
        r"\bigr)^{3}",
    ),
    "fraction": (
        Product(
            (
                Number(Fraction(-1)),
                Name("l"),
                Quotient(
                    Sum(tuple(Power(Name("m"), n) for n in range(2, 20))),
                    Sum(tuple(Power(Name("k"), n) for n in range(2, 20))),
                ),
            )
        ),
        r"\big/ \bigl(k",
    ),
    "exponential": (
        Call("exp", Product((Number(Fraction(-1)), Sum(tuple(Power(Name("m"), n) for n in range(2, 20)))))),
        r"\exp\bigl(",
    ),
    "tall": (
        Product((Name("l"), Sum(tuple(Quotient(Power(Name("m"), n), Name("k")) for n in range(1, 16))))),
        r"\biggl(",
    ),
}  # fmt: skip


@pytest.mark.parametrize("what", STUBBORN)
@pytest.mark.parametrize("room", [14.0, 25.0])
def test_whatever_is_wider_than_a_line_is_broken_and_reads_back(what, room):
    tree, sample = STUBBORN[what]
    formula = set_formula("q", tree, WRITER, room)
    assert len(formula.lines) > 1
    assert formula.width <= room
    left = width("q") + RELATION
    for line, indent in zip(formula.lines, formula.indents, strict=True):
        assert left + indent + width(line) <= room + 0.01
    assert sample in "\n".join(formula.lines)
    point = {"m": 0.31, "k": 0.83, "al": 0.27, "l": -0.6, "s": 0.9}
    read = read_latex(formula.body, SPELLING.inverse)
    assert number(read, point) == pytest.approx(number(tree, point), rel=1e-9)


def number(node, point):
    """The value of a tree in floating point: a second opinion on what the lines say."""
    match node:
        case Number(value=value):
            return float(value)
        case Name(name=name):
            return point[name]
        case Sum(terms=terms):
            return sum(number(term, point) for term in terms)
        case Product(factors=factors):
            return math.prod(number(factor, point) for factor in factors)
        case Quotient(numerator=top, denominator=bottom):
            return number(top, point) / number(bottom, point)
        case Power(base=base, exponent=exponent):
            return number(base, point) ** exponent
        case Call(function=function, argument=argument):
            return getattr(math, function)(number(argument, point))


@given(st.lists(st.integers(-99, 99).filter(bool), min_size=2, max_size=40), st.floats(6.0, 40.0))
@settings(max_examples=100, deadline=None)
def test_lines_hold_every_term_once_and_in_order(values, room):
    tree = Sum(tuple(Product((Number(Fraction(value)), Name("k"))) for value in values))
    lines = broken(WRITER, tree, room)
    assert " ".join(line.text for line in lines) == WRITER.text(tree)
    assert all(line.width + line.indent <= room for line in lines)
    for line, after in pairwise(lines):
        sign, *rest = after.text.split(" ")
        assert sign in ("+", "-")
        term = " ".join(rest[: 2 if rest[0].isdigit() else 1])
        assert line.width + line.indent + width(f"{sign} {term}") > room  # each line is as full as can be


def test_a_long_left_side_has_a_line_of_its_own():
    lhs = r"\det\left(s E - A\right) \left(m_{1} + m_{2}\right)"
    terms = Sum(tuple(Power(Name("k"), n) for n in range(2, 30)))
    rows = set_formula(lhs, terms, WRITER, 25.0).rows
    assert rows[0] == f"&{lhs}"
    assert rows[1].startswith(r"&\quad = k_{\mathrm{r}}^{2} + ")
    assert all(row.startswith(r"&\quad") for row in rows[1:])


def test_displays():
    ring, element, spelling = CHAINS[2]
    writer = FormulaWriter(ring, spelling)
    formula = writer.polynomial(r"\Delta(s)", element)
    assert len(formula.lines) == 2
    plain, numbered = formula.display(), formula.display(label="eq:poles")
    assert plain.startswith("\\begin{align*}\n\\Delta(s) &= m_{1} m_{2} s^{4}")
    assert plain.count(r"\\") == 1
    assert "\\notag \\\\\n&\\quad{} + " in numbered
    assert numbered.endswith("\\label{eq:poles}\n\\end{align}")
    inside = formula.display("equation", "eq:poles")
    assert inside.startswith("\\begin{equation}\n\\label{eq:poles}\n\\begin{aligned}")
    assert formula.display("aligned").startswith("\\begin{aligned}\n\\Delta(s) &=")
    short = writer.polynomial("p", ring.gen("s"))
    assert short.display("equation") == "\\begin{equation*}\np = s\n\\end{equation*}"
    with pytest.raises(ValueError, match="unknown environment"):
        formula.display("gather")
    long = setting(4, 24.0)
    assert len(long.lines) > PAGE_LINES
    for environment in ("align", "equation"):
        assert long.display(environment).startswith("\\begingroup\\allowdisplaybreaks\n\\begin{align*}")


def test_a_document_of_formulas_has_no_line_that_runs_off_the_page(tmp_path):
    displays = [setting(masses, 32.0) for masses in CHAINS]
    for masses in (2, 3):
        ring, element, spelling = CHAINS[masses]
        top, bottom = Polynomial.of(ring, element).coefficients[:2]
        writer = FormulaWriter(ring, spelling)
        displays += [writer.ratio("G(s)", top, element), writer.ratio("G(s)", bottom * bottom, element)]
        displays.append(writer.factored(r"\Delta(s)", element * (element + ring.one) * ring.gen("s") ** 2))
    displays += [
        set_formula("q", tree, WRITER, room) for tree, _ in STUBBORN.values() for room in (14.0, 32.0)
    ]
    if shutil.which("pdflatex") is None:  # the estimate, which another test holds against TeX, has to do
        assert all(formula.width <= 32.01 for formula in displays)
        return
    wide = tuple(tuple(Name("k") if i == j else Number(Fraction(0)) for j in range(12)) for i in range(12))
    parts = [formula.display(label=f"f{i}") for i, formula in enumerate(displays)]
    parts += [rf"\[ {matrix_latex(wide, SPELLING)} \]"]
    for size in ("10pt", "11pt", "12pt"):
        head = rf"\documentclass[{size}]{{article}}\usepackage{{amsmath}}\hfuzz=0.01pt\begin{{document}}"
        (tmp_path / "all.tex").write_text("\n\n".join([head, *parts, r"\end{document}"]))
        command = ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "-no-shell-escape", "all.tex"]
        subprocess.run(command, cwd=tmp_path, capture_output=True, check=True, timeout=120)
        log = (tmp_path / "all.log").read_text(errors="replace")
        assert "Overfull \\hbox" not in log
        assert "LaTeX Warning: Command" not in log

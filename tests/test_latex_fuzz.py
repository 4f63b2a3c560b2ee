"""Random trees in random LaTeX must be read as what they are; damaged LaTeX must be read or refused."""

from __future__ import annotations

import random
from fractions import Fraction

import pytest
from hypothesis import HealthCheck, assume, example, given, settings
from hypothesis import strategies as st

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, names_in
from symplant.errors import InputError
from symplant.reading.latex import read_latex

#: Declared name, and ways to write it; among them the letters that SymPy and the parser keep for themselves.
LETTERS = {
    "k": ["k"],
    "E": ["E"],
    "I": ["I"],
    "S": ["S"],
    "N": ["N"],
    "d": ["d"],
    "i": ["i"],
    "Ixx": ["I_{xx}", "I_{x x}", "I _ {xx}"],
    "x1": ["x_1", "x_{1}", "x_{ 1 }"],
    "x12": ["x_{12}", "x_{1 2}"],
    "Kt": [r"K_{\mathrm{t}}", r"K_\mathrm{t}", r"K_{\text{t}}", r"K_{\rm t}"],
    "beta": [r"\beta", r"{\beta}"],
    "wmax": [r"\omega_{\max}"],
    "xd": [r"\dot{x}", r"\dot x"],
    "kp": ["k'", r"k^{\prime}", r"k^\prime"],
    "xstar": ["x^{*}", "x^*", r"x^{\ast}"],
    "kplus": ["k_{+}", "k_+"],
    "Tend": [r"T_{\mathrm{end}}", r"T_{\text{end}}"],
    "pi": [r"\pi", "π"],
}
SPELLINGS = {variants[0]: name for name, variants in LETTERS.items() if name != "pi"}
POINT = {name: Fraction(p, 101) for name, p in zip(LETTERS, range(211, 900, 37), strict=False)}

numbers = st.integers(0, 30).map(lambda n: Number(Fraction(n))) | st.integers(1, 4000).map(
    lambda n: Number(Fraction(n, 1000))
)
leaves = numbers | st.sampled_from(sorted(LETTERS)).map(Name)


def _larger(inner: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
    several = st.lists(inner, min_size=2, max_size=4).map(tuple)
    negative = inner.map(lambda node: Product((Number(Fraction(-1)), node)))
    return st.one_of(
        st.lists(inner | negative, min_size=2, max_size=4).map(lambda parts: Sum(tuple(parts))),
        several.map(Product),
        st.builds(Quotient, inner, inner),
        st.builds(Power, inner, st.sampled_from([-3, -1, 1, 2, 3])),
    )


trees = st.recursive(leaves, _larger, max_leaves=14)


def value(node: Node) -> Fraction:
    match node:
        case Number(value=number):
            return number
        case Name(name=name):
            return POINT[name]
        case Sum(terms=terms):
            return sum(map(value, terms), Fraction(0))
        case Product(factors=factors):
            product = Fraction(1)
            for factor in factors:
                product *= value(factor)
            return product
        case Quotient(numerator=top, denominator=bottom):
            return value(top) / value(bottom)
        case Power(base=base, exponent=exponent):
            return value(base) ** exponent
        case Call(function=function, argument=argument):
            # Any function of exact values will do, as long as it tells functions and arguments apart.
            return (
                value(argument) * (3 + len(function)) + ord(function[-1]) + ord(function[0]) * Fraction(1, 7)
            )


class Writer:
    """Writes trees as LaTeX, choosing at random among the ways in which an author may do it."""

    def __init__(self, rng: random.Random) -> None:
        self.rng = rng

    def space(self) -> str:
        return self.rng.choice(["", "", " ", "  ", r"\,", r"\; ", "~", "\n", r"\quad "])

    def gap(self) -> str:
        return self.rng.choice([" ", " ", r"\, ", r"\;", "~", "\n", " % note\n"])

    def brackets(self, inside: str) -> str:
        left, right = self.rng.choice(
            [
                *(("(", ")"), ("[", "]"), (r"\{", r"\}"), (r"\left(", r"\right)"), (r"\left[", r"\right]")),
                *(
                    (r"\left\{", r"\right\}"),
                    (r"\big(", r"\big)"),
                    (r"\Bigl[", r"\Bigr]"),
                    (r"\bigl(", r"\bigr)"),
                ),
            ]
        )
        return f"{left}{self.space()}{inside}{self.space()}{right}"

    def sum(self, node: Node) -> str:
        terms = node.terms if isinstance(node, Sum) else (node,)
        text = self.rng.choice(["", "", "", "+"])
        for position, term in enumerate(terms):
            negative = isinstance(term, Product) and term.factors[0] == Number(Fraction(-1))
            if negative:
                text = "" if text == "+" and not position else text
                text += "-" + self.space() + self.product(term.factors[1])
            else:
                text += ("+" if position else "") + self.space() + self.product(term)
            text += self.space()
        return text

    def product(self, node: Node) -> str:
        if isinstance(node, Quotient) and self.rng.random() < 0.4:
            top = node.numerator
            written = self.product(top) if not isinstance(top, Quotient | Sum) else self.factor(top)
            return written + self.rng.choice(["/", r"\div ", " / ", " : "]) + self.factor(node.denominator)
        if not isinstance(node, Product):
            return self.factor(node)
        text = self.factor(node.factors[0])
        for factor in node.factors[1:]:
            following = self.factor(factor)
            # Without a sign only where nothing can be taken for an argument, a mixed number or one number.
            safe = isinstance(factor, Name | Call) or (isinstance(factor, Power) and raised_bare(factor.base))
            sign = self.rng.choice([r"\cdot ", r"\times ", "*", "·", r" \cdot "])
            text += self.gap() if safe and self.rng.random() < 0.7 else self.space() + sign + self.space()
            text += following
        return text

    def factor(self, node: Node) -> str:
        match node:
            case Number(value=number):
                return self.number(number)
            case Name(name=name):
                return self.rng.choice(LETTERS[name])
            case Quotient(numerator=top, denominator=bottom):
                if self.rng.random() < 0.2:
                    return rf"{{{self.sum(top)} \over {self.sum(bottom)}}}"
                command = self.rng.choice([r"\frac", r"\dfrac", r"\tfrac", r"\cfrac"])
                short = [isinstance(part, Number) and part.value in range(10) for part in (top, bottom)]
                if all(short) and self.rng.random() < 0.5:
                    return f"{command}{top.value}{bottom.value}"
                return f"{command}{self.space()}{{{self.sum(top)}}}{self.space()}{{{self.sum(bottom)}}}"
            case Power(base=base, exponent=exponent):
                written = self.factor(base) if raised_bare(base) else self.brackets(self.sum(base))
                if 0 <= exponent < 10 and self.rng.random() < 0.5:
                    return f"{written}^{exponent}"
                return f"{written}^{{{self.space()}{exponent}{self.space()}}}"
            case Call(function=function, argument=argument):
                return self.call(function, argument)
            case _:
                return self.brackets(self.sum(node))

    def call(self, function: str, argument: Node) -> str:
        inside = self.sum(argument)
        if function == "sqrt":
            return rf"\sqrt{{{inside}}}"
        if function == "exp" and self.rng.random() < 0.6:
            return self.rng.choice(["e", r"{\rm e}", r"\mathrm{e}"]) + f"^{{{inside}}}"
        if function == "log":
            return self.rng.choice([r"\ln", r"\log"]) + self.brackets(inside)
        command = rf"\{function}" if function != "atan" else r"\arctan"
        head = self.rng.choice([command, rf"\operatorname{{{function}}}", rf"\mathrm{{{function}}}"])
        return head + (self.brackets(inside) if self.rng.random() < 0.6 else f"{{{self.brackets(inside)}}}")

    def number(self, number: Fraction) -> str:
        if number.denominator == 1:
            whole = int(number)
            return self.rng.choice([f"{whole}", f"{whole}.0", f"{whole}.00"])
        decimal = f"{float(number):.3f}"
        assert Fraction(decimal) == number
        return self.rng.choice([decimal, decimal.lstrip("0") if number < 1 else decimal, decimal + "0"])

    def display(self, node: Node) -> str:
        text = self.space() + self.sum(node)
        around = self.rng.choice(
            [("", ""), ("$", "$"), (r"\[", r"\]"), (r"\(", r"\)"), (r"\displaystyle ", "")]
        )
        return around[0] + text + self.rng.choice(["", "", " .", r"\,,"]) + around[1]


def raised_bare(base: Node) -> bool:
    """Whether a power is written without brackets round its base; x^* has a superscript already."""
    return isinstance(base, Name) and base.name != "xstar"


def has_value(node: Node) -> bool:
    try:
        value(node)
    except ZeroDivisionError:
        return False
    return True


quick = settings(max_examples=400, deadline=None, suppress_health_check=[HealthCheck.too_slow])


@quick
@given(trees, st.integers(0, 2**32))
@example(Quotient(Name("k"), Name("k")), 1)
@example(Product((Name("E"), Name("I"), Name("S"))), 2)
def test_read_as_written(node: Node, seed: int) -> None:
    assume(has_value(node))
    text = Writer(random.Random(seed)).display(node)
    assert value(read_latex(text, SPELLINGS)) == value(node), text


functions = st.sampled_from(["sin", "cos", "tan", "exp", "log", "sqrt", "sinh", "cosh", "tanh", "atan"])
with_functions = st.recursive(
    leaves, lambda inner: _larger(inner) | st.builds(Call, functions, inner), max_leaves=10
)


@quick
@given(with_functions, st.integers(0, 2**32))
def test_functions_read_as_written(node: Node, seed: int) -> None:
    assume(has_value(node))
    text = Writer(random.Random(seed)).display(node)
    assert value(read_latex(text, SPELLINGS)) == value(node), text


BITS = r"""
\frac \sqrt \left( \right) \left. \right| { } ( ) [ ] ^ _ ' + - / * = < , . ; : & \\ $ % ! | ~ 1 23 4.5
\cdot \over \sin \ln \mathrm{e} \mathrm \dot \text{a} \begin{matrix} \end{matrix} \det \boxed dk kkkk
k E e d x_1 1e5 😀 ² φ \ 1\,234 \Delta \%
"""
PIECES = [*BITS.split(), "\x00", " ", r"\text{a b}"]


@quick
@given(
    trees,
    st.integers(0, 2**32),
    st.lists(st.tuples(st.integers(0, 400), st.sampled_from(PIECES)), max_size=3),
)
def test_damaged_text_is_read_or_refused(node: Node, seed: int, damage: list[tuple[int, str]]) -> None:
    rng = random.Random(seed)
    text = Writer(rng).display(node)
    for place, piece in damage:
        at = place % (len(text) + 1)
        text = text[:at] + piece + text[at + rng.randint(0, 2) :]
    try:
        assert names_in(read_latex(text, SPELLINGS)) <= set(LETTERS)
    except InputError as error:
        assert error.faults
        for fault in error.faults:
            assert 1 <= int(fault.place.removeprefix("column ")) <= len(text) + 1


@quick
@given(st.lists(st.sampled_from(PIECES), max_size=12).map(" ".join) | st.text(max_size=40))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        assert names_in(read_latex(text, SPELLINGS)) <= set(LETTERS)
    except InputError as error:
        assert error.faults


@pytest.mark.slow
@settings(max_examples=8000, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(with_functions, st.integers(0, 2**32))
def test_read_as_written_at_length(node: Node, seed: int) -> None:
    assume(has_value(node))
    text = Writer(random.Random(seed)).display(node)
    assert value(read_latex(text, SPELLINGS)) == value(node), text

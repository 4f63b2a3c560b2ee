"""What is read from LaTeX: the trees, their columns, and the words of the refusals."""

from __future__ import annotations

import subprocess
import sys
from fractions import Fraction

import pytest

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, integer
from symplant.errors import InputError, SymplantError
from symplant.reading.latex import engine, read_latex

A, B, C, K = Name("a"), Name("b"), Name("c"), Name("k")
PLAIN = {letter: letter for letter in "abcdhkmstxyzABCFGIKLMRT"}


def read(text: str, **declared: str) -> Node:
    return read_latex(text, {**PLAIN, **{spelling: name for name, spelling in declared.items()}})


def refusal(text: str, **declared: str) -> str:
    with pytest.raises(InputError) as caught:
        read(text, **declared)
    return str(caught.value)


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        (r"\frac{k}{k}", Quotient(K, K)),
        (r"k \cdot k", Product((K, K))),
        ("k - k", Sum((K, Product((integer(-1), K))))),
        ("k/k", Quotient(K, K)),
        (r"\frac{0}{k}", Quotient(integer(0), K)),
        ("k^0", Power(K, 0)),
        ("1 k", Product((integer(1), K))),
        ("a/b/c", Quotient(Quotient(A, B), C)),
        (r"a/b \cdot c", Product((Quotient(A, B), C))),
        (r"a/b \cdot c k", Product((Quotient(A, B), C, K))),
        (r"a b / c", Quotient(Product((A, B)), C)),
        ("(a b) c", Product((Product((A, B)), C))),
        ("a - 5", Sum((A, integer(-5)))),
        ("-2^2", Product((integer(-1), Power(integer(2), 2)))),
        ("(-2)^2", Power(integer(-2), 2)),
        (r"a \cdot -b", Product((integer(-1), Product((A, B))))),
        ("a^{-2}", Power(A, -2)),
        ("a^{1/2}", Call("sqrt", A)),
        ("a^{-1/2}", Power(Call("sqrt", A), -1)),
        (r"a^{\frac32}", Power(Call("sqrt", A), 3)),
        ("a^{4/2}", Power(A, 2)),
        (r"\sqrt{a}^2", Power(Call("sqrt", A), 2)),
        (r"\sqrt[2]{a}", Call("sqrt", A)),
        ("a^2b", Product((Power(A, 2), B))),
        (r"\frac ab", Quotient(A, B)),
        (r"\frac1k", Quotient(integer(1), K)),
        (r"\frac{1}2", Quotient(integer(1), integer(2))),
        (r"\frac\pi2", Quotient(Name("pi"), integer(2))),
        (r"\ln 2", Call("log", integer(2))),
        (r"\log_{23} x", Quotient(Call("log", Name("x")), Call("log", integer(23)))),
        (r"\log_2 3", Quotient(Call("log", integer(3)), Call("log", integer(2)))),
        ("((a)(b) + c)^2", Power(Sum((Product((A, B)), C)), 2)),
        ("(s I)^{-1}", Power(Product((Name("s"), Name("I"))), -1)),
        ("(s + I)^{-1}", Power(Sum((Name("s"), Name("I"))), -1)),
        ("(s I K)^{-1}", Power(Product((Name("s"), Name("I"), Name("K"))), -1)),
        ("{a}^2", Power(A, 2)),
        ("{(a + b)}^2", Power(Sum((A, B)), 2)),
        ("{a + b}", Sum((A, B))),
        (r"a \over b", Quotient(A, B)),
        (r"\left( a \over b \right)", Quotient(A, B)),
        (r"1.5\times10^{-3}", Product((Number(Fraction(3, 2)), Power(integer(10), -3)))),
        ("1.5e-3", Number(Fraction(3, 2000))),
        ("5. k", Product((integer(5), K))),
        ("5.", integer(5)),
        (r"12\,345\,678.5", Number(Fraction(24691357, 2))),
        (r"50\% k", Product((Number(Fraction(1, 2)), K))),
        (r"2\mathrm{e}", Product((integer(2), Call("exp", integer(1))))),
        ("e^x", Call("exp", Name("x"))),
        (r"\sin^2 x", Power(Call("sin", Name("x")), 2)),
        (r"\sin(x)^{-1}", Power(Call("sin", Name("x")), -1)),
        (r"\sin 2x", Call("sin", Product((integer(2), Name("x"))))),
        (r"a \sin x", Product((A, Call("sin", Name("x"))))),
        (r"\sin x / \cos x", Quotient(Call("sin", Name("x")), Call("cos", Name("x")))),
        (r"\sin x + a", Sum((Call("sin", Name("x")), A))),
        (r"\sin{a b}", Call("sin", Product((A, B)))),
        (r"\log_{10} x", Quotient(Call("log", Name("x")), Call("log", integer(10)))),
        (r"\log_2^2(x)", Power(Quotient(Call("log", Name("x")), Call("log", integer(2))), 2)),
        (r"\boxed{a + b} c", Product((Sum((A, B)), C))),
        ("a ⋅ b − c", Sum((Product((A, B)), Product((integer(-1), C))))),
        ("a % the first\n+ b % the second", Sum((A, B))),
        ("a + 2 % two\n b", Sum((A, Product((integer(2), B))))),
        ("$$ a + b, $$", Sum((A, B))),
        (r"\[ a. \]", A),
        ("$a$.", A),
        (r"\displaystyle a", A),
        (r"\bigl( a + b \bigr) \Big/ c", Quotient(Sum((A, B)), C)),
        ("a:b", Quotient(A, B)),
    ],
)
def test_trees(text: str, tree: Node) -> None:
    assert read(text) == tree


@pytest.mark.parametrize(
    ("text", "declared", "tree"),
    [
        ("e^2", {"e": "e"}, Power(Name("e"), 2)),
        (r"\mathrm{e}^{x}", {"e": "e"}, Call("exp", Name("x"))),
        (r"\pi", {}, Name("pi")),
        (r"2\pi a", {"p": r"\pi"}, Product((integer(2), Name("p"), A))),
        (r"\mathrm{j}", {"j": r"\mathrm{j}"}, Name("j")),
        (r"\mathrm{sin}", {"other": r"\mathrm{sin}"}, Name("other")),
        (r"\Delta m", {"dm": r"\Delta m"}, Name("dm")),
        (r"\Delta m_1^2", {"dm": r"\Delta m_{1}"}, Power(Name("dm"), 2)),
        (r"\Delta m", {"D": r"\Delta"}, Product((Name("D"), Name("m")))),
        ("x^*", {"xs": "x^{*}"}, Name("xs")),
        ("{x^{*}}^2", {"xs": "x^{*}"}, None),
        (r"x'^{\prime}", {"xp": "x'"}, None),
        ("(x^{*})^2", {"xs": "x^{*}"}, Power(Name("xs"), 2)),
        ("x'^2", {"xp": "x'"}, Power(Name("xp"), 2)),
        ("D'", {"dp": r"D^{\prime}"}, Name("dp")),
        (r"\omega_{\max}^2", {"w": r"\omega_{\max}"}, Power(Name("w"), 2)),
        ("k_+ k_-", {"u": "k_{+}", "v": "k_{-}"}, Product((Name("u"), Name("v")))),
        ("x_{1 2}^2", {"q": "x_{12}"}, Power(Name("q"), 2)),
        ("ω_0", {"w": r"\omega_{0}"}, Name("w")),
        ("R_{DS(on)} x", {"r": "R_{DS(on)}"}, Product((Name("r"), Name("x")))),
        (
            r"\hat{x}_1 \tilde\theta",
            {"p": r"\hat{x}_{1}", "q": r"\tilde{\theta}"},
            Product((Name("p"), Name("q"))),
        ),
    ],
)
def test_declared_spellings(text: str, declared: dict[str, str], tree: Node | None) -> None:
    if tree is None:
        refusal(text, **declared)
    else:
        assert read(text, **declared) == tree


@pytest.mark.parametrize(
    ("text", "column", "words"),
    [
        (r"\sin 2 a x", 10, "'x' after a function without brackets"),
        (r"\log_23 x", 5, "'23' without braces at 'log' (write {23})"),
        (r"3{1 \over 2}", 1, "a product or a mixed number"),
        (r"\ln 2 x", 7, "'x' after a function without brackets"),
        ("a_1'", 1, 'undeclared letter "a_1\'"'),
        ("(a)'", 4, "\"'\" after '(a)' is not read"),
        (r"(A - sI)^{-1}", 1, "reads as the inverse of a matrix"),
        (r"\left[zI - (A - BK)\right]^{-1}", 1, "reads as the inverse of a matrix"),
        (r"\sin x^2", 6, r"the exponent in '\sin x^2' reads two ways"),
        (r"\sin x \cdot a", 14, "'a' after a function"),
        (r"\sin{a + b}", 5, "a sum after 'sin' without brackets"),
        (r"\sin^{-1} x", 5, "inverse or reciprocal"),
        (r"\sin -x", 6, "the argument of 'sin' is missing"),
        (r"\cot(x)", 1, r"the function 'cot' is not known (write \frac{\cos(x)}{\sin(x)})"),
        (r"\arcsin(x)", 1, "the function 'arcsin' is not known (known are sin, cos"),
        ("sin(x)", 1, r"the word 'sin' in a formula (write \sin)"),
        ("a + bcda", 5, "'bcda' reads two ways: a word or a product"),
        ("a dx", 3, r"'dx' reads two ways: a differential or a product (write d \cdot x)"),
        (r"\sqrt[3]{a}", 6, "the root index '[3]': only square roots are read"),
        ("a^b", 2, "exponent contains 'b', which is no number, at 'a'"),
        ("a^{n}", 2, "the exponent 'n' of 'a' is not read"),
        ("a^{61}", 2, "exponent 61 is beyond 60, at 'a'"),
        ("((a^{9})^{9})^2", 9, "powers within powers come to the exponent 81 (at most 60 is read)"),
        ("x^10", 3, "'10' without braces (write {10}: TeX takes the first sign only)"),
        ("a^-1", 2, "the exponent '-' of 'a' is not read (put the whole exponent in braces)"),
        ("a/b c", 5, r"'c' after a division reads two ways (use \frac or brackets)"),
        ("1/2 a", 5, "'a' after a division reads two ways"),
        ("k(t)", 1, r"'k(t)' reads two ways: a product or a function's value (write \cdot for a product)"),
        ("G^2(s)", 1, "'G^2(s)' reads two ways"),
        (r"3\frac{1}{2}", 1, "a product or a mixed number"),
        ("a 2", 3, r"the number '2' after a factor (put it first, or write \cdot before it)"),
        ("{2}{3}", 5, "the number '3' after a factor"),
        ("1 234", 3, "the number '234' after a factor"),
        ("a {b + c}", 3, "the sum '{b + c}' in braces prints no brackets (use ( ))"),
        ("a - {b - c}", 5, "the sum '{b - c}' in braces"),
        ("{a b}^2", 6, "'^' after '{a b}' reads two ways"),
        ("a/{b c}", 6, "'c' after a division reads two ways"),
        (r"\frac{a}{b}^2", 12, r"'^' after '\frac{a}{b}' is not read"),
        (r"(a \over b)", 1, "takes the brackets along"),
        (r"a \over b \over c", 11, r"second '\over'"),
        (r"\left. a \right|", 1, r"the bracket '\left.' is not read"),
        ("|a|", 1, "unexpected '|' (bars are not read)"),
        (r"\left| a \right|", 1, "absolute values are not read"),
        ("1,5", 2, "unexpected ',' (write 1.5 for a decimal"),
        ("5% a", 2, r"'% a' reads two ways: a comment or percent (write \%)"),
        ("1/0", 2, "division by zero"),
        (r"\frac{a}{1 - 1}", 1, "division by zero"),
        ("(1-1)^{-1}", 6, "division by zero"),
        ("a +", 4, "an operand is missing at the end"),
        ("a + + b", 5, "an operand is missing before '+'"),
        (r"a \cdot / b", 9, "an operand is missing before '/'"),
        (r"a \cdot --b", 9, r"two signs after '\cdot'"),
        ("", 1, "nothing is written here (write 0 for zero)"),
        ("a ()", 4, "nothing is written here"),
        ("a = b", 3, "unexpected '=' (one side of a relation is read at a time)"),
        (r"a \\ b", 3, r"unexpected line break '\\' (only a matrix has rows)"),
        (r"a \pm b", 3, r"unknown command '\pm' (write the two signs out)"),
        ("φ", 1, r"unexpected 'φ' (write \phi or \varphi)"),
        ("a²", 2, "unexpected '²' (write ^{2})"),
        ("a!", 2, "'!' after 'a' is not read"),
        (r"\left( a )", 10, r"')' does not close the '\left(' at column 1"),
        (r"(s I - A)^{-1}", 1, "reads as the inverse of a matrix"),
        (r"\frac{a}", 9, r"an argument of '\frac' is missing"),
        (r"\frac123", 6, r"'123' after '\frac' (put the argument in braces)"),
        (r"\sqrt23", 6, r"'23' after '\sqrt'"),
        (r"\sqrt x^2", 8, "'^' after"),
        ("1e400", 1, "the number '1e400' is out of range"),
        (r"\mathrm{e}x_", 12, "an index or exponent is missing"),
        (r"\begin{matrix} a \end{matrix}", 1, r"'\begin{matrix}' where a scalar is expected"),
        (r"\mathrm{j}", 1, r"undeclared letter '\mathrm{j}'"),
    ],
)
def test_refusals_name_the_token(text: str, column: int, words: str) -> None:
    with pytest.raises(InputError) as caught:
        read(text)
    (fault,) = caught.value.faults
    assert fault.place == f"column {column}"
    assert words in str(fault)


def test_numbers_with_e_need_e_undeclared() -> None:
    assert read_latex("2e3", {"k": "k"}) == integer(2000)
    for letter in "eE":
        with pytest.raises(InputError, match="reads two ways: a number or a product") as caught:
            read_latex("1.5E-3", {letter: letter})
        assert r"1.5 \times 10^{-3}" in caught.value.faults[0].suggestion


def test_decimal_comma() -> None:
    for text in ("1,5", "1{,}5", "1.5"):
        assert read_latex(text, {}, decimal_comma=True) == Number(Fraction(3, 2))
    assert read_latex("k_{1,2}", {"k_{1,2}": "k"}, decimal_comma=True) == K
    for text in ("1,5", "1{,}5"):
        refusal(text)


def test_all_undeclared_letters_are_named_at_once() -> None:
    with pytest.raises(InputError) as caught:
        read_latex(r"k_l + \beta m + q + q x_{2", {"k_{1}": "k1", "m": "m"})
    assert len(caught.value.faults) == 1  # an unclosed brace leaves nothing to be sure of
    with pytest.raises(InputError) as caught:
        read_latex(r"k_l + \beta m + q + q /", {"k_{1}": "k1", "m": "m"})
    assert [str(fault) for fault in caught.value.faults] == [
        "column 1: undeclared letter 'k_l' (did you mean 'k_{1}'?)",
        r"column 7: undeclared letter '\beta' (declared are k_{1} and m)",
        "column 17: undeclared letter 'q' (declared are k_{1} and m)",
        "column 24: an operand is missing at the end",
    ]


def test_undeclared_letters_after_an_exponent_are_missed_by_no_one() -> None:
    for text in ("a^{-2} + q", "q + a^{1/2}", "a^{-1} + q^{-2} + a^{-3}", r"q^{\frac12}"):
        assert "undeclared letter 'q'" in refusal(text)


def test_a_letter_after_delta_may_read_two_ways() -> None:
    assert "is declared as one letter" in refusal(r"\Delta m", D=r"\Delta", dm=r"\Delta m")
    assert read(r"\Delta k", D=r"\Delta", dm=r"\Delta m") == Product((Name("D"), K))


def test_undeclared_letter_dressed_otherwise() -> None:
    declared = {r"K_{\mathrm{t}}": "Kt"}
    with pytest.raises(InputError, match=r"did you mean 'K_\{\\mathrm\{t\}\}'\?"):
        read_latex("K_t", declared)
    with pytest.raises(InputError, match="Euler's number is"):
        read_latex("e", declared)


def test_same_spelling_twice() -> None:
    with pytest.raises(InputError) as caught:
        read_latex("a", {"K_t": "Kt", "K_{t}": "other", "a b": "c"})
    assert [str(fault) for fault in caught.value.faults] == [
        "spelling of other: 'K_{t}' is already the spelling of Kt",
        "spelling of c, column 3: 'a b' is not one name (more than a letter is one name as an index)",
    ]
    assert read_latex("K_{t}", {"K_t": "Kt", "K_{t}": "Kt"}) == Name("Kt")


def test_columns_point_into_the_text() -> None:
    node = read(r"a + \frac{b}{c} - k/m^2 + \sin(x)")
    assert isinstance(node, Sum)
    first, fraction, minus, call = node.terms
    assert (first.column, fraction.column, call.column) == (1, 5, 27)
    assert isinstance(minus, Product)
    quotient = minus.factors[1]
    assert isinstance(quotient, Quotient)
    assert (quotient.numerator.column, quotient.column, quotient.denominator.column) == (19, 20, 22)


def test_first_column_may_be_given() -> None:
    with pytest.raises(InputError, match="column 43: unexpected '='"):
        read_latex("a = b", PLAIN, column=41)
    assert read_latex(" a", PLAIN, column=41).column == 42


def test_determinants() -> None:
    two = r"\begin{matrix} a & b \\ c & k \end{matrix}"
    want = Sum((Product((A, K)), Product((integer(-1), Product((B, C))))))
    for text in (
        rf"\left|{two}\right|",
        rf"\det{two}",
        rf"\det\left({two}\right)",
        two.replace("matrix", "vmatrix"),
    ):
        assert read(text) == want
    assert read(r"\det\begin{bmatrix} a \end{bmatrix}^2") == Power(A, 2)
    assert "order 6" in refusal(r"\det\begin{matrix}" + r"\\".join(["1&2&3&4&5&6"] * 6) + r"\end{matrix}")
    assert "2 rows and 1 columns" in refusal(r"\det\begin{matrix} a \\ b \end{matrix}")
    assert "row 2 has 1 entry, row 1 has 2 entries" in refusal(r"\begin{vmatrix} a & b \\ c \end{vmatrix}")
    assert "absolute values" in refusal(r"\left|\begin{vmatrix} a \end{vmatrix}\right|")


def test_long_products_are_one_product() -> None:
    node = read(" ".join(["a", "b"] * 100))
    assert node == Product((A, B) * 100)
    for count in (22, 23, 24, 46, 60):
        assert read("(a b) " + " ".join(["c"] * count)) == Product((Product((A, B)), *[C] * count))
        assert read("a/b" + r" \cdot c" * count) == Product((Quotient(A, B), *[C] * count))


def test_terms_of_one_shape_are_parsed_once() -> None:
    read("a")
    before = engine._template.cache_info().misses
    letters = {f"x_{{{i}}}": f"x{i}" for i in range(8)}
    text = " + ".join(
        f"{n} x_{{{n % 8}}}^{n % 9} x_{{{n % 5}}} x_{{{n % 3}}}^2 - {n}.5 x_1" for n in range(400)
    )
    node = read_latex(text, letters)
    assert isinstance(node, Sum)
    assert len(node.terms) == 800
    assert engine._template.cache_info().misses - before <= 4


def test_what_the_parser_loses_is_missed(monkeypatch: pytest.MonkeyPatch) -> None:
    read("a b")
    import sympy

    def placeholder(number: int) -> sympy.Symbol:
        return sympy.Symbol(f"p{number}q" + "0" * 32)

    wrong = {
        "lost": placeholder(0),
        "doubled": sympy.Mul(placeholder(0), placeholder(1), placeholder(1), evaluate=False),
        "moved": sympy.Mul(placeholder(1), placeholder(0), evaluate=False),
        "foreign": sympy.Symbol("a"),
        "summed": sympy.Add(placeholder(0), placeholder(1), evaluate=False),
    }
    for value in wrong.values():
        monkeypatch.setattr(engine, "_parser", lambda value=value: lambda text: value)
        engine._template.cache_clear()
        with pytest.raises(SymplantError, match="the LaTeX parser"):
            read("a b")
    monkeypatch.undo()
    assert read("a b") == Product((A, B))


def in_a_new_process(code: str) -> str:
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", code], capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr
    return done.stdout.strip()


def test_nothing_heavy_is_loaded_before_the_first_expression() -> None:
    code = (
        "import sys\n"
        "from symplant.reading.latex import canonical_spelling, default_spelling, read_latex\n"
        "from symplant.reading.latex.statements import read_rows, split_relation\n"
        "canonical_spelling(default_spelling('k_r')), split_relation('a = b'), read_rows('a = b')\n"
        "try: read_latex('a = b', {'a': 'a'})\n"
        "except Exception as error: print(type(error).__name__)\n"
        "print([name for name in ('sympy', 'antlr4', 'latex2sympy2', 'numpy') if name in sys.modules])\n"
    )
    assert in_a_new_process(code) == "InputError\n[]"


def test_stand_in_module_is_gone_after_loading() -> None:
    code = (
        "import sys\n"
        "from symplant.reading.latex import read_latex\n"
        "print(read_latex('a b', {'a': 'a', 'b': 'b'}).factors[1].name)\n"
        "print(sys.version_info >= (3, 13) and 'typing.io' in sys.modules)\n"
    )
    assert in_a_new_process(code) == "b\nFalse"


def test_missing_package_is_reported(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "latex2sympy2", None)
    with pytest.raises(SymplantError, match=r"needs the package latex2sympy2 1\.9\.1"):
        engine._package()

"""The reader of arithmetic text: what it reads, what it refuses, and where."""

from __future__ import annotations

import ast
import time
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from symplant.algebra.expression import (
    FUNCTIONS,
    Call,
    Name,
    Node,
    Number,
    Power,
    Product,
    Quotient,
    Sum,
    walk,
)
from symplant.algebra.text import node_text
from symplant.errors import InputError
from symplant.reading.arithmetic import MAX_NESTING, read_arithmetic

LETTERS = {"k": Fraction(3, 7), "m": Fraction(-5, 2), "lambda": Fraction(11, 3)}


def number(value: int | str) -> Number:
    return Number(Fraction(value))


def value_of(node: Node, point: dict[str, Fraction] = LETTERS) -> Fraction:
    """Exact value of a tree; an evaluator of its own, so that the product's is not asked about itself."""
    if isinstance(node, Number):
        return node.value
    if isinstance(node, Name):
        return point[node.name]
    if isinstance(node, Sum):
        return sum((value_of(term, point) for term in node.terms), Fraction(0))
    if isinstance(node, Product):
        product = Fraction(1)
        for factor in node.factors:
            product *= value_of(factor, point)
        return product
    if isinstance(node, Quotient):
        return value_of(node.numerator, point) / value_of(node.denominator, point)
    assert isinstance(node, Power)
    return value_of(node.base, point) ** node.exponent


def python_value(text: str) -> Fraction:
    """What Python's own grammar makes of a text, with exact numbers."""

    def visit(node: ast.expr) -> Fraction:
        match node:
            case ast.Constant():
                return Fraction(ast.get_source_segment(text, node) or "")
            case ast.Name(id=name):
                return LETTERS[name]
            case ast.UnaryOp(op=ast.USub(), operand=operand):
                return -visit(operand)
            case ast.UnaryOp(op=ast.UAdd(), operand=operand):
                return visit(operand)
            case ast.BinOp(left=left, op=ast.Add(), right=right):
                return visit(left) + visit(right)
            case ast.BinOp(left=left, op=ast.Sub(), right=right):
                return visit(left) - visit(right)
            case ast.BinOp(left=left, op=ast.Mult(), right=right):
                return visit(left) * visit(right)
            case ast.BinOp(left=left, op=ast.Div(), right=right):
                return visit(left) / visit(right)
            case ast.BinOp(left=left, op=ast.Pow(), right=right):
                exponent = visit(right)
                assert exponent.denominator == 1
                return visit(left) ** int(exponent)
        raise AssertionError(ast.dump(node))

    return visit(ast.parse(text, mode="eval").body)


def faults_of(text: str, names: tuple[str, ...] = ("k", "m", "c", "m1")) -> list[tuple[str, str, str]]:
    with pytest.raises(InputError) as caught:
        read_arithmetic(text, names)
    return [(fault.place, fault.reason, fault.suggestion) for fault in caught.value.faults]


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("0", number(0)),
        ("  k ", Name("k")),
        ("-k", Product((number(-1), Name("k")))),
        ("-2", number(-2)),
        ("+k", Name("k")),
        ("k + m - 2", Sum((Name("k"), Name("m"), number(-2)))),
        ("k - m*c", Sum((Name("k"), Product((number(-1), Name("m"), Name("c")))))),
        ("k*m*c", Product((Name("k"), Name("m"), Name("c")))),
        ("k*(m*c)", Product((Name("k"), Product((Name("m"), Name("c")))))),
        ("-k/m", Product((number(-1), Quotient(Name("k"), Name("m"))))),
        ("-k*m", Product((number(-1), Name("k"), Name("m")))),
        ("-2*k", Product((number(-2), Name("k")))),
        ("k - 2*m", Sum((Name("k"), Product((number(-2), Name("m")))))),
        ("k*-m*c", Product((Name("k"), Product((number(-1), Name("m"))), Name("c")))),
        ("k/-m/c", Quotient(Quotient(Name("k"), Product((number(-1), Name("m")))), Name("c"))),
        ("k - -m*c", Sum((Name("k"), Product((number(-1), Product((number(-1), Name("m"), Name("c")))))))),
        ("k/m/c", Quotient(Quotient(Name("k"), Name("m")), Name("c"))),
        ("k/m*c", Product((Quotient(Name("k"), Name("m")), Name("c")))),
        ("-k**2", Product((number(-1), Power(Name("k"), 2)))),
        ("(-k)**2", Power(Product((number(-1), Name("k"))), 2)),
        ("2**-1", Power(number(2), -1)),
        ("k**(2*3)", Power(Name("k"), 6)),
        ("k**(4/2 - 1)", Power(Name("k"), 1)),
        ("k**-60", Power(Name("k"), -60)),
        ("k**0", Power(Name("k"), 0)),
        ("k**(1/2)", Call("sqrt", Name("k"))),
        ("k**0.5", Call("sqrt", Name("k"))),
        ("k**(-1/2)", Power(Call("sqrt", Name("k")), -1)),
        ("k**-0.5", Power(Call("sqrt", Name("k")), -1)),
        ("k**1.5", Power(Call("sqrt", Name("k")), 3)),
        ("k**(3/2)", Power(Call("sqrt", Name("k")), 3)),
        ("k**-1/2", Quotient(Power(Name("k"), -1), number(2))),
        ("pi*k", Product((Name("pi"), Name("k")))),
        ("sin(k)*2", Product((Call("sin", Name("k")), number(2)))),
        ("sqrt((k))", Call("sqrt", Name("k"))),
        ("k\n  + m\t", Sum((Name("k"), Name("m")))),
    ],
)
def test_trees(text: str, tree: Node) -> None:
    assert read_arithmetic(text, ("k", "m", "c", "m1")) == tree


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("1.5", Fraction(3, 2)),
        ("1.", Fraction(1)),
        (".25", Fraction(1, 4)),
        ("1e-3", Fraction(1, 1000)),
        ("9.6E4", Fraction(96000)),
        ("1e+2", Fraction(100)),
        ("1_000.5", Fraction(2001, 2)),
        ("00", Fraction(0)),
        ("0.1", Fraction(1, 10)),
        ("1e400", Fraction(10**400)),
        ("7e-400", Fraction(7, 10**400)),
        ("9" * 400, Fraction(int("9" * 400))),
    ],
)
def test_numbers_are_what_they_spell(text: str, value: Fraction) -> None:
    assert read_arithmetic(text, ()) == Number(value)


@pytest.mark.parametrize("function", FUNCTIONS)
def test_every_function(function: str) -> None:
    assert read_arithmetic(f"{function}(2*k)", ["k"]) == Call(function, Product((number(2), Name("k"))))


@pytest.mark.parametrize(
    "name",
    [
        *("E", "I", "S", "N", "O", "Q", "C", "beta", "gamma", "zeta", "lambda", "in", "is", "None", "True"),
        *("e", "j", "oo", "_", "__class__", "k_1", "\u03c9", "\u03b1_0", "x\u0302", "s", "z", "if"),
    ],
)
def test_any_identifier_is_a_letter(name: str) -> None:
    tree = Product((number(2), Power(Name(name), 2)))
    assert read_arithmetic(f"2*{name}**2", [name]) == tree


def test_compatibility_characters_are_one_name_as_in_python() -> None:
    micro, greek_mu = "\u00b5", "\u03bc"
    assert read_arithmetic(micro, [greek_mu]) == Name(greek_mu)
    assert read_arithmetic(greek_mu, [micro]) == Name(micro)


def test_every_part_carries_its_column() -> None:
    tree = read_arithmetic(" -(k + 2)/sin(m)**2 - c*k", ["k", "m", "c"])
    assert all(part.column > 0 for part in walk(tree))
    columns = {type(part).__name__: part.column for part in walk(tree)}
    assert columns["Quotient"] == 10
    assert columns["Call"] == 11
    assert columns["Power"] == 17
    assert {part.name: part.column for part in walk(tree) if isinstance(part, Name)} == {
        "k": 25,
        "m": 15,
        "c": 23,
    }


@pytest.mark.parametrize(
    ("text", "place", "reason", "suggestion"),
    [
        ("", "column 1", "nothing is written here", "write 0 for zero"),
        (" \n", "column 1", "nothing is written here", "write 0 for zero"),
        ("2k", "column 2", "no operator between '2' and 'k'", "2*k"),
        ("k m", "column 3", "no operator between 'k' and 'm'", "k*m"),
        ("2(k)", "column 2", "no operator between '2' and '('", "2*(...)"),
        ("(k)m", "column 4", "no operator between ')' and 'm'", "(...)*m"),
        ("2 sin(k)", "column 3", "no operator between '2' and 'sin'", "2*sin(...)"),
        ("1 234", "column 3", "no operator between '1' and '234'", "1234"),
        ("1..2", "column 3", "no operator between '1.' and '.2'", "1.*.2"),
        ("k^2", "column 2", "'^' is no operator here", "write '**'"),
        ("k//m", "column 2", "'//' divides and rounds", "write '/'"),
        ("k%m", "column 2", "'%' is not arithmetic", "decimal"),
        ("k\u2212m", "column 2", "U+2212 minus sign", "write '-'"),
        ("k\u00b7m", "column 2", "U+00B7 middle dot", "write '*'"),
        ("k\u00d7m", "column 2", "U+00D7 multiplication sign", "write '*'"),
        ("k\u00f7m", "column 2", "U+00F7 division sign", "write '/'"),
        ("k\u00b2", "column 2", "is not read as a power", "write '**2'"),
        ("\u221ak", "column 1", "U+221A square root", "write sqrt(...)"),
        ("k\u00a0+ m", "column 2", "no-break space", "plain space"),
        ("k == m", "column 3", "'==' compares or assigns", "one expression"),
        ("k<m", "column 2", "'<' compares or assigns", "one expression"),
        ("k=m", "column 2", "'=' compares or assigns", "one expression"),
        ("1,5", "column 2", "',' is not arithmetic", "1.5"),
        ("k[0]", "column 2", "'[' is not arithmetic", ""),
        ("k'", "column 2", "is not arithmetic", "k_prime"),
        ("k!", "column 2", "'!' is not arithmetic", ""),
        ("k; m", "column 2", "';' is not arithmetic", ""),
        ("'k'", "column 1", "text in quotes, 'k', is not arithmetic", ""),
        ("k.m", "column 2", "'.m' asks for an attribute", ""),
        ("lambda: k", "column 1", "undeclared letter 'lambda'", ""),
        ("(k", "column 1", "'(' is never closed", ""),
        ("k)", "column 2", "')' closes no bracket", ""),
        ("()", "column 1", "nothing between the brackets", ""),
        ("sin()", "column 4", "nothing between the brackets", ""),
        ("k +", "column 3", "'+' has nothing after it", ""),
        ("(k*)", "column 3", "'*' has nothing after it", ""),
        ("*k", "column 1", "'*' has nothing before it", ""),
        ("k**", "column 2", "'**' has nothing after it", ""),
        ("2***3", "column 4", "'*' has nothing before it", ""),
        ("k(m)", "column 1", "'k' is no function", "k*(...)"),
        ("pi(m)", "column 1", "'pi' is no function", "pi*(...)"),
        ("sin k", "column 1", "function 'sin' without its argument in brackets", "write sin(...)"),
        ("sin**2(k)", "column 1", "function 'sin' without its argument", "write sin(...)**..."),
        ("Sin(k)", "column 1", "unknown function 'Sin'", "did you mean 'sin'?"),
        ("ln(k)", "column 1", "unknown function 'ln'", "did you mean 'log'?"),
        ("arctan(k)", "column 1", "unknown function 'arctan'", "'atan'"),
        ("f(k)", "column 1", "unknown function 'f'", "functions are sin, cos"),
        ("ml", "column 1", "undeclared letter 'ml'", "did you mean 'm1'?"),
        ("K", "column 1", "undeclared letter 'K'", "did you mean 'k'?"),
        ("kc", "column 1", "undeclared letter 'kc'", "did you mean 'k*c'"),
        ("q", "column 1", "undeclared letter 'q'", "declare it as a parameter"),
        ("\u03c0", "column 1", "undeclared letter", "did you mean 'pi'?"),
        ("\u043a", "column 1", "cyrillic small letter ka", ""),
        ("1e401", "column 1", "number '1e401' out of range", "400"),
        ("1e-401", "column 1", "number '1e-401' out of range", "400"),
        ("1e" + "9" * 5000, "column 1", "out of range", "400"),
        ("9" * 401, "column 1", "number of 401 digits", "400"),
        ("007", "column 1", "number '007' with leading zeros", "write '7'"),
        ("k**m", "column 2", "exponent contains 'm'", "exp(n*log(x))"),
        ("k**sin(2)", "column 2", "exponent contains 'sin'", "exp(n*log(x))"),
        ("k**pi", "column 2", "exponent contains 'pi'", ""),
        ("k**61", "column 2", "exponent 61 is beyond 60", ""),
        ("k**-61", "column 2", "exponent -61 is beyond 60", ""),
        ("k**30.5", "column 2", "exponent 61/2 is beyond 59/2", ""),
        ("k**(1/3)", "column 2", "exponent 1/3 is neither whole nor half", ""),
        ("k**1e400", "column 2", "exponent is beyond 60", ""),
        ("k**(1/0)", "column 2", "exponent divides by zero", ""),
        ("k**2**3", "column 2", "power within an exponent", "as one number"),
        ("k**10**10", "column 2", "power within an exponent", "as one number"),
        ("9**9**9**9", "column 5", "power within an exponent", "as one number"),
        ("((k**8)**8)", "column 8", "powers within powers that multiply to 64", "60"),
        ("k**(" + "+".join("1" * 60) + ")", "column 2", "exponent of very many parts", ""),
    ],
)
def test_refused(text: str, place: str, reason: str, suggestion: str) -> None:
    first = faults_of(text)[0]
    assert first[0] == place
    assert reason in first[1]
    assert suggestion in first[2]


@pytest.mark.parametrize(
    ("text", "places"),
    [
        ("ka + kb*2 + ka/kc1", ["column 1", "column 6", "column 13", "column 16"]),
        ("2k + ml - c^2 + (m", ["column 2", "column 6", "column 12", "column 17"]),
        ("k**61 + m**m + )", ["column 2", "column 10", "column 14", "column 16"]),
        ("__import__('os').system('x')", ["column 1", "column 12", "column 17", "column 25"]),
        (
            "[i for i in q]",
            ["column 1", "column 2", "column 4", "column 8", "column 10", "column 13", "column 14"],
        ),
        ("1e999 + 2k", ["column 1", "column 10"]),
    ],
)
def test_all_faults_of_an_entry_are_found_at_once(text: str, places: list[str]) -> None:
    assert [fault[0] for fault in faults_of(text)] == places


@pytest.mark.parametrize(
    "text", ["().__class__.__bases__[0]", "exec('x')", "k if m else c", "f'{k}'", "k := 2", "`k`"]
)
def test_programs_are_refused(text: str) -> None:
    assert faults_of(text)


def test_attack_by_nesting() -> None:
    assert faults_of("(" * 10_000)[0][:2] == (
        f"column {MAX_NESTING + 1}",
        f"nested deeper than {MAX_NESTING} levels",
    )
    for text in ("-" * 5000 + "k", "1" + "/k" * 300, "sin(" * 300 + "k" + ")" * 300):
        assert any("nested deeper" in reason for _, reason, _ in faults_of(text))
    deepest = "(" * MAX_NESTING + "k" + ")" * MAX_NESTING
    assert read_arithmetic(deepest, ["k"]) == Name("k")


def test_height_of_a_tree_that_is_read_is_bounded() -> None:
    def height(node: Node) -> int:
        heights: list[int] = []
        for part in walk(node):
            match part:
                case Sum(terms=inner) | Product(factors=inner):
                    count = len(inner)
                case Quotient():
                    count = 2
                case Power() | Call():
                    count = 1
                case _:
                    count = 0
            below = heights[len(heights) - count :]
            del heights[len(heights) - count :]
            heights.append(1 + max(below, default=0))
        return heights.pop()

    text = "k"
    while True:
        longer = f"1/(1 + m*sin({text})**3)"
        try:
            tree = read_arithmetic(longer, ["k", "m"])
        except InputError:
            break
        assert height(tree) <= MAX_NESTING
        text = longer
    assert text.count("sin") > 20


@pytest.mark.parametrize(
    "text",
    [
        "x" * 1_000_000,
        "@" * 20_000,
        "k " * 9_999,
        "ab " * 6_600,
        "9" * 20_000,
        "1e400*" * 3_300 + "1",
        "k+" * 9_999 + "k",
    ],
)
def test_long_texts_are_quick(text: str) -> None:
    start = time.perf_counter()
    try:
        read_arithmetic(text, ["k", "m"])
    except InputError as error:
        assert len(error.faults) <= 51
    assert time.perf_counter() - start < 5


def test_length_cap() -> None:
    assert faults_of("x" * 1_000_000) == [
        ("column 20001", "text of 1,000,000 characters", "at most 20,000 are read")
    ]
    assert len(read_arithmetic("+".join("k" * 10_000), ["k"]).terms) == 10_000  # type: ignore[union-attr]


def test_faults_hold_nothing_a_terminal_would_obey() -> None:
    for _, reason, suggestion in faults_of("k\x1b[2J + \x07 + \u202ek"):
        assert reason.isprintable() and suggestion.isprintable()


spaces = st.sampled_from(["", "", " ", "  "])
atoms = st.one_of(
    st.integers(0, 99).map(str),
    st.sampled_from(["0.5", "1.25", ".5", "2.", "1e1", "3e-1"]),
    st.sampled_from(["k", "m"]),
)


@st.composite
def longer_texts(draw: st.DrawFn, inner: st.SearchStrategy[str]) -> str:
    left, gap = draw(inner), draw(spaces)
    match draw(st.sampled_from(["binary", "binary", "binary", "sign", "power", "brackets"])):
        case "binary":
            return f"{left}{gap}{draw(st.sampled_from('+-*/'))}{gap}{draw(inner)}"
        case "sign":
            return f"{draw(st.sampled_from('+-'))}{gap}{left}"
        case "power":
            base = left if left.isalnum() else f"({left})"
            return (
                f"{base}{gap}**{gap}{draw(st.sampled_from(['2', '-1', '(1+1)', '- 2', '+3', '(4/2)', '0']))}"
            )
        case _:
            return f"({gap}{left}{gap})"


texts = st.recursive(atoms, longer_texts, max_leaves=12)


def is_within_limits(text: str) -> bool:
    """Whether Python's tree holds no tower of powers, which are refused by design."""
    for node in ast.walk(ast.parse(text, mode="eval")):
        if isinstance(node, ast.BinOp) and isinstance(node.op, ast.Pow):
            inner = [part for part in ast.walk(node.left) if isinstance(part, ast.BinOp)]
            if sum(isinstance(part.op, ast.Pow) for part in inner) > 2:
                return False
    return True


@given(texts.filter(is_within_limits))
def test_same_value_as_in_python(text: str) -> None:
    tree = read_arithmetic(text, LETTERS)
    try:
        expected = python_value(text)
    except ZeroDivisionError:
        with pytest.raises(ZeroDivisionError):
            value_of(tree)
        return
    assert value_of(tree) == expected


leaves: st.SearchStrategy[Node] = st.one_of(
    st.fractions(min_value=-20, max_value=20, max_denominator=30).map(Number),
    st.sampled_from(sorted(LETTERS)).map(Name),
)
trees: st.SearchStrategy[Node] = st.recursive(
    leaves,
    lambda inner: st.one_of(
        st.lists(inner, min_size=2, max_size=4).map(lambda parts: Sum(tuple(parts))),
        st.lists(inner, min_size=2, max_size=4).map(lambda parts: Product(tuple(parts))),
        st.builds(Quotient, inner, inner),
        st.builds(Power, inner, st.integers(-3, 3)),
    ),
    max_leaves=15,
)


def largest_power(node: Node) -> int:
    match node:
        case Power(base=base, exponent=exponent):
            return max(1, abs(exponent)) * largest_power(base)
        case Sum(terms=parts) | Product(factors=parts):
            return max(map(largest_power, parts))
        case Quotient(numerator=top, denominator=bottom):
            return max(largest_power(top), largest_power(bottom))
    return 1


@given(trees.filter(lambda tree: largest_power(tree) <= 60))
def test_round_trip_through_printed_text(tree: Node) -> None:
    again = read_arithmetic(node_text(tree), LETTERS)
    try:
        expected = value_of(tree)
    except ZeroDivisionError:
        with pytest.raises(ZeroDivisionError):
            value_of(again)
        return
    assert value_of(again) == expected


@given(st.text(alphabet="kmq12.e+-*/() ^,'_\\{}sin\u2212\u00b2\t", max_size=40))
def test_any_text_is_read_or_refused_with_places(text: str) -> None:
    try:
        tree = read_arithmetic(text, ["k", "m"])
    except InputError as error:
        columns = [int(fault.place.removeprefix("column ")) for fault in error.faults]
        assert columns == sorted(columns)
        assert all(1 <= column <= max(1, len(text)) for column in columns)
        assert all(fault.reason for fault in error.faults)
    else:
        ast.parse(text.strip().replace("\t", " "), mode="eval")
        assert all(part.name in ("k", "m", "pi") for part in walk(tree) if isinstance(part, Name))

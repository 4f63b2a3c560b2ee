"""Plants from Python arguments: SymPy and NumPy matrices, nested lists, LaTeX, and their faults."""

from __future__ import annotations

import subprocess
import sys
from decimal import Decimal
from fractions import Fraction
from typing import Any

import numpy as np
import pytest
import sympy as sp
from hypothesis import given
from hypothesis import strategies as st

from symplant.algebra.box import Sign
from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.algebra.text import node_text
from symplant.errors import InputError
from symplant.plant.model import Matrix, Model
from symplant.reading.arguments import model_from_arguments
from symplant.reading.sympy_tree import tree_from_sympy

k, m = sp.symbols("k m", positive=True)
a, b = sp.symbols("a b")


def written(matrix: Matrix | None) -> list[list[str]]:
    assert matrix is not None
    return [[node_text(entry) for entry in row] for row in matrix]


def scalar(entry: object, **options: Any) -> Model:
    return model_from_arguments([[entry]], [[1]], [[1]], **options)


def faults_of(*matrices: object, **options: Any) -> list[tuple[str, str, str]]:
    with pytest.raises(InputError) as caught:
        model_from_arguments(*matrices, **options)
    return [(fault.place, fault.reason, fault.suggestion) for fault in caught.value.faults]


def entry_fault(entry: object, **options: Any) -> tuple[str, str, str]:
    faults = faults_of([[entry]], [[1]], [[1]], **options)
    assert len(faults) == 1, faults
    return faults[0]


def sympy_value(node: Node, names: dict[str, sp.Symbol]) -> sp.Expr:
    match node:
        case Number(value=value):
            return sp.Rational(value.numerator, value.denominator)
        case Name(name=name):
            return sp.pi if name == "pi" else names[name]
        case Sum(terms=terms):
            return sp.Add(*(sympy_value(term, names) for term in terms))
        case Product(factors=factors):
            return sp.Mul(*(sympy_value(factor, names) for factor in factors))
        case Quotient(numerator=top, denominator=bottom):
            return sympy_value(top, names) / sympy_value(bottom, names)
        case Power(base=base, exponent=exponent):
            return sympy_value(base, names) ** exponent
        case Call(function=function, argument=argument):
            return getattr(sp, function)(sympy_value(argument, names))
    raise AssertionError(node)


def test_sympy_matrices() -> None:
    A = sp.Matrix([[0, 1], [-k / m, -a / m]])
    model = model_from_arguments(
        A, sp.Matrix([0, 1 / m]), sp.ImmutableMatrix([[1, 0]]), sp.zeros(1, 1), sp.eye(2)
    )
    assert model.letters == ("k", "m", "a")
    assert [p.sign for p in model.parameters] == [Sign.POSITIVE, Sign.POSITIVE, Sign.REAL]
    assert model.A[1][0] == Product((Number(Fraction(-1)), Quotient(Name("k"), Name("m"))))
    assert model.B[1] == (Quotient(Number(Fraction(1)), Name("m")),)
    assert written(model.D) == [["0"]]
    assert written(model.E) == [["1", "0"], ["0", "1"]]


def test_lists_of_everything() -> None:
    A = [
        ["-k/m", 1, 0.1],
        [Fraction(1, 3), Decimal("1e-3"), sp.Rational(2, 7)],
        (sp.Float("0.25"), np.float32(0.1), k),
    ]
    model = model_from_arguments(A, np.eye(3), np.array([[1, 2, 0.3]], dtype=np.float32))
    assert model.letters == ("k", "m")
    assert model.A[0][0] == Product((Number(Fraction(-1)), Quotient(Name("k"), Name("m"))))
    numbers = [entry.value for row in model.A for entry in row if isinstance(entry, Number)]
    assert numbers == [
        1,
        Fraction(1, 10),
        Fraction(1, 3),
        Fraction(1, 1000),
        Fraction(2, 7),
        Fraction(1, 4),
        Fraction(1, 10),
    ]
    assert written(model.C) == [["1", "2", "3/10"]]
    assert [signal.name for signal in (*model.inputs, *model.outputs)] == ["u1", "u2", "u3", "y1"]


@pytest.mark.filterwarnings("ignore:the matrix subclass")
def test_a_float_is_the_decimal_that_python_prints() -> None:
    assert scalar(0.1).A[0][0] == Number(Fraction(1, 10))
    assert scalar(1e22).A[0][0] == Number(Fraction(10**22))
    assert scalar(np.float64(-2.5e-5)).A[0][0] == Number(Fraction(-25, 10**6))
    assert scalar(np.matrix([[1.5]])[0, 0]).A[0][0] == Number(Fraction(3, 2))
    assert scalar(sp.Float("0.1")).A[0][0] == Number(Fraction(1, 10))


@pytest.mark.filterwarnings("ignore:the matrix subclass")
@pytest.mark.parametrize("kind", [np.array, np.matrix, sp.Matrix, sp.Array, tuple, list])
def test_every_kind_of_matrix(kind: Any) -> None:
    model = model_from_arguments(kind([[1, 2], [3, 4]]), kind([[0], [1]]), kind([[1, 0]]))
    assert written(model.A) == [["1", "2"], ["3", "4"]]
    assert written(model.B) == [["0"], ["1"]]


def test_arrays_of_objects_and_text() -> None:
    model = model_from_arguments(
        np.array([[k, "m"], [0, 1.5]], dtype=object), np.array([["0"], ["1/m"]]), [[1, 0]]
    )
    assert written(model.A) == [["k", "m"], ["0", "3/2"]]
    assert model.letters == ("k", "m")


def test_latex_matrices_and_entries() -> None:
    A = r"\begin{bmatrix} 0 & 1 \\ -\frac{k_r}{m} & 0 \end{bmatrix}"
    tables = {"m": {"range": (80, 200)}, "kr": {"latex": "k_{r}", "sign": "positive"}}
    model = model_from_arguments(A, [["0"], [r"\frac{1}{m}"]], [["1", 0]], parameters=tables)
    assert model.letters == ("m", "kr")
    assert model.B[1][0] == Quotient(Number(Fraction(1)), Name("m"))
    assert model.parameters[0].upper == 200


def test_letters_in_the_order_of_appearance() -> None:
    model = model_from_arguments([["z1 - y*b", b + a], ["q", 0]], [["a"], ["c"]], [[1, "sin(x)*pi"]])
    assert model.letters == ("z1", "y", "b", "a", "q", "c", "x")


@pytest.mark.parametrize(
    "name", ["E", "I", "S", "N", "O", "Q", "C", "beta", "gamma", "zeta", "lambda", "in", "z", "oo", "e"]
)
def test_any_identifier_is_a_letter(name: str) -> None:
    for entry in (f"2*{name}**2", 2 * sp.Symbol(name) ** 2):
        model = scalar(entry)
        assert model.letters == (name,)
        assert model.A[0][0] == Product((Number(Fraction(2)), Power(Name(name), 2)))


def test_time_title_and_signals() -> None:
    states = [sp.Symbol(r"\dot{\phi}"), sp.Function("v")(sp.Symbol("t"))]
    model = model_from_arguments(
        [["s", 1], [0, 0]],
        [[1], [0]],
        [[1, 0]],
        states=states,
        inputs=("F",),
        outputs=[{"name": "y", "unit": "m"}],
        time="discrete",
        title="Sampled",
    )
    assert (model.discrete, model.variable, model.title, model.letters) == (True, "z", "Sampled", ("s",))
    assert [(state.name, state.latex) for state in model.states] == [("dot_phi", r"\dot{\phi}"), ("v", "")]
    assert (model.inputs[0].name, model.outputs[0].unit) == ("F", "m")


@pytest.mark.parametrize(
    ("assumptions", "sign"),
    [
        ({}, Sign.REAL),
        ({"real": True}, Sign.REAL),
        ({"integer": True}, Sign.REAL),
        ({"positive": True}, Sign.POSITIVE),
        ({"negative": True}, Sign.NEGATIVE),
        ({"nonnegative": True}, Sign.NONNEGATIVE),
        ({"nonpositive": True}, Sign.NONPOSITIVE),
        ({"nonzero": True}, Sign.NONZERO),
        ({"zero": False}, Sign.NONZERO),
        ({"positive": False, "real": True}, Sign.NONPOSITIVE),
    ],
)
def test_signs_from_assumptions(assumptions: dict[str, bool], sign: Sign) -> None:
    symbol = sp.Symbol("q", **assumptions)
    assert scalar(symbol).parameters[0].sign is sign
    assert scalar(symbol, parameters=[symbol]).parameters[0].sign is sign
    assert scalar(symbol, parameters=["q"]).parameters[0].sign is sign
    assert scalar(symbol, parameters={"q": {"unit": "m"}}).parameters[0].sign is sign


def test_one_name_is_one_letter_and_all_assumptions_hold() -> None:
    at_least, not_zero = sp.Symbol("q", nonnegative=True), sp.Symbol("q", nonzero=True)
    model = model_from_arguments([[sp.Symbol("q") + at_least, 0], [not_zero, "q"]], [[1], [1]], [[1, 1]])
    assert [(p.name, p.sign) for p in model.parameters] == [("q", Sign.POSITIVE)]
    assert scalar(at_least, parameters={"q": {"sign": "nonzero"}}).parameters[0].sign is Sign.POSITIVE


def test_symbols_that_are_no_identifiers_keep_their_spelling() -> None:
    torque = sp.Symbol(r"K_{\mathrm{t}}", positive=True)
    rate = sp.Symbol(r"\dot{\phi}")
    model = scalar(torque * rate)
    assert [(p.name, p.latex, p.sign) for p in model.parameters] == [
        ("K_t", r"K_{\mathrm{t}}", Sign.POSITIVE),
        ("dot_phi", r"\dot{\phi}", Sign.REAL),
    ]
    assert {part.name for part in model.A[0][0].factors} == {"K_t", "dot_phi"}  # type: ignore[union-attr]
    declared = scalar(torque, parameters={"Kt": {"latex": r"K_\mathrm{t}"}})
    assert [(p.name, p.sign) for p in declared.parameters] == [("Kt", Sign.POSITIVE)]
    keyed = scalar(torque, parameters={torque: {"unit": "Nm/A"}})
    assert [(p.name, p.latex, p.unit) for p in keyed.parameters] == [("K_t", r"K_{\mathrm{t}}", "Nm/A")]


def test_made_up_names_do_not_meet() -> None:
    roman, italic = sp.Symbol(r"k_{\mathrm{r}}"), sp.Symbol("k_r")
    model = model_from_arguments([[italic, roman], [roman, italic]], [[1], [1]], [[1, 1]])
    assert [(p.name, p.latex) for p in model.parameters] == [("k_r", ""), ("k_r_2", r"k_{\mathrm{r}}")]
    assert model.A[0] == (Name("k_r"), Name("k_r_2"))


@pytest.mark.parametrize(
    ("expression", "tree"),
    [
        (sp.Integer(3), "3"),
        (sp.Rational(-1, 3), "-1/3"),
        (sp.Float("0.1"), "1/10"),
        (sp.pi, "pi"),
        (sp.E, "exp(1)"),
        (a / b, "a/b"),
        (1 / a, "1/a"),
        (a**-2, "1/a**2"),
        (1 / sp.sqrt(a), "1/sqrt(a)"),
        (sp.sqrt(a), "sqrt(a)"),
        (a ** sp.Rational(3, 2), "sqrt(a)**3"),
        (a ** sp.Float(0.5), "sqrt(a)"),
        (sp.sqrt(2), "sqrt(2)"),
        (sp.exp(-a), "exp(-a)"),
        (sp.E**a, "exp(a)"),
        (sp.Pow(sp.E, a, evaluate=False), "exp(a)"),
        (sp.tan(a) ** -1, "1/tan(a)"),
        (sp.atan(a), "atan(a)"),
        (sp.log(a) * sp.sinh(b), "log(a)*sinh(b)"),
    ],
)
def test_sympy_expressions(expression: sp.Expr, tree: str) -> None:
    assert node_text(tree_from_sympy(expression, {a: "a", b: "b"})) == tree


expressions: st.SearchStrategy[sp.Expr] = st.recursive(
    st.one_of(st.sampled_from([a, b, sp.pi]), st.fractions(-5, 5, max_denominator=6).map(sp.Rational)),
    lambda inner: st.one_of(
        st.builds(sp.Add, inner, inner),
        st.builds(sp.Mul, inner, inner),
        st.builds(lambda x, n: x**n if x != 0 else x, inner, st.sampled_from([-2, -1, 2, sp.Rational(1, 2)])),
        st.builds(lambda f, x: f(x), st.sampled_from([sp.sin, sp.cos, sp.exp]), inner),
    ),
    max_leaves=6,
)


@given(expressions)
def test_trees_have_the_value_of_the_expression(expression: sp.Expr) -> None:
    try:
        tree = tree_from_sympy(expression, {a: "a", b: "b"})
    except InputError:
        # Roots and logarithms of negative numbers are SymPy's, not ours; and so is zoo.
        assert expression.has(sp.I, sp.zoo, sp.nan) or any(
            not (power.exp * 2).is_Integer or abs(power.exp) > 60 for power in expression.atoms(sp.Pow)
        )
        return
    again = sympy_value(tree, {"a": a, "b": b})
    point = {a: sp.Rational(7, 5), b: sp.Rational(11, 3)}
    assert abs(sp.N((again - expression).subs(point), 30, chop=True)) < 1e-15


@pytest.mark.parametrize(
    ("entry", "reason", "suggestion"),
    [
        (sp.I * a, "imaginary unit", ""),
        (sp.oo, "'oo' is no number", ""),
        (sp.zoo, "'zoo' is no number", ""),
        (sp.nan, "'nan' is no number", ""),
        (sp.Function("x")(a), "unknown function 'x(a)'", "functions are sin"),
        (sp.Function("sin")(a), "unknown function 'sin(a)'", ""),
        (sp.asin(a), "unknown function 'asin(a)'", "functions are sin"),
        (sp.Abs(a), "unknown function 'Abs(a)'", ""),
        (sp.Derivative(sp.Function("x")(a), a), "Derivative", ""),
        (sp.GoldenRatio, "GoldenRatio", ""),
        (a > 0, "no arithmetic", ""),
        (2**a, "exponent 'a' is no number", "exp(n*log(x))"),
        (a**sp.pi, "exponent 'pi' is no number", ""),
        (a**61, "exponent 61 is beyond 60", ""),
        (a ** sp.Rational(1, 3), "exponent 1/3 is neither whole nor half", ""),
        (((a**8 + 1) ** 8), "powers within powers that multiply to 64", ""),
        (sp.Integer(10) ** 401, "number of more than 400 digits", ""),
        (True, "true or false where an entry", ""),
        (1j, "a complex number", ""),
        (np.complex128(1), "a complex number", ""),
        (float("nan"), "not a finite number", ""),
        (float("inf"), "not a finite number", ""),
        (None, "nothing where an entry", ""),
        (object(), "a value of type object", ""),
        (b"k", "a value of type bytes", ""),
        ({}, "a table where an entry", ""),
    ],
)
def test_refused_entries(entry: object, reason: str, suggestion: str) -> None:
    found = entry_fault(entry)
    assert found[0] == "A[1][1]"
    assert reason in found[1]
    assert suggestion in found[2]


def test_several_faults_of_one_sympy_entry() -> None:
    entry = sp.I * a + sp.asin(b) + 2**a
    assert len(faults_of([[entry]], [[1]], [[1]])) == 3


def test_sympy_expressions_too_deep_are_refused() -> None:
    deep = a
    for _ in range(400):
        deep = sp.sin(deep, evaluate=False)
    assert "nested deeper" in entry_fault(deep)[1]


def test_undeclared_symbols() -> None:
    assert entry_fault(sp.Symbol("ml"), parameters=["m1", "q"]) == (
        "A[1][1]",
        "undeclared letter 'ml'",
        "did you mean 'm1'?",
    )
    assert entry_fault("K", parameters={"k": {}})[:2] == ("A[1][1], column 1", "undeclared letter 'K'")


@pytest.mark.parametrize(
    ("symbols", "place", "reason"),
    [
        (
            sp.Symbol("q", positive=True) - sp.Symbol("q", negative=True),
            "parameters.q",
            "but a symbol assumed",
        ),
        (sp.Dummy("q") + sp.Symbol("q"), "parameters.q", "two different symbols are called 'q'"),
        (sp.Dummy("q") + sp.Dummy("q"), "parameters.q", "two different symbols are called 'q'"),
        (sp.Symbol("q", imaginary=True), "parameters.q", "no real number"),
        (sp.Symbol("q", zero=True) + 1, "parameters.q", "assumed to be zero"),
        (sp.Symbol("s"), "parameters.s", "variable of the polynomials"),
        (sp.Symbol("pi"), "parameters.pi", "constant"),
        (sp.Symbol("sin"), "parameters.sin", "function"),
        (sp.Symbol("x1"), "parameters.x1", "also a state"),
        (sp.Symbol("gain 1"), "parameters.gain_1.latex, column 2", "not one name"),
    ],
)
def test_refused_symbols(symbols: sp.Expr, place: str, reason: str) -> None:
    found = entry_fault(symbols)
    assert found[0] == place
    assert reason in found[1]


@pytest.mark.parametrize(
    ("parameters", "place", "reason"),
    [
        ("k m", "parameters", "text where names are expected"),
        (3, "parameters", "a number where names are expected"),
        ([3], "parameters[1]", "a number where a name or a symbol is expected"),
        (["k", "k"], "parameters.k", "declared twice"),
        ({"k": 3}, "parameters.k", "a number where a table is expected"),
        ({k: 3}, "parameters.k", "a number where a table is expected"),
        ({"k": {"sgn": 1}}, "parameters.k.sgn", "unknown key 'sgn'"),
        ({"k": {"sign": "postive"}}, "parameters.k.sign", "unknown sign 'postive'"),
        ({"k": {"sign": "negative"}}, "parameters.k", "declared negative, but a symbol assumed positive"),
        ({"k": {"range": [2, 1]}}, "parameters.k.range", "above upper end"),
        ({"k": {"range": np.array([2.5, 1])}}, "parameters.k.range", "lower end 2.5 is above upper end 1"),
        (
            {"k": {"nominal": 0.5, "range": (1, 2)}},
            "parameters.k.nominal",
            "0.5 lies outside the range [1, 2]",
        ),
        ({"k": {"range": [-2, -1]}}, "parameters.k.range", "positive parameter"),
        ({"k": {"nominal": sp.Symbol("q")}}, "parameters.k.nominal", "where a number is expected"),
        ({"k": {"nominal": float("inf")}}, "parameters.k.nominal", "not a finite number"),
        ({"k": {}, "k-1": {}}, "parameters.k-1", "'k-1' is no name"),
    ],
)
def test_refused_parameters(parameters: Any, place: str, reason: str) -> None:
    faults = faults_of([[k]], [[1]], [[1]], parameters=parameters)
    assert faults[0][0] == place
    assert reason in faults[0][1]


def test_values_of_parameters_are_exact() -> None:
    tables = {"k": {"nominal": sp.Rational(1, 3), "range": [np.float64(0.1), Decimal("0.7")]}, m: None}
    parameter = scalar(k / m, parameters=tables).parameters[0]
    assert (parameter.nominal, parameter.lower, parameter.upper) == (
        Fraction(1, 3),
        Fraction(1, 10),
        Fraction(7, 10),
    )


def test_faults_of_all_arguments_together() -> None:
    found = faults_of(
        [["-k/ml", "2k"], [0, sp.I]],
        [1, 2],
        None,
        [["0", "0"]],
        "k",
        parameters={"k": {"sign": "up"}},
        states=["x", "x"],
        inputs="F",
        outputs=[],
        time="sampled",
        title=3,
    )
    assert [place for place, _, _ in found] == [
        "A[2][2]",
        "title",
        "time",
        "parameters.k.sign",
        "states[2]",
        "inputs",
        "outputs",
        "A[1][1], column 4",
        "A[1][2], column 2",
        "B",
        "C",
        "E",
    ]


@pytest.mark.parametrize(
    ("matrices", "place", "reason"),
    [
        (([[1, 2]], [[1], [1]], [[1, 1]]), "A", "1 x 2, but 2 x 2 is needed: 2 states by B and C"),
        (([[1]], [[1], [1]], [[1]]), "B", "2 x 1, but 1 x 1 is needed: 1 state by A and C"),
        (([[1]], [1], [[1]]), "B", "a list of entries"),
        (([[1]], np.array([1]), [[1]]), "B", "a list of entries"),
        (([[1]], np.array(1.0), [[1]]), "B", "a number where a matrix"),
        (([[1]], [], [[1]]), "B", "no rows"),
        (([[1], [1, 2]], [[1]], [[1]]), "A[2]", "row of 2 entries, but row 1 has 1"),
        ((k, [[1]], [[1]]), "A", "a value of type Symbol"),
        (("k", [[1]], [[1]]), "A", "no LaTeX matrix"),
        ((np.zeros((1, 1, 1)), [[1]], [[1]]), "A[1][1]", "a list where an entry"),
    ],
)
def test_refused_matrices(matrices: tuple[object, ...], place: str, reason: str) -> None:
    found = faults_of(*matrices)
    assert found[0][0] == place
    assert reason in found[0][1]


def test_text_is_never_run() -> None:
    for text in (
        "__import__('os').system('exit 3')",
        "().__class__",
        "lambda: 1",
        "9**9**9**9",
        "(" * 10_000,
    ):
        assert faults_of([[text]], [[1]], [[1]])
    assert "1,000,000 characters" in entry_fault("+" * 1_000_000)[1]


def test_text_and_numbers_need_no_sympy() -> None:
    program = (
        "import sys\n"
        "from symplant.reading.arguments import model_from_arguments\n"
        "model_from_arguments([['-k/m', 0.5], [1, 0]], [[0], ['1/m']], [[1, 0]], parameters=['k', 'm'])\n"
        "print(sorted({'sympy', 'numpy', 'flint', 'symplant.reading.latex'} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"

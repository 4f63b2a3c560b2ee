"""The Python face: SymPy in and out, the same names as the machine answers."""

from __future__ import annotations

import json

import pytest
import sympy

import symplant
from symplant import InputError, Plant

m, c, k = sympy.symbols("m c k", positive=True)
OSCILLATOR = {"A": [[0, 1], [-k / m, -c / m]], "B": [[0], [1 / m]], "C": [[1, 0]]}
s = sympy.Symbol("s")


@pytest.mark.parametrize("wrap", [sympy.Matrix, lambda rows: rows, sympy.ImmutableMatrix])
def test_sympy_matrices_come_back_in_the_same_symbols(wrap):
    plant = Plant(**{name: wrap(rows) for name, rows in OSCILLATOR.items()})
    polynomial = plant.derive().characteristic_polynomial.sympy()
    assert sympy.expand(polynomial - (m * s**2 + c * s + k)) == 0
    assert {m, c, k} <= polynomial.free_symbols


def test_text_and_latex_matrices_are_the_same_plant():
    letters = {"m": {"sign": "positive"}, "k": {"latex": r"k_{\mathrm r}"}}
    one = Plant([["0", "1"], ["-k/m", 0]], [[0], ["1/m"]], [[1, 0]], parameters=letters)
    two = Plant(
        r"\begin{bmatrix} 0 & 1 \\ -\frac{k_{\mathrm r}}{m} & 0 \end{bmatrix}",
        r"\begin{bmatrix} 0 \\ \frac1m \end{bmatrix}",
        [[1, 0]],
        parameters=letters,
    )
    assert one.derive().to_json() == two.derive().to_json()


def test_results_have_the_names_of_the_answer():
    plant = Plant(**OSCILLATOR, inputs=["F"], outputs=["y"], title="Oscillator")
    derived, stable = plant.derive(), plant.stability()
    answer = json.loads(derived.to_json())
    for name in ("characteristic_polynomial", "channels", "zero_polynomial", "assumed_nonzero", "checks"):
        assert name in answer and hasattr(derived, name)
    for name in ("verdict", "conditions", "crossings", "witnesses", "intervals"):
        assert name in json.loads(stable.to_json()) and hasattr(stable, name)
    assert stable.verdict == "stable" and derived.passed
    assert derived.channel("y", "F").relative_degree == 2
    with pytest.raises(KeyError):
        derived.channel("y", "G")


def test_text_and_latex_of_results():
    plant = Plant(**OSCILLATOR)
    derived, stable = plant.derive(), plant.stability()
    assert "m s² + c s + k" in str(derived)
    assert derived._repr_latex_() == "$m s^{2} + c s + k$"
    assert "STABLE" in str(stable) and r"\begin" in derived.latex()
    assert derived.channels[0]._repr_latex_() == r"$\frac{1}{m s^{2} + c s + k}$"


def test_common_factors_are_kept_beside_uncancelled_forms():
    a, b = sympy.symbols("a b")
    plant = Plant([[-a, 0], [1, -b]], [[0], [1]], [[0, 1]])
    channel = plant.derive().channels[0]
    assert channel.common_factor.expression == "s + a"
    assert channel.denominator.degree == 2 and channel.numerator.degree == 1


def test_what_is_divided_by_is_listed_even_if_it_cancels():
    plant = Plant([["-k/k"]], [["1/m"]], [["m"]], parameters=["k", "m"])
    assert plant.derive().assumed_nonzero == ["k", "m"]


def test_faults_are_raised_together():
    with pytest.raises(InputError) as caught:
        Plant([["q"]], [["1"], ["2"]], [["1"]], parameters={"k": {"sign": "postive"}})
    assert len(caught.value.faults) >= 3


def test_a_report_from_python(tmp_path):
    main = Plant(**OSCILLATOR, title="Oscillator").report(tmp_path / "out")
    assert main == tmp_path / "out" / "report.tex" and main.exists()


def test_names_are_lazy():
    assert set(symplant.__all__) >= {"Plant", "InputError", "__version__"}
    for name in symplant.__all__:
        assert getattr(symplant, name)
    with pytest.raises(AttributeError):
        _ = symplant.Plants


def test_rings_with_functions_give_sympy_functions():
    alpha = sympy.Symbol("alpha", real=True)
    plant = Plant([[-(sympy.sin(alpha) ** 2) - sympy.cos(alpha) ** 2]], [[sympy.sqrt(k / m)]], [[1]])
    derived = plant.derive()
    assert derived.characteristic_polynomial.expression == "s + 1"
    numerator = derived.channels[0].numerator.sympy() / derived.channels[0].denominator.sympy()
    assert sympy.simplify(numerator - sympy.sqrt(k / m) / (s + 1)) == 0

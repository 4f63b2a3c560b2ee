"""The case book: which modes hide, under which equations, and what they do there."""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from itertools import product
from pathlib import Path
from random import Random

import numpy as np
import pytest
import scipy.linalg
import sympy

from symplant.algebra.determinant import determinant
from symplant.algebra.minor_factors import maximal_minor_factors
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.algebra.text import element_text
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.pencil import irreducible_factors
from symplant.derivation.zeros.free_response import free_response
from symplant.derivation.zeros.hidden import hidden_modes
from symplant.derivation.zeros.hidden_findings import HiddenCase, HiddenModes
from symplant.reading.fault_list import FaultList
from symplant.reading.model_building import build_model
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"
S = sympy.Symbol("s")


@cache
def book(name: str, output: str | None = None, input: str | None = None) -> HiddenModes:
    return hidden_modes(derive(read_plant_file(CASES / f"{name}.toml")), output, input)


def plant(signs: dict[str, str], **matrices: object) -> Derivation:
    raw = {"parameters": {name: {"sign": sign} for name, sign in signs.items()}}
    return derive(build_model(raw, matrices, FaultList()))


def text(polynomial: Polynomial) -> sympy.Expr:
    names = {name: sympy.Symbol(name) for name in (*polynomial.ring.letters, "s", "z")}
    return sympy.sympify(element_text(polynomial.ring, polynomial.element), locals=names)


def is_multiple(polynomial: Polynomial, wanted: str) -> bool:
    names = {name: sympy.Symbol(name) for name in (*polynomial.ring.letters, "s", "z")}
    return not sympy.cancel(text(polynomial) / sympy.sympify(wanted, locals=names)).has(S)


def under(found: HiddenModes, *conditions: str) -> list[HiddenCase]:
    return [case for case in found.cases if tuple(str(c) for c in case.conditions) == conditions]


def test_two_sticks_hide_an_unstable_mode_at_equal_lengths() -> None:
    # Luenberger, Introduction to Dynamic Systems, 1979; Kailath, Linear Systems, 1980 (from memory):
    # controllable exactly for l1 != l2; at equal lengths two modes l s^2 = g hide, one of them unstable.
    found = book("two_sticks")
    (case,) = under(found, "l1 - l2")
    assert case.kind == "uncontrollable" and case.hidden_factor is not None
    assert is_multiple(case.hidden_factor, "l2*s**2 - g") or is_multiple(case.hidden_factor, "l1*s**2 - g")
    assert case.stability.verdict == "unstable"
    assert case.inside_box.verdict is Verdict.PROVED and case.inside_box.witness == {"l1": 1, "l2": 1}
    assert "not stable" in case.warning and set(case.visible_in) == {"theta1", "sum"}
    assert found.complete is Verdict.PROVED
    # Every other case lies outside the box.
    assert all(c.inside_box.verdict is Verdict.REFUTED for c in found.cases if c is not case)


def test_equal_sticks_hide_it_always() -> None:
    (case,) = book("equal_sticks").cases
    assert case.always and case.stability.verdict == "unstable" and case.kind == "uncontrollable"
    assert case.hidden_factor is not None and is_multiple(case.hidden_factor, "l*s**2 - g")


@pytest.mark.parametrize(
    ("output", "input", "kind"), [(None, "radial", "uncontrollable"), ("r", None, "unobservable")]
)
def test_satellite_hides_the_angle(output: str | None, input: str | None, kind: str) -> None:
    # Brockett, Finite Dimensional Linear Systems, 1970 (answer from memory): the hidden mode is s = 0.
    always = [case for case in book("satellite", output, input).cases if case.always]
    (case,) = always
    assert case.kind == kind and case.hidden_factor is not None and is_multiple(case.hidden_factor, "s")
    assert case.stability.verdict == "marginal"


@pytest.mark.parametrize(("output", "input"), [(None, "tangential"), ("theta", None)])
def test_satellite_hides_nothing_inside_the_box(output: str | None, input: str | None) -> None:
    found = book("satellite", output, input)
    assert found.complete is Verdict.PROVED
    assert all(case.inside_box.verdict is Verdict.REFUTED for case in found.cases)


def test_cart_angle_hides_the_position() -> None:
    # Astrom, Murray, Feedback Systems, 2008, balance system (from memory): the angle keeps a factor s.
    case = next(c for c in book("balance_system", "theta", "F").cases if c.always)
    assert case.kind == "unobservable" and case.hidden_factor is not None
    assert is_multiple(case.hidden_factor, "s") and case.stability.verdict == "marginal"
    (channel,) = case.reduced
    assert not channel.numerator.gcd(channel.denominator).degree


def test_proportional_integral_zero_cancels_a_pole() -> None:
    # Franklin, Powell, Emami-Naeini, Feedback Control of Dynamic Systems: at K = KI = 1, T = 1/(s+1)^2.
    found = book("franklin_pi")
    (case,) = under(found, "K - KI")
    assert case.hidden_factor is not None and is_multiple(case.hidden_factor, "s + 1")
    assert case.stability.verdict == "stable" and not case.warning
    (channel,) = case.reduced
    at_one = text(channel.numerator).subs("KI", 1) / text(channel.denominator).subs("KI", 1)
    assert sympy.simplify(at_one - 1 / (S + 1) ** 2) == 0
    (integrator,) = under(found, "KI")
    assert integrator.stability.verdict == "marginal" and "does not decay" in integrator.warning


def test_a_quadratic_condition_is_solved_by_a_root() -> None:
    # The zero -b meets the poles s**2 + a*s + 1 where b**2 - a*b + 1 = 0: quadratic in b, linear in a;
    # with a written as c**3 no letter is linear.
    derivation = plant(
        {"b": "positive", "c": "positive"}, A=[[0, 1], [-1, "-c**3"]], B=[[0], [1]], C=[["b", 1]]
    )
    found = hidden_modes(derivation)
    (case,) = found.cases
    assert case.hidden_factor is not None and case.kind == "unobservable"
    assert is_multiple(case.hidden_factor, "s + b") or case.hidden_factor.degree == 1
    values = {"c": sympy.Integer(2), "b": 4 + sympy.sqrt(15)}
    names = {sympy.Symbol(k): v for k, v in values.items()}
    (condition,) = case.conditions
    letters = {n: sympy.Symbol(n) for n in "bc"}
    assert (
        sympy.simplify(sympy.sympify(element_text(derivation.ring, condition), locals=letters).subs(names))
        == 0
    )
    (root,) = sympy.solve(text(case.hidden_factor).subs(names), S)
    assert sympy.simplify(root + values["b"]) == 0


def test_conditions_through_square_roots() -> None:
    derivation = plant(
        {"k": "positive", "c": "positive"},
        A=[["-sqrt(k)", 0], [0, "-c"]],
        B=[[1], [1]],
        C=[[1, 1]],
    )
    found = hidden_modes(derivation)
    cases = [case for case in found.cases if case.inside_box.verdict is not Verdict.REFUTED]
    assert {case.kind for case in cases} == {"both"}
    assert all(case.hidden_factor is not None and case.hidden_factor.degree == 1 for case in cases)
    assert all(case.stability.verdict == "stable" for case in cases)


def test_sampled_plant_hides_nothing_at_a_positive_sampling_time() -> None:
    found = book("ogata_digital")
    assert found.complete is Verdict.PROVED
    assert all(case.inside_box.verdict is Verdict.REFUTED and not case.warning for case in found.cases)


def test_two_equations_at_once() -> None:
    # The second mode is lost on the input side only where both b1 and b2 vanish.
    derivation = plant(
        {"b1": "real", "b2": "real", "a": "positive"},
        A=[["-a", 0], [0, 1]],
        B=[[1, 0], ["b1", "b2"]],
        C=[[1, 0], [0, 1]],
    )
    found = hidden_modes(derivation)
    together = [case for case in found.cases if len(case.conditions) == 2]
    assert together and all({str(c) for c in case.conditions} == {"b1", "b2"} for case in together)
    assert all(
        case.hidden_factor is not None and is_multiple(case.hidden_factor, "s - 1") for case in together
    )
    assert all(case.stability.verdict == "unstable" and case.warning for case in together)
    assert together[0].inside_box.witness is not None
    assert (together[0].inside_box.witness["b1"], together[0].inside_box.witness["b2"]) == (0, 0)


def test_an_unstable_mode_shows_in_the_free_response_only() -> None:
    """Our own example: two magnets under one coil; with equal gains the difference cannot be driven."""
    derivation = plant(
        {"k": "positive", "m": "positive", "g1": "positive", "g2": "positive"},
        A=[[0, 1, 0, 0], ["k/m", 0, 0, 0], [0, 0, 0, 1], [0, 0, "k/m", 0]],
        B=[[0], ["g1"], [0], ["g2"]],
        C=[[1, 0, 0, 0], [0, 0, 1, 0]],
    )
    found = hidden_modes(derivation)
    (case,) = [c for c in found.cases if c.always]
    assert case.hidden_factor is not None and is_multiple(case.hidden_factor, "m*s**2 - k")
    assert case.stability.verdict == "unstable" and case.visible_in == ("y1", "y2")
    assert "response to initial conditions of y1, y2" in case.warning
    first = free_response(derivation)[0]
    assert is_multiple(first.visible, "m*s**2 - k")


@pytest.mark.parametrize("name", ["two_mass", "buck_boost", "balance_system", "satellite", "qep1"])
def test_free_response_against_the_resolvent(name: str) -> None:
    derivation = derive(read_plant_file(CASES / f"{name}.toml"))
    model = derivation.model
    point = {letter: Fraction(3 + 2 * i, 5) for i, letter in enumerate(model.letters)}
    values = {sympy.Symbol(k): sympy.Rational(v.numerator, v.denominator) for k, v in point.items()}
    from symplant.algebra.sympy_form import symbol_table, tree_to_sympy

    table = symbol_table("s", model.box)
    plain = {table[k]: values[sympy.Symbol(k)] for k in model.letters}

    def matrix(trees: tuple[tuple[object, ...], ...]) -> sympy.Matrix:
        return sympy.Matrix([[tree_to_sympy(x, table).subs(plain) for x in row] for row in trees])

    n = len(model.states)
    A, C = matrix(model.A), matrix(model.C)
    E = matrix(model.E) if model.E is not None else sympy.eye(n)
    at = sympy.Rational(7, 3)
    wanted = C * (at * E - A).inv() * E
    for response in free_response(derivation):
        below = response.denominator.ring.value(response.denominator.element, {**point, "s": Fraction(7, 3)})
        for j, numerator in enumerate(response.numerators):
            above = numerator.ring.value(numerator.element, {**point, "s": Fraction(7, 3)})
            assert sympy.Rational(*(above / below).as_integer_ratio()) == wanted[response.output, j]


@pytest.mark.parametrize("seed", range(8))
def test_cases_against_ranks_at_points(seed: int) -> None:
    """Where a case says a mode hides the pencils lose rank; away from all cases they do not."""
    random = Random(seed)
    entries = ["p", "q", "0", "1", "-1", "p - q", "p + 2"]
    n, m = 3, random.choice([1, 2])
    A = [[random.choice(entries) for _ in range(n)] for _ in range(n)]
    B = [[random.choice(["0", "1", "p", "q - 1"]) for _ in range(m)] for _ in range(n)]
    C = [[random.choice(["0", "1", "q"]) for _ in range(n)]]
    B[0][0], C[0][-1] = "1", "1"
    derivation = plant({"p": "real", "q": "real"}, A=A, B=B, C=C)
    found = hidden_modes(derivation)

    def lost(point: dict[str, Fraction]) -> tuple[int, int]:
        names = {k: sympy.Rational(v.numerator, v.denominator) for k, v in point.items()}
        a, b, c = (
            sympy.Matrix([[sympy.sympify(x).subs(names) for x in row] for row in M]) for M in (A, B, C)
        )
        controllable = sympy.Matrix.hstack(*[a**k * b for k in range(n)])
        observable = sympy.Matrix.vstack(*[c * a**k for k in range(n)])
        return n - controllable.rank(), n - observable.rank()

    structure = found.structure
    generic = (structure.input_decoupling.degree, structure.output_decoupling.degree)
    letters = [sympy.Symbol("p"), sympy.Symbol("q")]
    single = [
        sympy.sympify(element_text(derivation.ring, case.conditions[0]))
        for case in found.cases
        if len(case.conditions) == 1
    ]
    for p, q in product(range(-3, 4), repeat=2):
        at = dict(zip(letters, (p, q), strict=True))
        loss = lost({"p": Fraction(p), "q": Fraction(q)})
        on_case = any(condition.subs(at) == 0 for condition in single) or any(
            all(sympy.sympify(element_text(derivation.ring, c)).subs(at) == 0 for c in case.conditions)
            for case in found.cases
            if len(case.conditions) > 1
        )
        assert loss[0] >= generic[0] and loss[1] >= generic[1]
        if loss != generic:
            assert on_case or found.complete is Verdict.UNDECIDED, (p, q, loss)
        elif on_case:
            # The degree may rise only where the leading coefficient of the solution vanishes as well.
            assert loss != generic, (p, q)


@pytest.mark.parametrize("seed", range(25))
def test_factors_of_a_maximal_minor(seed: int) -> None:
    random = Random(seed)
    ring = Ring("s", ("a", "b", "c"))
    pool = [ring.gen("a"), ring.gen("b") - ring.gen("c"), ring.gen("a") + ring.gen("b"), ring.one, ring.zero]
    size = random.choice([2, 3, 4])
    rows = [
        [random.choice(pool) * random.choice(pool) + random.choice([0, 0, 1]) for _ in range(size)]
        for _ in range(size)
    ]
    expected = determinant(rows, ring.one)
    found = maximal_minor_factors(ring, rows)
    if not expected:
        assert found is None
        return
    assert found is not None
    assert sorted(map(str, found)) == sorted(map(str, irreducible_factors(ring, [expected])))


def test_equations_that_grow_too_large_are_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("symplant.algebra.minor_factors.PRODUCT_LIMIT", 0)
    found = hidden_modes(derive(read_plant_file(CASES / "car_handling.toml")))
    assert found.complete is Verdict.UNDECIDED
    assert any("too large" in note for note in found.notes)


def test_hidden_modes_stay_hidden_in_simulation() -> None:
    """At equal lengths the difference of the angles is not moved by any input."""
    g, length = 9.81, 0.7
    A = np.array([[0, 1, 0, 0], [g / length, 0, 0, 0], [0, 0, 0, 1], [0, 0, g / length, 0]])
    B = np.array([[0], [-1 / length], [0], [-1 / length]])
    step = scipy.linalg.expm(0.01 * np.block([[A, B], [np.zeros((1, 5))]]))[:4]
    x, y = np.zeros(4), np.array([0.01, 0, -0.01, 0])
    for k in range(100):
        u = np.sin(0.1 * k)
        x = step @ np.append(x, u)
        y = step @ np.append(y, u)
    assert abs(x[0] - x[2]) < 1e-12  # the transfer function never sees it
    assert abs(y[0] - y[2]) > 0.1  # an initial difference grows

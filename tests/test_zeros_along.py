"""Closed forms, events, sensitivities and limits of zeros, against published answers and SymPy."""

from __future__ import annotations

import math
from fractions import Fraction
from functools import cache
from pathlib import Path

import numpy as np
import pytest
import sympy
from flint import fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Sign
from symplant.algebra.newton_polygon import branches
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Ring
from symplant.algebra.sympy_form import element_to_sympy, ratio_to_sympy, symbol_table, tree_to_sympy
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.zeros.along import Along, Event, along
from symplant.derivation.zeros.closed_forms import closed_forms
from symplant.derivation.zeros.minimum_phase import minimum_phase
from symplant.derivation.zeros.structure import surroundings
from symplant.derivation.zeros.target import target
from symplant.reading.fault_list import FaultList
from symplant.reading.model_building import build_model
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"


@cache
def case(name: str) -> Derivation:
    return derive(read_plant_file(CASES / f"{name}.toml"))


def plant(
    parameters: dict[str, dict[str, object]], time: str = "continuous", **matrices: object
) -> Derivation:
    return derive(build_model({"parameters": parameters, "time": time}, matrices, FaultList()))


def zeros_of(derivation: Derivation, output: str | None = None, input: str | None = None) -> set[sympy.Expr]:
    forms = closed_forms(target(derivation, output, input), surroundings(derivation))
    table = {name: sympy.Symbol(name) for name in (*derivation.model.letters, "s")}
    table["pi"] = sympy.pi
    return {tree_to_sympy(zero.tree, table) for form in forms for zero in form.zeros}


def same_set(found: set[sympy.Expr], wanted: list[str]) -> bool:
    targets = [sympy.sympify(w, locals={n.name: n for e in found for n in e.free_symbols}) for w in wanted]
    point = {
        n: sympy.Rational(3 + 2 * i, 7 + i)
        for i, n in enumerate(sorted({n for e in found for n in e.free_symbols}, key=str))
    }
    numbers = sorted((complex(e.subs(point)) for e in found), key=lambda z: (z.real, z.imag))
    others = sorted((complex(e.subs(point)) for e in targets), key=lambda z: (z.real, z.imag))
    return len(numbers) == len(others) and np.allclose(numbers, others)


@pytest.mark.parametrize(
    ("name", "output", "input", "zeros", "source"),
    [
        (
            "two_mass",
            "x1",
            "u",
            ["sqrt(-k/m2)", "-sqrt(-k/m2)"],
            "Wie, Bernstein 1992: antiresonance, from memory",
        ),
        ("two_mass", "x2", "u", [], "Wie, Bernstein 1992, from memory"),
        ("buck_boost", "v", "d", ["(1 - D)**2*R/(D*L)"], "Erickson, Maksimovic, Table 8.2, from memory"),
        (
            "boost_parasitics",
            "y",
            "d",
            ["-1/(rC*C)", "(R**2*(1 - D)**2/(R + rC) - rL)/L"],
            "Kazimierczuk, PWM DC-DC Power Converters, recomputed",
        ),
        ("satellite", "theta", "tangential", ["sqrt(3)*w", "-sqrt(3)*w"], "Brockett 1970, recomputed"),
        ("skogestad", None, None, ["4"], "Skogestad, Postlethwaite, Example 4.8, from memory"),
        (
            "balance_system",
            "p",
            "F",
            [
                "(-gamma + sqrt(gamma**2 + 4*(J + m*l**2)*m*g*l))/(2*(J + m*l**2))",
                "(-gamma - sqrt(gamma**2 + 4*(J + m*l**2)*m*g*l))/(2*(J + m*l**2))",
            ],
            "Astrom, Murray, Feedback Systems, 2008, numerator from memory",
        ),
    ],
)
def test_closed_forms_of_published_zeros(
    name: str, output: str | None, input: str | None, zeros: list[str], source: str
) -> None:
    assert same_set(zeros_of(case(name), output, input), zeros), source


def test_cart_pendulum_numbers() -> None:
    # Astrom, Murray (from memory): without damping the zeros of the position are +-2.09.
    found = zeros_of(case("balance_system"), "p", "F")
    values = {"M": 10, "m": 80, "J": 100, "l": 1, "g": 9.8, "c": 0, "gamma": 0}
    numbers = sorted(float(z.subs(values)) for z in found)
    assert numbers == pytest.approx([-2.09, 2.09], abs=0.005)


def test_right_half_plane_zero_of_the_buck_boost() -> None:
    # Erickson, Maksimovic, sec. 8.2, from memory: 2.65 kHz at D = 0.6, R = 10, L = C = 160 uH/uF, Vg = 30.
    (zero,) = zeros_of(case("buck_boost"))
    value = float(zero.subs({"D": 0.6, "R": 10, "L": 160e-6}))
    assert value / (2 * math.pi) == pytest.approx(2650, abs=5)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.integers(-4, 4), min_size=2, max_size=5), st.booleans())
def test_closed_forms_are_roots(coefficients: list[int], even: bool) -> None:
    ring = Ring("s", ("a", "b"))
    s, a, b = (ring.gen(x) for x in "sab")
    letters = [a, b, ring.one, a * b, a + 2]
    variable = s**2 if even else s
    element = ring.zero
    for power, (value, letter) in enumerate(zip(coefficients[:3], letters, strict=False)):
        element = element + value * letter * variable**power
    if not element:
        return
    polynomial = Polynomial.of(ring, element)
    values = {"a": Fraction(7, 3), "b": Fraction(-5, 2)}
    table = {name: sympy.Rational(v.numerator, v.denominator) for name, v in values.items()}
    count = 0
    for form in closed_forms(polynomial):
        for zero in form.zeros:
            count += form.multiplicity
            root = complex(tree_to_sympy(zero.tree, table))
            total = sum(float(ring.value(c, values)) * root**k for k, c in enumerate(polynomial.coefficients))
            assert abs(total) < 1e-6 * (1 + abs(root)) ** 4 * 200
    assert count == polynomial.degree


def events(found: Along, kind: str) -> list[Event]:
    return [event for event in found.events if event.event == kind]


def test_events_of_a_zero_with_parasitic_resistance() -> None:
    found = along(case("boost_parasitics"), "rL")
    (origin,) = events(found, "crosses at origin")
    table = symbol_table("s", case("boost_parasitics").model.box)
    (value,) = (tree_to_sympy(tree, table) for tree, _ in origin.values)
    R, D, rC = (table[x] for x in ("R", "D", "rC"))
    # Kazimierczuk, recomputed: the zero lies at [R^2 D'^2/(R + rC) - rL]/L.
    assert sympy.simplify(value - R**2 * (1 - D) ** 2 / (R + rC)) == 0
    motions = [s.formula.motion for s in found.sensitivities if s.formula.derivative]
    (motion,) = motions
    assert motion is not None and motion.sign is Sign.NEGATIVE and motion.verdict is Verdict.PROVED


def third_order() -> Derivation:
    """Numerator s^3 + a s^2 + b s + c over (s+1)^4: states are a chain of lags in companion form."""
    return plant(
        {
            "a": {"sign": "positive", "nominal": 2},
            "b": {"sign": "positive", "nominal": 3},
            "c": {"sign": "real", "nominal": 1},
        },
        A=[[0, 1, 0, 0], [0, 0, 1, 0], [0, 0, 0, 1], [-1, -4, -6, -4]],
        B=[[0], [0], [0], [1]],
        C=[["c", "b", "a", 1]],
    )


def test_a_pair_crosses_the_imaginary_axis() -> None:
    found = along(third_order(), "c")
    (pair,) = events(found, "crosses on imaginary axis")
    assert str(pair.equation) in ("a*b - c", "-a*b + c") and pair.frequency_squared is not None
    assert str(pair.frequency_squared.numerator) == "b"
    (value,) = pair.nominal.values
    assert (value.lower, value.happens, value.inside) == (6, Verdict.PROVED, True)
    assert np.max(np.roots([1, 2, 3, 6]).real) == pytest.approx(0, abs=1e-12)
    (origin,) = events(found, "crosses at origin")
    assert [v.lower for v in origin.nominal.values] == [0]


def test_where_a_zero_cancels_a_pole() -> None:
    found = along(third_order(), "c")
    (cancel,) = events(found, "cancels a pole")
    (value,) = cancel.nominal.values
    # s = -1 is a zero where -1 + a - b + c = 0.
    assert value.lower == 2


def test_meeting_zeros_have_enclosures() -> None:
    found = along(third_order(), "c")
    (meet,) = events(found, "zeros meet")
    for value in meet.nominal.values:
        assert value.upper - value.lower < Fraction(1, 10**20)
    discriminant = sympy.discriminant(sympy.Poly([1, 2, 3, sympy.Symbol("c")], sympy.Symbol("s")))
    wanted = [float(r) for r in sympy.Poly(discriminant, sympy.Symbol("c")).nroots() if r.is_real]
    assert [float(v.lower) for v in meet.nominal.values] == pytest.approx(wanted)


def test_real_pairs_of_opposite_sign_do_not_cross() -> None:
    derivation = plant(
        {"a": {"nominal": 1}},
        A=[[0, 1, 0], [0, 0, 1], [-1, -3, -3]],
        B=[[0], [0], [1]],
        C=[[-1, "a", 1]],
    )
    # s^2 + a s - 1 has the roots +-1 at a = 0: no pair on the axis.
    assert not events(along(derivation, "a"), "crosses on imaginary axis")


def test_leading_coefficient_sends_a_zero_to_infinity() -> None:
    found = along(case("franklin_pi"), "K")
    (gone,) = events(found, "goes to infinity")
    assert str(gone.equation) == "K"
    at_zero = next(limit for limit in found.limits if limit.at == "0")
    assert (at_zero.exponent, at_zero.goes_to) == (-1, "infinity")


def test_discrete_events_are_about_the_unit_circle() -> None:
    # y/u = (z^2 + a z + b)/z^3; a complex pair crosses where b = 1, z = 1 where 1 + a + b = 0.
    derivation = plant(
        {"a": {"nominal": "1/2"}, "b": {"nominal": "1/2"}},
        "discrete",
        A=[[0, 1, 0], [0, 0, 1], [0, 0, 0]],
        B=[[0], [0], [1]],
        C=[["b", "a", 1]],
    )
    found = along(derivation, "b")
    (pair,) = events(found, "crosses on unit circle")
    (value,) = pair.nominal.values
    assert value.lower == 1 and value.happens is Verdict.PROVED
    assert abs(np.roots([1, 0.5, 1])[0]) == pytest.approx(1)
    assert [v.lower for v in events(found, "crosses at z = 1")[0].nominal.values] == [Fraction(-3, 2)]
    assert [v.lower for v in events(found, "crosses at z = -1")[0].nominal.values] == [Fraction(-1, 2)]


@pytest.mark.parametrize(
    ("name", "output", "input", "letter"),
    [
        ("balance_system", "p", "F", "m"),
        ("boost_parasitics", "y", "d", "rC"),
        ("kundur_regulator", "angle", "torque", "KA"),
        ("watt_governor", "speed", "load", "phi0"),
        ("ogata_digital", "y", "r", "T"),
    ],
)
def test_sensitivities_against_implicit_differentiation(
    name: str, output: str, input: str, letter: str
) -> None:
    derivation = case(name)
    ring = derivation.ring
    table = symbol_table(ring.variable, derivation.model.box)
    for finding in along(derivation, letter, output, input).sensitivities:
        formula = finding.formula
        factor = element_to_sympy(ring, formula.factor.element, table)
        wanted = -sympy.diff(factor, table[letter]) / sympy.diff(factor, table[ring.variable])
        difference = ratio_to_sympy(formula.derivative, table) - wanted
        names = sorted(difference.free_symbols, key=str)
        point = {n: sympy.Rational(3 + i, 7 + 2 * i) for i, n in enumerate(names)}
        assert abs(complex(difference.subs(point))) < 1e-12


def test_sensitivities_at_nominal_agree_with_differences() -> None:
    derivation = case("kundur_regulator")
    found = along(derivation, "KA", "angle", "torque")
    nominal = {k: float(v) for k, v in derivation.model.nominal.items()}
    polynomial = target(derivation, "angle", "torque")

    def roots(gain: float) -> np.ndarray:
        at = {**nominal, "KA": gain}
        exact = {k: Fraction(v) for k, v in at.items()}
        values = [float(polynomial.ring.value(c, exact)) for c in reversed(polynomial.coefficients)]
        return np.sort_complex(np.roots(values))

    step = 1e-3
    rates = (roots(nominal["KA"] + step) - roots(nominal["KA"] - step)) / (2 * step)
    (finding,) = found.sensitivities
    pairs = sorted(
        ((complex(n.zero), complex(n.derivative)) for n in finding.nominal if n.derivative is not None),
        key=lambda pair: (pair[0].real, pair[0].imag),
    )
    assert [rate for _, rate in pairs] == pytest.approx(list(rates), rel=1e-5)
    # The printed digits are guaranteed ones.
    assert all(float(n.zero.real.rad()) < 1e-30 for n in finding.nominal)


@settings(max_examples=40, deadline=None)
@given(st.lists(st.tuples(st.integers(0, 3), st.integers(1, 5)), min_size=3, max_size=5), st.booleans())
def test_newton_polygon_against_roots(shape: list[tuple[int, int]], at_infinity: bool) -> None:
    ring = Ring("s", ("p",))
    s, p = ring.gen("s"), ring.gen("p")
    element = ring.zero
    for power, (order, value) in enumerate(shape):
        element = element + value * p**order * s**power
    polynomial = Polynomial.of(ring, element)
    size = Fraction(10) ** (24 if at_infinity else -24)
    values = [ring.value(c, {"p": size}) for c in polynomial.coefficients]
    scale = math.lcm(*(v.denominator for v in values))
    exact = fmpz_poly([int(v * scale) for v in values]).complex_roots()
    sign = 24 if at_infinity else -24
    slopes = sorted(
        math.log10(abs(complex(root))) / sign for root, multiplicity in exact for _ in range(multiplicity)
    )
    found = sorted(
        float(branch.exponent)
        for branch in branches(polynomial, "p", at_infinity)
        for _ in range(branch.edge.degree)
    )
    assert found == pytest.approx(slopes, abs=0.11)


def test_limits_of_the_balance_system() -> None:
    # J z^2 + m l^2 z^2 + gamma z - m g l: as m grows the zeros go to +-sqrt(g/l), those of a point mass.
    found = along(case("balance_system"), "m", "p", "F")
    far = [limit for limit in found.limits if limit.at == "infinity"]
    (limit,) = far
    assert limit.exponent == 0 and limit.goes_to == "a finite value" and limit.count == 2
    table = {n: sympy.Symbol(n, positive=True) for n in ("g", "l")}
    zeros = {tree_to_sympy(z.tree, table) for form in limit.forms for z in form.zeros}
    assert zeros == {sympy.sqrt(table["g"] / table["l"]), -sympy.sqrt(table["g"] / table["l"])}


def test_too_large_equations_are_solved_at_nominal(monkeypatch: pytest.MonkeyPatch) -> None:
    full = along(third_order(), "c")
    monkeypatch.setattr("symplant.derivation.zeros.events.SIZE_LIMIT", -1.0)
    short = along(third_order(), "c")
    assert any("too large" in note for note in short.notes)
    for kind in ("crosses on imaginary axis", "zeros meet", "cancels a pole"):
        assert not events(short, kind)
    # With only the letters' number in the way, the same values come out at the nominal point.
    monkeypatch.setattr("symplant.derivation.zeros.events.SIZE_LIMIT", 0.1)
    short = along(third_order(), "c")
    for kind in ("crosses on imaginary axis", "zeros meet", "cancels a pole"):
        mine, whole = events(short, kind), events(full, kind)
        assert [v.lower for e in mine for v in e.nominal.values] == [
            v.lower for e in whole for v in e.nominal.values
        ]


@pytest.mark.parametrize(
    ("name", "output", "input", "verdict"),
    [
        # Erickson, Maksimovic (from memory): the zero of the buck-boost lies in the right half plane.
        ("buck_boost", "v", "d", "unstable"),
        ("two_mass", "x1", "u", "marginal"),
        ("two_mass", "x2", "u", "stable"),
        ("balance_system", "p", "F", "unstable"),
        ("boost_parasitics", "y", "d", "conditional"),
        ("kundur_regulator", "angle", "torque", "conditional"),
    ],
)
def test_minimum_phase(name: str, output: str, input: str, verdict: str) -> None:
    assert minimum_phase(case(name), output, input).verdict == verdict


def test_unknown_parameter_is_refused() -> None:
    with pytest.raises(KeyError):
        along(case("two_mass"), "m3")

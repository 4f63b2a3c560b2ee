"""Zero directions: exact against the matrices, and an output that stays zero in simulation."""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from pathlib import Path

import numpy as np
import pytest
import scipy.linalg
import sympy
from scipy.integrate import solve_ivp

from symplant.algebra.sympy_form import element_to_sympy, ratio_to_sympy, symbol_table, tree_to_sympy
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.zeros.directions import directions
from symplant.reading.fault_list import FaultList
from symplant.reading.model_building import build_model
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"


@cache
def case(name: str) -> Derivation:
    return derive(read_plant_file(CASES / f"{name}.toml"))


def matrices(derivation: Derivation) -> dict[str, sympy.Matrix]:
    model = derivation.model
    table = symbol_table(model.variable, model.box)
    n, m, p = len(model.states), len(model.inputs), len(model.outputs)
    found = {
        name: sympy.Matrix([[tree_to_sympy(entry, table) for entry in row] for row in matrix])
        for name, matrix in model.matrices.items()
    }
    return {"E": sympy.eye(n), "D": sympy.zeros(p, m), **found}


@pytest.mark.parametrize(
    ("name", "output", "input", "count"),
    [
        ("two_mass", "x1", "u", 2),
        ("buck_boost", "v", "d", 1),
        ("boost_parasitics", "y", "d", 2),
        ("balance_system", "p", "F", 2),
        ("satellite", "theta", "tangential", 2),
        ("skogestad", None, None, 1),
        ("qep1", None, None, 4),
        ("kundur_regulator", "angle", "torque", 2),
        ("watt_governor", "speed", "load", 2),
        ("ogata_digital", "y", "r", 1),
        ("lorenz", "y1", "u1", 2),
    ],
)
def test_directions_against_the_original_matrices(
    name: str, output: str | None, input: str | None, count: int
) -> None:
    derivation = case(name)
    model = derivation.model
    found = directions(derivation, output, input).directions
    assert len(found) == count
    parts = matrices(derivation)
    rows = [i for i, y in enumerate(model.outputs) if output in (None, y.name)]
    columns = [j for j, u in enumerate(model.inputs) if input in (None, u.name)]
    table = symbol_table(model.variable, model.box)
    for direction in found:
        assert direction.verdict is Verdict.PROVED
        z = ratio_to_sympy(direction.zero, table)
        x = sympy.Matrix([element_to_sympy(direction.ring, e, table) for e in direction.state])
        u = sympy.Matrix([element_to_sympy(direction.ring, e, table) for e in direction.input])
        upper = (parts["A"] - z * parts["E"]) * x + parts["B"][:, columns] * u
        lower = parts["C"][rows, :] * x + parts["D"][rows, columns] * u
        letters = sorted((upper.col_join(lower).free_symbols | x.free_symbols | u.free_symbols), key=str)
        point = {letter: sympy.Rational(5 + 2 * i, 7 + i) for i, letter in enumerate(letters)}
        scale = max(abs(complex(e.subs(point))) for e in (*x, *u))
        assert scale > 0
        for entry in (*upper, *lower):
            assert abs(complex(entry.subs(point).evalf(40))) < 1e-25 * scale


def test_output_stays_zero_in_simulation() -> None:
    """The buck-boost converter along its right half plane zero: the current grows, the voltage rests."""
    derivation = case("buck_boost")
    (direction,) = directions(derivation).directions
    values = {"D": Fraction(3, 5), "R": 10, "L": Fraction(160, 10**6), "C": Fraction(160, 10**6), "Vg": 30}
    point = {name: Fraction(value) for name, value in values.items()}
    ring = direction.ring
    z = float(ring.value(direction.zero.numerator, point) / ring.value(direction.zero.denominator, point))
    x0 = np.array([float(ring.value(e, point)) for e in direction.state])
    u0 = np.array([float(ring.value(e, point)) for e in direction.input])
    table = symbol_table("s", derivation.model.box)
    numbers = {
        table[name]: sympy.Rational(value.numerator, value.denominator) for name, value in point.items()
    }
    E, A, B, C, D = (np.array(matrices(derivation)[k].subs(numbers), dtype=float) for k in "EABCD")
    A, B = np.linalg.solve(E, A), np.linalg.solve(E, B)
    assert z > 0 and np.linalg.norm(u0) > 0
    end = 3 / z
    run = solve_ivp(lambda t, x: A @ x + B @ u0 * np.exp(z * t), (0, end), x0, rtol=1e-11, atol=1e-12)
    outputs = np.array([C @ x + D @ u0 * np.exp(z * t) for t, x in zip(run.t, run.y.T, strict=True)])
    assert np.linalg.norm(run.y[:, -1]) > 15 * np.linalg.norm(x0)
    assert np.max(np.abs(outputs)) < 1e-7 * np.linalg.norm(run.y[:, -1])
    # From another state the same input does not hold the output at zero.
    other = solve_ivp(
        lambda t, x: A @ x + B @ u0 * np.exp(z * t), (0, end), x0 + np.array([0, x0[0]]), rtol=1e-9
    )
    assert np.max(np.abs(C @ other.y)) > 1e-3 * np.linalg.norm(x0)


def test_complex_zero_in_simulation() -> None:
    """The antiresonance of two masses: a sinusoidal force at sqrt(k/m2) leaves the first mass at rest."""
    derivation = case("two_mass")
    direction = directions(derivation, "x1", "u").directions[0]
    table = symbol_table("s", derivation.model.box)
    numbers = {table["m1"]: 2, table["m2"]: 3, table["k"]: 12}
    z = complex(ratio_to_sympy(direction.zero, table).subs(numbers))
    assert z == pytest.approx(2j)
    x0, u0 = (
        np.array([complex(element_to_sympy(direction.ring, e, table).subs(numbers)) for e in part])
        for part in (direction.state, direction.input)
    )
    A, B, C = (np.array(matrices(derivation)[k].subs(numbers), dtype=float) for k in "ABC")
    augmented = np.block([[A, B @ u0[:, None]], [np.zeros((1, 4)), np.array([[z]])]])
    for t in np.linspace(0, 10, 50):
        state = scipy.linalg.expm(augmented * t) @ np.append(x0, 1)
        assert abs(C[0] @ state[:4].real) < 1e-9 and abs(C[0] @ state[:4].imag) < 1e-9
        assert np.linalg.norm(state[:4]) == pytest.approx(np.linalg.norm(x0), rel=1e-9)


def test_unsuited_plants_say_why() -> None:
    found = directions(case("ag08bd"))
    assert not found.directions and "some input holds the output at zero" in found.notes[0]
    chain = directions(case("phase_shift_oscillator"))
    assert not chain.directions and "degree 3" in chain.notes[0]


def test_even_polynomials_of_degree_four() -> None:
    raw = {"parameters": {name: {"sign": "positive"} for name in "ab"}}
    derivation = derive(
        build_model(
            raw,
            {
                "A": [
                    [0, 1, 0, 0, 0],
                    [0, 0, 1, 0, 0],
                    [0, 0, 0, 1, 0],
                    [0, 0, 0, 0, 1],
                    [-1, -5, -10, -10, -5],
                ],
                "B": [[0], [0], [0], [0], [1]],
                "C": [["b", 0, "a", 0, 1]],
            },
            FaultList(),
        )
    )
    found = directions(derivation).directions
    assert len(found) == 4 and all(d.verdict is Verdict.PROVED for d in found)
    table = symbol_table("s", derivation.model.box)
    point = {table["a"]: sympy.Rational(7, 2), table["b"]: sympy.Rational(5, 3)}
    roots = [complex(ratio_to_sympy(d.zero, table).subs(point)) for d in found]
    wanted = np.roots([1, 0, 3.5, 0, 5 / 3])
    assert all(np.min(np.abs(wanted - r)) < 1e-9 for r in roots) and len({np.round(r, 6) for r in roots}) == 4

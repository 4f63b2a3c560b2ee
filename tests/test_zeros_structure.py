"""Zeros and poles of all kinds against published answers, brute force and generalized eigenvalues."""

from __future__ import annotations

from fractions import Fraction
from functools import cache, reduce
from itertools import combinations
from pathlib import Path
from random import Random

import numpy as np
import pytest
import scipy.linalg
import sympy

from symplant.algebra.division import normalised
from symplant.algebra.minors import gcd_of_minors
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.rank import exact_rank, minor
from symplant.algebra.ring import Generator, Ring
from symplant.algebra.text import element_text
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.zeros.structure import find_zeros
from symplant.reading.fault_list import FaultList
from symplant.reading.model_building import build_model
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"
S = sympy.Symbol("s")


@cache
def case(name: str) -> Derivation:
    return derive(read_plant_file(CASES / f"{name}.toml"))


def plant(letters: str = "", **matrices: object) -> Derivation:
    raw = {"parameters": {name: {"sign": "positive"} for name in letters.split()}}
    return derive(build_model(raw, matrices, FaultList()))


def same(derivation: Derivation, polynomial: Polynomial, text: str) -> bool:
    """Equal up to a factor free of the variable."""
    names = {name: sympy.Symbol(name) for name in (*derivation.model.letters, "s", "z")}
    found = sympy.sympify(element_text(polynomial.ring, polynomial.element), locals=names)
    wanted = sympy.sympify(text, locals=names)
    if not found.has(S) or not wanted.has(S):
        return not found.has(S) and not wanted.has(S)
    return not sympy.simplify(sympy.cancel(found / wanted)).has(S)


#: Case, kind, polynomial, source.
PUBLISHED = [
    ("ag08bd", "invariant", "s - 1", "SLICOT AG08BD example: one finite zero, 1"),
    ("ag08bd", "transmission", "s - 1", "SLICOT AG08BD example"),
    ("ag08bd", "system_poles", "1", "SLICOT AG08BD example: no finite poles"),
    ("tb04ad", "invariant", "s**3 + 8*s**2 + 21*s + 17", "SLICOT TB04AD data, determinant recomputed"),
    ("tb05ad", "system_poles", "(s - 3)*(s + 3)*(s - 1)", "SLICOT TB05AD: eigenvalues 3, -3, 1"),
    ("tb05ad", "transfer_poles", "(s - 3)*(s + 3)*(s - 1)", "SLICOT TB05AD, recomputed"),
    ("two_mass", "system_poles", "s**2*(m1*m2*s**2 + k*(m1 + m2))", "Wie, Bernstein 1992, from memory"),
    ("satellite", "system_poles", "s**2*(s**2 + w**2)", "Brockett 1970, recomputed"),
    ("satellite", "invariant", "1", "Brockett 1970, recomputed: no finite zeros"),
    ("two_sticks", "input_decoupling", "1", "Luenberger 1979: controllable for unequal lengths, from memory"),
    ("equal_sticks", "input_decoupling", "l*s**2 - g", "Luenberger 1979; Kailath 1980, from memory"),
    ("equal_sticks", "transfer_poles", "l*s**2 - g", "Kailath 1980, recomputed"),
    ("buck_boost", "invariant", "D*L*s - (1 - D)**2*R", "Erickson, Maksimovic, Table 8.2, from memory"),
    (
        "boost_parasitics",
        "invariant",
        "(rC*C*s + 1)*(L*(R + rC)*s - R**2*(1 - D)**2 + rL*(R + rC))",
        "Kazimierczuk, PWM DC-DC Power Converters, recomputed",
    ),
    ("skogestad", "transmission", "s - 4", "Skogestad, Postlethwaite, Example 4.8, from memory"),
    ("skogestad", "transfer_poles", "s + 2", "Skogestad, Postlethwaite, Example 4.8, from memory"),
    ("no_zeros", "transmission", "1", "Skogestad, Postlethwaite, Example 4.10, from memory"),
    ("no_zeros", "transfer_poles", "(s + 1)*(s + 2)", "Skogestad, Postlethwaite, Example 4.10, from memory"),
    (
        "franklin_pi_cancelling",
        "transfer_poles",
        "(s + 1)**2",
        "Franklin, Powell, Emami-Naeini, Example 3.34",
    ),
    ("franklin_pi_cancelling", "input_decoupling", "s + 1", "Franklin, Powell, Emami-Naeini, recomputed"),
]


@pytest.mark.parametrize(("name", "kind", "text", "source"), PUBLISHED)
def test_published_zeros_and_poles(name: str, kind: str, text: str, source: str) -> None:
    finding = getattr(find_zeros(case(name)), kind)
    assert finding.verdict is Verdict.PROVED
    assert same(case(name), finding.polynomial, text), (source, finding.polynomial.element)


@pytest.mark.parametrize(
    ("name", "rank"), [("ag08bd", 2), ("tb04ad", 2), ("satellite", 2), ("two_mass", 1), ("rendezvous", 3)]
)
def test_normal_rank(name: str, rank: int) -> None:
    found = find_zeros(case(name)).normal_rank
    assert (found.value, found.verdict) == (rank, Verdict.PROVED)


def test_channels_of_the_satellite() -> None:
    # Brockett 1970: uncontrollable from radial thrust alone, unobservable from the radius alone (s = 0).
    radial = find_zeros(case("satellite"), input="radial")
    assert same(case("satellite"), radial.input_decoupling.polynomial, "s")
    assert same(
        case("satellite"), find_zeros(case("satellite"), input="tangential").input_decoupling.polynomial, "1"
    )
    assert same(
        case("satellite"), find_zeros(case("satellite"), output="r").output_decoupling.polynomial, "s"
    )
    assert same(
        case("satellite"), find_zeros(case("satellite"), output="theta").output_decoupling.polynomial, "1"
    )
    angle = find_zeros(case("satellite"), output="theta", input="tangential")
    assert same(case("satellite"), angle.transmission.polynomial, "s**2 - 3*w**2")


def test_smith_mcmillan_of_a_two_by_three_plant() -> None:
    # G = [[1/(s+1), 0, (s-1)/((s+1)(s+2))], [-1/(s-1), 1/(s+2), 1/(s+2)]], Skogestad, Postlethwaite,
    # Example 4.11, from memory: poles (s+1)(s+2)^2(s-1), zero s-1.  Partial fractions give a
    # realisation with five states, (s-1)/((s+1)(s+2)) = -2/(s+1) + 3/(s+2).
    derivation = plant(
        A=[[-1, 0, 0, 0], [0, -2, 0, 0], [0, 0, 1, 0], [0, 0, 0, -2]],
        B=[[1, 0, -2], [0, 0, 3], [-1, 0, 0], [0, 1, 1]],
        C=[[1, 1, 0, 0], [0, 0, 1, 1]],
    )
    found = find_zeros(derivation)
    assert same(derivation, found.transfer_poles.polynomial, "(s + 1)*(s + 2)**2*(s - 1)")
    assert same(derivation, found.transmission.polynomial, "s - 1")
    assert found.normal_rank.value == 2


def test_a_zero_that_no_channel_shows() -> None:
    # [[1/(s+1), 2/(s+3)], [1/(s+1), 1/(s+1)]], Rosenbrock, from memory: zero s = 1.
    derivation = plant(
        A=[[-1, 0, 0], [0, -3, 0], [0, 0, -1]], B=[[1, 0], [0, 2], [0, 1]], C=[[1, 1, 0], [1, 0, 1]]
    )
    found = find_zeros(derivation)
    assert same(derivation, found.transmission.polynomial, "s - 1")
    assert same(derivation, found.transfer_poles.polynomial, "(s + 1)**2*(s + 3)")


def test_modes_hidden_on_both_sides_are_counted_once() -> None:
    derivation = plant(
        "a b c d",
        A=[["-a", 0, 0, 0], [0, "-b", 0, 0], [0, 0, "-c", 0], [0, 0, 0, "-d"]],
        B=[[1], [1], [0], [0]],
        C=[[1, 0, 1, 0]],
    )
    found = find_zeros(derivation)
    assert same(derivation, found.input_decoupling.polynomial, "(s + c)*(s + d)")
    assert same(derivation, found.output_decoupling.polynomial, "(s + b)*(s + d)")
    assert same(derivation, found.input_output_decoupling.polynomial, "s + d")
    assert same(derivation, found.transfer_poles.polynomial, "s + a")
    assert same(derivation, found.transmission.polynomial, "1")
    assert same(derivation, found.system_zeros.polynomial, "(s + b)*(s + c)*(s + d)")


def test_a_plant_with_two_equal_inputs_has_low_normal_rank() -> None:
    derivation = plant("a b", A=[["-a", 1], [0, "-b"]], B=[[0, 0], [1, 1]], C=[[1, 0], [0, 1]])
    found = find_zeros(derivation)
    assert found.normal_rank.value == 1 and "vanish identically" in found.normal_rank.reason
    assert same(derivation, found.invariant.polynomial, "1")


def test_relative_degree_changes_where_the_leading_coefficient_vanishes() -> None:
    raw = {"parameters": {"a": {}, "b": {"sign": "positive"}}}
    derivation = derive(
        build_model(raw, {"A": [[0, 1], ["-b", -1]], "B": [["a"], [1]], "C": [[1, 0]]}, FaultList())
    )
    (degree,) = find_zeros(derivation).relative_degrees
    assert degree.value == 1
    (change,) = degree.changes
    assert (str(change.condition), change.becomes) == ("a", 2)
    assert change.vanishing.verdict is Verdict.PROVED and change.vanishing.witness == {"a": 0}


def test_unknown_names_are_refused() -> None:
    with pytest.raises(KeyError):
        find_zeros(case("two_mass"), output="x3")


def _brute_force(ring: Ring, rows: list[list[object]]) -> Polynomial:
    size = exact_rank(ring, rows).value
    height, width = len(rows), len(rows[0])
    return normalised(
        reduce(
            Polynomial.gcd,
            (
                Polynomial(ring, minor(ring, rows, i, j))
                for i in combinations(range(height), size)
                for j in combinations(range(width), size)
            ),
            Polynomial.constant(ring, 0),
        )
    )


@pytest.mark.parametrize("seed", range(40))
def test_gcd_of_minors_against_all_minors(seed: int) -> None:
    """Random products with repeated and shared factors, in a plain ring and in one with a root."""
    random = Random(seed)
    if seed % 2:
        ring = Ring("s", ("a", "b"))
        factors = [ring.gen("s") + ring.gen(x) for x in "ab"] + [ring.gen("s") ** 2 + ring.gen("a")]
    else:
        from symplant.algebra.expression import Call, Name

        root = Generator("w", Call("sqrt", Name("a")), square=(("a",), {(1,): 1}))
        ring = Ring("s", ("a", "b"), functions=(root,))
        # s**2 - a falls apart into s - w and s + w in this ring.
        factors = [
            ring.gen("s") ** 2 - ring.gen("a"),
            ring.gen("s") - ring.gen("w"),
            ring.gen("s") + ring.gen("b"),
        ]
    height, width = random.choice([(2, 3), (3, 3), (3, 4), (4, 3)])
    middle = min(height, width)
    left = [[ring.constant(random.randint(-2, 2)) for _ in range(middle)] for _ in range(height)]
    right = [[ring.constant(random.randint(-2, 2)) for _ in range(width)] for _ in range(middle)]
    diagonal = []
    for _ in range(middle):
        entry = ring.constant(random.choice([0, 1, 1, 1]))
        for _ in range(random.randint(0, 2)):
            entry = entry * random.choice(factors)
        diagonal.append(entry)
    rows = [
        [
            ring.reduce(sum((left[i][k] * diagonal[k] * right[k][j] for k in range(middle)), ring.zero))
            for j in range(width)
        ]
        for i in range(height)
    ]
    found = gcd_of_minors(ring, rows)
    assert found.verdict is Verdict.PROVED
    wanted = _brute_force(ring, rows)
    assert found.polynomial.degree == wanted.degree
    assert found.polynomial.gcd(wanted).degree == wanted.degree


@pytest.mark.parametrize("seed", range(12))
def test_random_square_plants_against_generalized_eigenvalues(seed: int) -> None:
    random = Random(100 + seed)
    n, m = random.choice([(3, 1), (4, 1), (4, 2), (5, 2)])
    letters = ["p", "q"]

    def entry() -> str:
        return random.choice(["p", "q", "p*q", "1/p", "0", "1", "-2", "3", "q - 1"])

    matrices = {
        "A": [[entry() for _ in range(n)] for _ in range(n)],
        "B": [[entry() for _ in range(m)] for _ in range(n)],
        "C": [[entry() for _ in range(n)] for _ in range(m)],
        "D": [["1" if i == j and seed % 2 else "0" for j in range(m)] for i in range(m)],
    }
    derivation = plant("p q", **matrices)
    found = find_zeros(derivation).invariant.polynomial
    point = {"p": Fraction(7, 5), "q": Fraction(11, 3)}
    values = {name: float(value) for name, value in point.items()}

    def number(matrix: list[list[str]]) -> np.ndarray:
        return np.array([[float(sympy.sympify(x).subs(values)) for x in row] for row in matrix])

    A, B, C, D = (number(matrices[x]) for x in "ABCD")
    pencil = np.block([[A, B], [C, D]])
    weight = np.zeros_like(pencil)
    weight[:n, :n] = np.eye(n)
    alpha, beta = scipy.linalg.eigvals(pencil, weight, homogeneous_eigvals=True)
    finite = np.sort_complex((alpha / np.where(beta == 0, 1, beta))[np.abs(beta) > 1e-9 * np.abs(alpha)])
    finite = finite[np.abs(finite) < 1e6]
    coefficients = [float(found.ring.value(c, point)) for c in reversed(found.coefficients)]
    roots = np.sort_complex(np.roots(coefficients)) if letters else []
    assert len(roots) == len(finite)
    for root in roots:
        assert np.min(np.abs(finite - root)) < 1e-5 * (1 + abs(root))

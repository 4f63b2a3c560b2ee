"""What each letter does, and the monomials through which it does it."""

from __future__ import annotations

from functools import cache
from itertools import product
from pathlib import Path
from random import Random

import pytest
import sympy

from symplant.algebra.ring import Ring
from symplant.algebra.scalings import Monomial, find_scaling
from symplant.algebra.sympy_form import element_to_sympy, symbol_table
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.zeros.influence import Influence, influence
from symplant.reading.fault_list import FaultList
from symplant.reading.model_building import build_model
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"


@cache
def case(name: str) -> Derivation:
    return derive(read_plant_file(CASES / f"{name}.toml"))


def words(found: Influence) -> dict[str, str]:
    return {
        x.parameter: "".join(
            letter
            for letter, holds in (("z", x.moves_zeros), ("p", x.moves_poles), ("g", x.scales_gain))
            if holds
        )
        for x in found.letters
    }


@pytest.mark.parametrize(
    ("name", "output", "input", "wanted"),
    [
        # The antiresonance of the collocated drive is sqrt(k/m2) (Wie, Bernstein 1992, from memory).
        ("two_mass", "x1", "u", {"m1": "pg", "m2": "zp", "k": "zp"}),
        # R (1-D)^2/(D L), gain by Vg (Erickson, Maksimovic, from memory).
        ("buck_boost", "v", "d", {"D": "zpg", "R": "zpg", "L": "zp", "C": "pg", "Vg": "g"}),
        ("generator", "angle", "torque", {"T3": "zp", "M": "pg", "w0": "pg"}),
        ("ogata_digital", "y", "r", {"K": "pg", "T": "zpg"}),
    ],
)
def test_letters(name: str, output: str, input: str, wanted: dict[str, str]) -> None:
    found = influence(case(name), output, input)
    assert wanted.items() <= words(found).items()


@pytest.mark.parametrize(
    "name", ["two_mass", "boost_parasitics", "car_handling", "kundur_regulator", "watt_governor"]
)
def test_claims_against_sympy(name: str) -> None:
    derivation = case(name)
    ring = derivation.ring
    table = symbol_table(ring.variable, derivation.model.box)
    for channel in derivation.channels:
        found = influence(derivation, channel.output.name, channel.input.name)
        for polynomial, field in (
            (channel.numerator, "moves_zeros"),
            (derivation.characteristic_polynomial.polynomial, "moves_poles"),
        ):
            expression = element_to_sympy(ring, polynomial.element, table)
            monic = sympy.Poly(expression, table["s"]).monic() if polynomial.degree > 0 else None
            for letter in found.letters:
                slopes = (
                    []
                    if monic is None
                    else [sympy.diff(c, table[letter.parameter]) for c in monic.all_coeffs()]
                )
                assert getattr(letter, field) == any(sympy.simplify(slope) != 0 for slope in slopes), letter


def test_gain_alone_and_nothing() -> None:
    raw = {"parameters": {name: {"sign": "positive"} for name in "abk"} | {"idle": {}}}
    matrices = {"A": [["-a"]], "B": [["k"]], "C": [["1 + 0*idle"]]}
    found = {x.parameter: x for x in influence(derive(build_model(raw, matrices, FaultList()))).letters}
    assert found["k"].only_gain and found["idle"].nothing and found["b"].nothing
    assert found["a"].moves_poles and not found["a"].scales_gain
    assert all(x.verdict is Verdict.PROVED for x in found.values())


def monomial_value(monomial: Monomial, values: dict[str, sympy.Rational]) -> sympy.Rational:
    return sympy.prod(values[letter] ** exponent for letter, exponent in monomial)


def test_natural_groups() -> None:
    found = influence(case("two_mass"), "x1", "u")
    assert found.zeros.groups == ((("m2", -1), ("k", 1)),)
    assert len(found.poles.groups) == 2 and found.poles.root == 2 and len(found.poles.ratios) == 1
    sticks = influence(case("equal_sticks"), "theta1", "u").poles
    assert sticks.groups == ((("l", -1), ("g", 1)),) and sticks.root == 2 and sticks.ratios == ()


@pytest.mark.parametrize(
    "name", ["two_mass", "boost_parasitics", "car_handling", "kundur_regulator", "meshchersky"]
)
def test_equal_groups_give_equal_roots(name: str) -> None:
    """Values that differ but give every group the same value give the same roots."""
    derivation = case(name)
    polynomial = derivation.characteristic_polynomial.polynomial
    ring, letters = derivation.ring, list(derivation.model.letters)
    groups = influence(derivation).poles.groups
    rows = [[dict(group).get(letter, 0) for letter in letters] for group in groups]
    null = sympy.Matrix(rows).nullspace()
    assert null
    random = Random(5)
    start = {letter: sympy.Rational(random.randint(1, 9), random.randint(1, 9)) for letter in letters}
    for vector in null:
        vector = vector * sympy.ilcm(*[x.q for x in vector])
        other = {x: start[x] * sympy.Integer(2) ** int(e) for x, e in zip(letters, vector, strict=True)}
        assert [monomial_value(g, start) for g in groups] == [monomial_value(g, other) for g in groups]
        ratios = []
        for values in (start, other):
            numbers = [
                ring.value(c, {k: _fraction(v) for k, v in values.items()}) for c in polynomial.coefficients
            ]
            ratios.append([number / numbers[-1] for number in numbers])
        assert ratios[0] == ratios[1]


def _fraction(value: sympy.Rational) -> object:
    from fractions import Fraction

    return Fraction(int(value.p), int(value.q))


@pytest.mark.parametrize("seed", range(15))
def test_groups_are_all_integer_monomials(seed: int) -> None:
    """Every small monomial that all scalings leave alone is an integer combination of the groups."""
    random = Random(seed)
    ring = Ring("s", ("a", "b", "c", "d"))
    letters = [ring.gen(x) for x in "abcd"]
    element = ring.zero
    for power in range(3):
        term = ring.gen("s") ** power
        for letter in letters:
            term = term * letter ** random.randint(0, 2)
        element = element + random.randint(1, 5) * term
    groups = find_scaling(ring, [element]).groups
    matrix = sympy.Matrix([[dict(group).get(x, 0) for x in "abcd"] for group in groups]) if groups else None
    exponents = [[int(m[ring.position[x]]) for x in "abcd"] for m in element.monoms()]
    differences = sympy.Matrix([[a - b for a, b in zip(e, exponents[0], strict=True)] for e in exponents])
    rank = differences.rank()
    assert (matrix.rank() if matrix is not None else 0) == rank == len(groups)
    if matrix is None:
        return
    for vector in product(range(-2, 3), repeat=4):
        row = sympy.Matrix([vector])
        if differences.col_join(row).rank() == rank:
            solution = (matrix * matrix.T).LUsolve(matrix * row.T)
            assert all(x.is_integer for x in solution)

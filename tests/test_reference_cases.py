"""Published plants with published answers: the plants are in cases/, the answers in published.toml.

The source stands beside each answer.  Everything is compared as mathematics, by SymPy, which the
derivation itself never uses.
"""

from __future__ import annotations

import math
import re
import tomllib
from functools import cache
from itertools import combinations
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import pytest
import sympy

from symplant.algebra.text import polynomial_text
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Channel, Derivation, derive
from symplant.reading.plant_file import read_plant_file

CASES = Path(__file__).parent / "cases"
PUBLISHED = tomllib.loads(Path(__file__).with_name("published.toml").read_text(encoding="utf-8"))
S = sympy.Symbol("s")
Z = sympy.Symbol("z")


class Published(NamedTuple):
    """What a source states of a plant."""

    case: str
    value: str | int
    source: str
    of: str = ""  # "output/input" of a channel
    units: float = 0.51  # of the last printed digit


@cache
def derived(case: str) -> Derivation:
    return derive(read_plant_file(CASES / f"{case}.toml"))


def channel(case: str, name: str) -> Channel:
    return next(c for c in derived(case).channels if c.name == name)


def symbols(case: str) -> dict[str, Any]:
    letters = {name: sympy.Symbol(name, positive=True) for name in derived(case).model.letters}
    return {"s": S, "z": Z, **letters}


def expression(case: str, text: str) -> Any:
    return sympy.sympify(text, locals=symbols(case), rational=True)


def text_of(case: str, polynomial: Any) -> str:
    return polynomial_text(derived(case).ring, polynomial.element)


def variable(case: str) -> Any:
    return Z if derived(case).model.discrete else S


def is_zero(value: Any) -> bool:
    return bool(sympy.simplify(sympy.expand(value, trig=True)) == 0)


def assert_proportional(case: str, found: Any, published: str) -> None:
    """Equal up to a nonzero factor free of the variable."""
    first = sympy.Poly(expression(case, text_of(case, found)), variable(case)).all_coeffs()
    second = sympy.Poly(expression(case, published), variable(case)).all_coeffs()
    assert len(first) == len(second), (first, second)
    assert not is_zero(first[0])
    for mine, theirs in zip(first, second, strict=True):
        assert is_zero(mine * second[0] - theirs * first[0]), (mine, theirs)


def every(quantity: str) -> pytest.MarkDecorator:
    """Run a test on each published statement about a quantity."""
    entries = [Published(**entry) for entry in PUBLISHED[quantity]]
    return pytest.mark.parametrize("entry", entries, ids=[f"{e.case} {e.of}".strip() for e in entries])


@pytest.mark.parametrize("case", sorted(path.stem for path in CASES.glob("*.toml")))
def test_both_routes_agree_in_every_case(case: str) -> None:
    checks = derived(case).checks
    assert len(checks) == 1 + len(derived(case).channels)
    assert {check.verdict for check in checks} == {Verdict.PROVED}


@every("characteristic_polynomial")
def test_characteristic_polynomial(entry: Published) -> None:
    scaled = derived(entry.case).characteristic_polynomial
    assert_proportional(entry.case, scaled.polynomial, str(entry.value))


@every("transfer_function")
def test_transfer_function(entry: Published) -> None:
    found = channel(entry.case, entry.of)
    top, bottom = (
        expression(entry.case, text_of(entry.case, p)) for p in (found.numerator, found.denominator)
    )
    assert sympy.cancel(top / bottom - expression(entry.case, str(entry.value))) == 0


@every("numerator")
def test_numerator(entry: Published) -> None:
    assert_proportional(entry.case, channel(entry.case, entry.of).numerator, str(entry.value))


@every("zero_polynomial")
def test_zero_polynomial(entry: Published) -> None:
    zero = derived(entry.case).zero_polynomial
    assert zero is not None
    assert_proportional(entry.case, zero.polynomial, str(entry.value))


@every("common_factor")
def test_common_factor(entry: Published) -> None:
    assert_proportional(entry.case, channel(entry.case, entry.of).common_factor, str(entry.value))


@every("relative_degree")
def test_relative_degree(entry: Published) -> None:
    assert channel(entry.case, entry.of).relative_degree == entry.value


def test_channel_that_is_identically_zero_has_no_relative_degree() -> None:
    # Clohessy, Wiltshire 1960: the motion out of the orbital plane is apart from the others.
    assert channel("rendezvous", "z/ax").numerator.is_zero
    assert channel("rendezvous", "z/ax").relative_degree is None


def test_normal_rank_and_zero_of_a_singular_pencil() -> None:
    # SLICOT, AG08BD example: normal rank 2 of the transfer matrix, one finite zero at 1.
    zero = derived("ag08bd").zero_polynomial
    assert zero is not None and zero.polynomial.is_zero
    assert "below 3" in derived("ag08bd").zero_polynomial_note
    found = iter(derived("ag08bd").channels)
    numerators = sympy.Matrix(3, 3, [expression("ag08bd", text_of("ag08bd", c.numerator)) for c in found])
    pairs = list(combinations(range(3), 2))
    minors = [sympy.expand(numerators[list(i), list(j)].det()) for i in pairs for j in pairs]
    assert sympy.expand(numerators.det()) == 0
    assert sympy.monic(sympy.gcd_list(minors), S) == S - 1


def test_denominators_that_were_assumed_nonzero() -> None:
    # The published closed forms hold where these do not vanish.
    def texts(case: str) -> set[str]:
        return {polynomial_text(derived(case).ring, element) for element in derived(case).assumed_nonzero}

    assert texts("two_mass") == {"m1", "m2"}
    assert texts("balance_system") == {"M*m*l**2 + M*J + m*J"}
    assert texts("buck_boost") == {"R", "D - 1"}
    assert texts("maxwell_governor") == set()


def nominal(case: str, polynomial: Any, **values: float) -> list[float]:
    """Falling coefficients with the nominal values put in."""
    model = derived(case).model
    point: dict[str, Any] = {**model.nominal, **values}
    put = {symbols(case)[name]: sympy.Rational(str(value)) for name, value in point.items()}
    poly = sympy.Poly(expression(case, text_of(case, polynomial)).subs(put), variable(case))
    return [float(c) for c in poly.all_coeffs()]


def assert_printed(value: float, printed: str, units: float = 0.51) -> None:
    """Equal within so many units of the last printed digit."""
    digits, _, power = printed.partition("e")
    decimals = len(digits.partition(".")[2]) - int(power or 0)
    assert value == pytest.approx(float(printed), abs=units * 10.0**-decimals, rel=0), (value, printed)


def assert_roots(found: list[float], printed: str, units: float = 0.51) -> None:
    """`printed` lists roots as "re" or "re+-im"; each is that of a root found."""
    roots = [complex(root) for root in np.roots(found)]
    listed = [part.strip().split("+-") for part in printed.split(",")]
    assert len(roots) == sum(len(parts) for parts in listed)
    for real, *imaginary in listed:
        target = complex(float(real), float(imaginary[0]) if imaginary else 0.0)
        nearest = min(roots, key=lambda root: abs(root - target))
        assert_printed(nearest.real, real, units)
        if imaginary:
            assert_printed(nearest.imag, imaginary[0], units)


@every("roots")
def test_published_roots(entry: Published) -> None:
    found = nominal(entry.case, derived(entry.case).characteristic_polynomial.polynomial)
    assert_roots(found, str(entry.value), entry.units)


def test_boeing_coefficients() -> None:
    # Etkin, Reid, Dynamics of Flight, 3rd ed., 1996; the lateral polynomial from memory.
    def monic(case: str, polynomial: Any, over: Any) -> list[float]:
        first = nominal(case, over)[0]
        return [value / first for value in nominal(case, polynomial)]

    pitch = derived("boeing_longitudinal").characteristic_polynomial.polynomial
    found = monic("boeing_longitudinal", pitch, pitch)[1:]
    printed = [".750468", ".935494", "9.463025e-3", "4.195875e-3"]
    for value, text in zip(found, printed, strict=True):
        assert_printed(value, text, 1.0)
    theta = channel("boeing_longitudinal", "theta/delta_e")
    found = monic("boeing_longitudinal", theta.numerator, theta.denominator)
    for value, text in zip(found, ["-1.158", "-.3545", "-.003873"], strict=True):
        assert_printed(value, text)
    side = derived("boeing_lateral").characteristic_polynomial.polynomial
    found = monic("boeing_lateral", side, side)[1:]
    for value, text in zip(found, [".6358", ".9388", ".5114", ".003682"], strict=True):
        assert_printed(value, text)


def test_frequency_response_of_tb05ad() -> None:
    # SLICOT, TB05AD example: G(0.5j) = (0.69+0.35j, -0.80-0.40j).
    for name, real, imaginary in (("y1/u1", "0.69", "0.35"), ("y2/u1", "-0.80", "-0.40")):
        found = channel("tb05ad", name)
        top, bottom = nominal("tb05ad", found.numerator), nominal("tb05ad", found.denominator)
        value = np.polyval(top, 0.5j) / np.polyval(bottom, 0.5j)
        assert_printed(float(value.real), real)
        assert_printed(float(value.imag), imaginary)


def test_buck_boost_figures() -> None:
    # Erickson, Maksimovic, sec. 8.2: 2.65 kHz, 400 Hz, Q = 4, 187.5 V; from memory.
    found = channel("buck_boost", "v/d")
    slope, constant = nominal("buck_boost", found.numerator)
    second, first, last = nominal("buck_boost", found.denominator)
    assert_printed(-constant / slope / (2000 * math.pi), "2.65")
    assert_printed(math.sqrt(last / second) / (2000 * math.pi), "0.40")
    assert math.sqrt(last * second) / first == pytest.approx(4.0, rel=1e-12)
    assert constant / last == pytest.approx(-187.5, rel=1e-12)


def test_balance_system_figures() -> None:
    # Astrom, Murray, Feedback Systems, 2008: without damping poles {0, 0, +-2.68}, zeros +-2.09; from memory.
    found = channel("balance_system", "p/F")
    poles = np.sort(np.roots(nominal("balance_system", found.denominator, c=0, gamma=0)).real)
    zeros = np.sort(np.roots(nominal("balance_system", found.numerator, c=0, gamma=0)).real)
    for value, text in zip([*poles, *zeros], ["-2.68", "0", "0", "2.68", "-2.09", "2.09"], strict=True):
        assert_printed(value, text)


def test_sampled_servo_with_period_one() -> None:
    # Ogata, Discrete-Time Control Systems: z^2 + (.3679K - 1.3679) z + .3679 + .2642K; from memory.
    case = "ogata_digital"
    polynomial = derived(case).characteristic_polynomial.polynomial
    poly = sympy.Poly(expression(case, text_of(case, polynomial)).subs(symbols(case)["T"], 1), Z)
    monic = [sympy.expand(c / poly.LC()) for c in poly.all_coeffs()]
    gain = symbols(case)["K"]
    for coefficient, at_zero, slope in ((monic[1], "-1.3679", ".3679"), (monic[2], ".3679", ".2642")):
        assert_printed(float(coefficient.coeff(gain, 0)), at_zero)
        assert_printed(float(coefficient.coeff(gain, 1)), slope)


def test_shaft_whirls_at_its_critical_speed() -> None:
    # Smith, Proc. R. Soc. A 142 (1933): at W = sqrt(k/m)(1 + ce/ci) it whirls with sqrt(k/m); from memory.
    case = "rotating_shaft"
    letter = symbols(case)
    polynomial = expression(case, text_of(case, derived(case).characteristic_polynomial.polynomial))
    whirl = sympy.sqrt(letter["k"] / letter["m"])
    critical = whirl * (1 + letter["ce"] / letter["ci"])
    assert is_zero(polynomial.subs({letter["W"]: critical, S: sympy.I * whirl}))
    assert not is_zero(polynomial.subs({letter["W"]: 2 * critical, S: sympy.I * whirl}))


def test_every_case_names_its_source() -> None:
    for path in CASES.glob("*.toml"):
        assert re.match(r"# .{20,}", path.read_text(encoding="utf-8")), path.name
    for entries in PUBLISHED.values():
        assert all(len(entry["source"]) > 9 for entry in entries)

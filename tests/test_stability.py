"""Stability conditions: published plants in reduced form, special cases, numerical second opinion."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.text import element_text
from symplant.derivation.pencil import build_pencil
from symplant.derivation.stability import StabilityFinding, stability, stability_of
from symplant.derivation.stability.subject import subject_of
from symplant.derivation.stability.witnesses import classify
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments

POSITIVE = Interval(declared=Sign.POSITIVE)


def _plant(A: Any, letters: str = "", parameters: Any = None, **more: Any) -> Model:
    """A plant of which only the dynamics matter; all letters positive unless told otherwise."""
    n = len(A)
    table = {name: {"sign": "positive"} for name in letters.split()} | (parameters or {})
    rows = [[str(entry) for entry in row] for row in A]
    return model_from_arguments(
        rows, [["1"]] + [["0"]] * (n - 1), [["1"] + ["0"] * (n - 1)], parameters=table, **more
    )


def _ring(
    variable: str, positive: str = "", real: str = "", **intervals: Interval
) -> tuple[Ring, list[Element]]:
    box = dict.fromkeys(positive.split(), POSITIVE) | dict.fromkeys(real.split(), Interval()) | intervals
    ring = Ring(variable, tuple(box), Box(box))
    return ring, [ring.gen(variable), *(ring.gen(x) for x in box)]


def _study(ring: Ring, element: Element, **more: Any) -> StabilityFinding:
    return stability_of(Polynomial.of(ring, element), **more)


def _binding(finding: StabilityFinding) -> list[str]:
    return [element_text(finding.ring, c.element) for c in finding.binding]


def _binds(finding: StabilityFinding, *elements: Element) -> bool:
    """Whether these are the conditions that bind, in any order."""
    return sorted(map(str, elements)) == sorted(str(c.element) for c in finding.binding)


def _statuses(finding: StabilityFinding) -> dict[str, str]:
    return {c.name: c.status for c in finding.conditions}


def _is(ratio: Ratio | None, numerator: Element, denominator: Element) -> bool:
    return ratio is not None and ratio.numerator * denominator == ratio.denominator * numerator


def _check_witnesses(model: Model, finding: StabilityFinding) -> None:
    """Replayed by separate code: eigenvalues of the numeric matrices."""
    subject = subject_of(build_pencil(model))
    for kind, point in finding.witnesses.items():
        if point is None:
            continue
        assert set(point) == set(model.letters)
        assert model.box.contains(point)
        verdict = classify(subject, {name: point[name] for name in point})
        assert (verdict == "stable") == (kind == "stable")


# --- published plants -------------------------------------------------------------------------


def test_lorenz() -> None:
    # E. N. Lorenz, J. Atmos. Sci. 20 (1963) 130-141; value seen in public text (secondary).
    ring, (s, g, b, r) = _ring("s", "g b", r=Interval(lower=Fraction(1)))
    finding = _study(ring, s**3 + (g + b + 1) * s**2 + (r + g) * b * s + 2 * g * b * (r - 1))
    assert finding.verdict == "conditional"
    # r > 1, and r*(g - b - 1) < g*(g + b + 3): right for either sign of g - b - 1, the published case split.
    assert _binds(finding, r - 1, g * (g + b + 3) - r * (g - b - 1))
    pair = next(x for x in finding.crossings if x.at == "imaginary pair")
    assert _is(pair.frequency_squared, (r + g) * b, ring.one)
    assert [x.at for x in finding.crossings] == ["origin", "imaginary pair"]
    # At sigma = 10, b = 8/3 stability ends at r = 470/19 = 24.74, where
    # omega^2 = 2 b sigma (sigma+1)/(sigma-b-1).
    line = _study(ring, finding.polynomial.element, fixed={"g": Fraction(10), "b": Fraction(8, 3)})
    assert [(i.start and i.start.exact, i.end and i.end.exact, i.verdict) for i in line.intervals] == [
        (1, Fraction(470, 19), "stable"),
        (Fraction(470, 19), None, "unstable"),
    ]
    ratio = line.crossings[-1].frequency_squared
    assert ratio is not None
    at = {"r": Fraction(470, 19)}
    omega = line.ring.value(ratio.numerator, at) / line.ring.value(ratio.denominator, at)
    assert omega == 2 * Fraction(8, 3) * 10 * 11 / (10 - Fraction(8, 3) - 1)


def test_lorenz_as_a_plant_with_a_root() -> None:
    # The Jacobian at the upper equilibrium holds c = sqrt(b*(r-1)); same conditions.
    model = _plant(
        [["-g", "g", "0"], ["1", "-1", "-sqrt(b*(r-1))"], ["sqrt(b*(r-1))", "sqrt(b*(r-1))", "-b"]],
        "g b",
        {"r": {"range": [1, 100]}},
    )
    finding = stability(model)
    ring = finding.ring
    g, b, r = (ring.gen(x) for x in "gbr")
    assert _binds(finding, r - 1, g * (g + b + 3) - r * (g - b - 1))
    assert finding.verdict == "conditional"


def test_maxwell_governor() -> None:
    # J. C. Maxwell, Proc. R. Soc. 16 (1868) 270-283, p. 278 (from memory).
    # M x'' = -F x' - G y, B y'' = F x' - Y y'.
    ring, (s, M, B, Y, F, G) = _ring("s", "M B Y F G")
    finding = _study(ring, M * B * s**3 + (M * Y + F * B) * s**2 + F * Y * s + F * G)
    (condition,) = finding.binding
    assert condition.element == (M * Y + F * B) * Y - M * B * G
    assert any(bound.letter == "G" and bound.relation == "<" for bound in condition.solved)


def test_watt_governor() -> None:
    # Vyshnegradsky 1876; L. S. Pontryagin, Ordinary Differential Equations, 1962, sec. 27; public text.
    # sine and cosine of the equilibrium angle lie in (0, 1); stable iff b*J*w > 2*k*c*m.
    unit = Interval(Fraction(0), Fraction(1), Sign.POSITIVE)
    ring, (L, m, b, g, k, J, w, p, c) = _ring("L", "m b g k J w", p=unit, c=unit)
    cubic = m * c * J * w * L**3 + b * c * J * w * L**2 + m * g * p**2 * J * w * L + 2 * m * k * g * p**2 * c
    finding = _study(ring, cubic)
    (condition,) = finding.binding
    assert condition.element == b * J * w - 2 * k * c * m


def test_vyshnegradsky_normal_form() -> None:
    ring, (x, X, Y) = _ring("x", "X Y")
    assert _binding(_study(ring, x**3 + X * x**2 + Y * x + 1)) == ["X*Y - 1"]


def test_routh_with_letters() -> None:
    # Franklin, Powell, Emami-Naeini, Examples 3.33, 3.34; value seen in public text.
    ring, (s, K, KI) = _ring("s", real="K KI")
    finding = _study(ring, s**3 + 5 * s**2 + (K - 6) * s + K)
    assert _binding(finding) == ["2*K - 15"]
    assert [(i.start and i.start.exact, i.verdict) for i in finding.intervals] == [
        (None, "unstable"),
        (Fraction(15, 2), "stable"),
    ]
    assert _is(finding.crossings[0].frequency_squared, K - 6, ring.one)
    finding = _study(ring, s**3 + 3 * s**2 + (2 + K) * s + KI)
    assert _binding(finding) == ["KI", "3*K - KI + 6"]  # KI > 0 and K > KI/3 - 2


@pytest.mark.parametrize(
    ("falling", "limit"), [((1, 3, 3, 2), Fraction(14, 9)), ((1, 18, 77), Fraction(1386))]
)
def test_gain_ranges(falling: tuple[int, ...], limit: Fraction) -> None:
    # Ogata ch. 5: 0 < K < 14/9 (from memory); Nise ch. 6: 0 < K < 1386 (value seen in public text).
    ring, (s, K) = _ring("s", real="K")
    n = len(falling)
    finding = _study(ring, sum((v * s ** (n - i) for i, v in enumerate(falling)), K))
    stable = [i for i in finding.intervals if i.verdict == "stable"]
    assert [(i.start and i.start.exact, i.end and i.end.exact) for i in stable] == [(0, limit)]
    assert len(finding.binding) == 2


@pytest.mark.parametrize(("c3", "c2", "c1", "top"), [(6, 11, 6, 60), (8, 17, 10, 126)])
def test_two_gains(c3: int, c2: int, c1: int, top: int) -> None:
    # Dorf & Bishop, Modern Control Systems, ch. 6 (from memory): welding head (60-K)(K+6) > 36Ka, a > 0;
    # tracked vehicle (K+10)(126-K) > 64Ka, Ka > 0.
    ring, (s, K, a) = _ring("s", real="K a")
    finding = _study(ring, s**4 + c3 * s**3 + c2 * s**2 + (K + c1) * s + K * a)
    assert _binds(finding, K * a, (top - K) * (K + c1) - c3**2 * K * a)
    assert _statuses(finding)["coefficient of s^1"] == "implied"
    if c3 == 6:
        line = _study(ring, finding.polynomial.element, fixed={"K": Fraction(40)})
        stable = [i for i in line.intervals if i.verdict == "stable"]
        assert [(i.start and i.start.exact, i.end and i.end.exact) for i in stable] == [(0, Fraction(23, 36))]


def test_jury_cases() -> None:
    # Ogata, Discrete-Time Control Systems, 2nd ed., ch. 4 (from memory).
    ring, (z, K) = _ring("z", real="K")
    assert _study(ring, 100 * z**4 - 120 * z**3 + 7 * z**2 + 30 * z - 8, discrete=True).verdict == "stable"
    assert _study(ring, 100 * z**3 - 130 * z**2 - 8 * z + 24, discrete=True).verdict == "unstable"
    # Sampled K/(s(s+1)) with T = 1 in the book's rounded coefficients: 0 < K < 2.3925.
    loop = 10000 * z**2 + (3679 * K - 13679) * z + 3679 + 2642 * K
    finding = _study(ring, loop, discrete=True)
    assert _binding(finding) == ["K", "-2642*K + 6321"]
    assert [(x.at, x.detail) for x in finding.crossings] == [
        ("unit circle", "z = 1"),
        ("unit circle", "complex pair"),
    ]
    stable = [i for i in finding.intervals if i.verdict == "stable"]
    assert [(i.start and i.start.exact, i.end and i.end.exact) for i in stable] == [(0, Fraction(6321, 2642))]
    assert round(float(Fraction(6321, 2642)), 4) == 2.3925


def test_sampled_loop_with_an_exponential() -> None:
    # The same loop with q = exp(-T) kept: K < (1 - q)/(1 - q - T*q), recomputed exactly.
    q = "exp(-T)"
    model = _plant(
        [["0", "1"], [f"-({q} + K*(1 - {q} - T*{q}))", f"1 + {q} - K*(T - 1 + {q})"]], "K T", time="discrete"
    )
    finding = stability(model)
    assert finding.verdict == "conditional"
    assert "ball arithmetic" in finding.because
    limit = (1 - np.exp(-1)) / (1 - 2 * np.exp(-1))
    for gain, inside in ((limit * 0.999, True), (limit * 1.001, False)):
        point = {"K": Fraction(gain).limit_denominator(10**6), "T": Fraction(1)}
        signs = [certified_sign(finding.ring, c.element, point) for c in finding.binding]
        assert (signs == [1] * len(signs)) is inside
    along = stability(
        _plant([["0", "K"], ["-1/2", "1/2"]], "", {"K": {"nominal": 1}}, time="discrete"), along="K"
    )
    assert along.along == "K"


@pytest.mark.parametrize(
    ("n", "ultimate", "omega"),
    [(3, Fraction(8), 3), (4, Fraction(4), 1), (6, Fraction(64, 27), Fraction(1, 3))],
)
def test_ultimate_gains(n: int, ultimate: Fraction, omega: Fraction) -> None:
    # 1/(s+1)^n: sec^n(pi/n) at tan(pi/n) (Ziegler & Nichols 1942 setting; from memory).
    ring, (s, K) = _ring("s", "K")
    finding = _study(ring, (s + 1) ** n + K)
    stable = [i for i in finding.intervals if i.verdict == "stable"]
    assert [i.end and i.end.exact for i in stable] == [ultimate]
    pair = next(
        x
        for x in finding.crossings
        if x.at == "imaginary pair" and not ring.value(x.element, {"K": ultimate})
    )
    assert pair.frequency_squared is not None
    top, bottom = (
        ring.value(e, {"K": ultimate})
        for e in (pair.frequency_squared.numerator, pair.frequency_squared.denominator)
    )
    assert top / bottom == omega


def test_ultimate_gain_that_is_irrational() -> None:
    # n = 5: the root 2.885438 of K^2 + 352K - 1024, enclosed to 20 digits.
    ring, (s, K) = _ring("s", "K")
    (stable,) = [i for i in _study(ring, (s + 1) ** 5 + K).intervals if i.verdict == "stable"]
    assert stable.end is not None and stable.end.exact is None
    low, high = Fraction(stable.end.lower), Fraction(stable.end.upper)
    assert low < high < low + Fraction(1, 10**15)
    assert (low**2 + 352 * low - 1024 < 0) and (high**2 + 352 * high - 1024 > 0)


def test_three_lags() -> None:
    # Ku = (T1+T2)(T2+T3)(T3+T1)/(T1T2T3) (from memory); Seborg, Edgar, Mellichamp: lags 5, 2, 1 give 12.6.
    ring, (s, a, b, c, K) = _ring("s", "a b c", real="K")
    finding = _study(ring, (a * s + 1) * (b * s + 1) * (c * s + 1) + K)
    assert _binds(finding, K + 1, (a + b) * (b + c) * (c + a) - a * b * c * K)
    line = _study(
        ring, finding.polynomial.element, fixed={"a": Fraction(5), "b": Fraction(2), "c": Fraction(1)}
    )
    (stable,) = [i for i in line.intervals if i.verdict == "stable"]
    assert (stable.start and stable.start.exact, stable.end and stable.end.exact) == (-1, Fraction(63, 5))


def test_rotating_shaft() -> None:
    # A. L. Kimball 1924; D. M. Smith, Proc. R. Soc. A 142 (1933) 92-118 (from memory):
    # W < sqrt(k/m)(1 + ce/ci).
    model = _plant(
        [
            ["0", "0", "1", "0"],
            ["0", "0", "0", "1"],
            ["-k/m", "-ci*W/m", "-(ce+ci)/m", "0"],
            ["ci*W/m", "-k/m", "0", "-(ce+ci)/m"],
        ],
        "m k ce ci W",
    )
    finding = stability(model)
    m, k, ce, ci, W = (finding.ring.gen(x) for x in ("m", "k", "ce", "ci", "W"))
    (condition,) = finding.binding
    assert condition.element == k * (ce + ci) ** 2 - m * ci**2 * W**2
    assert [(x.at, _is(x.frequency_squared, k, m)) for x in finding.crossings] == [("imaginary pair", True)]
    assert finding.verdict == "conditional"
    _check_witnesses(model, finding)


def test_two_mass_drive_drifts() -> None:
    # B. Wie & D. S. Bernstein, J. Guid. Control Dyn. 15 (1992) 1057-1059; value seen in public text.
    model = _plant([[0, 0, 1, 0], [0, 0, 0, 1], ["-k/m1", "k/m1", 0, 0], ["k/m2", "-k/m2", 0, 0]], "m1 m2 k")
    finding = stability(model)
    assert finding.verdict == "unstable"
    assert "too few eigenvectors" in finding.because  # double integrator, one eigenvector
    assert all(c.status == "always" for c in finding.marginal_conditions)


def test_heffron_phillips() -> None:
    # P. Kundur, Power System Stability and Control, 1994, Ex. 12.3 (from memory): K1 > K2*K3*K4.
    model = _plant(
        [["-D/M", "-K1/M", "-K2/M"], ["w0", "0", "0"], ["0", "-K3*K4/T3", "-1/T3"]], "D M K1 K2 w0 K3 K4 T3"
    )
    finding = stability(model)
    assert _binding(finding) == ["K1 - K2*K3*K4"]
    assert [x.at for x in finding.crossings] == ["origin"]
    _check_witnesses(model, finding)


def test_heffron_phillips_without_damping() -> None:
    model = _plant(
        [["0", "-K1/M", "-K2/M"], ["w0", "0", "0"], ["0", "-K3*K4/T3", "-1/T3"]],
        "M K1 K2 w0 K3 T3",
        {"K4": {"sign": "real"}},
    )
    # (D = 0: also K2*K3*K4 > 0)
    assert set(_binding(stability(model))) == {"K4", "K1 - K2*K3*K4"}


def test_satellite() -> None:
    # R. W. Brockett, Finite Dimensional Linear Systems, 1970: s^2(s^2 + w^2), defective at the origin.
    finding = stability(_plant([[0, 1, 0, 0], ["3*w**2", 0, 0, "2*w"], [0, 0, 0, 1], [0, "-2*w", 0, 0]], "w"))
    assert finding.verdict == "unstable"
    assert "too few eigenvectors" in finding.because
    assert [i.verdict for i in finding.intervals] == ["unstable"]


def test_clohessy_wiltshire() -> None:
    # Hill, Clohessy, Wiltshire: s^2(s^2 + n^2)^2; the double pair is harmless, the double zero is not.
    A = [[0] * 6 for _ in range(6)]
    for i in range(3):
        A[i][i + 3] = 1
    B: list[list[Any]] = A
    B[3] = ["3*n**2", 0, 0, 0, "2*n", 0]
    B[4] = [0, 0, 0, "-2*n", 0, 0]
    B[5] = [0, 0, "-n**2", 0, 0, 0]
    finding = stability(_plant(B, "n"))
    assert finding.verdict == "unstable"
    assert "the factor s are multiple" in finding.because
    assert "s**2 + n**2 are multiple" not in finding.because


L4 = "3*sqrt(3)/4*(1 - 2*mu)"


@pytest.mark.parametrize(("high", "verdict"), [("19/500", "marginal"), ("1/2", "unstable")])
def test_lagrange_point(high: str, verdict: str) -> None:
    # G. Gascheau 1843; E. J. Routh 1875: marginally stable iff 27mu(1-mu) < 1; value seen in public text.
    model = _plant(
        [[0, 0, 1, 0], [0, 0, 0, 1], ["3/4", L4, 0, 2], [L4, "9/4", -2, 0]],
        "",
        {"mu": {"range": ["1/1000", high]}},
    )
    finding = stability(model)
    assert finding.verdict == verdict
    mu = finding.ring.gen("mu")
    if verdict == "unstable":
        assert [c.element for c in finding.marginal_conditions if c.status == "required"] == [
            27 * mu**2 - 27 * mu + 1
        ]
        assert [i.verdict for i in finding.intervals] == ["marginal", "unstable"]
        end = finding.intervals[0].end
        assert end is not None and end.lower.startswith("0.0385208965045")  # (1 - sqrt(69)/9)/2
        assert finding.witnesses["unstable"] is not None
    else:
        assert {c.status for c in finding.marginal_conditions} == {"always"}


def test_car_handling() -> None:
    # L. Segel 1956; M. Abe, Vehicle Handling Dynamics (from memory).
    slip = "(a*Cf - b*Cr)"
    model = _plant(
        [
            ["-(Cf + Cr)/(m*V)", f"-1 - {slip}/(m*V**2)"],
            [f"-{slip}/Iz", "-(a**2*Cf + b**2*Cr)/(Iz*V)"],
        ],
        "Cf Cr m V a b Iz",
    )
    finding = stability(model)
    Cf, Cr, m, V, a, b = (finding.ring.gen(x) for x in ("Cf", "Cr", "m", "V", "a", "b"))
    (condition,) = finding.binding
    assert condition.element == Cf * Cr * (a + b) ** 2 - m * V**2 * (a * Cf - b * Cr)
    _check_witnesses(model, finding)


def test_phase_shift_oscillator() -> None:
    # (1+A)(tau s)^3 + 6(tau s)^2 + 5 tau s + 1: limit A = 29, omega^2 = 1/(6 tau^2) (from memory).
    ring, (s, A, t) = _ring("s", "A t")
    finding = _study(ring, (1 + A) * (t * s) ** 3 + 6 * (t * s) ** 2 + 5 * t * s + 1)
    assert _binding(finding) == ["-A + 29"]
    ratio = finding.crossings[0].frequency_squared
    assert ratio is not None
    at = {"A": Fraction(29), "t": Fraction(2)}
    assert ring.value(ratio.numerator, at) / ring.value(ratio.denominator, at) == Fraction(1, 24)


def test_brusselator() -> None:
    # Prigogine & Lefever 1968 (from memory): unstable iff B > 1 + A^2.
    finding = stability(_plant([["B - 1", "A**2"], ["-B", "-A**2"]], "A B"))
    assert _binding(finding) == ["A**2 - B + 1"]
    assert finding.crossings[0].at == "imaginary pair"


def test_meshchersky_governor() -> None:
    # Meshchersky, problem 56.17 (statement seen in public text): stable iff beta c/m > A B/J.
    finding = stability(_plant([[0, 1, 0], ["-c/m", "-beta/m", "A/m"], ["-B/J", 0, 0]], "m beta c A B J"))
    assert _binding(finding) == ["-m*A*B + beta*c*J"]


# --- structure and special cases ---------------------------------------------------------------


def _chain(n: int) -> Model:
    """n masses in a row, the first tied to a wall, a spring and a damper in each link."""
    A: list[list[str]] = [["0"] * (2 * n) for _ in range(2 * n)]
    for i in range(n):
        A[i][n + i] = "1"
        for offset, x in ((0, "k"), (n, "c")):
            ahead = f" - {x}{i + 2}" if i < n - 1 else ""
            A[n + i][offset + i] = f"(-{x}{i + 1}{ahead})/m{i + 1}"
            if i:
                A[n + i][offset + i - 1] = f"{x}{i + 1}/m{i + 1}"
            if i < n - 1:
                A[n + i][offset + i + 1] = f"{x}{i + 2}/m{i + 1}"
    return _plant(A, " ".join(f"{x}{i}" for x in "mkc" for i in range(1, n + 1)))


@pytest.mark.parametrize("n", [1, 2, 3, 4, 5])
def test_damped_chains_are_stable(n: int) -> None:
    finding = stability(_chain(n))
    assert finding.verdict == "stable"
    assert not finding.binding
    assert n < 2 or "energy" in finding.because


def test_the_energy_argument_needs_damping_that_acts_everywhere() -> None:
    # The second damper only: its matrix is not definite, and the determinants must decide.
    A = [[0, 0, 1, 0], [0, 0, 0, 1], ["-(k1+k2)/m1", "k2/m1", 0, 0], ["k2/m2", "-k2/m2", 0, "-c/m2"]]
    finding = stability(_plant(A, "m1 m2 k1 k2 c"))
    assert finding.verdict == "stable"
    assert "energy" not in finding.because
    # Without the wall the whole may drift.
    free = [
        [0, 0, 1, 0],
        [0, 0, 0, 1],
        ["-k/m1", "k/m1", "-c/m1", "c/m1"],
        ["k/m2", "-k/m2", "c/m2", "-c/m2"],
    ]
    assert stability(_plant(free, "m1 m2 k c")).verdict == "unstable"


def test_single_integrator_and_undamped_mass_are_marginal() -> None:
    assert stability(_plant([[0, 0], [0, "-a"]], "a")).verdict == "marginal"
    assert stability(_plant([[0, 1], ["-k/m", 0]], "k m")).verdict == "marginal"
    assert stability(_plant([[0, 0], [0, 0]])).verdict == "marginal"  # two eigenvectors
    assert stability(_plant([[0, 1], [0, 0]])).verdict == "unstable"  # one


def test_discrete_roots_on_the_circle() -> None:
    assert (
        stability(_plant([[0, 1], [-1, "c"]], "", {"c": {"range": [0, 1]}}, time="discrete")).verdict
        == "marginal"
    )
    for entry, verdict in (("1", "marginal"), ("-1", "marginal"), ("0", "stable"), ("-3/2", "unstable")):
        assert stability(_plant([[entry]], time="discrete")).verdict == verdict
    assert stability(_plant([["-1", "1"], ["0", "-1"]], time="discrete")).verdict == "unstable"
    assert stability(_plant([["-1", "0"], ["0", "-1"]], time="discrete")).verdict == "marginal"


def test_leading_coefficient_of_unknown_sign() -> None:
    ring, (s, a, b) = _ring("s", real="a b")
    finding = _study(ring, a * s**2 + s + b)
    assert finding.verdict == "conditional"
    for x, y, stable in ((1, 1, True), (-1, -1, False), (-1, 1, False), (2, 3, True)):
        point = {"a": Fraction(x), "b": Fraction(y)}
        assert all(ring.value(c.element, point) > 0 for c in finding.binding) is stable
    assert ("infinity", a) in [(x.at, x.element) for x in finding.crossings]
    (case,) = finding.special_cases
    assert case.where == a and _binding(case.finding) == ["b"]
    assert any("degree drops below 2" in note for note in finding.notes)
    # Either sign of a first-order lead, multiplied through.
    first = _study(ring, (a - 1) * s + b)
    assert _binding(first) == ["a*b - b"]


def test_descriptor_plants() -> None:
    E = [["L", "0"], ["0", "0"]]
    finding = stability(_plant([["-R", "1"], ["1", "-1"]], "L R", E=E))
    assert any("finite poles" in note for note in finding.notes)
    assert _binding(finding) == ["R - 1"]
    none = stability(_plant([["1", "0"], ["0", "1"]], E=[["0", "1"], ["0", "0"]]))
    assert none.verdict == "stable" and "no finite poles" in none.because
    with pytest.raises(InputError):
        stability(_plant([["0", "0"], ["0", "1"]], E=[["0", "0"], ["0", "1"]]))


def test_repeated_factors_are_tested_once() -> None:
    ring, (s, a) = _ring("s", real="a")
    finding = _study(ring, (s + a) ** 3 * (s + 2))
    assert _binding(finding) == ["a"]
    assert any(c.name == "coefficient of s^0 of the factor s + a" for c in finding.conditions)


def test_conditions_that_exclude_each_other() -> None:
    ring, (s, T, K) = _ring("s", "T", real="K")
    finding = _study(ring, (s + K - 5 - T) * (s + 3 - K))
    assert finding.verdict == "unstable" and "exclude each other" in finding.because
    single = _study(ring, (s + K - 5) * (s + 3 - K))
    assert single.verdict == "unstable"
    assert {i.verdict for i in single.intervals} == {"unstable"}


def test_two_letters_are_decided_by_cells_of_the_plane() -> None:
    # Each condition can hold, no two exclude each other by their terms, all three together never hold.
    ring, (s, a, b) = _ring("s", real="a b")
    finding = _study(ring, (s + 1 - a**2 - b**2) * (s + a - 2) * (s + b + 5))
    assert finding.verdict == "unstable" and "plane of a and b" in finding.because
    # The same with a circle that reaches the half plane, if only just.
    near = _study(ring, (s + 401 - 100 * a**2 - 100 * b**2) * (s + a - 2) * (s + b + 5))
    assert near.verdict == "conditional"
    point = near.witnesses["stable"]
    assert point is not None and point["a"] > 2 and 100 * point["a"] ** 2 + 100 * point["b"] ** 2 < 401
    # A letter with a single value leaves no open cell; then nothing is claimed from cells.
    ring, (s, a, b) = _ring("s", real="a", b=Interval(Fraction(3), Fraction(3)))
    assert _study(ring, (s + a) * (s + b - 2)).verdict == "conditional"


def test_a_closed_end_is_not_forgotten() -> None:
    # At mu = 0 the second condition holds and the first fails: it is not implied.
    ring, (s, u) = _ring("s", u=Interval(Fraction(0), Fraction(1, 2)))
    finding = _study(ring, (s + u) * (s + 1 - 3 * u))
    assert set(_binding(finding)) == {"u", "-3*u + 1"}


def test_where_the_polynomial_vanishes_no_witness_is_taken() -> None:
    ring, (s, b, c) = _ring("s", "b", c=Interval(declared=Sign.NEGATIVE))
    finding = _study(ring, (b * c + 1) * (s + c))
    point = finding.witnesses["unstable"]
    assert finding.verdict == "unstable" and point is not None
    assert ring.value(b * c + 1, point) != 0
    assert any("vanishes identically" in note for note in finding.notes)


def test_along_a_letter_with_the_others_at_nominal_values() -> None:
    model = _plant(
        [[0, 1], ["-k/m", "-(c - 1)*sqrt(k/m)"]],
        "",
        {
            "m": {"nominal": 2, "sign": "positive"},
            "k": {"nominal": 3, "sign": "positive"},
            "c": {"sign": "real"},
        },
    )
    finding = stability(model, along="c")
    assert [(i.end and i.end.exact, i.verdict) for i in finding.intervals] == [
        (1, "unstable"),
        (None, "stable"),
    ]
    assert _binding(finding) == ["c - 1"]
    fixed = stability(model, fixed={"c": Fraction(5)})
    assert fixed.verdict == "stable"
    with pytest.raises(InputError) as caught:
        stability(model, along="k")
    assert [fault.place for fault in caught.value.faults] == ["parameters.c"]
    with pytest.raises(InputError):
        stability(model, along="nothing", fixed={"c": Fraction(1)})
    with pytest.raises(InputError):
        stability(model, fixed={"nothing": Fraction(1)})


def test_end_points_behind_a_root() -> None:
    # s + sqrt(x) - 2: stable for x > 4; the norm x - 4 gives the end point.
    model = _plant([["2 - sqrt(x)"]], "x")
    finding = stability(model)
    assert [(i.start and i.start.exact, i.verdict) for i in finding.intervals] == [
        (0, "unstable"),
        (4, "stable"),
    ]


def test_stages_are_reported() -> None:
    seen: list[str] = []
    stability(_plant([["B - 1", "A**2"], ["-B", "-A**2"]], "A B"), stage=seen.append)
    assert seen[0] == "the characteristic polynomial" and "witnesses" in seen


# --- numerical second opinion --------------------------------------------------------------------


def _random_box(random: Random, letters: str) -> Box:
    choices = [
        Interval(),
        POSITIVE,
        Interval(declared=Sign.NONNEGATIVE),
        Interval(declared=Sign.NEGATIVE),
        Interval(Fraction(1), Fraction(3)),
        Interval(Fraction(-1), Fraction(2)),
    ]
    return Box({name: random.choice(choices) for name in letters})


@given(st.integers(0, 100_000), st.booleans())
@settings(max_examples=40, deadline=None)
def test_conditions_agree_with_numerical_roots(seed: int, discrete: bool) -> None:
    random = Random(seed)
    letters = "ab"[: random.randint(1, 2)]
    ring = Ring("s", tuple(letters), _random_box(random, letters))
    s = ring.gen("s")
    element = ring.zero
    for power in range(random.randint(2, 5)):
        for _ in range(random.randint(1, 2)):
            term = ring.constant(random.choice([1, 2, 3, 5, -1]))
            for _ in range(random.randint(0, 2)):
                term = term * ring.gen(random.choice(letters))
            element = element + term * s**power
    polynomial = Polynomial.of(ring, element)
    if polynomial.degree < 1:
        return
    finding = stability_of(polynomial, discrete=discrete)
    for _ in range(40):
        point = {x: Fraction(random.randint(-50, 50), random.randint(1, 12)) for x in letters}
        values = [float(ring.value(c, point)) for c in polynomial.coefficients]
        if not ring.box.contains(point) or not values[-1]:
            continue
        roots = np.roots(values[::-1])
        margin = max(abs(roots)) - 1 if discrete else max(roots.real)
        if abs(margin) < 1e-4:
            continue
        holds = [certified_sign(ring, c.element, point) == 1 for c in finding.conditions]
        open_ones = [
            h for h, c in zip(holds, finding.conditions, strict=True) if c.status not in ("always", "implied")
        ]
        assert all(open_ones) == (margin < 0)
        assert all(holds) == all(open_ones)
        assert finding.verdict != "stable" or margin < 0
        assert finding.verdict not in ("unstable", "marginal") or margin > 0
    for kind, witness in finding.witnesses.items():
        if witness is not None:
            assert ring.box.contains(witness)
            found = classify(_subject(polynomial, discrete), witness)
            assert (found == "stable") == (kind == "stable")


def _subject(polynomial: Polynomial, discrete: bool) -> Any:
    from symplant.derivation.stability.subject import Subject

    return Subject(polynomial, discrete)


@given(st.integers(0, 100_000))
@settings(max_examples=25, deadline=None)
def test_plants_agree_with_eigenvalues(seed: int) -> None:
    random = Random(seed)
    n = random.randint(2, 3)
    texts = ["0", "1", "-1", "-a", "-b/a", "a - b", "-2*b", "b", "-3", "a/(a + b)"]
    A = [[random.choice(texts) for _ in range(n)] for _ in range(n)]
    for i in range(n):
        A[i][i] = random.choice(["-a", "-2*b", "-a - b", "-3", "a - b"])
    model = _plant(A, "a b")
    finding = stability(model)
    for _ in range(40):
        a, b = Fraction(random.randint(1, 60), random.randint(1, 9)), Fraction(random.randint(1, 60), 7)
        values = {"a": float(a), "b": float(b)}
        matrix = [[eval(entry, {}, values) for entry in row] for row in A]  # texts of this test only
        margin = max(np.linalg.eigvals(np.array(matrix, dtype=float)).real)
        if abs(margin) < 1e-6:
            continue
        holds = all(
            certified_sign(finding.ring, c.element, {"a": a, "b": b}) == 1
            for c in finding.conditions
            if c.status not in ("always", "implied")
        )
        assert holds == (margin < 0)

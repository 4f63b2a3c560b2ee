"""Published plants: their stability conditions in reduced form, each with its source."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import numpy as np
import pytest
from stability_subjects import binding, plant, ring_of, study

from symplant.algebra.box import Interval, Sign
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element
from symplant.derivation.pencil import build_pencil
from symplant.derivation.stability import StabilityFinding, stability
from symplant.derivation.stability.subject import subject_of
from symplant.derivation.stability.witnesses import classify
from symplant.plant.model import Model


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


def test_lorenz() -> None:
    # E. N. Lorenz, J. Atmos. Sci. 20 (1963) 130-141; value seen in public text (secondary).
    ring, (s, g, b, r) = ring_of("s", "g b", r=Interval(lower=Fraction(1)))
    finding = study(ring, s**3 + (g + b + 1) * s**2 + (r + g) * b * s + 2 * g * b * (r - 1))
    assert finding.verdict == "conditional"
    # r > 1, and r*(g - b - 1) < g*(g + b + 3): right for either sign of g - b - 1, the published case split.
    assert _binds(finding, r - 1, g * (g + b + 3) - r * (g - b - 1))
    pair = next(x for x in finding.crossings if x.at == "imaginary pair")
    assert _is(pair.frequency_squared, (r + g) * b, ring.one)
    assert [x.at for x in finding.crossings] == ["origin", "imaginary pair"]
    # At sigma = 10, b = 8/3 stability ends at r = 470/19 = 24.74, where
    # omega^2 = 2 b sigma (sigma+1)/(sigma-b-1).
    line = study(ring, finding.polynomial.element, fixed={"g": Fraction(10), "b": Fraction(8, 3)})
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
    model = plant(
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
    ring, (s, M, B, Y, F, G) = ring_of("s", "M B Y F G")
    finding = study(ring, M * B * s**3 + (M * Y + F * B) * s**2 + F * Y * s + F * G)
    (condition,) = finding.binding
    assert condition.element == (M * Y + F * B) * Y - M * B * G
    assert any(bound.letter == "G" and bound.relation == "<" for bound in condition.solved)


def test_watt_governor() -> None:
    # Vyshnegradsky 1876; L. S. Pontryagin, Ordinary Differential Equations, 1962, sec. 27; public text.
    # sine and cosine of the equilibrium angle lie in (0, 1); stable iff b*J*w > 2*k*c*m.
    unit = Interval(Fraction(0), Fraction(1), Sign.POSITIVE)
    ring, (L, m, b, g, k, J, w, p, c) = ring_of("L", "m b g k J w", p=unit, c=unit)
    cubic = m * c * J * w * L**3 + b * c * J * w * L**2 + m * g * p**2 * J * w * L + 2 * m * k * g * p**2 * c
    finding = study(ring, cubic)
    (condition,) = finding.binding
    assert condition.element == b * J * w - 2 * k * c * m


def test_vyshnegradsky_normal_form() -> None:
    ring, (x, X, Y) = ring_of("x", "X Y")
    assert binding(study(ring, x**3 + X * x**2 + Y * x + 1)) == ["X*Y - 1"]


def test_routh_with_letters() -> None:
    # Franklin, Powell, Emami-Naeini, Examples 3.33, 3.34; value seen in public text.
    ring, (s, K, KI) = ring_of("s", real="K KI")
    finding = study(ring, s**3 + 5 * s**2 + (K - 6) * s + K)
    assert binding(finding) == ["2*K - 15"]
    assert [(i.start and i.start.exact, i.verdict) for i in finding.intervals] == [
        (None, "unstable"),
        (Fraction(15, 2), "stable"),
    ]
    assert _is(finding.crossings[0].frequency_squared, K - 6, ring.one)
    finding = study(ring, s**3 + 3 * s**2 + (2 + K) * s + KI)
    assert binding(finding) == ["KI", "3*K - KI + 6"]  # KI > 0 and K > KI/3 - 2


@pytest.mark.parametrize(
    ("falling", "limit"), [((1, 3, 3, 2), Fraction(14, 9)), ((1, 18, 77), Fraction(1386))]
)
def test_gain_ranges(falling: tuple[int, ...], limit: Fraction) -> None:
    # Ogata ch. 5: 0 < K < 14/9 (from memory); Nise ch. 6: 0 < K < 1386 (value seen in public text).
    ring, (s, K) = ring_of("s", real="K")
    n = len(falling)
    finding = study(ring, sum((v * s ** (n - i) for i, v in enumerate(falling)), K))
    stable = [i for i in finding.intervals if i.verdict == "stable"]
    assert [(i.start and i.start.exact, i.end and i.end.exact) for i in stable] == [(0, limit)]
    assert len(finding.binding) == 2


@pytest.mark.parametrize(("c3", "c2", "c1", "top"), [(6, 11, 6, 60), (8, 17, 10, 126)])
def test_two_gains(c3: int, c2: int, c1: int, top: int) -> None:
    # Dorf & Bishop, Modern Control Systems, ch. 6 (from memory): welding head (60-K)(K+6) > 36Ka, a > 0;
    # tracked vehicle (K+10)(126-K) > 64Ka, Ka > 0.
    ring, (s, K, a) = ring_of("s", real="K a")
    finding = study(ring, s**4 + c3 * s**3 + c2 * s**2 + (K + c1) * s + K * a)
    assert _binds(finding, K * a, (top - K) * (K + c1) - c3**2 * K * a)
    assert _statuses(finding)["coefficient of s^1"] == "implied"
    if c3 == 6:
        line = study(ring, finding.polynomial.element, fixed={"K": Fraction(40)})
        stable = [i for i in line.intervals if i.verdict == "stable"]
        assert [(i.start and i.start.exact, i.end and i.end.exact) for i in stable] == [(0, Fraction(23, 36))]


def test_jury_cases() -> None:
    # Ogata, Discrete-Time Control Systems, 2nd ed., ch. 4 (from memory).
    ring, (z, K) = ring_of("z", real="K")
    assert study(ring, 100 * z**4 - 120 * z**3 + 7 * z**2 + 30 * z - 8, discrete=True).verdict == "stable"
    assert study(ring, 100 * z**3 - 130 * z**2 - 8 * z + 24, discrete=True).verdict == "unstable"
    # Sampled K/(s(s+1)) with T = 1 in the book's rounded coefficients: 0 < K < 2.3925.
    loop = 10000 * z**2 + (3679 * K - 13679) * z + 3679 + 2642 * K
    finding = study(ring, loop, discrete=True)
    assert binding(finding) == ["K", "-2642*K + 6321"]
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
    model = plant(
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


@pytest.mark.parametrize(
    ("n", "ultimate", "omega"),
    [(3, Fraction(8), 3), (4, Fraction(4), 1), (6, Fraction(64, 27), Fraction(1, 3))],
)
def test_ultimate_gains(n: int, ultimate: Fraction, omega: Fraction) -> None:
    # 1/(s+1)^n: sec^n(pi/n) at tan(pi/n) (Ziegler & Nichols 1942 setting; from memory).
    ring, (s, K) = ring_of("s", "K")
    finding = study(ring, (s + 1) ** n + K)
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
    ring, (s, K) = ring_of("s", "K")
    (stable,) = [i for i in study(ring, (s + 1) ** 5 + K).intervals if i.verdict == "stable"]
    assert stable.end is not None and stable.end.exact is None
    low, high = Fraction(stable.end.lower), Fraction(stable.end.upper)
    assert low < high < low + Fraction(1, 10**15)
    assert (low**2 + 352 * low - 1024 < 0) and (high**2 + 352 * high - 1024 > 0)


def test_three_lags() -> None:
    # Ku = (T1+T2)(T2+T3)(T3+T1)/(T1T2T3) (from memory); Seborg, Edgar, Mellichamp: lags 5, 2, 1 give 12.6.
    ring, (s, a, b, c, K) = ring_of("s", "a b c", real="K")
    finding = study(ring, (a * s + 1) * (b * s + 1) * (c * s + 1) + K)
    assert _binds(finding, K + 1, (a + b) * (b + c) * (c + a) - a * b * c * K)
    line = study(
        ring, finding.polynomial.element, fixed={"a": Fraction(5), "b": Fraction(2), "c": Fraction(1)}
    )
    (stable,) = [i for i in line.intervals if i.verdict == "stable"]
    assert (stable.start and stable.start.exact, stable.end and stable.end.exact) == (-1, Fraction(63, 5))


def test_rotating_shaft() -> None:
    # A. L. Kimball 1924; D. M. Smith, Proc. R. Soc. A 142 (1933) 92-118 (from memory):
    # W < sqrt(k/m)(1 + ce/ci).
    model = plant(
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
    model = plant([[0, 0, 1, 0], [0, 0, 0, 1], ["-k/m1", "k/m1", 0, 0], ["k/m2", "-k/m2", 0, 0]], "m1 m2 k")
    finding = stability(model)
    assert finding.verdict == "unstable"
    assert "too few eigenvectors" in finding.because  # double integrator, one eigenvector
    assert all(c.status == "always" for c in finding.marginal_conditions)


def test_heffron_phillips() -> None:
    # P. Kundur, Power System Stability and Control, 1994, Ex. 12.3 (from memory): K1 > K2*K3*K4.
    model = plant(
        [["-D/M", "-K1/M", "-K2/M"], ["w0", "0", "0"], ["0", "-K3*K4/T3", "-1/T3"]], "D M K1 K2 w0 K3 K4 T3"
    )
    finding = stability(model)
    assert binding(finding) == ["K1 - K2*K3*K4"]
    assert [x.at for x in finding.crossings] == ["origin"]
    _check_witnesses(model, finding)


def test_heffron_phillips_without_damping() -> None:
    model = plant(
        [["0", "-K1/M", "-K2/M"], ["w0", "0", "0"], ["0", "-K3*K4/T3", "-1/T3"]],
        "M K1 K2 w0 K3 T3",
        {"K4": {"sign": "real"}},
    )
    # (D = 0: also K2*K3*K4 > 0)
    assert set(binding(stability(model))) == {"K4", "K1 - K2*K3*K4"}


def test_satellite() -> None:
    # R. W. Brockett, Finite Dimensional Linear Systems, 1970: s^2(s^2 + w^2), defective at the origin.
    finding = stability(plant([[0, 1, 0, 0], ["3*w**2", 0, 0, "2*w"], [0, 0, 0, 1], [0, "-2*w", 0, 0]], "w"))
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
    finding = stability(plant(B, "n"))
    assert finding.verdict == "unstable"
    assert "the factor s are multiple" in finding.because
    assert "s**2 + n**2 are multiple" not in finding.because


L4 = "3*sqrt(3)/4*(1 - 2*mu)"


@pytest.mark.parametrize(("high", "verdict"), [("19/500", "marginal"), ("1/2", "unstable")])
def test_lagrange_point(high: str, verdict: str) -> None:
    # G. Gascheau 1843; E. J. Routh 1875: marginally stable iff 27mu(1-mu) < 1; value seen in public text.
    model = plant(
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
    model = plant(
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
    ring, (s, A, t) = ring_of("s", "A t")
    finding = study(ring, (1 + A) * (t * s) ** 3 + 6 * (t * s) ** 2 + 5 * t * s + 1)
    assert binding(finding) == ["-A + 29"]
    ratio = finding.crossings[0].frequency_squared
    assert ratio is not None
    at = {"A": Fraction(29), "t": Fraction(2)}
    assert ring.value(ratio.numerator, at) / ring.value(ratio.denominator, at) == Fraction(1, 24)


def test_brusselator() -> None:
    # Prigogine & Lefever 1968 (from memory): unstable iff B > 1 + A^2.
    finding = stability(plant([["B - 1", "A**2"], ["-B", "-A**2"]], "A B"))
    assert binding(finding) == ["A**2 - B + 1"]
    assert finding.crossings[0].at == "imaginary pair"


def test_meshchersky_governor() -> None:
    # Meshchersky, problem 56.17 (statement seen in public text): stable iff beta c/m > A B/J.
    finding = stability(plant([[0, 1, 0], ["-c/m", "-beta/m", "A/m"], ["-B/J", 0, 0]], "m beta c A B J"))
    assert binding(finding) == ["-m*A*B + beta*c*J"]

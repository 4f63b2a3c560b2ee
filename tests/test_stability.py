"""Stability: structure, marginal plants, special cases, one and two letters."""

from __future__ import annotations

from fractions import Fraction

import pytest
from stability_subjects import binding, plant, ring_of, study

from symplant.algebra.box import Interval, Sign
from symplant.derivation.stability import stability
from symplant.errors import InputError
from symplant.plant.model import Model


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
    return plant(A, " ".join(f"{x}{i}" for x in "mkc" for i in range(1, n + 1)))


@pytest.mark.parametrize("n", [1, 2, 3, 4, 5])
def test_damped_chains_are_stable(n: int) -> None:
    finding = stability(_chain(n))
    assert finding.verdict == "stable"
    assert not finding.binding
    assert n < 2 or "energy" in finding.because


def test_the_energy_argument_needs_damping_that_acts_everywhere() -> None:
    # The second damper only: its matrix is not definite, and the determinants must decide.
    A = [[0, 0, 1, 0], [0, 0, 0, 1], ["-(k1+k2)/m1", "k2/m1", 0, 0], ["k2/m2", "-k2/m2", 0, "-c/m2"]]
    finding = stability(plant(A, "m1 m2 k1 k2 c"))
    assert finding.verdict == "stable"
    assert "energy" not in finding.because
    # Without the wall the whole may drift.
    free = [
        [0, 0, 1, 0],
        [0, 0, 0, 1],
        ["-k/m1", "k/m1", "-c/m1", "c/m1"],
        ["k/m2", "-k/m2", "c/m2", "-c/m2"],
    ]
    assert stability(plant(free, "m1 m2 k c")).verdict == "unstable"


def test_single_integrator_and_undamped_mass_are_marginal() -> None:
    assert stability(plant([[0, 0], [0, "-a"]], "a")).verdict == "marginal"
    assert stability(plant([[0, 1], ["-k/m", 0]], "k m")).verdict == "marginal"
    assert stability(plant([[0, 0], [0, 0]])).verdict == "marginal"  # two eigenvectors
    assert stability(plant([[0, 1], [0, 0]])).verdict == "unstable"  # one


def test_discrete_roots_on_the_circle() -> None:
    assert (
        stability(plant([[0, 1], [-1, "c"]], "", {"c": {"range": [0, 1]}}, time="discrete")).verdict
        == "marginal"
    )
    for entry, verdict in (("1", "marginal"), ("-1", "marginal"), ("0", "stable"), ("-3/2", "unstable")):
        assert stability(plant([[entry]], time="discrete")).verdict == verdict
    assert stability(plant([["-1", "1"], ["0", "-1"]], time="discrete")).verdict == "unstable"
    assert stability(plant([["-1", "0"], ["0", "-1"]], time="discrete")).verdict == "marginal"


def test_leading_coefficient_of_unknown_sign() -> None:
    ring, (s, a, b) = ring_of("s", real="a b")
    finding = study(ring, a * s**2 + s + b)
    assert finding.verdict == "conditional"
    for x, y, stable in ((1, 1, True), (-1, -1, False), (-1, 1, False), (2, 3, True)):
        point = {"a": Fraction(x), "b": Fraction(y)}
        assert all(ring.value(c.element, point) > 0 for c in finding.binding) is stable
    assert ("infinity", a) in [(x.at, x.element) for x in finding.crossings]
    (case,) = finding.special_cases
    assert case.where == a and binding(case.finding) == ["b"]
    assert any("degree drops below 2" in note for note in finding.notes)
    # Either sign of a first-order lead, multiplied through.
    first = study(ring, (a - 1) * s + b)
    assert binding(first) == ["a*b - b"]


def test_descriptor_plants() -> None:
    E = [["L", "0"], ["0", "0"]]
    finding = stability(plant([["-R", "1"], ["1", "-1"]], "L R", E=E))
    assert any("finite poles" in note for note in finding.notes)
    assert binding(finding) == ["R - 1"]
    none = stability(plant([["1", "0"], ["0", "1"]], E=[["0", "1"], ["0", "0"]]))
    assert none.verdict == "stable" and "no finite poles" in none.because
    with pytest.raises(InputError):
        stability(plant([["0", "0"], ["0", "1"]], E=[["0", "0"], ["0", "1"]]))


def test_repeated_factors_are_tested_once() -> None:
    ring, (s, a) = ring_of("s", real="a")
    finding = study(ring, (s + a) ** 3 * (s + 2))
    assert binding(finding) == ["a"]
    assert any(c.name == "coefficient of s^0 of the factor s + a" for c in finding.conditions)


def test_conditions_that_exclude_each_other() -> None:
    ring, (s, T, K) = ring_of("s", "T", real="K")
    finding = study(ring, (s + K - 5 - T) * (s + 3 - K))
    assert finding.verdict == "unstable" and "exclude each other" in finding.because
    single = study(ring, (s + K - 5) * (s + 3 - K))
    assert single.verdict == "unstable"
    assert {i.verdict for i in single.intervals} == {"unstable"}


def test_two_letters_are_decided_by_cells_of_the_plane() -> None:
    # Each condition can hold, no two exclude each other by their terms, all three together never hold.
    ring, (s, a, b) = ring_of("s", real="a b")
    finding = study(ring, (s + 1 - a**2 - b**2) * (s + a - 2) * (s + b + 5))
    assert finding.verdict == "unstable" and "plane of a and b" in finding.because
    # The same with a circle that reaches the half plane, if only just.
    near = study(ring, (s + 401 - 100 * a**2 - 100 * b**2) * (s + a - 2) * (s + b + 5))
    assert near.verdict == "conditional"
    point = near.witnesses["stable"]
    assert point is not None and point["a"] > 2 and 100 * point["a"] ** 2 + 100 * point["b"] ** 2 < 401
    # A letter with a single value leaves no open cell; then nothing is claimed from cells.
    ring, (s, a, b) = ring_of("s", real="a", b=Interval(Fraction(3), Fraction(3)))
    assert study(ring, (s + a) * (s + b - 2)).verdict == "conditional"


def test_a_closed_end_is_not_forgotten() -> None:
    # At mu = 0 the second condition holds and the first fails: it is not implied.
    ring, (s, u) = ring_of("s", u=Interval(Fraction(0), Fraction(1, 2)))
    finding = study(ring, (s + u) * (s + 1 - 3 * u))
    assert set(binding(finding)) == {"u", "-3*u + 1"}


def test_where_the_polynomial_vanishes_no_witness_is_taken() -> None:
    ring, (s, b, c) = ring_of("s", "b", c=Interval(declared=Sign.NEGATIVE))
    finding = study(ring, (b * c + 1) * (s + c))
    point = finding.witnesses["unstable"]
    assert finding.verdict == "unstable" and point is not None
    assert ring.value(b * c + 1, point) != 0
    assert any("vanishes identically" in note for note in finding.notes)


def test_along_a_letter_with_the_others_at_nominal_values() -> None:
    model = plant(
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
    assert binding(finding) == ["c - 1"]
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
    model = plant([["2 - sqrt(x)"]], "x")
    finding = stability(model)
    assert [(i.start and i.start.exact, i.verdict) for i in finding.intervals] == [
        (0, "unstable"),
        (4, "stable"),
    ]


def test_stages_are_reported() -> None:
    seen: list[str] = []
    stability(plant([["B - 1", "A**2"], ["-B", "-A**2"]], "A B"), stage=seen.append)
    assert seen[0] == "the characteristic polynomial" and "witnesses" in seen


def test_undamped_chains_are_marginal_by_conservation() -> None:
    A = [["0"] * 6 for _ in range(6)]
    springs = [["-(k1+k2)/m1", "k2/m1", "0"], ["k2/m2", "-(k2+k3)/m2", "k3/m2"], ["0", "k3/m3", "-k3/m3"]]
    for i in range(3):
        A[i][3 + i] = "1"
        A[3 + i][:3] = springs[i]
    finding = stability(plant(A, "m1 m2 m3 k1 k2 k3"))
    assert finding.verdict == "marginal" and "bounded oscillation" in finding.because
    # With an unstable spring among them the argument must not be used.
    A[3][0] = "(k1 - k2)/m1"
    assert stability(plant(A, "m1 m2 m3 k1 k2 k3")).verdict == "unstable"

"""Poles left of a line, within a circle, within a sector: conditions against numerical poles."""

from __future__ import annotations

from fractions import Fraction
from random import Random
from typing import Any

import numpy as np
import pytest

from symplant.algebra.text import element_text
from symplant.derivation.stability import Margins, StabilityFinding, stability
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments
from symplant.writing.stability_page import stability_page


def _plant(A: Any, letters: str, **more: Any) -> Model:
    n = len(A)
    table = {name: {"sign": "positive"} for name in letters.split()}
    return model_from_arguments(
        A, [["1"]] + [["0"]] * (n - 1), [["1"] + ["0"] * (n - 1)], parameters=table, **more
    )


OSCILLATOR = _plant([["0", "1"], ["-k/m", "-c/m"]], "m c k")
LOOP = _plant([["0", "1", "0"], ["0", "-a", "1"], ["-K", "0", "-b"]], "a b K")
SAMPLED = _plant([["0", "1"], ["-b", "-a"]], "a b", time="discrete")


def _binding(finding: StabilityFinding) -> set[str]:
    return {element_text(finding.ring, c.element) for c in finding.binding}


def test_an_oscillator_that_decays_fast_enough() -> None:
    # s -> s - 1/2: m s^2 + (c - m) s + k - c/2 + m/4.
    finding = stability(OSCILLATOR, margins=Margins(decay=Fraction(1, 2)))
    assert _binding(finding) == {"-m + c", "m - 2*c + 4*k"}
    assert "left of Re s = -1/2" in finding.asked


def test_an_oscillator_that_is_damped_well_enough() -> None:
    # The damping ratio of a pair is c / (2 sqrt(k m)): above 1/2 exactly where c^2 > k m.
    finding = stability(OSCILLATOR, margins=Margins(damping=Fraction(1, 2)))
    assert _binding(finding) == {"-m*k + c**2"}
    assert "damping ratio" in finding.asked
    page = stability_page(finding, OSCILLATOR).plain()
    assert "damping ratio of every pole above 1/2" in page and "The margin is kept exactly where" in page
    assert "a pair of roots reaches the margin" in page and "stability is lost" not in page.lower()
    assert all(c.frequency_squared is None for c in finding.crossings)


@pytest.mark.parametrize(
    ("model", "margins"),
    [
        (LOOP, Margins(decay=Fraction(1, 4))),
        (LOOP, Margins(damping=Fraction(2, 5))),
        (SAMPLED, Margins(decay=Fraction(3, 5))),
        (OSCILLATOR, Margins(damping=Fraction(9, 10))),
    ],
)
def test_against_numerical_poles(model: Model, margins: Margins) -> None:
    finding = stability(model, margins=margins)
    ring, random, seen = finding.ring, Random(5), set()
    characteristic = stability(model).polynomial.coefficients[::-1]
    for _ in range(400):
        point = {name: Fraction(random.randint(1, 60), random.randint(5, 30)) for name in model.letters}
        holds = all(ring.value(c.element, point) > 0 for c in finding.conditions if c.status != "implied")
        poles = np.roots([float(ring.value(c, point)) for c in characteristic])
        if margins.damping is not None:
            margin = max(s.real + float(margins.damping) * abs(s) for s in poles)
        elif model.discrete:
            margin = max(abs(poles)) - float(margins.decay or 1)
        else:
            margin = max(poles.real) + float(margins.decay or 0)
        if abs(margin) > 1e-7:
            assert holds == (margin < 0), point
            seen.add(holds)
    assert seen == {True, False}


def test_faults_of_margins_are_told_together() -> None:
    with pytest.raises(InputError) as caught:
        stability(OSCILLATOR, margins=Margins(decay=Fraction(-1), damping=Fraction(2)))
    assert len(caught.value.faults) == 3
    with pytest.raises(InputError):
        stability(SAMPLED, margins=Margins(decay=Fraction(3, 2)))
    with pytest.raises(InputError):
        stability(SAMPLED, margins=Margins(damping=Fraction(1, 2)))

"""Plants and rings in a line, for the tests of stability."""

from __future__ import annotations

from typing import Any

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.algebra.text import element_text
from symplant.derivation.stability import StabilityFinding, stability_of
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments

POSITIVE = Interval(declared=Sign.POSITIVE)


def plant(A: Any, letters: str = "", parameters: Any = None, **more: Any) -> Model:
    """A plant of which only the dynamics matter; all letters positive unless told otherwise."""
    n = len(A)
    table = {name: {"sign": "positive"} for name in letters.split()} | (parameters or {})
    rows = [[str(entry) for entry in row] for row in A]
    return model_from_arguments(
        rows, [["1"]] + [["0"]] * (n - 1), [["1"] + ["0"] * (n - 1)], parameters=table, **more
    )


def ring_of(
    variable: str, positive: str = "", real: str = "", **intervals: Interval
) -> tuple[Ring, list[Element]]:
    box = dict.fromkeys(positive.split(), POSITIVE) | dict.fromkeys(real.split(), Interval()) | intervals
    ring = Ring(variable, tuple(box), Box(box))
    return ring, [ring.gen(variable), *(ring.gen(x) for x in box)]


def study(ring: Ring, element: Element, **more: Any) -> StabilityFinding:
    return stability_of(Polynomial.of(ring, element), **more)


def binding(finding: StabilityFinding) -> list[str]:
    return [element_text(finding.ring, c.element) for c in finding.binding]

"""Determinants, adjugates and whole derivations against SymPy: its matrices and its polynomial rings."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import benchmark_plants
import pytest
from ratios import Ratios

from symplant.algebra.determinant import adjugate, determinant
from symplant.derivation.derive import Derivation, derive
from symplant.derivation.pencil import Pencil, build_pencil
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments

#: What the families are called in the table.
FAMILIES = {
    "chain": "chain of n masses",
    "dense": "dense n x n, all letters",
    "ladder": "ladder of n sections",
}
CHAINS = [("chain", size) for size in range(2, 9)]
PLANTS = [*CHAINS, ("dense", 5), ("dense", 6), ("dense", 7), ("ladder", 4), ("ladder", 8)]


def model_of(family: str, size: int) -> Model:
    plant = getattr(benchmark_plants, family)(size)
    parameters = {letter: {"sign": "positive"} for letter in plant.letters}
    return model_from_arguments(plant.A, plant.B, plant.C, parameters=parameters)


def timed(benchmark: Any, work: Callable[[], Any]) -> tuple[Any, float | None]:
    """The result and the median seconds of five runs (None where pytest-benchmark is switched off)."""
    result = benchmark.pedantic(work, rounds=5, warmup_rounds=1)
    return result, benchmark.stats.stats.median if benchmark.stats else None


def compared(
    ratios: Ratios, work: str, family: str, size: int, ours: float | None, routes: list[str], terms: int
) -> None:
    # One route each on the ladder: none of them comes back on its larger size.
    for route in routes if family != "ladder" else routes[:1]:
        rival = ratios.sympy(family, size, route)
        # The same determinant, not only the same question.
        assert rival.terms in (None, terms)
        if ours is not None:
            ratios.add(f"{FAMILIES[family]}: {work}", size, ours, f"SymPy {route}", rival)


@pytest.mark.parametrize(("family", "size"), PLANTS)
def test_determinant(benchmark: Any, ratios: Ratios, family: str, size: int) -> None:
    pencil: Pencil = build_pencil(model_of(family, size))
    found, ours = timed(benchmark, lambda: determinant(pencil.dynamics, pencil.ring.one))
    routes = ["ring charpoly", "ring det", *(["Matrix.det"] if family == "chain" else [])]
    compared(ratios, "determinant", family, size, ours, routes, len(found))


@pytest.mark.parametrize(("family", "size"), PLANTS)
def test_adjugate(benchmark: Any, ratios: Ratios, family: str, size: int) -> None:
    pencil: Pencil = build_pencil(model_of(family, size))
    (found, _), ours = timed(benchmark, lambda: adjugate(pencil.dynamics, pencil.ring.one))
    compared(ratios, "adjugate", family, size, ours, ["ring adj_det", "Matrix.adjugate"], len(found))


@pytest.mark.parametrize(("family", "size"), PLANTS)
def test_derive(benchmark: Any, ratios: Ratios, family: str, size: int) -> None:
    model = model_of(family, size)
    found, ours = timed(benchmark, lambda: derive(model))
    assert isinstance(found, Derivation) and all(check.passed for check in found.checks)
    terms = len(found.characteristic_polynomial.polynomial.element)
    compared(ratios, "whole derivation", family, size, ours, ["ring adj_det", "C*(sI-A).inv()*B"], terms)

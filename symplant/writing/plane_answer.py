"""The machine answer of `stability --plane`."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.algebra.text import factored_text
from symplant.writing.answer import FORMAT, plant_answer

if TYPE_CHECKING:
    from symplant.derivation.stability.plane import StabilityPlane
    from symplant.plant.model import Model

__all__ = ["plane_answer"]

VERDICTS = {"stable": "stable", "unstable": "unstable", "axis": "marginal or unstable"}


def plane_answer(plane: StabilityPlane, model: Model, picture: str | None = None) -> dict[str, Any]:
    """Boundary curves, conditions, and every cell with its verdict and a rational point in it."""
    ring = plane.ring
    return {
        "format": FORMAT,
        "command": "stability",
        "plant": plant_answer(model),
        "plane": {
            "across": plane.across,
            "up": plane.up,
            "fixed": _values(plane.fixed),
            "curves": [
                {
                    "expression": factored_text(ring, crossing.element),
                    "at": crossing.at,
                    "detail": crossing.detail,
                }
                for crossing in plane.curves
            ],
            "conditions": [
                {"expression": factored_text(ring, element), "relation": ">"} for element in plane.conditions
            ],
            "cells": [
                {"point": _values(cell.point), "verdict": VERDICTS[cell.verdict]} for cell in plane.cells
            ],
            "witnesses": {
                side: None if point is None else _values(point) for side, point in plane.witnesses.items()
            },
            "note": plane.note,
        },
        "picture": picture,
    }


def _values(point: Mapping[str, Fraction]) -> dict[str, str]:
    return {name: str(value) for name, value in point.items()}

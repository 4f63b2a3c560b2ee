"""Stability over the parameter box: the conditions that bind, crossings, witnesses, intervals."""

from symplant.derivation.stability.finding import (
    Bound,
    Condition,
    Crossing,
    Endpoint,
    SettledCondition,
    SpecialCase,
    StabilityFinding,
    StabilityInterval,
)
from symplant.derivation.stability.margins import Margins
from symplant.derivation.stability.plane import PlaneCell, StabilityPlane, stability_plane
from symplant.derivation.stability.study import stability, stability_of

__all__ = [
    "Bound",
    "Condition",
    "Crossing",
    "Endpoint",
    "Margins",
    "PlaneCell",
    "SettledCondition",
    "SpecialCase",
    "StabilityFinding",
    "StabilityInterval",
    "StabilityPlane",
    "stability",
    "stability_of",
    "stability_plane",
]

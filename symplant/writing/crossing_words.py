"""How the loss of stability at a crossing is put into words."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from symplant.derivation.stability.finding import Crossing

__all__ = ["crossing_words"]

AT = {
    "origin": "a root passes through the origin",
    "imaginary pair": "a pair of roots crosses the imaginary axis",
    "infinity": "a root passes through infinity",
    "unit circle": "roots cross the unit circle",
}


MARGIN = {
    "origin": "a real root reaches the margin",
    "imaginary pair": "a pair of roots reaches the margin",
    "infinity": "a root passes through infinity",
    "z = 1": "a positive real root reaches the margin",
    "z = -1": "a negative real root reaches the margin",
    "complex pair": "a complex pair of roots reaches the margin",
}


def crossing_words(crossing: Crossing, margin: bool = False) -> str:
    """What happens to the roots there, as the rest of a sentence; `margin`: a margin stands for stability."""
    if margin:
        return MARGIN[crossing.detail or crossing.at]
    if crossing.at != "unit circle" or not crossing.detail:
        return AT[crossing.at]
    if "pair" in crossing.detail:
        return "a complex pair of roots crosses the unit circle"
    return f"a root crosses the unit circle at {crossing.detail}"

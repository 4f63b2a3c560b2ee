"""Zeros of all kinds, hidden modes, and their dependence on the letters."""

from symplant.derivation.zeros.along import along
from symplant.derivation.zeros.closed_forms import closed_forms
from symplant.derivation.zeros.directions import directions
from symplant.derivation.zeros.free_response import free_response
from symplant.derivation.zeros.hidden import hidden_modes
from symplant.derivation.zeros.influence import influence
from symplant.derivation.zeros.minimum_phase import minimum_phase
from symplant.derivation.zeros.structure import find_zeros
from symplant.derivation.zeros.target import target

__all__ = [
    "along",
    "closed_forms",
    "directions",
    "find_zeros",
    "free_response",
    "hidden_modes",
    "influence",
    "minimum_phase",
    "target",
]

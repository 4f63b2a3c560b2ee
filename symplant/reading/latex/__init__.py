"""LaTeX to expression trees: a strict gate in front of latex2sympy2.

The names below load what they need when they are first used, and SymPy no sooner than the first
expression is read: a plant that is written without LaTeX pays for none of it.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from symplant.reading.latex.gate import read_latex
    from symplant.reading.latex.matrices import read_latex_matrix
    from symplant.reading.latex.names import canonical_spelling
    from symplant.reading.latex.spelling_rules import default_spelling

__all__ = ["canonical_spelling", "default_spelling", "read_latex", "read_latex_matrix"]

# No submodule may be called like one of the functions: it would hide it once it is loaded.
_HOMES = {
    "canonical_spelling": "names",
    "default_spelling": "spelling_rules",
    "read_latex": "gate",
    "read_latex_matrix": "matrices",
}


def __getattr__(name: str) -> object:
    if name not in _HOMES:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(import_module(f"{__name__}.{_HOMES[name]}"), name)

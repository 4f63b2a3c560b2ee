"""symplant: closed-form poles, zeros and stability of plants whose matrices carry physical parameters.

The names below load what they need when they are first used, so that `import symplant` is instant.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.version import __version__

if TYPE_CHECKING:
    from symplant.errors import BudgetError, CheckError, Fault, InputError, SymplantError, UndecidedError
    from symplant.face.plant import Plant

__all__ = [
    "BudgetError",
    "CheckError",
    "Fault",
    "InputError",
    "Plant",
    "SymplantError",
    "UndecidedError",
    "__version__",
]


def __getattr__(name: str) -> object:
    if name == "Plant":
        from symplant.face.plant import Plant

        return Plant
    if name in __all__:
        from symplant import errors

        return getattr(errors, name)
    raise AttributeError(f"module 'symplant' has no attribute {name!r}")

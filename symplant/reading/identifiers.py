"""Names that a parameter or a signal may have."""

from __future__ import annotations

import re

from symplant.algebra.expression import FUNCTIONS
from symplant.reading.letters import CONSTANT
from symplant.reading.suggestions import quoted
from symplant.reading.tokens import is_identifier

__all__ = ["identifier_from", "name_trouble", "reserved_trouble"]


def name_trouble(name: str) -> tuple[str, str] | None:
    """Why a text is no name, and what would be one; None if it is.

    >>> name_trouble("k-1"), name_trouble("lambda")
    (("'k-1' is no name", 'write k_1'), None)
    """
    if is_identifier(name):
        return None
    return f"{quoted(name)} is no name", f"write {identifier_from(name)}"


def reserved_trouble(name: str, variable: str) -> tuple[str, str] | None:
    """Why a letter cannot have this name though it is one; `variable` may be empty, if not known.

    >>> reserved_trouble("s", "s")[0], reserved_trouble("z", "s")
    ("'s' is the variable of the polynomials", None)
    """
    hint = f"call it {name}_1"
    if name == variable:
        return f"{quoted(name)} is the variable of the polynomials", hint
    if name in FUNCTIONS:
        return f"{quoted(name)} is a function", hint
    if name == CONSTANT:
        return f"{quoted(name)} is the constant 3.14...", hint
    return None


def identifier_from(spelling: str) -> str:
    r"""A name made of whatever a spelling holds, LaTeX or not.

    >>> identifier_from(r"K_{\mathrm{t}}"), identifier_from(r"\dot{\phi}"), identifier_from("2 k")
    ('K_t', 'dot_phi', 'p_2_k')
    """
    bare = re.sub(r"\\(?:mathrm|mathit|mathbf|mathsf|text|textrm|operatorname|rm|it)\b", " ", spelling)
    bare = bare.replace("'", "_prime").replace("*", "_star")
    name = re.sub(r"[\W_]+", "_", bare).strip("_")
    return name if is_identifier(name) else f"p_{name}".rstrip("_")

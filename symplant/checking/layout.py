"""Printed LaTeX without its layout: one expression on one line, nothing of its meaning touched."""

from __future__ import annotations

import re

__all__ = ["sides", "without_layout"]

_ENVIRONMENTS = "align|aligned|equation|gather|gathered|multline|split|flalign|alignat|displaymath|math"
_COMMENT = re.compile(r"(?<!\\)%[^\n]*\n?")
_WRAPPERS = re.compile(
    rf"\\(?:begin|end)\s*\{{(?:{_ENVIRONMENTS})\*?\}}|\\(?:begingroup|endgroup)(?![A-Za-z])"
)
_MARKS = re.compile(r"\\(?:label|tag\*?)\s*\{[^{}]*\}")
_WORDS = re.compile(
    r"\\(?:notag|nonumber|allowdisplaybreaks|quad|qquad|displaystyle|textstyle|enspace|nobreak|allowbreak)"
    r"(?![A-Za-z])"
)
_ROW = re.compile(r"\\\\(?:\s*\[[^\]\n]*\])?")
_OPEN_FENCE = re.compile(r"\\(?:left|right)\s*\.")
_FENCE = re.compile(r"\\(?:left|right)(?![A-Za-z])\s*")
# Braces that print nothing, where no command, index or exponent can own them.
_EMPTY = re.compile(r"(?<![^\s(\[])\{\s*\}")
_BROKEN_DIGITS = re.compile(r"(?<=[0-9])\s+(?=\\,[0-9]{3}(?![0-9]))")
_RELATION = re.compile(r"[=<>]|\\(?:leq?|geq?|neq?|lt|gt)(?![A-Za-z])")
_SPACE = re.compile(r"\s+")


def without_layout(latex: str) -> str:
    r"""The expression that a display shows: rows joined, alignment, labels and wrappers left out.

    Brackets whose \left and \right stand in different rows lose their sizes, all of them then, as do
    the invisible ones that TeX needs there.

    >>> print(without_layout("\\begin{align}\n a &= b \\notag \\\\\n &\\quad{} + c \\label{x}\n\\end{align}"))
    a = b + c
    """
    text = _COMMENT.sub("", latex)
    text = _WRAPPERS.sub(" ", text)
    text = _MARKS.sub(" ", text)
    text = _ROW.sub(" ", text)
    text = _WORDS.sub(" ", text).replace(r"\&", "\0").replace("&", " ").replace("\0", r"\&")
    if _OPEN_FENCE.search(text):
        text = _FENCE.sub("", _OPEN_FENCE.sub(" ", text))
    text = _EMPTY.sub(" ", text)
    text = _BROKEN_DIGITS.sub("", text)
    return _SPACE.sub(" ", text).strip()


def sides(expression: str, both: bool = False) -> tuple[str, ...]:
    r"""What is to be read of an expression: of an equation the right side, of an inequality left and right.

    With `both` an equation has two sides as well.  Without a relation the expression is its only side.

    >>> sides(r"\Delta(s) = s + a"), sides(r"k \ge m"), sides("a + b")
    (('s + a',), ('k', 'm'), ('a + b',))
    """
    parts = [part.strip() for part in _RELATION.split(expression)]
    if len(parts) == 1:
        return (parts[0],)
    if not both and all(mark == "=" for mark in _RELATION.findall(expression)):
        return (parts[-1],)
    return tuple(parts)

"""The tables of checks of a report: what was compared, and the numbers of the exact substitution."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.checking.evaluation import value_text
from symplant.writing.tex_text import number_latex, tex_text

if TYPE_CHECKING:
    from symplant.algebra.verdict import Check
    from symplant.checking.point import Point
    from symplant.checking.substitution import Substitution
    from symplant.writing.spelling import Spelling

__all__ = ["check_rows", "point_rows", "substitution_rows"]

#: Digits after which a long number may be broken.
GROUP = 6


def check_rows(checks: Sequence[Check]) -> list[str]:
    """Rows of the table of checks."""
    return [
        " & ".join([tex_text(c.what), tex_text(c.method), rf"\emph{{{c.verdict}}}" + _remark(c)])
        for c in checks
    ]


def _remark(check: Check) -> str:
    # What a reader needs of a passed check is its verdict; of any other, the particulars.
    return "" if str(check.verdict) in ("proved", "agrees") else f": {tex_text(check.detail)}"


def point_rows(points: Sequence[Point], spelling: Spelling) -> list[dict[str, str]]:
    """The points by name, their values as formulas."""
    return [
        {
            "name": f"P{number}",
            "at": r",\ \allowbreak ".join(
                f"{spelling[name]} = {number_latex(value)}" for name, value in point.values.items()
            ),
        }
        for number, point in enumerate(points, 1)
    ]


def substitution_rows(substitution: Substitution) -> list[str]:
    """Rows of the table of numbers: each quantity at each point, both sides."""
    names = {id(point): f"P{number}" for number, point in enumerate(substitution.points, 1)}
    return [
        " & ".join(
            [tex_text(row.quantity), names.get(id(row.point), ""), _value(row.left), _value(row.right)]
        )
        for row in substitution.rows
    ]


def _value(value: Any) -> str:
    """A long exact number, in a form that can be broken."""
    text = str(value) if isinstance(value, Fraction) else value_text(value)
    if text.lstrip("-").isdigit() or "/" in text:
        parts = []
        for piece in text.split("/"):
            groups = [piece[i : i + GROUP] for i in range(0, len(piece), GROUP)]
            parts.append(r"\allowbreak{}".join(groups))
        return rf"{'/'.join(parts)}" if not text.startswith("-") else rf"$-${'/'.join(parts)[1:]}"
    return tex_text(text)

"""The tables of checks of a report: what was compared, and the numbers of the exact substitution."""

from __future__ import annotations

import re
from collections.abc import Sequence
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.algebra.verdict import Verdict
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
_BALL = re.compile(r"\[([-+0-9.e]+) \+/- ([0-9.e+-]+)\]")


def check_rows(checks: Sequence[Check]) -> list[str]:
    """Rows of the table of checks: those made the same way with the same result share one."""
    groups: dict[tuple[str, str], list[Check]] = {}
    for check in checks:
        # What a reader needs of a passed check is its verdict; of any other, the particulars.
        passed = check.verdict in (Verdict.PROVED, Verdict.AGREES)
        result = rf"\emph{{{check.verdict}}}" + ("" if passed else f": {tex_text(check.detail)}")
        groups.setdefault((check.method, result), []).append(check)
    rows = []
    for (method, result), members in groups.items():
        names = "; ".join(dict.fromkeys(tex_text(check.what) for check in members))
        rows.append(" & ".join([names, tex_text(method), result]))
    return rows


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
    """Rows of the table of numbers: each quantity at each point, both sides.

    A denominator that is the characteristic polynomial itself is not told twice.
    """
    names = {id(point): f"P{number}" for number, point in enumerate(substitution.points, 1)}
    seen: set[tuple[str, str, str]] = set()
    rows = []
    for row in substitution.rows:
        values = (names.get(id(row.point), ""), _value(row.left), _value(row.right))
        if row.quantity.startswith("denominator") and values in seen:
            continue
        seen.add(values)
        rows.append(" & ".join([tex_text(row.quantity), *values]))
    return rows


def _value(value: Any) -> str:
    """A long exact number, in a form that can be broken; a ball as its middle and radius."""
    text = str(value) if isinstance(value, Fraction) else value_text(value)
    ball = _BALL.fullmatch(text)
    if ball is not None:
        middle, radius = (_scientific(part) for part in ball.groups())
        return rf"${middle}$ $\pm {radius}$"
    if text.lstrip("-").isdigit() or "/" in text:
        sign, digits = ("$-$", text[1:]) if text.startswith("-") else ("", text)
        parts = []
        for piece in digits.split("/"):
            groups = [piece[i : i + GROUP] for i in range(0, len(piece), GROUP)]
            parts.append(r"\allowbreak{}".join(groups))
        return sign + "/".join(parts)
    return tex_text(text)


def _scientific(text: str) -> str:
    mantissa, _, power = text.partition("e")
    return rf"{mantissa} \cdot 10^{{{int(power)}}}" if power else mantissa

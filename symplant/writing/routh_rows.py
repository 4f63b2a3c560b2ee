"""Routh's array as an engineer writes it, the special rows explained under them."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING

from symplant.writing.plain import PlainFormulas

if TYPE_CHECKING:
    from symplant.algebra.ratio import Ratio
    from symplant.algebra.routh import RouthRow
    from symplant.derivation.stability.finding import StabilityFinding

__all__ = ["routh_rows"]


def routh_rows(finding: StabilityFinding, plain: PlainFormulas) -> list[str]:
    """The rows as text; where the first column is made of numbers the roots are counted at the end."""
    variable = "w" if finding.discrete else finding.ring.variable
    rows = finding.routh.rows
    cells = [[_cell(plain, entry) for entry in row.entries] for row in rows]
    count = max(len(row) for row in cells)
    widths = [max((len(row[j]) for row in cells if j < len(row)), default=0) for j in range(count)]
    narrow = sum(widths) + 3 * count < plain.columns - 8
    lines = []
    above: RouthRow | None = None
    for row, texts in zip(rows, cells, strict=True):
        head = f"{variable}^{row.power}"
        if narrow:
            texts = [text.center(width) for text, width in zip(texts, widths, strict=False)]
            lines.append(f"{head:<5} | " + "   ".join(texts).rstrip())
        else:
            lines += [f"{head:<5} | {text}" if j == 0 else f"      | {text}" for j, text in enumerate(texts)]
        lines += [f"      |   {line}" for line in _explained(plain, variable, row, above)]
        above = row
    return lines + _count(finding, plain)


def _explained(plain: PlainFormulas, variable: str, row: RouthRow, above: RouthRow | None) -> list[str]:
    """What happened to a special row, in an engineer's words."""
    if row.kind == "zero row" and above is not None:
        return [
            "this row came out zero: the polynomial has the factor (auxiliary polynomial)",
            f"  {_auxiliary(plain, variable, above)},",
            "whose roots lie symmetric to the origin; its derivative stands here instead",
        ]
    if row.kind == "zero pivot":
        before = "   ".join(_cell(plain, entry) for entry in row.replaced)
        zeros = next(i for i, entry in enumerate(row.replaced) if entry)
        places = "place" if zeros == 1 else "places"
        sign = "minus" if zeros % 2 else "plus"
        return [
            f"this row came out as  {before}  and has no pivot: it was replaced by itself {sign}",
            f"itself shifted left by {zeros} {places}, which leaves every count of roots as it is",
        ]
    return []


def _auxiliary(plain: PlainFormulas, variable: str, row: RouthRow) -> str:
    terms = []
    for j, entry in enumerate(row.entries):
        power = row.power - 2 * j
        if not entry:
            continue
        text = _cell(plain, entry)
        if power == 0:
            terms.append(text)
            continue
        letter = variable if power == 1 else f"{variable}^{power}"
        compound = len(entry.numerator) > 1 and entry.denominator.is_one()
        terms.append(letter if text == "1" else f"({text}) {letter}" if compound else f"{text} {letter}")
    joined = " + ".join(terms)
    return joined.replace("+ −", "− ").replace("+ -", "- ")


def _count(finding: StabilityFinding, plain: PlainFormulas) -> list[str]:
    """The changes of sign in the first column and what they mean, where they can be told."""
    column = finding.routh.first_column
    if not all(entry.numerator.is_constant() and entry.denominator.is_constant() for entry in column):
        return []
    signs = [
        int(entry.numerator.leading_coefficient()) * int(entry.denominator.leading_coefficient()) > 0
        for entry in column
    ]
    changes = sum(a != b for a, b in pairwise(signs))
    where = "outside the unit circle" if finding.discrete else "in the right half plane"
    times, roots = ("change", "root") if changes == 1 else ("changes", "roots")
    return [f"{changes} {times} of sign in the first column: {changes} {roots} {where}"]


def _cell(plain: PlainFormulas, entry: Ratio) -> str:
    top = plain.text(entry.numerator)
    if entry.denominator.is_one():
        return top
    bottom = plain.text(entry.denominator)
    top = f"({top})" if len(entry.numerator) > 1 else top
    return f"{top}/({bottom})" if not bottom.isalnum() else f"{top}/{bottom}"

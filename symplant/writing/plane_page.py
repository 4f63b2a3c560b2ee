"""What `stability --plane` prints: boundary curves in words and formulas, cells, witnesses."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import TYPE_CHECKING

from symplant.writing.crossing_words import crossing_words
from symplant.writing.derive_page import add_head
from symplant.writing.numbers import number_text
from symplant.writing.page import Page
from symplant.writing.plain import PlainFormulas

if TYPE_CHECKING:
    from symplant.derivation.stability.plane import StabilityPlane
    from symplant.plant.model import Model

__all__ = ["plane_page"]

SIDES = {"stable": "stable", "unstable": "unstable", "axis": "on the boundary"}


def plane_page(plane: StabilityPlane, model: Model, width: int = 100, unicode: bool = True) -> Page:
    """The page of the stable region over two letters."""
    page = Page(width)
    add_head(page, model)
    plain = PlainFormulas(plane.ring, width - 4, unicode)
    page.heading(f"Stable region over {plane.across} and {plane.up}")
    if plane.fixed:
        fixed = ", ".join(f"{name} = {number_text(value)}" for name, value in plane.fixed.items())
        page.rows([("others fixed", fixed)])
    counts = {verdict: sum(c.verdict == verdict for c in plane.cells) for verdict in SIDES}
    if plane.cells:
        told = ", ".join(f"{count} {SIDES[verdict]}" for verdict, count in counts.items() if count)
        page.rows([("cells", f"{told}; every open cell between the curves was looked at, exactly")])
    if plane.note:
        page.rows([("", plane.note)], ["doubt"], indent=0)
    page.heading("Boundary curves" if plane.curves else "No boundary curve within the ranges")
    for crossing in plane.curves:
        page.add(f"{plain.factored('', crossing.element)} = 0")
        page.add(crossing_words(crossing), "quiet", 4)
    rows = [
        (f"{'not ' if side == 'unstable' else ''}stable at", _point(point))
        for side, point in plane.witnesses.items()
        if point
    ]
    if rows:
        page.heading("Witnesses")
        page.rows(rows)
    return page


def _point(point: Mapping[str, Fraction]) -> str:
    return ", ".join(f"{name} = {number_text(value)}" for name, value in point.items())

"""Displays: the rows of an alignment, a list of formulas or a system, rid of what only serves the page."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from symplant.reading.latex.groups import Group, Item, grouped, split, text_of, undisplayed
from symplant.reading.latex.tokens import Token, tokenise

__all__ = ["RELATIONS", "Span", "read_rows"]


class Span(NamedTuple):
    """A piece of a text and the column of its first character."""

    text: str
    column: int


#: Signs of relation and what they mean.
RELATIONS = {
    **dict.fromkeys(("=", "==", ":=", r"\coloneqq", r"\triangleq", r"\equiv"), "="),
    **dict.fromkeys(("<", r"\lt"), "<"),
    **dict.fromkeys((">", r"\gt"), ">"),
    **dict.fromkeys(("<=", r"\le", r"\leq", r"\leqslant", r"\leqq"), "<="),
    **dict.fromkeys((">=", r"\ge", r"\geq", r"\geqslant", r"\geqq"), ">="),
    **dict.fromkeys((r"\ne", r"\neq"), "!="),
}

_SIGNS = ("+", "-", r"\cdot", r"\times", "*")
_PLAIN = frozenset(("equation", "equation*", "displaymath", "math"))
_ALIGNED = frozenset(
    ("align", "align*", "aligned", "split", "eqnarray", "eqnarray*", "multline", "multline*")
)
_LISTED = frozenset(("gather", "gather*", "gathered", "cases"))

#: What belongs to the display and says nothing, with whether an argument in braces follows.
_FURNITURE = {r"\label": True, r"\tag": True, r"\nonumber": False, r"\notag": False}


def read_rows(text: str, *, column: int = 1) -> list[Span]:
    r"""The rows of a display: of align, split, gather, cases and their kin, in equation or alone.

    Alignment marks, labels, tags and \nonumber are blanked out, empty rows left out.  A row that begins with
    a relation goes on from the row above and is joined to it; in an alignment so is one that begins with a
    plus, minus or multiplication sign.  An ampersand that parts columns stays, for the reader to refuse.  A
    text without such an environment is cut at its line breaks.  Raises `InputError` if a bracket does not
    fit.

    >>> rows = read_rows(r"\begin{align} a &= b \\ &= c \label{x} \\ d &= e \end{align}")
    >>> [row.text.split() for row in rows]
    [['a', '=', 'b', '=', 'c'], ['d', '=', 'e']]
    """
    tokens = undisplayed(tokenise(text, column=column))
    page = _Page(text, column)
    items = page.cleaned(grouped(tokens))
    start = tokens[0].column if tokens else column
    end = tokens[-1].end if tokens else column
    aligned = False
    while len(items) == 1 and isinstance(items[0], Group) and items[0].environment:
        group = items[0]
        if group.kind not in _PLAIN | _ALIGNED | _LISTED:
            break
        aligned = aligned or group.kind in _ALIGNED
        items = page.cleaned(group.items)
        start, end = page.inside(group)
    return _rows(items, start, end, page, aligned)


class _Page:
    """The characters of a text, of which some get blanked."""

    def __init__(self, text: str, column: int) -> None:
        self._text, self._column = text, column
        self._characters = list(text)

    def inside(self, group: Group) -> tuple[int, int]:
        """The columns between which the body of an environment stands."""
        first = self._text.index("}", group.column - self._column) + 1
        last = self._text.rindex("\\end", 0, group.end - self._column)
        return first + self._column, last + self._column

    def blank(self, item: Item) -> None:
        """Puts spaces in the place of an item."""
        first, last = item.column - self._column, item.end - self._column
        self._characters[first:last] = " " * (last - first)

    def cleaned(self, items: Sequence[Item]) -> list[Item]:
        """The items without labels, tags and their like, which are blanked."""
        kept: list[Item] = []
        argument = False
        for item in items:
            if (argument and isinstance(item, Group) and item.kind == "{") or text_of(item) in _FURNITURE:
                argument = _FURNITURE.get(text_of(item), False)
                self.blank(item)
            else:
                argument = False
                kept.append(item)
        return kept

    def span(self, start: int, end: int) -> Span:
        """What now stands between two columns."""
        return Span("".join(self._characters[start - self._column : end - self._column]), start)


def _rows(items: Sequence[Item], start: int, end: int, page: _Page, aligned: bool) -> list[Span]:
    parts, breaks = split(items, lambda item: isinstance(item, Token) and item.kind == "row")
    starts = [start, *(item.end for item in breaks)]
    ends = [*(item.column for item in breaks), end]
    bounds: list[tuple[int, int]] = []
    unjoined = 0  # the first line break that no joined row has passed
    for number, part in enumerate(parts):
        _unalign(part, page, aligned)
        content = [item for item in part if text_of(item) != "&"]
        first = text_of(content[0]) if content else ""
        if bounds and (first in RELATIONS or (aligned and first in _SIGNS)):
            for mark in breaks[unjoined:number]:
                page.blank(mark)
            bounds[-1] = (bounds[-1][0], ends[number])
        elif content:
            bounds.append((starts[number], ends[number]))
        else:
            continue
        unjoined = number
    return [page.span(*pair) for pair in bounds]


def _unalign(row: Sequence[Item], page: _Page, aligned: bool) -> None:
    """Blanks the ampersands that only align: at a relation, at the row's edge, a lone one before a sign."""
    marks = [position for position, item in enumerate(row) if text_of(item) == "&"]
    for count, position in enumerate(marks):
        before = text_of(row[position - 1]) if position else ""
        after = text_of(row[position + 1]) if position + 1 < len(row) else ""
        edge = position == count or position + len(marks) - count == len(row)
        lone = aligned and len(marks) == 1 and after in _SIGNS
        if edge or lone or before in RELATIONS or after in RELATIONS:
            page.blank(row[position])

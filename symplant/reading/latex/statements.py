"""Statements: the sides of chains of relations; what the sides say is read elsewhere.

Nothing here loads the parser.  Every piece keeps the column at which it stands in the text, for `read_latex`.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import NamedTuple

from symplant.reading.latex.displays import RELATIONS, Span, read_rows
from symplant.reading.latex.groups import Group, Item, grouped, split, text_of, undisplayed
from symplant.reading.latex.tokens import Token, refusal, tokenise
from symplant.reading.suggestions import quoted

__all__ = ["Span", "Statement", "read_rows", "split_relation"]


class Statement(NamedTuple):
    """The sides of a chain of relations, and the relations between them (one less)."""

    sides: tuple[Span, ...]
    relations: tuple[str, ...]


_PAIRS = (":=", "<=", ">=", "==")
_GAP = re.compile(r"\\q?quad(?![A-Za-z])")


def split_relation(text: str, *, decimal_comma: bool = False, column: int = 1) -> list[Statement]:
    r"""The statements of a text, one for each part between commas, semicolons or the word "and".

    Relations are =, <, >, <=, >= and !=, however LaTeX spells them; chains are allowed.  Only the first side
    of a chain may be empty (a row that goes on from the row above).  A text without a relation is one
    statement with one side.  Raises `InputError` if a bracket does not fit, if a side is missing or reads as
    two, or if one of several parts is no relation.

    >>> split_relation(r"0 < a \le b, c = d")[0].relations
    ('<', '<=')
    >>> split_relation("G(s) = k/m")[0].sides[-1]
    Span(text='k/m', column=8)
    """
    tokens = undisplayed(tokenise(text, decimal_comma=decimal_comma, column=column))
    parts, marks = split(_without_and(_with_pairs(grouped(tokens))), _separates)
    if len(parts) > 1 and not parts[-1]:
        del parts[-1]
    starts = [tokens[0].column if tokens else column, *(mark.end for mark in marks)]
    statements = []
    for part, start in zip(parts, starts, strict=False):
        statement = _statement(part, start, text, column)
        if len(parts) > 1 and not statement.relations:
            hint = "a decimal comma must be announced as one" if "," in text else ""
            raise refusal(start, f"{quoted(statement.sides[0].text)} is no relation", hint)
        statements.append(statement)
    return statements


def _statement(part: Sequence[Item], start: int, text: str, column: int) -> Statement:
    shown = [item for item in part if text_of(item) != "$"]
    parts, marks = split(shown, lambda item: text_of(item) in RELATIONS)
    sides: list[Span] = []
    for side, mark in zip(parts, [None, *marks], strict=True):
        if side:
            first = side[0].column
            sides.append(Span(text[first - column : side[-1].end - column], first))
        elif mark is None:
            sides.append(Span("", start))
        else:
            raise refusal(mark.column, f"a side is missing after {quoted(text_of(mark))}")
    for between in sides[1:-1]:
        if _GAP.search(between.text):
            reason = f"{quoted(between.text)} reads two ways: one side or two"
            raise refusal(between.column, reason, "put a comma between them")
    return Statement(tuple(sides), tuple(RELATIONS[text_of(mark)] for mark in marks))


def _with_pairs(items: Sequence[Item]) -> list[Item]:
    """The items with signs such as `<=`, written as two characters without a gap, made one."""
    joined: list[Item] = []
    for item in items:
        last = joined[-1] if joined else None
        if last is not None and last.end == item.column and text_of(last) + text_of(item) in _PAIRS:
            joined[-1] = Token("symbol", text_of(last) + text_of(item), last.column, item.end)
        else:
            joined.append(item)
    return joined


def _without_and(items: Sequence[Item]) -> list[Item]:
    """The items with the word "and", plain or in roman type, made a comma."""
    kept: list[Item] = []
    skip = 0
    for position, item in enumerate(items):
        following = items[position + 1] if position + 1 < len(items) else None
        if skip:
            skip -= 1
        elif isinstance(item, Token) and item.word == "and":
            kept.append(Token("symbol", ",", item.column, item.column + 3))
            skip = 2
        elif text_of(item) == r"\mathrm" and isinstance(following, Group) and _spells_and(following):
            kept.append(Token("symbol", ",", item.column, following.end))
            skip = 1
        else:
            kept.append(item)
    return kept


def _spells_and(group: Group) -> bool:
    return "".join(map(text_of, group.items)) == "and"


def _separates(item: Item) -> bool:
    return text_of(item) in (",", ";", r"\land", r"\wedge")

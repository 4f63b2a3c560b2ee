"""Tokens to nested groups: which bracket closes which, settled once and without recursion."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import TypeAlias

from symplant.reading.latex.tokens import Token, refusal

__all__ = ["MAX_DEPTH", "Cursor", "Group", "Item", "grouped", "is_sign", "split", "text_of", "undisplayed"]

#: Deepest nesting of brackets that is read; everything after this module may recurse by groups.
MAX_DEPTH = 50

_CLOSERS = {"(": ")", "[": "]", "{": "}", r"\{": r"\}"}
_SIZED_CLOSERS = {**_CLOSERS, "|": "|"}
_DISPLAYS = {"$": "$", r"\(": r"\)", r"\[": r"\]"}


@dataclass(slots=True)
class Group:
    """What stands between two brackets.

    `kind` is the opening bracket, or the name of an environment; `sized` if written with \\left and \\right.
    """

    kind: str
    column: int
    sized: bool = False
    items: list[Item] = field(default_factory=list)
    end: int = 0
    environment: bool = False


Item: TypeAlias = Token | Group


def grouped(tokens: Sequence[Token]) -> list[Item]:
    """The tokens with every bracket, brace and environment folded into a group.

    Raises `InputError` at the first bracket that does not fit, and at the first one that is too deep.

    >>> from symplant.reading.latex.tokens import tokenise
    >>> [type(item).__name__ for item in grouped(tokenise("(a + b) c"))]
    ['Group', 'Token']
    """
    whole: list[Item] = []
    open_groups: list[Group] = []
    level = whole
    for token in tokens:
        group = _opened(token)
        if group is not None:
            if len(open_groups) == MAX_DEPTH:
                raise refusal(token.column, f"brackets nested deeper than {MAX_DEPTH} at {_shown(token)}")
            level.append(group)
            open_groups.append(group)
            level = group.items
        elif token.kind in ("right", "end") or (token.kind == "symbol" and token.text in _CLOSERS.values()):
            if not open_groups:
                raise refusal(token.column, f"{_shown(token)} closes nothing")
            group = open_groups.pop()
            if not _fits(group, token):
                raise refusal(
                    token.column,
                    f"{_shown(token)} does not close the {_opener(group)} at column {group.column}",
                )
            group.end = token.end
            level = open_groups[-1].items if open_groups else whole
        else:
            level.append(token)
    if open_groups:
        raise refusal(open_groups[-1].column, f"{_opener(open_groups[-1])} is never closed")
    return whole


def _opened(token: Token) -> Group | None:
    if token.kind in ("left", "begin"):
        return Group(token.text, token.column, token.kind == "left", environment=token.kind == "begin")
    if token.kind == "symbol" and token.text in _CLOSERS:
        return Group(token.text, token.column)
    return None


def _fits(group: Group, closer: Token) -> bool:
    if group.environment or closer.kind == "end":
        return group.environment and closer.kind == "end" and group.kind == closer.text
    if group.sized or closer.kind == "right":
        fitting = closer.text == _SIZED_CLOSERS.get(group.kind, closer.text)
        return group.sized and closer.kind == "right" and fitting
    return closer.text == _CLOSERS[group.kind]


def _shown(token: Token) -> str:
    if token.kind in ("begin", "end"):
        return rf"'\{token.kind}{{{token.text}}}'"
    return rf"'\{token.kind}{token.text}'" if token.kind in ("left", "right") else f"'{token.text}'"


def _opener(group: Group) -> str:
    if group.environment:
        return rf"'\begin{{{group.kind}}}'"
    return rf"'\left{group.kind}'" if group.sized else f"'{group.kind}'"


class Cursor:
    """A place in a row of items; `splice` puts items in front of what is still to come."""

    __slots__ = ("_rest", "end")

    def __init__(self, items: Sequence[Item], end: int) -> None:
        self._rest = list(reversed(items))
        self.end = end

    def peek(self) -> Item | None:
        """The next item, or None at the end."""
        return self._rest[-1] if self._rest else None

    def text(self, ahead: int = 0) -> str:
        """The text of the token that stands `ahead` places from here; empty for a group and past the end."""
        item = self._rest[-1 - ahead] if len(self._rest) > ahead else None
        return item.text if isinstance(item, Token) else ""

    def after(self) -> Item | None:
        """The item behind the next one, or None."""
        return self._rest[-2] if len(self._rest) > 1 else None

    def take(self) -> Item:
        """The next item, which is passed."""
        return self._rest.pop()

    def left(self) -> int:
        """How many items are still to come."""
        return len(self._rest)

    def upcoming(self, count: int) -> list[Item]:
        """The next items, `count` of them at most; none is passed."""
        return self._rest[: -count - 1 : -1]

    def splice(self, items: Sequence[Item]) -> None:
        """Makes `items` the next ones."""
        self._rest.extend(reversed(items))

    def column(self) -> int:
        """The column of the next item, or of the place behind the last one."""
        item = self.peek()
        return self.end if item is None else item.column


def split(items: Sequence[Item], at: Callable[[Item], bool]) -> tuple[list[list[Item]], list[Item]]:
    """The parts between the items that `at` marks, and these items."""
    parts: list[list[Item]] = [[]]
    marks: list[Item] = []
    for item in items:
        if at(item):
            marks.append(item)
            parts.append([])
        else:
            parts[-1].append(item)
    return parts, marks


def text_of(item: Item | None) -> str:
    """The text of a token; empty for a group and for None."""
    return item.text if isinstance(item, Token) else ""


def is_sign(item: Item | None) -> bool:
    """Whether the item is a plus or minus sign."""
    return isinstance(item, Token) and item.text in ("+", "-")


def undisplayed(tokens: Sequence[Token]) -> list[Token]:
    r"""The tokens without the `$`, `\[` or `\(` round the whole, and without a full stop or comma at its end.

    >>> from symplant.reading.latex.tokens import tokenise
    >>> [token.text for token in undisplayed(tokenise(r"\[ a + b. \]"))]
    ['a', '+', 'b']
    """
    inner = _unpunctuated(list(tokens))
    for _ in range(2):  # $$ is two signs
        if len(inner) >= 2 and _DISPLAYS.get(inner[0].text) == inner[-1].text:
            inner = _unpunctuated(inner[1:-1])
    return inner


def _unpunctuated(tokens: list[Token]) -> list[Token]:
    ends = len(tokens) > 1 and tokens[-1].kind == "symbol" and tokens[-1].text in (".", ",")
    return tokens[:-1] if ends else tokens

"""A term in the making: which operand may follow which, and the shape that goes to the parser."""

from __future__ import annotations

from symplant.algebra.expression import Node, Product
from symplant.reading.latex.engine import assembled
from symplant.reading.latex.functions import function_at
from symplant.reading.latex.groups import Cursor
from symplant.reading.latex.operands import DIVISION
from symplant.reading.latex.scope import Operand, Scope, refuse_zero, unexpected
from symplant.reading.latex.tokens import Token, refusal

__all__ = ["Term"]

_OPERANDS_AT_ONCE = 24
_MOST_DIVISIONS = 50


class Term:
    """A product in the making: what was read so far, and whether the next operand may follow it."""

    def __init__(self, scope: Scope, column: int) -> None:
        self.scope, self.column = scope, column
        self.operator: Token | None = None
        self._last: Operand | None = None
        self._divided = False
        self._divisions = 0
        self._shape = ""
        self._leaves: list[Node] = []
        self._columns: dict[int, int] = {}
        self._folded: Node | None = None

    def empty(self) -> bool:
        """Whether nothing was read yet."""
        return self._last is None and self.operator is None

    def operate(self, mark: Token) -> None:
        """Takes note of a multiplication or division sign."""
        if self._last is None or self.operator is not None:
            raise refusal(mark.column, f"an operand is missing before {self.scope.shown(mark)}")
        self.operator = mark

    def check_next(self, cursor: Cursor) -> None:
        """Refuses an operand that, where it stands, can be read in two ways."""
        item, last = cursor.peek(), self._last
        if item is None or last is None:
            return
        if last.kind == "bare" and function_at(cursor, self.scope) is None:
            reason = f"{self.scope.shown(item)} after a function without brackets reads two ways"
            raise refusal(item.column, reason, "put the function's argument in brackets")
        if self.operator is not None:
            return
        if isinstance(item, Token) and item.kind == "symbol":
            raise unexpected(item, self.scope)
        if self._divided:
            reason = f"{self.scope.shown(item)} after a division reads two ways"
            raise refusal(item.column, reason, r"use \frac or brackets")
        if isinstance(item, Token) and item.kind == "number":
            reason = f"the number {self.scope.shown(item)} after a factor"
            raise refusal(item.column, reason, r"put it first, or write \cdot before it")

    def add(self, operand: Operand, end: int) -> None:
        """Appends an operand, which ends at a column, with the sign in front of it."""
        last, mark = self._last, self.operator
        if last is not None and mark is None:
            other = ""
            if last.kind == "name" and operand.kind == "call":
                other = "a function's value"
            elif last.kind == "number" and not last.raised and operand.kind == "fraction":
                other = "a mixed number"
            if other:
                reason = f"{self.scope.quote(last.column, end)} reads two ways: a product or {other}"
                raise refusal(last.column, reason, r"write \cdot for a product")
        if mark is not None and mark.text in DIVISION:
            refuse_zero(operand.node, mark.column)
            self._divided = True
            self._divisions += 1
            if self._divisions > _MOST_DIVISIONS:
                reason = f"more than {_MOST_DIVISIONS} divisions in one term"
                raise refusal(mark.column, reason, r"use \frac")
            self._columns[len(self._leaves)] = mark.column
            self._shape += "/"
        elif last is not None:
            self._divided = self._divided and mark is None
            self._shape += r"\cdot "
        self._leaves.append(operand.node)
        self._shape += "@"
        self._last, self.operator = operand, None
        if len(self._leaves) == _OPERANDS_AT_ONCE:
            self._fold()

    def _fold(self) -> None:
        """Hands the product so far to the parser; it is the first operand of what follows."""
        node = assembled(self._shape, self._leaves, self._columns, self.column)
        carried = self._folded
        if isinstance(node, Product) and isinstance(carried, Product) and node.factors[0] is carried:
            node = Product(carried.factors + node.factors[1:], node.column)
        self._shape, self._leaves, self._columns = "@", [node], {}
        self._folded = node

    def finished(self, cursor: Cursor) -> Node:
        """The tree of the product; raises `InputError` if an operand is missing."""
        if self._last is None or self.operator is not None:
            following = cursor.peek()
            where = "at the end" if following is None else f"before {self.scope.shown(following)}"
            raise refusal(cursor.column(), f"an operand is missing {where}")
        self._fold()
        return self._leaves[0]

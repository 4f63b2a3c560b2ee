"""The gate: sums and terms of LaTeX are taken apart here, and what reads two ways is refused.

Each term goes to the parser as a shape whose operands and exponents are numbered slots (see `engine`).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from symplant.algebra.expression import Node, Sum, names_in, negated
from symplant.errors import InputError, SymplantError
from symplant.reading.latex.engine import assembled
from symplant.reading.latex.groups import Cursor, Group, Item, grouped, is_sign, split, undisplayed
from symplant.reading.latex.names import starts_name, take_name
from symplant.reading.latex.operands import DIVISION, MULTIPLICATION, read_operand
from symplant.reading.latex.scope import Scope, refuse_zero
from symplant.reading.latex.spellings import Spellings
from symplant.reading.latex.terms import Term
from symplant.reading.latex.tokens import Token, refusal, tokenise

__all__ = ["Gate", "read_latex"]


def read_latex(
    text: str, spellings: Mapping[str, str], *, decimal_comma: bool = False, column: int = 1
) -> Node:
    r"""The tree of one LaTeX expression over declared letters.

    `spellings` maps LaTeX spellings to declared names, which the tree holds; `\pi` is `pi` if no letter has
    that spelling.  `column` is the column of the text's first character.  With `decimal_comma`, 1,5 is 3/2.
    Raises `InputError` with a fault for every undeclared letter and for the first thing that cannot be read
    without guessing; each place is a column of the text, counted from 1.

    >>> from symplant.algebra.expression import Name, Quotient
    >>> letters = {r"k_{\mathrm{r}}": "k", "m": "m"}
    >>> read_latex(r"\frac{k_{\mathrm r}}{m}", letters) == Quotient(Name("k"), Name("m"))
    True
    >>> read_latex("a/b c", {"a": "a", "b": "b", "c": "c"})
    Traceback (most recent call last):
    symplant.errors.InputError: column 5: 'c' after a division reads two ways (use \frac or brackets)
    """
    tokens = undisplayed(tokenise(text, decimal_comma=decimal_comma, column=column))
    gate = Gate(text, column, Spellings(spellings))
    return gate.whole(grouped(tokens), tokens[-1].end if tokens else column)


class Gate:
    """The reading of one text, of which several parts may be read one after the other."""

    def __init__(self, source: str, first: int, spellings: Spellings) -> None:
        self.scope = Scope(source, first, spellings, self.expression)

    def whole(self, items: Sequence[Item], end: int) -> Node:
        """The tree of one expression; raises `InputError` if anything was noted against it."""
        try:
            node = self.expression(items, end)
        except InputError as error:
            noted = self.scope.faults
            raise InputError(noted + [fault for fault in error.faults if fault not in noted]) from None
        if self.scope.faults:
            raise InputError(self.scope.faults)
        if foreign := names_in(node) - self.scope.spellings.letters() - {"pi"}:
            raise SymplantError(f"undeclared letters went unnoticed: {', '.join(sorted(foreign))}")
        return node

    def expression(self, items: Sequence[Item], end: int) -> Node:
        r"""The tree of a sum, or of a fraction written with `\over`."""
        parts, marks = split(items, lambda item: isinstance(item, Token) and item.text == r"\over")
        if not marks:
            return self._sum(Cursor(items, end))
        if len(marks) > 1:
            raise refusal(marks[1].column, r"second '\over'", r"use \frac or braces")
        column = marks[0].column
        top = self._sum(Cursor(parts[0], column))
        bottom = self._sum(Cursor(parts[1], end))
        refuse_zero(bottom, column)
        return assembled(r"\frac{@}{@}", [top, bottom], {1: column}, column)

    def _sum(self, cursor: Cursor) -> Node:
        column = cursor.column()
        if cursor.peek() is None:
            raise refusal(column, "nothing is written here", "write 0 for zero")
        terms: list[Node] = []
        sign = "+"
        if is_sign(cursor.peek()):
            sign = cursor.text()
            cursor.take()
        while True:
            term, negative = self._term(cursor, sign)
            terms.append(negated(term) if negative else term)
            if cursor.peek() is None:
                break
            sign = cursor.text()
            cursor.take()
        return terms[0] if len(terms) == 1 else Sum(tuple(terms), column)

    def _term(self, cursor: Cursor, sign: str) -> tuple[Node, bool]:
        """The product up to the next sign or the end, and whether it is negative."""
        negative = sign == "-"
        term = Term(self.scope, cursor.column())
        while (item := cursor.peek()) is not None:
            if isinstance(item, Group) and self._opened(cursor, item, term, sign):
                continue
            mark = cursor.text()
            if is_sign(item):
                if term.operator is None:
                    break
                if is_sign(cursor.after()):
                    raise refusal(item.column, f"two signs after '{term.operator.text}'", "use brackets")
                negative ^= mark == "-"
                cursor.take()
            elif mark in MULTIPLICATION or mark in DIVISION:
                assert isinstance(item, Token)
                term.operate(item)
                cursor.take()
            else:
                term.check_next(cursor)
                term.add(read_operand(cursor, self.scope), cursor.column())
        return term.finished(cursor), negative

    def _opened(self, cursor: Cursor, group: Group, term: Term, sign: str) -> bool:
        """Removes bare braces, which print nothing: what is read is what a reader of the page sees."""
        if group.kind != "{" or starts_name(group):
            return False
        if not group.items:
            raise refusal(group.column, "empty braces")
        following = cursor.after()
        if any(isinstance(item, Token) and item.text == r"\over" for item in group.items):
            return False
        if any(is_sign(item) for item in group.items):
            alone = term.empty() and sign == "+" and (following is None or is_sign(following))
            if not alone:
                shown = self.scope.shown(group)
                raise refusal(group.column, f"the sum {shown} in braces prints no brackets", "use ( )")
        if isinstance(following, Token) and following.text in ("^", "_", "'") and not _is_single(group):
            shown = self.scope.shown(group)
            raise refusal(following.column, f"'{following.text}' after {shown} reads two ways", "use ( )")
        cursor.take()
        cursor.splice(group.items)
        return True


def _is_single(group: Group) -> bool:
    if not starts_name(group.items[0]):
        return len(group.items) == 1
    cursor = Cursor(group.items, group.end)
    take_name(cursor)
    return cursor.peek() is None

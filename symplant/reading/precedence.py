"""Tokens to trees by operator precedence, going on after a fault so that the later ones are found too.

Operators wait on a stack (E. W. Dijkstra's shunting yard, Mathematisch Centrum report MR 35, 1961;
from memory), so that no depth of brackets can exhaust Python's own.
"""

from __future__ import annotations

import keyword
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import chain

from symplant.algebra.expression import FUNCTIONS, Call, Name, Node, Number, Product, Quotient, Sum
from symplant.errors import Fault
from symplant.reading.exponents import MAX_EXPONENT, exponent_of, raised
from symplant.reading.suggestions import quoted
from symplant.reading.tokens import Kind, Token, normal_form

__all__ = ["MAX_NESTING", "Parser"]

#: Deepest nesting of brackets, and largest height of the tree that comes out.
MAX_NESTING = 200

# A sign that leads a term is applied to the whole term: -k/m is read as -(k/m), which has the value
# that Python gives to (-k)/m and the shape that its author sees.
_PRECEDENCE = {
    "(": 0,
    "+": 1,
    "-": 1,
    "leading +": 2,
    "leading -": 2,
    "*": 3,
    "/": 3,
    "inner +": 4,
    "inner -": 4,
    "**": 5,
}


@dataclass(slots=True)
class _Part:
    """An operand: a finished tree, or a sum or product that can still grow.

    `column` is where it starts, `height` the longest way down, `powers` the largest product of
    exponents on one way down: a tower of powers in brackets is still a tower.
    """

    items: list[Node]
    column: int
    height: int = 1
    powers: int = 1
    form: type[Sum] | type[Product] | None = None

    @property
    def node(self) -> Node:
        return self.items[0] if self.form is None else self.form(tuple(self.items), self.column)

    def opened(self, form: type[Sum] | type[Product]) -> _Part:
        """This part as a sum or product that takes further items."""
        if self.form is form:
            return self
        return _Part([self.node], self.column, self.height + 1, self.powers, form)

    def take(self, other: _Part) -> None:
        self.items.append(other.node)
        self.height = max(self.height, other.height + 1)
        self.powers = max(self.powers, other.powers)


@dataclass(frozen=True, slots=True)
class _Waiting:
    """An operator that waits for its right operand, or a bracket (of `function`) for its end."""

    sign: str
    token: Token
    function: Token | None = None


class Parser:
    """One reading of one text; `faults` holds what was found wrong with its structure.

    Names are looked up in `letters` (normal form to declared name); those not found there are taken
    to have been reported already.
    """

    def __init__(self, letters: Mapping[str, str]) -> None:
        self.faults: list[Fault] = []
        self._letters = letters
        self._operands: list[_Part] = []
        self._waiting: list[_Waiting] = []
        self._depth = 0
        self._deep = False

    def parse(self, tokens: Sequence[Token]) -> Node | None:
        """The tree, or None with the reason among the faults; with faults the tree means nothing."""
        before: Token | None = None
        function: Token | None = None
        complete = False  # whether what was read so far could end here
        for token, after in zip(tokens, chain(tokens[1:], (None,)), strict=True):
            if complete and token.kind in (Kind.NUMBER, Kind.NAME, Kind.OPEN):
                self._implied_product(before, token, after)
                complete = False
            match token.kind:
                case Kind.NUMBER:
                    self._operands.append(_Part([Number(token.value, token.column)], token.column))
                    complete = True
                case Kind.NAME if self._is_called(token, after):
                    function = token
                case Kind.NAME:
                    self._operands.append(_Part([self._name(token)], token.column))
                    complete = True
                case Kind.OPEN:
                    self._waiting.append(_Waiting("(", token, function))
                    function, self._depth = None, self._depth + 1
                case Kind.CLOSE:
                    if not complete:
                        self._nothing_after(before, token)
                    self._close(token)
                    complete = True
                case Kind.OPERATOR:
                    complete = self._operator(token, complete)
            if self._depth > MAX_NESTING:
                self._too_deep(token)
                return None
            before = token
        if not complete:
            self._nothing_after(before, None)
        return self._finish()

    def _is_called(self, token: Token, after: Token | None) -> bool:
        if after is None or after.kind is not Kind.OPEN:
            return False
        name = normal_form(token.text)
        return name in FUNCTIONS and name not in self._letters

    def _name(self, token: Token) -> Node:
        name = normal_form(token.text)
        return Name(self._letters.get(name, name), token.column)

    def _implied_product(self, before: Token | None, token: Token, after: Token | None) -> None:
        assert before is not None
        reported = before.kind is Kind.NAME and token.kind is Kind.OPEN
        # Calls, functions without brackets and words of Python were reported with the names.
        calls = self._is_called(token, after)
        if not reported and not self._is_no_factor(before) and (calls or not self._is_no_factor(token)):
            left = "(...)" if before.kind is Kind.CLOSE else _shortened(before.text)
            right = "(...)" if token.kind is Kind.OPEN else _shortened(token.text)
            if calls:
                right += "(...)"
            hint = f"a product is written {left}*{right}"
            if (before.text + token.text).isdecimal():
                hint = f"write {left}{right} for one number, {left}*{right} for a product"
            self._fault(token, f"no operator between {quoted(before.text)} and {quoted(token.text)}", hint)
        self._push(_Waiting("*", token))

    def _is_no_factor(self, token: Token) -> bool:
        name = normal_form(token.text)
        return name not in self._letters and (name in FUNCTIONS or keyword.iskeyword(name))

    def _operator(self, token: Token, complete: bool) -> bool:
        """Takes an operator; whether the text could still end (only if it was left out)."""
        if complete:
            self._push(_Waiting(token.text, token))
        elif token.text in ("+", "-"):
            before = self._waiting[-1].sign if self._waiting else "("
            rank = "leading" if before in ("(", "+", "-") or before.startswith("leading") else "inner"
            self._waiting.append(_Waiting(f"{rank} {token.text}", token))
        else:
            self._fault(token, f"{quoted(token.text)} has nothing before it")
        return False

    def _push(self, operator: _Waiting) -> None:
        strength = _PRECEDENCE[operator.sign]
        # Powers group from the right: an equal one that waits goes on waiting.
        limit = strength + 1 if operator.sign == "**" else strength
        while self._waiting and _PRECEDENCE[self._waiting[-1].sign] >= limit:
            self._apply(self._waiting.pop())
        self._waiting.append(operator)

    def _nothing_after(self, before: Token | None, token: Token | None) -> None:
        """Reports the missing operand and puts one in its place."""
        if before is not None and before.kind is Kind.OPERATOR:
            self._fault(before, f"{quoted(before.text)} has nothing after it")
        elif before is not None and token is not None and before.kind is Kind.OPEN:
            self._fault(before, "there is nothing between the brackets")
        column = 0 if before is None else before.column
        self._operands.append(_Part([Number(Fraction(1), column)], column))

    def _close(self, token: Token) -> None:
        while self._waiting and self._waiting[-1].sign != "(":
            self._apply(self._waiting.pop())
        if not self._waiting:
            self._fault(token, "')' closes no bracket")
            return
        self._depth -= 1
        inner, function = self._operands.pop(), self._waiting.pop().function
        if function is not None:
            call = Call(normal_form(function.text), inner.node, function.column)
            # A function is one more letter to the algebra, but a root and its radicand share powers.
            powers = inner.powers if call.function == "sqrt" else 1
            inner = _Part([call], function.column, inner.height + 1, powers)
        self._put(_Part([inner.node], inner.column, inner.height, inner.powers), token)

    def _finish(self) -> Node | None:
        while self._waiting:
            operator = self._waiting.pop()
            if operator.sign == "(":
                self._fault(operator.token, "'(' is never closed")
            else:
                self._apply(operator)
        (whole,) = self._operands
        return whole.node

    def _apply(self, operator: _Waiting) -> None:
        right, column = self._operands.pop(), operator.token.column
        if operator.sign.startswith(("leading", "inner")):
            right = _negative(right, column, column) if operator.sign.endswith("-") else right
            self._put(right, operator.token)
            return
        left = self._operands.pop()
        match operator.sign:
            case "+" | "-":
                left = left.opened(Sum)
                left.take(_negative(right, column, right.column) if operator.sign == "-" else right)
            case "*":
                left = left.opened(Product)
                left.take(right)
            case "/":
                quotient = Quotient(left.node, right.node, column)
                height = max(left.height, right.height) + 1
                left = _Part([quotient], left.column, height, max(left.powers, right.powers))
            case "**":
                left = self._power(left, right, operator.token)
        self._put(left, operator.token)

    def _put(self, part: _Part, token: Token) -> None:
        if part.height > MAX_NESTING:
            self._too_deep(token)
            part = _Part([Number(Fraction(1), part.column)], part.column)
        self._operands.append(part)

    def _power(self, base: _Part, exponent: _Part, token: Token) -> _Part:
        value, reason, hint = exponent_of(exponent.node)
        if value is None:
            self._fault(token, reason, hint)
            return base
        powers = base.powers * max(1, abs(value.numerator))
        if powers > MAX_EXPONENT:
            reason = f"powers within powers that multiply to {powers}"
            self._fault(token, reason, f"at most {MAX_EXPONENT} is read")
            return base
        return _Part([raised(base.node, value, token.column)], base.column, base.height + 2, powers)

    def _too_deep(self, token: Token) -> None:
        if not self._deep:
            self._deep = True
            hint = "use fewer brackets or divisions within each other"
            self._fault(token, f"nested deeper than {MAX_NESTING} levels", hint)

    def _fault(self, token: Token, reason: str, suggestion: str = "") -> None:
        self.faults.append(Fault(f"column {token.column}", reason, suggestion))


def _negative(part: _Part, sign_column: int, start: int) -> _Part:
    """Minus a part: numbers change their sign, also in front of a product; others get a factor -1."""
    node = part.node
    if isinstance(node, Number):
        return _Part([Number(-node.value, start)], start, part.height, part.powers)
    minus_one = Number(Fraction(-1), sign_column)
    if part.form is Product:
        first = part.items[0]
        factors = (minus_one, *part.items)
        if isinstance(first, Number):
            factors = (Number(-first.value, start), *part.items[1:])
        return _Part([Product(factors, start)], start, part.height, part.powers)
    return _Part([Product((minus_one, node), start)], start, part.height + 1, part.powers)


def _shortened(text: str) -> str:
    return text if len(text) <= 20 else f"{text[:17]}..."

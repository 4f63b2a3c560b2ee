r"""Functions and their arguments: `\sin(x)`, `\sin^2 x`, `\sin 2x`; where an argument ends must be plain."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

from symplant.algebra.expression import Call, Node, Number
from symplant.reading.latex.engine import assembled
from symplant.reading.latex.groups import Cursor, Group, is_sign
from symplant.reading.latex.letters import FUNCTION_COMMANDS, UNKNOWN_FUNCTIONS
from symplant.reading.latex.names import starts_name, take_script
from symplant.reading.latex.powers import powered, read_exponent
from symplant.reading.latex.scope import Operand, Scope
from symplant.reading.latex.tokens import Token, refusal

__all__ = ["function_at", "read_function"]

#: Functions of whose bare argument a number may be a part: sin 2x is one thing, ln 2 x is two.
_OF_ANGLES = frozenset(("sin", "cos", "tan", "sinh", "cosh", "tanh"))


def function_at(cursor: Cursor, scope: Scope) -> str | None:
    r"""The LaTeX name, without backslash, of the function at the cursor; None if no function stands there."""
    item = cursor.peek()
    if not isinstance(item, Token) or item.kind != "command":
        return None
    name = item.text[1:]
    if name == "mathrm":
        letters = cursor.after()
        if not isinstance(letters, Group) or not all(isinstance(part, Token) for part in letters.items):
            return None
        name = "".join(part.text for part in letters.items if isinstance(part, Token))
        if rf"\mathrm{{{name}}}" in scope.spellings:
            return None
    return name if name in FUNCTION_COMMANDS or name in UNKNOWN_FUNCTIONS else None


def read_function(
    cursor: Cursor, scope: Scope, name: str, read_operand: Callable[[Cursor, Scope], Operand]
) -> Operand:
    """The value of the function at the cursor; `read_operand` reads an argument without brackets."""
    head = cursor.take()
    if isinstance(head, Token) and head.text == r"\mathrm":
        cursor.take()
    column = head.column
    if name in UNKNOWN_FUNCTIONS:
        hint = UNKNOWN_FUNCTIONS[name]
        known = f"known are {', '.join(FUNCTION_COMMANDS)}"
        raise refusal(column, f"the function '{name}' is not known", f"write {hint}" if hint else known)
    raised = cursor.column()
    exponent, base = _scripts(cursor, scope, column, name)
    argument, closed = _argument(cursor, scope, column, name, read_operand)
    node: Node = Call(FUNCTION_COMMANDS[name], argument, column)
    if base is not None:
        node = assembled(r"\frac{@}{@}", [node, Call("log", base, base.column)], {1: column}, column)
    if closed and cursor.text() == "^" and exponent is None:
        sign = cursor.take()
        items, end = take_script(cursor, sign)
        exponent, raised = read_exponent(items, column, sign.column, end, scope), sign.column
    if exponent is not None:
        node = powered(node, exponent, raised)
    return Operand("value" if closed else "bare", node, exponent is not None, column)


def _scripts(cursor: Cursor, scope: Scope, column: int, name: str) -> tuple[Fraction | None, Number | None]:
    r"""The exponent and the base that stand at a function's name, as in `\sin^2` and `\log_{10}`."""
    exponent: Fraction | None = None
    base: Number | None = None
    while (mark := cursor.text()) in ("^", "_"):
        sign = cursor.take()
        bare = cursor.text()
        items, end = take_script(cursor, sign)
        if len(bare) > 1 and bare.isdecimal():  # of \log_23 TeX makes the logarithm of 3 to the base 2
            raise refusal(sign.column, f"'{bare}' without braces at '{name}'", f"write {{{bare}}}")
        if mark == "^" and exponent is None:
            exponent = read_exponent(items, column, sign.column, end, scope)
            if exponent < 1 or exponent.denominator != 1:
                shown = scope.quote(sign.column, end)
                hint = "write a fraction, or the name of the inverse function"
                raise refusal(sign.column, f"{shown} at '{name}' reads two ways: inverse or reciprocal", hint)
        elif mark == "_" and name == "log" and base is None:
            only = items[0]
            digits = only.text if isinstance(only, Token) and len(items) == 1 else ""
            if not digits.isdecimal() or len(digits) > 9 or int(digits) < 2:
                raise refusal(sign.column, "the base of a logarithm must be a whole number above 1")
            base = Number(Fraction(digits), only.column)
        else:
            raise refusal(sign.column, f"{scope.quote(sign.column, end)} at '{name}'")
    return exponent, base


def _argument(
    cursor: Cursor, scope: Scope, column: int, name: str, read_operand: Callable[[Cursor, Scope], Operand]
) -> tuple[Node, bool]:
    """The argument, and whether brackets show its end."""
    item = cursor.peek()
    inner = item.items[0] if isinstance(item, Group) and item.kind == "{" and len(item.items) == 1 else item
    if isinstance(inner, Group) and inner.kind in ("(", "[", r"\{"):
        cursor.take()
        return scope.expression(inner.items, inner.end - 1), True
    if isinstance(item, Group) and item.kind == "{" and not starts_name(item):
        if any(is_sign(part) for part in item.items):
            raise refusal(item.column, f"a sum after '{name}' without brackets", rf"write \{name}(...)")
        cursor.take()
        return scope.expression(item.items, item.end - 1), False
    factors: list[Operand] = []
    while len(factors) < 2 and _may_stand_bare(cursor, scope, first=not factors):
        operand = read_operand(cursor, scope)
        if operand.raised:
            shown = scope.quote(column, cursor.column())
            raise refusal(operand.column, f"the exponent in {shown} reads two ways", "use brackets")
        factors.append(operand)
        if operand.kind != "number" or name not in _OF_ANGLES:
            break
    if not factors:
        raise refusal(cursor.column(), f"the argument of '{name}' is missing", "put it in brackets")
    if len(factors) == 1:
        return factors[0].node, False
    if factors[1].kind == "fraction":
        raise refusal(factors[1].column, "a number before a fraction reads two ways", "use brackets")
    return assembled(r"@\cdot@", [factor.node for factor in factors], {}, factors[0].column), False


def _may_stand_bare(cursor: Cursor, scope: Scope, *, first: bool) -> bool:
    item = cursor.peek()
    if item is None or function_at(cursor, scope) is not None:
        return False
    number = isinstance(item, Token) and item.kind == "number"
    return starts_name(item) or cursor.text() in (r"\frac", r"\sqrt") or (first and number)

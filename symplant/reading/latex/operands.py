"""One factor of a term: a number, a name, a bracket, a fraction, a root, a determinant."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from symplant.algebra.expression import Number
from symplant.reading.latex.engine import assembled
from symplant.reading.latex.functions import function_at, read_function
from symplant.reading.latex.groups import Cursor, Group, Item, is_sign, split, text_of
from symplant.reading.latex.letters import LETTER_COMMANDS
from symplant.reading.latex.lookup import read_name
from symplant.reading.latex.names import starts_name, take_script
from symplant.reading.latex.powers import powered, read_exponent
from symplant.reading.latex.scope import Operand, Scope, refuse_zero, unexpected
from symplant.reading.latex.tables import cells, determinant
from symplant.reading.latex.tokens import Token, refusal
from symplant.reading.suggestions import quoted
from symplant.reading.tokens import MAX_DIGITS

__all__ = ["DIVISION", "MULTIPLICATION", "read_operand"]

MULTIPLICATION = (r"\cdot", r"\times", "*")
DIVISION = ("/", r"\div", ":")

_OPERATORS = frozenset((*MULTIPLICATION, *DIVISION, "+", "-", r"\frac", r"\over"))
_ROUND_A_MATRIX = ("(", "[", r"\{", "{")
_SCALED_IDENTITIES = (("s", "I"), ("z", "I"), ("s", "E"), ("z", "E"))
_LARGEST_POWER_OF_TEN = 308


def read_operand(cursor: Cursor, scope: Scope) -> Operand:
    """The operand at the cursor, which is passed.  Raises `InputError` if none stands there."""
    item = cursor.peek()
    if item is None:
        raise refusal(cursor.column(), "an operand is missing here")
    function = function_at(cursor, scope)
    if function is not None:
        operand = read_function(cursor, scope, function, read_operand)
    elif starts_name(item):
        operand = read_name(cursor, scope)
    elif isinstance(item, Group):
        operand = _group(cursor, scope, item)
    elif item.kind == "number":
        operand = _number(cursor, scope)
    elif item.text == r"\frac":
        operand = _fraction(cursor, scope)
    elif item.text == r"\sqrt":
        operand = _root(cursor, scope)
    elif item.text == r"\boxed":
        cursor.take()
        items, end = _argument(cursor, scope, item)
        operand = _raised(cursor, scope, Operand("value", scope.expression(items, end), False, item.column))
    elif item.text == r"\det":
        operand = _determinant(cursor, scope)
    else:
        raise unexpected(item, scope)
    following = cursor.peek()
    if isinstance(following, Token) and following.text in ("^", "_", "'", "!"):
        before = scope.quote(item.column, following.column)
        raise refusal(
            following.column, f"{quoted(following.text)} after {before} is not read", "use brackets"
        )
    return operand


def _raised(cursor: Cursor, scope: Scope, operand: Operand) -> Operand:
    """The operand with the exponent that follows it, if one does."""
    if cursor.text() != "^":
        return operand
    sign = cursor.take()
    items, end = take_script(cursor, sign)
    value = read_exponent(items, operand.column, sign.column, end, scope)
    return Operand(operand.kind, powered(operand.node, value, sign.column), True, operand.column)


def _group(cursor: Cursor, scope: Scope, group: Group) -> Operand:
    if group.environment or group.kind == "|":
        return _determinant(cursor, scope)
    if group.kind not in ("(", "[", r"\{", "{"):
        raise refusal(group.column, f"the bracket {scope.quote(group.column, group.column + 6)} is not read")
    over = any(isinstance(item, Token) and item.text == r"\over" for item in group.items)
    if over and not group.sized and group.kind != "{":
        raise refusal(group.column, r"'\over' in brackets takes the brackets along", r"use \frac")
    cursor.take()
    node = scope.expression(group.items, group.end - 1)
    if cursor.text() == "^" and _is_resolvent(group.items):
        raise refusal(
            group.column,
            f"{scope.shown(group)} with an exponent reads as the inverse of a matrix",
            r"for scalar letters write \frac{1}{...}",
        )
    if group.kind == "{":
        whole = len(group.items) == 3 and _is_whole(group.items[0]) and _is_whole(group.items[2])
        return Operand("fraction" if whole else "value", node, False, group.column)
    kind = "value" if _has_operator(group.items) else "call"
    return _raised(cursor, scope, Operand(kind, node, False, group.column))


def _has_operator(items: Sequence[Item]) -> bool:
    while len(items) == 1 and isinstance(items[0], Group):
        items = items[0].items
    return any(isinstance(item, Token) and item.text in _OPERATORS for item in items)


def _is_resolvent(items: Sequence[Item]) -> bool:
    r"""Whether a sum has the term `s I` or `s E`: everyone in this trade reads it as a sum of matrices."""
    terms, signs = split(items, is_sign)
    products = [tuple(map(text_of, term)) for term in terms]
    return bool(signs) and any(product in _SCALED_IDENTITIES for product in products)


def _number(cursor: Cursor, scope: Scope) -> Operand:
    token = cursor.take()
    assert isinstance(token, Token)
    plain = token.text.replace(r"\,", "").replace("{,}", ".").replace(",", ".").lower()
    digits, _, power = plain.partition("e")
    if power and ("e" in scope.spellings or "E" in scope.spellings):
        raise refusal(
            token.column,
            f"{scope.shown(token)} reads two ways: a number or a product with a declared letter",
            rf"write {digits} \times 10^{{{int(power)}}}" if len(power) < 5 else "",
        )
    if len(digits) > MAX_DIGITS or len(power) > 5 or abs(int(power or "0")) > _LARGEST_POWER_OF_TEN:
        raise refusal(token.column, f"the number {scope.shown(token)} is out of range")
    value = Fraction(plain)
    point = cursor.peek()
    if token.text.isdecimal() and isinstance(point, Token) and (point.text, point.column) == (".", token.end):
        following = cursor.after()
        if not (isinstance(following, Token) and following.kind == "number"):
            cursor.take()
    if cursor.text() == r"\%":
        cursor.take()
        value /= 100
    return _raised(cursor, scope, Operand("number", Number(value, token.column), False, token.column))


def _argument(
    cursor: Cursor, scope: Scope, command: Token, *, pair: bool = False
) -> tuple[Sequence[Item], int]:
    """The items of a command's next argument and where they end; `pair` splits two digits, as TeX does."""
    item = cursor.peek()
    if item is None:
        raise refusal(cursor.column(), f"an argument of '{command.text}' is missing")
    if isinstance(item, Group):
        if item.kind == "{":
            cursor.take()
            return item.items, item.end - 1
    elif item.kind == "number" and item.text.isdecimal() and len(item.text) <= (2 if pair else 1):
        cursor.take()
        if len(item.text) == 2:
            cursor.splice([Token("number", item.text[1], item.column + 1, item.end)])
            item = Token("number", item.text[0], item.column, item.column + 1)
        return [item], item.end
    elif item.kind == "letter" or item.text in LETTER_COMMANDS:
        cursor.take()
        return [item._replace(word="")], item.end
    raise refusal(item.column, f"{scope.shown(item)} after '{command.text}'", "put the argument in braces")


def _fraction(cursor: Cursor, scope: Scope) -> Operand:
    command = cursor.take()
    assert isinstance(command, Token)
    top_items, top_end = _argument(cursor, scope, command, pair=True)
    bottom_items, bottom_end = _argument(cursor, scope, command)
    top = scope.expression(top_items, top_end)
    bottom = scope.expression(bottom_items, bottom_end)
    refuse_zero(bottom, command.column)
    node = assembled(r"\frac{@}{@}", [top, bottom], {1: command.column}, command.column)
    whole = all(len(items) == 1 and _is_whole(items[0]) for items in (top_items, bottom_items))
    return Operand("fraction" if whole else "value", node, False, command.column)


def _is_whole(item: Item) -> bool:
    return isinstance(item, Token) and item.kind == "number" and item.text.isdecimal()


def _root(cursor: Cursor, scope: Scope) -> Operand:
    command = cursor.take()
    assert isinstance(command, Token)
    index = cursor.peek()
    if isinstance(index, Group) and index.kind == "[":
        cursor.take()
        if [item.text for item in index.items if isinstance(item, Token)] != ["2"] or len(index.items) != 1:
            raise refusal(index.column, f"the root index {scope.shown(index)}: only square roots are read")
    braced = isinstance(cursor.peek(), Group)
    items, end = _argument(cursor, scope, command)
    node = assembled(r"\sqrt{@}", [scope.expression(items, end)], {}, command.column)
    operand = Operand("value", node, False, command.column)
    return _raised(cursor, scope, operand) if braced else operand


def _determinant(cursor: Cursor, scope: Scope) -> Operand:
    r"""`\det` of a matrix environment, a vmatrix, or a matrix between bars."""
    start = cursor.take()
    group: Item | None = start
    if isinstance(start, Token):
        group = cursor.take() if cursor.peek() is not None else None
        while isinstance(group, Group) and group.kind in _ROUND_A_MATRIX and len(group.items) == 1:
            group = group.items[0]
        reason = r"'\det' of something that is no matrix written out"
    elif start.kind == "|":
        group = start.items[0] if len(start.items) == 1 else None
        reason = f"the bars of {scope.shown(start)}: absolute values are not read"
    elif not start.kind.startswith("vmatrix"):
        raise refusal(start.column, rf"'\begin{{{start.kind}}}' where a scalar is expected")
    if not isinstance(group, Group) or not group.environment or (group is not start and group.kind[0] == "v"):
        raise refusal(start.column, reason)
    rows = [[scope.expression(cell, end) for cell, end in row] for row in cells(group)]
    node = determinant(rows, start.column)
    return _raised(cursor, scope, Operand("value", node, False, start.column))
